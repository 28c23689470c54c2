//! Floor 1: pictures.

/// What is shown.
#[derive(Clone, Debug, Default)]
pub struct Figure {}

//! Floor 5: the window. The only folder that names the toolkit.

pub mod harness;
pub mod theme;
pub mod widget;

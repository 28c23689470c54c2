//! Findings (to be replaced).
use crate::table::Table;
use crate::table::finding::Finding;
/// Roles.
#[derive(Debug)]
pub struct Roles<'a> { /// a
 pub rows: &'a [usize], /// a
 pub sample_name: Option<&'a str>, /// a
 pub unit: Option<&'a str>, /// a
 pub batch: Option<&'a str>, /// a
 pub order: Option<&'a str>, /// a
 pub outcome: Option<&'a str>, /// a
 pub predictors: &'a [usize] }
/// Find.
#[must_use]
pub fn with_roles(_t: &Table, _r: &Roles<'_>) -> Vec<Finding> { Vec::new() }

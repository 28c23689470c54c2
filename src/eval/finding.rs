//! Findings in words (to be replaced).
use crate::base::problem::{Place, Problem};
use crate::table::finding::Finding;
use crate::table::read::ReadError;
use crate::table::samples::JoinError;
/// Sentence.
#[must_use]
pub fn sentence(f: &Finding) -> String {
    format!("{:?}", f.kind)
}
/// Treatment.
#[must_use]
pub fn treatment(f: &Finding) -> String {
    format!("{:?}", f.treatment)
}
/// Error.
#[must_use]
pub fn read_problem(e: &ReadError, file: &str) -> Problem {
    Problem::new("read", format!("{e:?}")).at(Place::file(file))
}
/// Join.
#[must_use]
pub fn join_error(e: &JoinError) -> String {
    format!("{e:?}")
}

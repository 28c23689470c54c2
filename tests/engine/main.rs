//! The engine from tables to hand-overs, through its widest doors.

mod command; // the program itself: exit statuses, what is said and written
mod cross_validation; // given parts against reference values
mod evaluate; // what is evaluated again, and that threads do not matter
mod null_twin; // an outcome without signal is not predicted, however steps are stacked
mod numeral; // every number of the hand-overs is a value of the study
mod support;

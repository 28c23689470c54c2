//! Journeys through the library and the program, as a user would make them, without a window.

/// Whatever is wrong with a table, the answer says what, where, and what would mend it.
mod bad_input;
/// The commands, on tables that nobody here made.
mod commands;
/// What is on disk may be damaged in any way; nothing of it may cost work or peace.
mod damaged_files;
/// What is evaluated, what is remembered, and what comes of it.
mod evaluation;
/// Where there is nothing to find, nothing is claimed.
mod honest;
/// Every kind of outcome, the whole way; and what cannot be fitted.
mod kinds;
/// Every number that is handed over is a value of the study.
mod numerals;
/// What a fit may know beyond one penalty for all.
mod options;
/// Every preparation step through its cell.
mod preparation;
/// Tables as they are delivered, from import to hand-over.
mod real_tables;
/// Making studies from tables, running them, and running the program.
mod run;
/// What was saved opens again as it was, with its results.
mod save_and_reopen;
/// Dice, folders, and studies made at random.
mod support;

//! Journeys through the library, as a user would make them, without a window.

/// What is on disk may be damaged in any way; nothing of it may cost work or peace.
mod damaged_files;
/// What was saved opens again as it was, with its results.
mod save_and_reopen;
/// Dice, folders, and studies made at random.
mod support;

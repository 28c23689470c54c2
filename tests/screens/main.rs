//! The window, driven without a display.
//!
//! `study` works on a small invented study; `pictures` holds widgets to what was looked at.

mod pictures;
mod study;
mod support;

//! The window, driven without a display.
//!
//! `study` works on a small invented study; `troubles` lets things go wrong; `pages` holds every
//! screen, and `pictures` single widgets, to what was looked at.

mod pages;
mod pictures;
mod study;
mod support;
mod troubles;

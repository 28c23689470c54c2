//! Widefold: a study document for wide data.
//!
//! The floors, from the ground up. A module may use the floors below its own, and itself;
//! neighbours on one floor do not know each other. `tests/tidy.rs` holds the tree to it.
//!
//! | floor | modules | what they are |
//! |---|---|---|
//! | 0 | [`base`] | small things that know nothing of the trade |
//! | 1 | [`table`], [`numeric`], [`figure`], [`study`] | data, mathematics, pictures, the document |
//! | 2 | [`eval`] | from a study to its outcomes |
//! | 3 | [`report`] | what a cell has to say, once for all readers |
//! | 4 | [`export`], [`store`] | blocks into files; studies on disk |
//! | 5 | [`app`], [`cli`] | the window; commands without a window |

pub mod app;
pub mod base;
pub mod cli;
pub mod eval;
pub mod export;
pub mod figure;
pub mod numeric;
pub mod report;
pub mod store;
pub mod study;
pub mod table;

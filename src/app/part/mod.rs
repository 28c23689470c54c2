//! The parts of the study screen: thread, page, margin, head line, strip.

pub mod block;
pub mod cell;
pub mod facts;
pub mod head;
pub mod margin;
pub mod offer;
pub mod strip;
pub mod table;
pub mod thread;

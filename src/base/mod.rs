//! Floor 0: small things that know nothing of the trade.

pub mod hash;
pub mod layout;
pub mod number;
pub mod problem;
pub mod real;
pub mod thread;
pub mod work;

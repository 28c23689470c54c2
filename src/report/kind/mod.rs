//! The sentences, methods and answers of each kind of cell.

pub mod compare;
pub mod data;
pub mod fit;
pub mod prepare;
pub mod prose;
pub mod question;
pub mod score;

//! The screens: welcome, starting from tables, study.

pub mod start;
pub mod study;
pub mod welcome;

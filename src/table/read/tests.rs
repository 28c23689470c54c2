//! Tests of reading.

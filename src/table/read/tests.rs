//! Tests of reading.


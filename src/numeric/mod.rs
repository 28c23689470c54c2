//! Floor 1: mathematics on numbers only: no names, no text, no tables.

//! Figures through their widest door: from plain numbers to SVG text and PNG bytes.
//!
//! * `sample`: one invented figure of each kind
//! * `nasty`: figures from numbers and names that nobody would choose
//! * `snapshots`: the SVG text of each kind, and one PNG
//! * `laws`: what holds for every picture
//! * `fonts`: the table of widths against the fonts themselves

mod fonts;
mod laws;
mod nasty;
mod sample;
mod snapshots;

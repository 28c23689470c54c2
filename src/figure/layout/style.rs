//! Sizes of type, lines and gaps, in pixels: one grid of four for all figures.

use crate::figure::ink::Ink;
use crate::figure::{Role, Weight};

/// The em of a title.
pub(super) const TITLE: f64 = 13.0;
/// The em of everything else that is read in a table.
pub(super) const TEXT: f64 = 12.0;
/// The em of numbers on axes, headings and labels.
pub(super) const SMALL: f64 = 11.0;
/// From the top to the baseline of the title.
pub(super) const TITLE_BASELINE: f64 = 13.0;
/// The height that a title of one line takes, with the air below it.
pub(super) const TITLE_HEIGHT: f64 = 28.0;
/// Between the baselines of a title.
pub(super) const TITLE_PITCH: f64 = 18.0;
/// The most lines that a title takes.
pub(super) const TITLE_LINES: usize = 2;
/// The height of a line of small text.
pub(super) const SMALL_LINE: f64 = 16.0;
/// From the middle of a line of small text down to its baseline.
pub(super) const BASELINE: f64 = 4.0;
/// The least distance between the middles of two labels.
pub(super) const LABEL_PITCH: f64 = 14.0;
/// Between a text and what it stands beside.
pub(super) const GAP: f64 = 8.0;
/// The height of a strip.
pub(super) const STRIP: f64 = 28.0;
/// The least height of a panel that is no strip.
pub(super) const LEAST_PANEL: f64 = 24.0;
/// A hairline.
pub(super) const HAIR: f64 = 1.0;
/// The radius of a dot that is one of few.
pub(super) const DOT: f64 = 3.5;
/// The radius of a dot that is one of many.
pub(super) const SMALL_DOT: f64 = 2.3;
/// The radius of a dot that is one of very many.
pub(super) const TINY_DOT: f64 = 1.5;
/// The radius of the ring around what was chosen.
pub(super) const RING: f64 = 5.5;

/// The ink of a solid mark.
pub(super) fn mark_ink(role: Role) -> Ink {
    match role {
        Role::Series(nth) => Ink::Series(nth),
        Role::Pale(nth) => Ink::SeriesPale(nth),
        Role::Chosen => Ink::Chosen,
        Role::Quiet => Ink::Quiet,
        Role::Caution => Ink::Caution,
        Role::Reference => Ink::Reference,
    }
}

/// The ink of one dot among many.
pub(super) fn dot_ink(role: Role) -> Ink {
    match role {
        Role::Series(nth) => Ink::SeriesDot(nth),
        Role::Chosen => Ink::ChosenDot,
        Role::Pale(_) | Role::Quiet | Role::Caution | Role::Reference => mark_ink(role),
    }
}

/// The ink of an area between two lines.
pub(super) fn band_ink(role: Role) -> Ink {
    match role {
        Role::Series(nth) | Role::Pale(nth) => Ink::SeriesBand(nth),
        Role::Chosen | Role::Caution => Ink::ChosenBand,
        Role::Quiet | Role::Reference => Ink::QuietBand,
    }
}

/// The ink of a text that belongs to a mark.
pub(super) fn text_ink(role: Role) -> Ink {
    match role {
        Role::Series(nth) | Role::Pale(nth) => Ink::SeriesText(nth),
        Role::Chosen => Ink::ChosenText,
        Role::Caution => Ink::CautionText,
        Role::Quiet | Role::Reference => Ink::QuietText,
    }
}

/// The width of a line.
pub(super) fn line_width(weight: Weight) -> f64 {
    match weight {
        Weight::Strong => 2.0,
        Weight::Normal | Weight::Dashed => 1.5,
        Weight::Fine | Weight::Faint => 0.75,
    }
}

//! What each kind of cell can be told. An impossible choice cannot be written down.

pub mod compare;
pub mod data;
pub mod fit;
pub mod prepare;
pub mod question;
pub mod said;
pub mod score;
pub mod slot;
#[cfg(test)]
pub mod spread;
pub mod weights;

use crate::study::cell::{CellId, Kind};
use crate::study::link::Link;
use crate::study::prose::Prose;
use crate::study::settings::compare::Compare;
use crate::study::settings::data::Data;
use crate::study::settings::fit::Fit;
use crate::study::settings::prepare::Prepare;
use crate::study::settings::question::Question;
use crate::study::settings::score::Score;

/// The settings of a cell, one variant per kind.
#[expect(
    clippy::large_enum_variant,
    reason = "a study has a few dozen cells, and a Data cell is handed on as often as any"
)]
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Settings {
    /// Reads tables.
    Data(Data),
    /// Prepares.
    Prepare(Prepare),
    /// Fits.
    Fit(Fit),
    /// Asks.
    Question(Question),
    /// Compares.
    Compare(Compare),
    /// Scores.
    Score(Score),
    /// Tells.
    Prose(Prose),
}

impl Settings {
    /// The kind of cell that these settings belong to.
    #[must_use]
    pub const fn kind(&self) -> Kind {
        match self {
            Self::Data(_) => Kind::Data,
            Self::Prepare(_) => Kind::Prepare,
            Self::Fit(_) => Kind::Fit,
            Self::Question(_) => Kind::Question,
            Self::Compare(_) => Kind::Compare,
            Self::Score(_) => Kind::Score,
            Self::Prose(_) => Kind::Prose,
        }
    }

    /// The cells that are drawn on, each once, in the order of the settings.
    #[must_use]
    pub fn draws_on(&self) -> Vec<CellId> {
        let links: Vec<Link> = match self {
            Self::Data(_) => Vec::new(),
            Self::Prepare(prepare) => vec![prepare.input],
            Self::Fit(fit) => vec![fit.input],
            Self::Question(question) => vec![question.fit],
            Self::Compare(compare) => compare.fits.clone(),
            Self::Score(score) => vec![score.fit],
            Self::Prose(prose) => prose.cells().into_iter().map(Link::to).collect(),
        };
        let mut cells = Vec::new();
        for id in links.into_iter().filter_map(|link| link.0) {
            if !cells.contains(&id) {
                cells.push(id);
            }
        }
        cells
    }
}

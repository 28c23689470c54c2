//! A cell: its lasting identity, its title, its settings.

use crate::study::settings::Settings;

/// Names a cell for the whole life of a study; never given out twice.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct CellId(u32);

impl CellId {
    /// The id with this number.
    #[must_use]
    pub const fn new(number: u32) -> Self {
        Self(number)
    }

    /// The number that is written down.
    #[must_use]
    pub const fn number(self) -> u32 {
        self.0
    }
}

impl std::fmt::Debug for CellId {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "#{}", self.0)
    }
}

/// One step of a study.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Cell {
    /// Who it is, whatever it is called and wherever it stands.
    pub id: CellId,
    /// What people call it.
    pub title: String,
    /// What it does.
    pub settings: Settings,
}

/// The seven kinds of cell.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Kind {
    /// Reads tables and gives their columns roles.
    Data,
    /// An ordered list of preparation steps.
    Prepare,
    /// One penalised regression.
    Fit,
    /// Asks one thing of a fit.
    Question,
    /// Sets several fits side by side.
    Compare,
    /// Applies a fit to samples of another table.
    Score,
    /// Text with live facts.
    Prose,
}

impl Kind {
    /// All kinds, in the order in which they are offered.
    pub const ALL: [Self; 7] = [
        Self::Data,
        Self::Prepare,
        Self::Fit,
        Self::Question,
        Self::Compare,
        Self::Score,
        Self::Prose,
    ];

    /// The kind's name on the page.
    #[must_use]
    pub const fn name(self) -> &'static str {
        match self {
            Self::Data => "Data",
            Self::Prepare => "Prepare",
            Self::Fit => "Fit",
            Self::Question => "Question",
            Self::Compare => "Compare",
            Self::Score => "Score",
            Self::Prose => "Prose",
        }
    }
}

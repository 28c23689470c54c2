//! Why an export could not be made.

use crate::base::problem::Problem;
use crate::eval::caveat::Caveat;
use crate::export::picture::PictureError;

/// Why an export could not be made.
#[derive(Clone, Debug, PartialEq)]
pub enum ExportError {
    /// Stops stand and nobody gave a reason to override them.
    Stopped(Vec<Caveat>),
    /// No cell has an outcome.
    NothingToExport,
    /// A figure could not be painted.
    Picture(PictureError),
    /// The workbook could not be put together, as its writer says.
    Workbook(String),
}

impl From<PictureError> for ExportError {
    fn from(error: PictureError) -> Self {
        Self::Picture(error)
    }
}

impl ExportError {
    /// The error as it is told to people. `despite` names the way to give a reason.
    #[must_use]
    pub fn problem(&self, despite: &str) -> Problem {
        match self {
            Self::Stopped(caveats) => {
                let texts: Vec<String> = caveats
                    .iter()
                    .map(|caveat| format!("“{}”: {}", caveat.heading, caveat.text))
                    .collect();
                Problem::new(
                    "export-stopped",
                    format!(
                        "The export is blocked by what stands in the margin. {}",
                        texts.join(" ")
                    ),
                )
                .mend("Resolve it.")
                .mend(format!(
                    "Or give a reason, which is printed, with {despite}."
                ))
            }
            Self::NothingToExport => Problem::new(
                "nothing-to-export",
                "No cell of the study has been evaluated yet.",
            )
            .mend("Bring the study up to date first."),
            Self::Picture(error) => Problem::new("picture", "A figure could not be painted.")
                .details(format!("{error:?}")),
            Self::Workbook(words) => {
                Problem::new("workbook", "The workbook could not be put together.")
                    .details(words.clone())
            }
        }
    }
}

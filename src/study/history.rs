//! Undo and redo, and whether the study is saved.

use crate::study::Study;
use crate::study::edit::{Edit, EditError};

/// One step of the history: a label for the menu, and the edits that take the step back.
#[derive(Clone, Debug)]
struct Step {
    label: String,
    /// Past: the edits that undo the step. Future: the edits that do it again.
    edits: Vec<Edit>,
    serial: u64,
}

/// The linear history of a study: past and future steps without limit.
///
/// A new step forgets the future. Each step has a serial number, and *saved* is the number at
/// the time of saving, because equal depth does not mean equal content.
#[derive(Clone, Debug, Default)]
pub struct History {
    past: Vec<Step>,
    future: Vec<Step>,
    last_serial: u64,
    saved: u64,
}

impl History {
    /// The history of a study that has just been opened or saved.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// Applies edits to the study as one step. Edits that change nothing make no step, so that
    /// leaving a word as it was neither forgets the future nor asks for saving.
    ///
    /// # Errors
    /// The first refusal; study and history are then as they were.
    pub fn commit(
        &mut self,
        study: &mut Study,
        label: &str,
        edits: Vec<Edit>,
    ) -> Result<(), EditError> {
        let before = study.clone();
        let back = study.apply_all(edits)?;
        if *study == before {
            return Ok(());
        }
        self.last_serial += 1;
        self.past.push(Step {
            label: label.to_owned(),
            edits: back,
            serial: self.last_serial,
        });
        self.future.clear();
        Ok(())
    }

    /// Takes the last step back. Returns its label, or `None` when there is no past.
    pub fn undo(&mut self, study: &mut Study) -> Option<String> {
        let step = self.past.pop()?;
        let again = study.take_back(step.edits);
        self.future.push(Step {
            label: step.label.clone(),
            edits: again,
            serial: step.serial,
        });
        Some(step.label)
    }

    /// Does the step again that was last taken back. Returns its label, or `None`.
    pub fn redo(&mut self, study: &mut Study) -> Option<String> {
        let step = self.future.pop()?;
        let back = study.take_back(step.edits);
        self.past.push(Step {
            label: step.label.clone(),
            edits: back,
            serial: step.serial,
        });
        Some(step.label)
    }

    /// The label of the step that undo would take back.
    #[must_use]
    pub fn undo_label(&self) -> Option<&str> {
        self.past.last().map(|step| step.label.as_str())
    }

    /// The label of the step that redo would do again.
    #[must_use]
    pub fn redo_label(&self) -> Option<&str> {
        self.future.last().map(|step| step.label.as_str())
    }

    /// Whether the study differs from what was last saved.
    #[must_use]
    pub fn is_modified(&self) -> bool {
        self.serial() != self.saved
    }

    /// Notes that the study as it is now has been saved.
    pub fn saved(&mut self) {
        self.saved = self.serial();
    }

    /// Notes that the study as it is now lies nowhere but here, such as work that was rescued.
    pub fn unsaved(&mut self) {
        self.saved = u64::MAX;
    }

    fn serial(&self) -> u64 {
        self.past.last().map_or(0, |step| step.serial)
    }
}

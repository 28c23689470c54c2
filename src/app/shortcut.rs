//! Keys to messages.

use iced::keyboard::{Key, Modifiers, key::Named};

/// What a key means wherever it is pressed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Shortcut {
    /// Takes the last step back.
    Undo,
    /// Does it again.
    Redo,
    /// Saves.
    Save,
    /// Saves under another name.
    SaveAs,
    /// Opens a study.
    Open,
    /// Starts from tables.
    Start,
    /// Opens the exports.
    HandOver,
    /// Evaluates what is due.
    BringUpToDate,
    /// Hides or shows the controls.
    Read,
    /// Light or dark.
    Turn,
    /// Letters become larger.
    Larger,
    /// Letters become smaller.
    Smaller,
    /// Letters have their usual size.
    Usual,
    /// The focus goes on.
    Next,
    /// The focus goes back.
    Previous,
    /// What is open is closed.
    Escape,
    /// The next cell is shown.
    NextCell,
    /// The cell before is shown.
    PreviousCell,
    /// The keys are shown.
    Keys,
    /// Closes the study.
    Close,
}

/// All keys as they are listed.
pub const LISTED: &[(&str, &str)] = &[
    ("Tab, Shift Tab", "the next word or control, the one before"),
    ("Enter, Space", "press what has the focus"),
    ("Escape", "close what is open"),
    ("Alt ↓, Alt ↑", "the next cell, the cell before"),
    (
        "Page ↓, Page ↑, Home, End",
        "through the page, or through a table",
    ),
    (
        "Arrows, with Shift",
        "from value to value in a table; select",
    ),
    (
        "Ctrl C, Ctrl A in a table",
        "copy what is selected; select all",
    ),
    (
        "Enter in a table of an answer",
        "make the row stand out in every figure and table",
    ),
    (
        "←, →, with Shift; Enter, on a figure",
        "move the penalty strength, finely; set it",
    ),
    ("Ctrl Z, Ctrl Shift Z", "undo, redo"),
    (
        "Ctrl Enter",
        "bring up to date; while prose is typed, set it",
    ),
    ("Ctrl S, Ctrl Shift S", "save, save under another name"),
    ("Ctrl O, Ctrl N", "open a study, start from tables"),
    ("Ctrl E", "hand over"),
    ("Ctrl W", "close the study"),
    ("F8", "reading view"),
    ("F9", "light or dark"),
    ("Ctrl +, Ctrl −, Ctrl 0", "larger letters, smaller, usual"),
    ("F1", "this page"),
];

/// What a key means.
#[must_use]
pub fn of(key: &Key, modifiers: Modifiers) -> Option<Shortcut> {
    let command = modifiers.command();
    let shift = modifiers.shift();
    let shortcut = match key.as_ref() {
        Key::Character("z") if command && !shift => Shortcut::Undo,
        Key::Character("z" | "Z") if command => Shortcut::Redo,
        Key::Character("y") if command => Shortcut::Redo,
        Key::Character("s") if command && !shift => Shortcut::Save,
        Key::Character("s" | "S") if command => Shortcut::SaveAs,
        Key::Character("o") if command => Shortcut::Open,
        Key::Character("n") if command => Shortcut::Start,
        Key::Character("e") if command => Shortcut::HandOver,
        Key::Character("w") if command => Shortcut::Close,
        Key::Character("+" | "=") if command => Shortcut::Larger,
        Key::Character("-") if command => Shortcut::Smaller,
        Key::Character("0") if command => Shortcut::Usual,
        Key::Named(Named::Enter) if command => Shortcut::BringUpToDate,
        Key::Named(Named::Tab) if shift => Shortcut::Previous,
        Key::Named(Named::Tab) if modifiers.is_empty() => Shortcut::Next,
        Key::Named(Named::Escape) => Shortcut::Escape,
        Key::Named(Named::ArrowDown) if modifiers.alt() => Shortcut::NextCell,
        Key::Named(Named::ArrowUp) if modifiers.alt() => Shortcut::PreviousCell,
        Key::Named(Named::F1) => Shortcut::Keys,
        Key::Named(Named::F8) => Shortcut::Read,
        Key::Named(Named::F9) => Shortcut::Turn,
        Key::Named(_) | Key::Character(_) | Key::Unidentified => return None,
    };
    Some(shortcut)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn shift_turns_undo_into_redo() {
        let key = Key::Character("z".into());
        assert_eq!(of(&key, Modifiers::CTRL), Some(Shortcut::Undo));
        let both = Modifiers::CTRL | Modifiers::SHIFT;
        assert_eq!(of(&key, both), Some(Shortcut::Redo));
        assert_eq!(of(&key, Modifiers::empty()), None);
    }
}

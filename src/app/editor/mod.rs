//! Editors: what opens below a sentence when one of its words is pressed.
//!
//! What is being typed and is not yet lawful is a draft and lives here, never in the document.
//! An editor changes nothing: it hands a value to the screen, which sets it through the one door.

pub mod acts;
pub mod cell;
pub mod choice;
pub mod column;
pub mod columns;
pub mod file;
pub mod line;
pub mod list;
pub mod names;
pub mod place;
pub mod prose;
pub mod steps;

use crate::app::editor::column::Names;
use crate::app::theme::{container, space, text};
use crate::app::widget::Element;
use crate::base::problem::Problem;
use crate::report::sentence::{self, Word};
use crate::study::Study;
use crate::study::cell::CellId;
use crate::study::settings::Settings;
use crate::study::settings::slot::Value;
use iced::widget::{Column, container as boxed, row, space as gap};
use iced::{Length, Task};

/// The name by which the field of an open editor is given the focus.
pub const FIELD: &str = "editor field";

/// What an editor is told.
#[derive(Clone, Debug)]
pub enum Message {
    /// About a line that is typed.
    Line(line::Message),
    /// About a list of choices.
    Choice(choice::Message),
    /// About a column.
    Column(column::Message),
    /// About ranges of columns.
    Columns(columns::Message),
    /// About several columns.
    Names(names::Message),
    /// About a cell.
    Cell(cell::Message),
    /// About a file.
    File(file::Message),
    /// About steps.
    Steps(steps::Message),
    /// About a list of texts.
    List(list::Message),
    /// About recorded acts.
    Acts(acts::Message),
    /// Closes the editor without a change.
    Close,
}

/// What an editor wants of the screen.
#[derive(Debug)]
pub enum Action {
    /// Nothing.
    None,
    /// A value is to be set.
    Commit(Value),
    /// A file that has been read is to be put on the shelf, and set.
    Take {
        /// Where it lies.
        path: std::path::PathBuf,
        /// Its bytes.
        bytes: std::sync::Arc<[u8]>,
    },
    /// The editor is done.
    Close,
    /// Something is done off the window's thread.
    Run(Task<Message>),
}

/// An editor.
#[derive(Debug)]
pub enum Editor {
    /// A number or a text.
    Line(line::Line),
    /// One of a few values.
    Choice(choice::Choice),
    /// One column, or none.
    Column(column::Column),
    /// Ranges of columns.
    Columns(columns::Columns),
    /// Several columns.
    Names(names::Chosen),
    /// A cell.
    Cell(cell::CellEditor),
    /// A file.
    File(file::File),
    /// Steps.
    Steps(steps::Steps),
    /// A list of texts.
    List(list::List),
    /// Recorded acts.
    Acts(acts::Acts),
}

/// The editor that is open, and where.
#[derive(Debug)]
pub struct Open {
    /// The cell whose word it is.
    pub cell: CellId,
    /// Which sentence of the cell.
    pub sentence: usize,
    /// Which piece of the sentence.
    pub piece: usize,
    /// The word.
    pub word: Word,
    /// The editor.
    pub editor: Editor,
    /// Why the draft cannot stand.
    pub problem: Option<Problem>,
}

impl Open {
    /// Opens the editor of a word.
    pub fn new(
        study: &Study,
        cell: CellId,
        (sentence, piece): (usize, usize),
        word: &Word,
        columns: Names,
        beside: Option<&std::path::PathBuf>,
    ) -> (Self, Task<Message>) {
        let settings = study.cell(cell).map(|cell| &cell.settings);
        let value = settings.and_then(|settings| settings.value(&word.slot));
        let (editor, task) = match &word.editor {
            sentence::Editor::Number { least, most, whole } => (
                Editor::Line(line::Line::number(
                    value.as_ref(),
                    word,
                    *least,
                    *most,
                    *whole,
                )),
                Task::none(),
            ),
            sentence::Editor::Text => (
                Editor::Line(line::Line::words(value.as_ref(), word)),
                Task::none(),
            ),
            sentence::Editor::Choice(choices) => (
                Editor::Choice(choice::Choice::new(choices.clone(), value.as_ref())),
                Task::none(),
            ),
            sentence::Editor::Column => {
                (Editor::Column(column::Column::new(columns)), Task::none())
            }
            sentence::Editor::Columns => (
                Editor::Columns(columns::Columns::new(columns, value)),
                Task::none(),
            ),
            sentence::Editor::Names => (
                Editor::Names(names::Chosen::new(columns, value)),
                Task::none(),
            ),
            sentence::Editor::Cell(kinds) => (
                Editor::Cell(cell::CellEditor::new(study, cell, kinds)),
                Task::none(),
            ),
            sentence::Editor::File => {
                let (file, task) = file::File::new(file::beside(beside));
                (Editor::File(file), task.map(Message::File))
            }
            sentence::Editor::Steps => (Editor::Steps(steps::Steps::new(value)), Task::none()),
            sentence::Editor::List => (Editor::List(list::List::new(value)), Task::none()),
            sentence::Editor::Acts => (Editor::Acts(acts::Acts::new(value)), Task::none()),
        };
        let open = Self {
            cell,
            sentence,
            piece,
            word: word.clone(),
            editor,
            problem: None,
        };
        let focus = iced::widget::operation::focus(FIELD);
        (open, Task::batch([task, focus]))
    }

    /// What differs from this table is shown before a file is taken for it.
    pub fn replaces(&mut self, earlier: file::Earlier) {
        if let Editor::File(file) = &mut self.editor {
            file.replaces(earlier);
        }
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        self.problem = None;
        match (&mut self.editor, message) {
            (_, Message::Close) => Action::Close,
            (Editor::Line(line), Message::Line(message)) => line.update(message),
            (Editor::Choice(choice), Message::Choice(message)) => choice.update(message),
            (Editor::Column(column), Message::Column(message)) => column.update(message),
            (Editor::Columns(columns), Message::Columns(message)) => columns.update(message),
            (Editor::Names(chosen), Message::Names(message)) => chosen.update(message),
            (Editor::Cell(_), Message::Cell(message)) => cell::CellEditor::update(message),
            (Editor::File(file), Message::File(message)) => file.update(message),
            (Editor::Steps(steps), Message::Steps(message)) => steps.update(message),
            (Editor::List(list), Message::List(message)) => list.update(message),
            (Editor::Acts(acts), Message::Acts(message)) => acts.update(message),
            // A message of an editor that was closed meanwhile.
            (
                Editor::Line(_)
                | Editor::Choice(_)
                | Editor::Column(_)
                | Editor::Columns(_)
                | Editor::Names(_)
                | Editor::Cell(_)
                | Editor::File(_)
                | Editor::Steps(_)
                | Editor::List(_)
                | Editor::Acts(_),
                _,
            ) => Action::None,
        }
    }

    /// Whether the editor chooses among names of columns and knows none yet.
    #[must_use]
    pub fn lacks_names(&self) -> bool {
        match &self.editor {
            Editor::Column(column) => column.is_nameless(),
            Editor::Columns(columns) => columns.is_nameless(),
            Editor::Names(chosen) => chosen.is_nameless(),
            Editor::Line(_)
            | Editor::Choice(_)
            | Editor::Cell(_)
            | Editor::File(_)
            | Editor::Steps(_)
            | Editor::List(_)
            | Editor::Acts(_) => false,
        }
    }

    /// The names of the columns have become known.
    pub fn learn(&mut self, names: Names) {
        match &mut self.editor {
            Editor::Column(column) => column.learn(names),
            Editor::Columns(columns) => columns.learn(names),
            Editor::Names(chosen) => chosen.learn(names),
            Editor::Line(_)
            | Editor::Choice(_)
            | Editor::Cell(_)
            | Editor::File(_)
            | Editor::Steps(_)
            | Editor::List(_)
            | Editor::Acts(_) => {}
        }
    }

    /// Takes a file that was dropped on the window, where one is asked for.
    pub fn drop_file(&mut self, path: std::path::PathBuf) -> Option<Task<Message>> {
        let Editor::File(file) = &mut self.editor else {
            return None;
        };
        Some(file.read(path).map(Message::File))
    }

    /// What the draft would set, if there is one that is worth keeping when the editor is left.
    #[must_use]
    pub fn draft(&self) -> Option<Value> {
        match &self.editor {
            Editor::Line(line) => line.draft(),
            Editor::List(list) => list.draft(),
            Editor::Choice(_)
            | Editor::Column(_)
            | Editor::Columns(_)
            | Editor::Names(_)
            | Editor::Cell(_)
            | Editor::File(_)
            | Editor::Steps(_)
            | Editor::Acts(_) => None,
        }
    }

    /// The editor, set off from the sentence by a bar.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let editor = match &self.editor {
            Editor::Line(line) => line.view().map(Message::Line),
            Editor::Choice(choice) => choice.view().map(Message::Choice),
            Editor::Column(column) => column.view().map(Message::Column),
            Editor::Columns(columns) => columns.view().map(Message::Columns),
            Editor::Names(chosen) => chosen.view().map(Message::Names),
            Editor::Cell(cell) => cell.view().map(Message::Cell),
            Editor::File(file) => file.view().map(Message::File),
            Editor::Steps(steps) => steps.view().map(Message::Steps),
            Editor::List(list) => list.view().map(Message::List),
            Editor::Acts(acts) => acts.view().map(Message::Acts),
        };
        let mut parts = Column::new().spacing(space::SMALL).push(editor);
        if let Some(problem) = &self.problem {
            parts = parts.push(text::wrong(problem.to_string()));
        }
        set_off(parts.into())
    }
}

/// Something that belongs to what stands above it, set off by a bar.
#[must_use]
pub fn set_off<'a, M: 'a>(content: Element<'a, M>) -> Element<'a, M> {
    let bar = boxed(gap())
        .width(space::BAR)
        .height(Length::Fill)
        .style(container::accent);
    let sheet = boxed(content)
        .padding(space::GAP - space::TIGHT)
        .width(Length::Fill)
        .style(container::sheet);
    row![bar, sheet].height(Length::Shrink).into()
}

/// The settings of a cell with one word changed.
///
/// # Errors
/// A [`Problem`] that says what may stand there.
pub fn changed(study: &Study, open: &Open, value: Value) -> Result<Settings, Problem> {
    let cell = study.cell(open.cell).ok_or_else(|| {
        Problem::new(
            "no-such-cell",
            "The cell that was to be changed is no longer in the study.",
        )
    })?;
    cell.settings.with(&open.word.slot, value)
}

#[cfg(test)]
mod tests;

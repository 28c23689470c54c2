//! What is said by the words of the sentences: which editor a word opens, and what it sets.

use crate::app::editor::{self, choice, column, names};
use crate::app::run;
use crate::app::screen::start::taken::{Taken, take_bytes};
use crate::app::screen::start::word::{self, Ask};
use crate::app::screen::start::{Action, Busy, EditorMessage, Field, Message, Start};
use crate::base::layout::Orientation;
use crate::base::work::{CancelSource, Work};
use crate::report::kind::data;
use crate::report::sentence::Choice;
use crate::study::settings::slot::Value;
use crate::table::read::Options;
use std::sync::Arc;

impl Start {
    pub(super) fn open_word(&mut self, sentence: usize, piece: usize) -> Action {
        let Some(shown) = &self.shown else {
            return Action::None;
        };
        let open = self.open.as_ref().map(|(ask, _)| *ask);
        let sentences = word::sentences(&self.roles, self.kind, &shown.taken, open);
        let ask = sentences
            .get(sentence)
            .and_then(|words| words.get(piece))
            .and_then(|(_, ask)| *ask);
        let Some(ask) = ask.filter(|ask| open != Some(*ask)) else {
            self.open = None;
            return Action::None;
        };
        let field = match ask {
            Ask::Column(_) => Field::Column(column::Column::new(Arc::new(self.names()))),
            Ask::Columns(role) => {
                let given = Value::Texts(self.roles.all(role));
                let names = Arc::new(self.names());
                Field::Names(names::Chosen::new(names, Some(given)))
            }
            Ask::Kind | Ask::Orientation | Ask::Sheet | Ask::Header => {
                let (choices, present) = choices(ask, self.kind, &shown.taken);
                Field::Choice(choice::Choice::new(choices, Some(&present)))
            }
        };
        self.open = Some((ask, field));
        Action::Run(iced::widget::operation::focus(editor::FIELD))
    }

    pub(super) fn in_editor(&mut self, message: EditorMessage) -> Action {
        let Some((ask, field)) = &mut self.open else {
            return Action::None;
        };
        let ask = *ask;
        let action = match (field, message) {
            (Field::Choice(choice), EditorMessage::Choice(message)) => choice.update(message),
            (Field::Column(column), EditorMessage::Column(message)) => column.update(message),
            (Field::Names(names), EditorMessage::Names(message)) => names.update(message),
            // A message of an editor that was closed meanwhile.
            (Field::Choice(_) | Field::Column(_) | Field::Names(_), _) => editor::Action::None,
        };
        match action {
            editor::Action::None | editor::Action::Take { .. } | editor::Action::Run(_) => {
                Action::None
            }
            editor::Action::Close => {
                self.open = None;
                Action::None
            }
            editor::Action::Commit(value) => {
                self.open = None;
                self.set(ask, value)
            }
        }
    }

    pub(super) fn set(&mut self, ask: Ask, value: Value) -> Action {
        self.problem = None;
        match (ask, value) {
            (Ask::Column(role), Value::Column(Some(name))) => {
                self.give(&name, role);
                let is_shown = self.shown.as_ref().is_some_and(|shown| {
                    shown
                        .table()
                        .columns()
                        .iter()
                        .any(|column| column.name == name)
                });
                if is_shown {
                    self.jump(&name);
                }
            }
            (Ask::Column(role), _) => {
                self.roles.clear(role);
                self.refresh();
            }
            (Ask::Columns(role), Value::Texts(names)) => {
                self.roles.clear(role);
                for name in &names {
                    self.roles.give(name, role);
                }
                self.refresh();
            }
            (Ask::Kind, Value::Choice(name)) => {
                self.kind = data::kinds()
                    .iter()
                    .map(|(known, _)| *known)
                    .find(|known| *known == name);
            }
            (Ask::Kind | Ask::Columns(_), _) => {}
            (Ask::Orientation, Value::Choice(name)) => {
                let orientation = match name.as_str() {
                    "columns" => Orientation::SamplesInColumns,
                    _ => Orientation::SamplesInRows,
                };
                return self.again(|options| options.orientation = Some(orientation));
            }
            (Ask::Sheet, Value::Choice(name)) => {
                return self.again(|options| {
                    // Another sheet may lie in another way.
                    *options = Options {
                        sheet: Some(name),
                        ..Options::default()
                    };
                });
            }
            (Ask::Header, Value::Whole(line)) => {
                let line = usize::try_from(line).unwrap_or(0);
                return self.again(|options| options.header_row = Some(line));
            }
            (Ask::Orientation | Ask::Sheet | Ask::Header, _) => {}
        }
        Action::None
    }

    /// Reads the table that is shown in another way, off the window's thread.
    pub(super) fn again(&mut self, change: impl FnOnce(&mut Options)) -> Action {
        let Some(taken) = self.tables.get(self.at) else {
            return Action::None;
        };
        let mut options = taken.asked.clone();
        change(&mut options);
        let (at, path, bytes) = (self.at, taken.path.clone(), Arc::clone(&taken.bytes));
        let cancel = CancelSource::new();
        let token = cancel.token();
        self.busy = Busy::Reading {
            name: taken.name.clone(),
            cancel,
        };
        Action::Run(run::off_thread(move || {
            let report = |_: f32| {};
            let work = Work::new(token, &report);
            Message::ReadAgain(at, Box::new(take_bytes(&path, bytes, options, &work)))
        }))
    }
}

/// The choices of a word that has a few, and which of them stands.
fn choices(ask: Ask, kind: Option<&str>, taken: &Taken) -> (Vec<Choice>, Value) {
    let used = &taken.reading.used;
    let named = |label: &str, name: &str| Choice {
        label: label.to_owned(),
        value: Value::choice(name),
    };
    match ask {
        Ask::Kind => {
            let own = named("the kind that its values show", "");
            let kinds = data::kinds().iter().map(|(name, label)| named(label, name));
            (
                std::iter::once(own).chain(kinds).collect(),
                Value::choice(kind.unwrap_or("")),
            )
        }
        Ask::Sheet => {
            let sheets = taken.reading.choices.sheets.iter();
            (
                sheets
                    .map(|sheet| named(&sheet.name, &sheet.name))
                    .collect(),
                Value::choice(used.sheet.as_deref().unwrap_or("")),
            )
        }
        Ask::Header => {
            const LINES: u64 = 12;
            let line = |line: u64| Choice {
                label: match line {
                    0 => "no line: the columns have no names".to_owned(),
                    _ => format!("line {line}"),
                },
                value: Value::Whole(line),
            };
            let present = used.header_row.unwrap_or(1) as u64;
            ((0..=LINES).map(line).collect(), Value::Whole(present))
        }
        Ask::Orientation | Ask::Column(_) | Ask::Columns(_) => {
            let present = match used.orientation {
                Some(Orientation::SamplesInColumns) => "columns",
                Some(Orientation::SamplesInRows) | None => "rows",
            };
            (
                vec![
                    named("rows: one row is one sample", "rows"),
                    named("columns: one column is one sample", "columns"),
                ],
                Value::choice(present),
            )
        }
    }
}

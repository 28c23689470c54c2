//! What the study screen does with words that are edited and prose that is typed.

use crate::app::disk;
use crate::app::editor::file::Earlier;
use crate::app::editor::prose::{self, Offer, Prose};
use crate::app::editor::{self, Open};
use crate::app::part::cell;
use crate::app::screen::study::{Action, Message, StudyScreen};
use crate::app::session::{Following, data_cell, dataset};
use crate::eval::fact::FactValue;
use crate::report::sentence;
use crate::study::cell::CellId;
use crate::study::edit::Edit;
use crate::study::settings::Settings;
use crate::study::settings::slot::data::DataSlot;
use crate::study::settings::slot::table::TableSlot;
use crate::study::settings::slot::{Slot, Value};
use iced::widget::operation;
use std::path::PathBuf;
use std::sync::Arc;

impl StudyScreen {
    pub(super) fn open_word(&mut self, id: CellId, nth: usize, at: usize) -> Action {
        let is_open = |open: &Open| open.cell == id && open.sentence == nth && open.piece == at;
        if self.editor.as_ref().is_some_and(is_open) {
            self.editor = None;
            return Action::None;
        }
        let word = self
            .sheet(id)
            .and_then(|sheet| sheet.report.sentences.get(nth))
            .and_then(|sentence| sentence.pieces.get(at));
        let Some(sentence::Piece::Word(word)) = word.cloned() else {
            return Action::None;
        };
        let names = self.column_names(id);
        let beside = self.session.path();
        let (mut open, task) = Open::new(self.session.study(), id, (nth, at), &word, names, beside);
        if let Some(earlier) = self.earlier(id, &word.slot) {
            open.replaces(earlier);
        }
        let lacks_names = open.lacks_names();
        self.editor = Some(open);
        let wrap = move |message| Message::Cell(id, Box::new(cell::Message::Editor(message)));
        let task = task.map(wrap);
        // A study that was opened with its record knows its tables' columns only once it has read
        // them; nothing that is due runs for that unless it would run anyway.
        let may_read = self.session.following() == Following::AsIEdit || !self.session.is_due();
        match data_cell(self.session.study(), id) {
            Some(data) if lacks_names && may_read && self.session.run().is_none() => {
                let read = self.session.bring_table(data).map(Message::Session);
                Action::Run(iced::Task::batch([task, read]))
            }
            Some(_) | None => Action::Run(task),
        }
    }

    /// The names of the columns of the tables that a cell leads back to.
    pub(super) fn column_names(&self, id: CellId) -> Arc<Vec<String>> {
        let dataset = dataset(self.session.study(), self.session.standings(), id);
        Arc::new(dataset.map_or_else(Vec::new, |dataset| {
            dataset
                .table
                .columns()
                .iter()
                .map(|column| column.name.clone())
                .collect()
        }))
    }

    /// The table that a file taken for this slot would replace.
    fn earlier(&self, id: CellId, slot: &Slot) -> Option<Earlier> {
        let Slot::Data(DataSlot::Table(at, TableSlot::File)) = slot else {
            return None;
        };
        let Settings::Data(data) = &self.session.study().cell(id)?.settings else {
            return None;
        };
        let bytes = self.session.shelf().get(&data.tables.get(*at)?.source)?;
        Some(Earlier {
            data: data.clone(),
            at: *at,
            bytes: Arc::clone(bytes),
        })
    }

    pub(super) fn in_editor(&mut self, message: editor::Message) -> Action {
        let Some(open) = &mut self.editor else {
            return Action::None;
        };
        let id = open.cell;
        match open.update(message) {
            editor::Action::None => Action::None,
            editor::Action::Close => {
                self.editor = None;
                Action::None
            }
            editor::Action::Commit(value) => self.set_word(value),
            editor::Action::Take { path, bytes } => {
                let name = disk::name(&path);
                let shelf = self.session.shelf_mut();
                let source = shelf.put(bytes);
                // The readable form of a study names its tables by path.
                shelf.came_from(&source, &name, &path);
                self.set_word(Value::File { source, name })
            }
            editor::Action::Run(task) => {
                let wrap =
                    move |message| Message::Cell(id, Box::new(cell::Message::Editor(message)));
                Action::Run(task.map(wrap))
            }
        }
    }

    /// A file that was dropped on the window goes to the word whose editor is open.
    pub fn dropped(&mut self, path: PathBuf) -> Action {
        let taken = self
            .editor
            .as_mut()
            .and_then(|open| Some((open.cell, open.drop_file(path)?)));
        match taken {
            Some((id, task)) => {
                let wrap =
                    move |message| Message::Cell(id, Box::new(cell::Message::Editor(message)));
                Action::Run(task.map(wrap))
            }
            None => {
                self.said = Some(
                    "A table can be dropped while the editor of a file’s name is open; press that \
                     name in a Data or Score cell first."
                        .to_owned(),
                );
                Action::None
            }
        }
    }

    /// Sets the word whose editor is open. A value that cannot stand stays in the editor.
    pub(super) fn set_word(&mut self, value: Value) -> Action {
        let Some(open) = &self.editor else {
            return Action::None;
        };
        let id = open.cell;
        let label = format!("change {}", open.word.slot.label());
        let result = editor::changed(self.session.study(), open, value).and_then(|settings| {
            self.session
                .commit(&label, vec![Edit::Configure { id, settings }])
        });
        match result {
            Ok(task) => {
                self.editor = None;
                self.follow_table();
                Action::Run(task.map(Message::Session))
            }
            Err(problem) => {
                if let Some(open) = &mut self.editor {
                    open.problem = Some(problem);
                }
                Action::None
            }
        }
    }

    pub(super) fn write(&mut self, id: CellId) -> Action {
        let study = self.session.study();
        let Some(Settings::Prose(prose)) = study.cell(id).map(|cell| &cell.settings) else {
            return Action::None;
        };
        let typed = prose.typed(study);
        self.editor = None;
        self.prose = Some(Prose::new(id, &typed, self.offers(id)));
        let _ = self.go_to(id);
        Action::Run(operation::focus(prose::FIELD))
    }

    /// Every fact that has a text of its own, in reading order.
    pub(super) fn offers(&self, id: CellId) -> Vec<Offer> {
        let study = self.session.study();
        let mut offers = Vec::new();
        for cell in study.cells().iter().filter(|cell| cell.id != id) {
            let Some(outcome) = self.session.standings().get(cell.id).outcome else {
                continue;
            };
            for fact in outcome.facts.all() {
                if !matches!(fact.value, FactValue::Table(_)) {
                    offers.push(Offer {
                        title: cell.title.clone(),
                        fact: fact.name.clone(),
                        shown: fact.shown_with_unit(),
                    });
                }
            }
        }
        offers
    }

    pub(super) fn in_prose(&mut self, message: prose::Message) -> Action {
        let Some(open) = &mut self.prose else {
            return Action::None;
        };
        let id = open.cell;
        match open.update(message) {
            prose::Action::None => Action::None,
            prose::Action::Close => {
                self.prose = None;
                Action::None
            }
            prose::Action::Commit(typed) => {
                let study = self.session.study();
                let text = crate::study::prose::Prose::parse(&typed, study);
                let settings = Settings::Prose(text);
                let label = format!("write {}", self.title(id));
                let action = self.commit(&label, vec![Edit::Configure { id, settings }]);
                if !matches!(action, Action::Tell(_)) {
                    self.prose = None;
                }
                action
            }
        }
    }
}

//! What the study screen does with what happens on it.

use crate::app::disk;
use crate::app::editor::prose::{self, Offer, Prose};
use crate::app::editor::{self, Open};
use crate::app::part::{block, cell, head, offer, strip, table, thread};
use crate::app::run;
use crate::app::screen::study::{Action, Message, Renaming, StudyScreen};
use crate::app::session::{Following, dataset};
use crate::app::sheet::Part;
use crate::app::widget::picture::Told;
use crate::base::number::{self, Precision};
use crate::base::problem::Problem;
use crate::base::real::Real;
use crate::eval::fact::FactValue;
use crate::figure::ink::Palette;
use crate::figure::{Meaning, svg};
use crate::report::sentence;
use crate::store;
use crate::study::cell::{Cell, CellId};
use crate::study::edit::{Edit, Titled};
use crate::study::settings::Settings;
use crate::study::settings::fit::Strength;
use crate::study::settings::slot::Value;
use iced::Task;
use iced::widget::operation;
use std::path::PathBuf;
use std::sync::Arc;

impl StudyScreen {
    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        let action = match message {
            Message::Session(message) => {
                let task = self.session.update(message);
                self.follow_table();
                Action::Run(task.map(Message::Session))
            }
            Message::Head(message) => self.head(message),
            Message::Thread(thread::Message::GoTo(id)) => self.go_to(id),
            Message::Cell(id, message) => self.in_cell(id, *message),
            Message::Strip(strip::Message::Stop) => {
                self.session.stop();
                Action::None
            }
            Message::Strip(strip::Message::Dismiss) => {
                self.said = None;
                Action::None
            }
            Message::Offer => {
                self.offering = Some(None);
                Action::None
            }
            Message::Offered(message) => {
                let at = self.session.study().cells().len();
                self.add(at, &message)
            }
            Message::Escape => self.escape(),
            Message::Step(by) => self.step(by),
            Message::FigureSaved(Ok(words)) => {
                self.said = Some(words);
                Action::None
            }
            Message::FigureSaved(Err(problem)) => Action::Tell(problem),
        };
        self.refresh();
        action
    }

    fn head(&mut self, message: head::Message) -> Action {
        match message {
            head::Message::Rename => {
                let draft = self.session.study().title().to_owned();
                self.rename(Titled::Study, draft, head::FIELD)
            }
            head::Message::Typed(draft) => self.type_title(draft),
            head::Message::Renamed => self.renamed(),
            head::Message::Undo => self.undo(),
            head::Message::Redo => self.redo(),
            head::Message::Read => {
                self.is_reading = !self.is_reading;
                self.close_all();
                self.sheets.clear();
                Action::None
            }
            head::Message::Save => Action::Save,
            head::Message::HandOver => Action::HandOver,
            head::Message::BringUpToDate => self.bring_up_to_date(),
            head::Message::Follow(following) => {
                let task = self.session.follow(following);
                match following {
                    Following::AsIEdit => Action::Run(task.map(Message::Session)),
                    Following::WhenAsked => Action::Followed(following),
                }
            }
            head::Message::Close => Action::Close,
            head::Message::Keys => Action::Keys,
            head::Message::Turn => Action::Turn,
        }
    }

    /// Evaluates what is due.
    pub fn bring_up_to_date(&mut self) -> Action {
        Action::Run(self.session.bring_up_to_date().map(Message::Session))
    }

    /// Takes the last step back.
    pub fn undo(&mut self) -> Action {
        self.close_all();
        let task = self.session.undo().map(Message::Session);
        self.follow_table();
        self.refresh();
        Action::Run(task)
    }

    /// Does it again.
    pub fn redo(&mut self) -> Action {
        self.close_all();
        let task = self.session.redo().map(Message::Session);
        self.follow_table();
        self.refresh();
        Action::Run(task)
    }

    fn close_all(&mut self) {
        self.editor = None;
        self.prose = None;
        self.renaming = None;
        self.offering = None;
        self.more = None;
    }

    fn escape(&mut self) -> Action {
        let had = self.editor.take().is_some()
            | self.renaming.take().is_some()
            | self.offering.take().is_some()
            | self.more.take().is_some();
        if had {
            return Action::None;
        }
        // Prose is closed last and only when nothing would be lost: undo does not reach drafts.
        match &self.prose {
            Some(prose) if prose.is_changed() => {
                self.said =
                    Some("The text has been changed: Set keeps it, Leave gives it up.".to_owned());
            }
            Some(_) => self.prose = None,
            None => {
                if self.highlight.take().is_none() {
                    self.said = None;
                }
            }
        }
        Action::None
    }

    fn go_to(&mut self, id: CellId) -> Action {
        self.shown = Some(id);
        self.go_to.key = cell::key(id);
        self.go_to.serial += 1;
        Action::None
    }

    fn step(&mut self, by: isize) -> Action {
        let cells = self.session.study().cells();
        let at = self
            .shown
            .and_then(|id| self.session.study().position(id))
            .map_or(0, |at| at.saturating_add_signed(by));
        match cells.get(at.min(cells.len().saturating_sub(1))) {
            Some(cell) => self.go_to(cell.id),
            None => Action::None,
        }
    }

    /// Applies edits through the one door; a refusal is told.
    fn commit(&mut self, label: &str, edits: Vec<Edit>) -> Action {
        match self.session.commit(label, edits) {
            Ok(task) => {
                self.follow_table();
                Action::Run(task.map(Message::Session))
            }
            Err(problem) => Action::Tell(problem),
        }
    }

    fn rename(&mut self, what: Titled, draft: String, field: &'static str) -> Action {
        self.more = None;
        self.renaming = Some(Renaming { what, draft });
        Action::Run(Task::batch([
            operation::focus(field),
            operation::select_all(field),
        ]))
    }

    fn type_title(&mut self, draft: String) -> Action {
        if let Some(renaming) = &mut self.renaming {
            renaming.draft = draft;
        }
        Action::None
    }

    fn renamed(&mut self) -> Action {
        let Some(Renaming { what, draft }) = self.renaming.clone() else {
            return Action::None;
        };
        let before = match what {
            Titled::Study => self.session.study().title().to_owned(),
            Titled::Cell(id) => self.title(id),
        };
        if draft.trim() == before {
            self.renaming = None;
            return Action::None;
        }
        let label = format!("rename {before}");
        let title = draft;
        let action = self.commit(&label, vec![Edit::Retitle { what, title }]);
        // A refused title stays in the field.
        if !matches!(action, Action::Tell(_)) {
            self.renaming = None;
        }
        action
    }

    fn title(&self, id: CellId) -> String {
        self.session
            .study()
            .cell(id)
            .map_or_else(|| "a removed cell".to_owned(), |cell| cell.title.clone())
    }

    fn in_cell(&mut self, id: CellId, message: cell::Message) -> Action {
        self.shown = Some(id);
        match message {
            cell::Message::Word(nth, piece) => self.open_word(id, nth, piece),
            cell::Message::Editor(message) => self.in_editor(message),
            cell::Message::Write => self.write(id),
            cell::Message::Prose(message) => self.in_prose(message),
            cell::Message::Rename => {
                let draft = self.title(id);
                self.rename(Titled::Cell(id), draft, cell::FIELD)
            }
            cell::Message::Typed(draft) => self.type_title(draft),
            cell::Message::Renamed => self.renamed(),
            cell::Message::More => {
                self.more = (self.more != Some(id)).then_some(id);
                Action::None
            }
            cell::Message::Move(by) => self.move_by(id, by),
            cell::Message::Duplicate => self.duplicate(id),
            cell::Message::Remove => {
                self.more = None;
                let label = format!("remove {}", self.title(id));
                self.commit(&label, vec![Edit::Remove { id }])
            }
            cell::Message::AddBelow => {
                self.more = None;
                self.offering = Some(Some(id));
                Action::None
            }
            cell::Message::Offer(message) => {
                let at = self.session.study().position(id).map_or(0, |at| at + 1);
                self.add(at, &message)
            }
            cell::Message::Remedy(at) => self.take_remedy(id, at),
            cell::Message::CopyDetails => {
                let failure = self.session.standings().get(id).failure;
                let problem = failure.as_deref().map(|failure| failure.problem.clone());
                match problem {
                    Some(problem) => {
                        let details = problem.details.clone().unwrap_or_default();
                        let words = format!("{problem}\n{}: {details}", problem.code);
                        self.said = Some("The details have been copied.".to_owned());
                        Action::Run(iced::clipboard::write(words))
                    }
                    None => Action::None,
                }
            }
            cell::Message::Block(at, message) => self.in_block(id, at, message),
            cell::Message::OpenTable => self.open_table(id),
            cell::Message::Table(message) => self.in_table(message),
            cell::Message::Notes => {
                if !self.notes.remove(&id) {
                    let _ = self.notes.insert(id);
                }
                Action::None
            }
        }
    }

    fn open_word(&mut self, id: CellId, nth: usize, at: usize) -> Action {
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
        let (open, task) = Open::new(self.session.study(), id, (nth, at), &word, names);
        self.editor = Some(open);
        let wrap = move |message| Message::Cell(id, Box::new(cell::Message::Editor(message)));
        Action::Run(task.map(wrap))
    }

    /// The names of the columns of the tables that a cell leads back to.
    fn column_names(&self, id: CellId) -> Arc<Vec<String>> {
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

    fn in_editor(&mut self, message: editor::Message) -> Action {
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
            editor::Action::Take { name, bytes } => {
                let source = self.session.shelf_mut().put(bytes);
                self.set_word(Value::File { source, name })
            }
            editor::Action::Run(task) => {
                let wrap =
                    move |message| Message::Cell(id, Box::new(cell::Message::Editor(message)));
                Action::Run(task.map(wrap))
            }
        }
    }

    /// Sets the word whose editor is open. A value that cannot stand stays in the editor.
    fn set_word(&mut self, value: Value) -> Action {
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

    fn write(&mut self, id: CellId) -> Action {
        let study = self.session.study();
        let Some(Settings::Prose(prose)) = study.cell(id).map(|cell| &cell.settings) else {
            return Action::None;
        };
        let typed = prose.typed(study);
        self.editor = None;
        self.prose = Some(Prose::new(id, &typed, self.offers(id)));
        Action::Run(operation::focus(prose::FIELD))
    }

    /// Every fact that has a text of its own, in reading order.
    fn offers(&self, id: CellId) -> Vec<Offer> {
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

    fn in_prose(&mut self, message: prose::Message) -> Action {
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

    fn move_by(&mut self, id: CellId, by: isize) -> Action {
        let study = self.session.study();
        let n_cells = study.cells().len();
        let Some(from) = study.position(id) else {
            return Action::None;
        };
        let to = from.saturating_add_signed(by).min(n_cells - 1);
        if to == from {
            return Action::None;
        }
        let label = format!("move {}", self.title(id));
        self.commit(&label, vec![Edit::Move { id, to }])
    }

    fn duplicate(&mut self, id: CellId) -> Action {
        self.more = None;
        let study = self.session.study();
        let (Some(copy), Some(at)) = (offer::copy(study, id), study.position(id)) else {
            return Action::None;
        };
        let label = format!("duplicate {}", self.title(id));
        self.insert(&label, at + 1, copy)
    }

    fn add(&mut self, at: usize, message: &offer::Message) -> Action {
        self.offering = None;
        match offer::cell(self.session.study(), at, message) {
            Some(cell) => {
                let label = format!("add {}", cell.title);
                self.insert(&label, at, cell)
            }
            None => Action::None,
        }
    }

    fn insert(&mut self, label: &str, at: usize, cell: Cell) -> Action {
        let id = cell.id;
        let action = self.commit(label, vec![Edit::Insert { at, cell }]);
        let _ = self.go_to(id);
        action
    }

    fn take_remedy(&mut self, id: CellId, at: usize) -> Action {
        let failure = self.session.standings().get(id).failure;
        let remedy = failure
            .as_deref()
            .and_then(|failure| failure.remedies.get(at))
            .cloned();
        match remedy {
            Some(remedy) => {
                let settings = remedy.settings;
                self.commit(&remedy.label, vec![Edit::Configure { id, settings }])
            }
            None => Action::None,
        }
    }

    fn in_block(&mut self, id: CellId, at: usize, message: block::Message) -> Action {
        match message {
            block::Message::Figure(Told::Pressed(meaning)) => {
                let is_thing = |meaning: &Meaning| !matches!(meaning, Meaning::Strength(_));
                let meaning = meaning.filter(is_thing);
                self.highlight = if self.highlight == meaning {
                    None
                } else {
                    meaning
                };
                Action::None
            }
            block::Message::Figure(Told::Dragged(strength)) => self.set_strength(id, strength),
            block::Message::CopyFigure(at) => match self.figure(id, at) {
                Some((_, drawing)) => {
                    self.said = Some("The figure has been copied as SVG.".to_owned());
                    Action::Run(iced::clipboard::write(drawing))
                }
                None => Action::None,
            },
            block::Message::SaveFigure(_) => self.save_figure(id, at),
        }
    }

    /// A figure's name and its drawing on paper.
    fn figure(&self, id: CellId, at: usize) -> Option<(String, String)> {
        let Some(Part::Figure(figure)) = self.sheet(id)?.parts.get(at) else {
            return None;
        };
        let name = format!("{} {}", self.title(id), figure.name);
        Some((name, svg::svg(&figure.picture, &Palette::paper())))
    }

    fn save_figure(&mut self, id: CellId, at: usize) -> Action {
        let Some((name, drawing)) = self.figure(id, at) else {
            return Action::None;
        };
        // Beside the study; else where the program was started.
        let folder = self
            .session
            .path()
            .and_then(|path| path.parent().map(PathBuf::from))
            .unwrap_or_else(disk::start);
        let clean: String = name
            .chars()
            .map(|letter| {
                if letter.is_alphanumeric() {
                    letter
                } else {
                    '-'
                }
            })
            .collect();
        Action::Run(run::off_thread(move || {
            let written = write_figure(&folder, clean.trim_matches('-'), &drawing);
            Message::FigureSaved(written)
        }))
    }

    /// The strength that was dragged on a figure is set by hand, in the fit that the figure is of.
    fn set_strength(&mut self, id: CellId, strength: f64) -> Action {
        let study = self.session.study();
        let fit = match study.cell(id).map(|cell| &cell.settings) {
            Some(Settings::Fit(_)) => Some(id),
            Some(Settings::Question(question)) => question.fit.0,
            Some(
                Settings::Data(_)
                | Settings::Prepare(_)
                | Settings::Compare(_)
                | Settings::Score(_)
                | Settings::Prose(_),
            )
            | None => None,
        };
        let Some(fit) = fit else {
            return Action::None;
        };
        let Some(Settings::Fit(settings)) = study.cell(fit).map(|cell| &cell.settings) else {
            return Action::None;
        };
        // Three digits are as fine as a hand is.
        let rounded: f64 = format!("{strength:.2e}").parse().unwrap_or(strength);
        let Some(real) = Real::new(rounded) else {
            return Action::None;
        };
        let mut settings = settings.clone();
        settings.strength = Strength::ByHand(real);
        let words = number::text(rounded, Precision::Significant(3));
        let label = format!("drag the strength to {words}");
        let settings = Settings::Fit(settings);
        self.commit(&label, vec![Edit::Configure { id: fit, settings }])
    }

    fn open_table(&mut self, id: CellId) -> Action {
        let data = dataset(self.session.study(), self.session.standings(), id);
        let settings = self.session.study().cell(id).map(|cell| &cell.settings);
        if let (Some(dataset), Some(Settings::Data(settings))) = (data, settings) {
            self.table = Some(table::Open::new(id, dataset, settings));
            return Action::None;
        }
        // Results from the record have facts but no table; a run brings it.
        self.said = Some(
            "The table is read when the study is brought up to date; then it can be opened."
                .to_owned(),
        );
        let task = self.session.bring_up_to_date();
        Action::Run(task.map(Message::Session))
    }

    /// The open table shows what its cell gives now.
    fn follow_table(&mut self) {
        let Some(table) = &mut self.table else {
            return;
        };
        let id = table.cell;
        let data = dataset(self.session.study(), self.session.standings(), id);
        let settings = self.session.study().cell(id).map(|cell| &cell.settings);
        if let (Some(dataset), Some(Settings::Data(settings))) = (data, settings) {
            table.refresh(dataset, settings);
        }
    }

    fn in_table(&mut self, message: table::Message) -> Action {
        let Some(table) = &mut self.table else {
            return Action::None;
        };
        let id = table.cell;
        let settings = self.session.study().cell(id).map(|cell| &cell.settings);
        let Some(Settings::Data(settings)) = settings else {
            return Action::None;
        };
        match table.update(message, settings) {
            table::Action::None => Action::None,
            table::Action::Close => {
                self.table = None;
                Action::None
            }
            table::Action::Commit { label, settings } => {
                let settings = *settings;
                self.commit(&label, vec![Edit::Configure { id, settings }])
            }
            table::Action::Run(task) => {
                let wrap =
                    move |message| Message::Cell(id, Box::new(cell::Message::Table(message)));
                Action::Run(task.map(wrap))
            }
        }
    }
}

/// Writes a drawing, and a picture of it at twice its size, and says where.
fn write_figure(folder: &std::path::Path, name: &str, drawing: &str) -> Result<String, Problem> {
    let path = folder.join(format!("{name}.svg"));
    store::replace(&path, drawing.as_bytes())?;
    let picture = crate::export::picture::png(drawing, 2.0).map_err(|error| {
        Problem::new(
            "figure-unpainted",
            "The figure could not be painted as PNG.",
        )
        .details(format!("{error:?}"))
    })?;
    store::replace(&folder.join(format!("{name}.png")), &picture)?;
    Ok(format!(
        "The figure has been written to {}.",
        path.display()
    ))
}

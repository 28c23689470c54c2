//! What the study screen does with figures, grids and tables.

use crate::app::disk;
use crate::app::part::{block, cell, facts, table};
use crate::app::screen::study::{Action, Message, StudyScreen};
use crate::app::session::dataset;
use crate::app::sheet::Part;
use crate::app::widget::picture::Told;
use crate::base::number::{self, Precision};
use crate::base::real::Real;
use crate::figure::ink::Palette;
use crate::figure::{Meaning, svg};
use crate::study::cell::CellId;
use crate::study::edit::Edit;
use crate::study::settings::Settings;
use crate::study::settings::said::said;
use std::path::PathBuf;

impl StudyScreen {
    /// Takes up what was offered about a finding, as an ordinary edit.
    fn take_offer(&mut self, id: CellId, setting: &str) -> Action {
        let settings = self.session.study().cell(id).map(|cell| &cell.settings);
        let Some(Settings::Data(data)) = settings else {
            return Action::None;
        };
        match said(data, setting) {
            Ok(data) => {
                let settings = Settings::Data(data);
                self.commit(setting, vec![Edit::Configure { id, settings }])
            }
            Err(problem) => {
                self.said = Some(problem.found);
                Action::None
            }
        }
    }

    pub(super) fn in_block(&mut self, id: CellId, at: usize, message: block::Message) -> Action {
        match message {
            block::Message::Offer(setting) => self.take_offer(id, &setting),
            block::Message::Figure(Told::Pressed(meaning)) => {
                let is_thing = |meaning: &Meaning| !matches!(meaning, Meaning::Strength(_));
                self.stand_out(meaning.filter(is_thing));
                Action::None
            }
            block::Message::Row(row) => {
                let part = self.sheet(id).and_then(|sheet| sheet.parts.get(at));
                let meaning = match part {
                    Some(Part::Grid(grid)) => grid.meaning(row),
                    Some(
                        Part::Heading(_)
                        | Part::Section(..)
                        | Part::Words(_)
                        | Part::List(_)
                        | Part::Quote(_)
                        | Part::Code(_)
                        | Part::Offers(_)
                        | Part::Rule
                        | Part::Tabular(..)
                        | Part::Figure(_),
                    )
                    | None => None,
                };
                self.stand_out(meaning);
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
            block::Message::CopyTable(_) => {
                let Some(Part::Grid(grid)) = self.sheet(id).and_then(|sheet| sheet.parts.get(at))
                else {
                    return Action::None;
                };
                let copied = facts::copied(grid);
                self.said = Some("The table has been copied.".to_owned());
                Action::Run(iced::clipboard::write(copied))
            }
        }
    }

    /// A thing stands out in all figures and grids; the same once more no longer does.
    fn stand_out(&mut self, meaning: Option<Meaning>) {
        self.highlight = meaning.filter(|meaning| self.highlight.as_ref() != Some(meaning));
    }

    /// A figure's name and its drawing on paper.
    pub(super) fn figure(&self, id: CellId, at: usize) -> Option<(String, String)> {
        let Some(Part::Figure(figure)) = self.sheet(id)?.parts.get(at) else {
            return None;
        };
        let name = format!("{} {}", self.title(id), figure.name);
        Some((name, svg::svg(&figure.picture, &Palette::paper())))
    }

    pub(super) fn save_figure(&mut self, id: CellId, at: usize) -> Action {
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
        let wish = folder.join(clean.trim_matches('-'));
        Action::SaveFigure { wish, drawing }
    }

    /// The strength that was dragged on a figure is set by hand, in the fit that the figure is of.
    pub(super) fn set_strength(&mut self, id: CellId, strength: f64) -> Action {
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
        settings.strength = settings.strength.set_by_hand(real);
        let words = number::text(rounded, Precision::Significant(3));
        let label = format!("drag the strength to {words}");
        let settings = Settings::Fit(settings);
        self.commit(&label, vec![Edit::Configure { id: fit, settings }])
    }

    pub(super) fn open_table(&mut self, id: CellId) -> Action {
        let data = dataset(self.session.study(), self.session.standings(), id);
        let settings = self.session.study().cell(id).map(|cell| &cell.settings);
        if let (Some(dataset), Some(Settings::Data(settings))) = (data, settings) {
            self.table = Some(table::Open::new(id, dataset, settings));
            return Action::None;
        }
        // Results from the record have facts but no table; a run brings it.
        self.said = Some("The table is being read.".to_owned());
        self.table_wanted = Some(id);
        let task = self.session.bring_table(id);
        Action::Run(task.map(Message::Session))
    }

    /// A table that was waited for is opened, and an editor learns the names of its columns.
    pub(super) fn follow_data(&mut self) {
        if let Some(id) = self.table_wanted
            && dataset(self.session.study(), self.session.standings(), id).is_some()
        {
            self.table_wanted = None;
            self.said = None;
            let _ = self.open_table(id);
        }
        if let Some(open) = self.editor.as_ref().filter(|open| open.lacks_names()) {
            let names = self.column_names(open.cell);
            if let Some(open) = self.editor.as_mut().filter(|_| !names.is_empty()) {
                open.learn(names);
            }
        }
    }

    /// The open table shows what its cell gives now.
    pub(super) fn follow_table(&mut self) {
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

    pub(super) fn in_table(&mut self, message: table::Message) -> Action {
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

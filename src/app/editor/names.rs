//! Several columns, one by one; found by typing a part of a name.

use crate::app::editor::column::{self, Names};
use crate::app::editor::{Action, FIELD};
use crate::app::theme::button::Look;
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::study::settings::slot::Value;
use iced::widget::{Row, column as below, row, text_input};
use iced::{Alignment, Length};

/// What happens to the names.
#[derive(Clone, Debug)]
pub enum Message {
    /// A part of a name is being typed.
    Typed(String),
    /// A column was taken.
    Took(usize),
    /// What is typed is taken.
    Add,
    /// A name is taken away.
    Remove(usize),
    /// The names are as they should be.
    Done,
}

/// Names that are being chosen.
#[derive(Clone, Debug)]
pub struct Chosen {
    names: Names,
    chosen: Vec<String>,
    search: String,
    found: Vec<usize>,
    n_found: usize,
}

impl Chosen {
    /// Begins with the names that stand.
    #[must_use]
    pub fn new(names: Names, value: Option<Value>) -> Self {
        let chosen = match value {
            Some(Value::Texts(texts)) => texts,
            Some(_) | None => Vec::new(),
        };
        let (found, n_found) = column::found(&names, "");
        Self {
            names,
            chosen,
            search: String::new(),
            found,
            n_found,
        }
    }

    /// Whether no name is known.
    #[must_use]
    pub fn is_nameless(&self) -> bool {
        self.names.is_empty()
    }

    /// The names have become known; what is typed stays.
    pub fn learn(&mut self, names: Names) {
        self.names = names;
        self.find();
    }

    fn find(&mut self) {
        (self.found, self.n_found) = column::found(&self.names, &self.search);
    }

    fn push(&mut self, name: String) {
        if !self.chosen.contains(&name) {
            self.chosen.push(name);
        }
        self.search.clear();
        self.find();
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Typed(search) => {
                self.search = search;
                self.find();
            }
            Message::Took(at) => {
                if let Some(name) = self.names.get(at).cloned() {
                    self.push(name);
                }
            }
            Message::Add => {
                let typed = self.search.trim().to_owned();
                let first = self.found.first().and_then(|at| self.names.get(*at));
                match first.cloned() {
                    Some(name) if !typed.is_empty() => self.push(name),
                    None if self.names.is_empty() && !typed.is_empty() => self.push(typed),
                    Some(_) | None => {}
                }
            }
            Message::Remove(at) => {
                if at < self.chosen.len() {
                    let _ = self.chosen.remove(at);
                }
            }
            Message::Done => return Action::Commit(Value::Texts(self.chosen.clone())),
        }
        Action::None
    }

    /// The names, the search, and what it finds.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let chosen = self.chosen.iter().enumerate().map(|(at, name)| {
            row![
                text::body(name.as_str()),
                press::words("Remove", Message::Remove(at)).look(Look::Attention),
            ]
            .spacing(space::TIGHT)
            .align_y(Alignment::Center)
            .into()
        });
        let field = text_input("part of a column’s name", &self.search)
            .id(FIELD)
            .font(text::SANS)
            .size(text::BODY)
            .width(Length::Fill)
            .style(input::line)
            .on_input(Message::Typed)
            .on_submit(Message::Add);
        below![
            Row::with_children(chosen).spacing(space::GAP).wrap(),
            row![field, press::words("Add", Message::Add)]
                .spacing(space::SMALL)
                .align_y(Alignment::Center),
            column::listed(&self.names, &self.found, Message::Took),
            row![
                text::quiet(column::count(self.names.len(), self.n_found)).width(Length::Fill),
                press::main("Set", Message::Done),
            ]
            .spacing(space::SMALL)
            .align_y(Alignment::Center),
        ]
        .spacing(space::SMALL)
        .into()
    }
}

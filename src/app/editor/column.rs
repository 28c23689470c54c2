//! One column of the tables, or none; found by typing a part of its name.

use crate::app::editor::{Action, FIELD};
use crate::app::theme::button::Look;
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press::{self, Press};
use crate::base::number::{self, Precision};
use crate::study::settings::slot::Value;
use iced::widget::{self, column, row, scrollable, text_input};
use iced::{Alignment, Length};
use std::sync::Arc;

/// How many matches are listed: more would only have to be scrolled through.
const LISTED: usize = 60;

/// The names of all columns, in the order of the tables.
pub type Names = Arc<Vec<String>>;

/// What happens to the column.
#[derive(Clone, Debug)]
pub enum Message {
    /// A part of the name is being typed.
    Typed(String),
    /// A column was taken.
    Took(usize),
    /// No column is wanted.
    TookNone,
    /// What is typed is the name, or finds it.
    Done,
}

/// A column that is being chosen.
#[derive(Clone, Debug)]
pub struct Column {
    names: Names,
    search: String,
    found: Vec<usize>,
    n_found: usize,
}

impl Column {
    /// Chooses among these names.
    #[must_use]
    pub fn new(names: Names) -> Self {
        let mut column = Self {
            names,
            search: String::new(),
            found: Vec::new(),
            n_found: 0,
        };
        column.find();
        column
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
        (self.found, self.n_found) = found(&self.names, &self.search);
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Typed(search) => {
                self.search = search;
                self.find();
                Action::None
            }
            Message::Took(at) => match self.names.get(at) {
                Some(name) => Action::Commit(Value::Column(Some(name.clone()))),
                None => Action::None,
            },
            Message::TookNone => Action::Commit(Value::Column(None)),
            Message::Done => match self.found.first() {
                Some(first) if !self.search.is_empty() => {
                    Action::Commit(Value::Column(self.names.get(*first).cloned()))
                }
                // Without a list of names, what is typed is taken as the name.
                None if self.names.is_empty() && !self.search.trim().is_empty() => {
                    Action::Commit(Value::Column(Some(self.search.trim().to_owned())))
                }
                Some(_) | None => Action::None,
            },
        }
    }

    /// The search, and what it finds.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let field = text_input("part of a column’s name", &self.search)
            .id(FIELD)
            .font(text::SANS)
            .size(text::BODY)
            .width(Length::Fill)
            .style(input::line)
            .on_input(Message::Typed)
            .on_submit(Message::Done);
        column![
            row![field, press::words("None", Message::TookNone)]
                .spacing(space::SMALL)
                .align_y(Alignment::Center),
            listed(&self.names, &self.found, Message::Took),
            text::quiet(count(self.names.len(), self.n_found)),
        ]
        .spacing(space::SMALL)
        .into()
    }
}

/// The names in which a text occurs: first those that are it, then those that begin with it, then
/// the others, each in the order of the tables; at most as many as are listed, and how many there
/// are.
#[must_use]
pub fn found(names: &[String], search: &str) -> (Vec<usize>, usize) {
    let wanted = search.trim().to_lowercase();
    let mut ranks: [Vec<usize>; 3] = [Vec::new(), Vec::new(), Vec::new()];
    let mut n_found = 0;
    for (at, name) in names.iter().enumerate() {
        let name = name.to_lowercase();
        let rank = if name == wanted {
            0
        } else if name.starts_with(&wanted) {
            1
        } else if name.contains(&wanted) {
            2
        } else {
            continue;
        };
        n_found += 1;
        if ranks[rank].len() < LISTED {
            ranks[rank].push(at);
        }
    }
    let [exact, beginning, inside] = ranks;
    let all = exact.into_iter().chain(beginning).chain(inside);
    (all.take(LISTED).collect(), n_found)
}

/// Names below each other, to be taken.
pub fn listed<'a, M: Clone + 'a>(
    names: &'a [String],
    found: &[usize],
    took: impl Fn(usize) -> M,
) -> Element<'a, M> {
    let rows = found.iter().filter_map(|at| {
        let name = names.get(*at)?;
        Some(
            Press::new(text::plain(name.as_str(), text::SANS), took(*at))
                .look(Look::Row)
                .fill()
                .into(),
        )
    });
    widget::container(
        scrollable(widget::Column::with_children(rows))
            .direction(input::narrow())
            .style(input::scroller)
            .width(Length::Fill),
    )
    .max_height(space::LIST)
    .into()
}

/// How many columns there are and how many of them were found.
#[must_use]
pub fn count(all: usize, found: usize) -> String {
    let whole = |count: usize| number::text(count as f64, Precision::Whole);
    if all == 0 {
        "The names of the columns are not known yet; a name that is typed is taken as it stands."
            .to_owned()
    } else if found > LISTED {
        format!(
            "{} of {} columns; the first {} are listed.",
            whole(found),
            whole(all),
            whole(LISTED)
        )
    } else {
        format!("{} of {} columns.", whole(found), whole(all))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_name_itself_comes_before_names_that_hold_it() {
        let names: Vec<String> = ["1900 nm", "900 nm", "900", "a 900"]
            .map(str::to_owned)
            .into();
        let (found, n_found) = found(&names, "900");
        assert_eq!(found, [2, 1, 0, 3]);
        assert_eq!(n_found, 4);
    }

    #[test]
    fn twenty_thousand_names_are_counted_but_not_listed() {
        let names: Vec<String> = (0..20_000).map(|at| format!("marker {at}")).collect();
        let (found, n_found) = found(&names, "marker");
        assert_eq!((found.len(), n_found), (LISTED, 20_000));
    }
}

//! Ranges of columns, chosen by their ends; found by typing a part of a name.

use crate::app::editor::column::{self, Names};
use crate::app::editor::{Action, FIELD};
use crate::app::theme::button::Look;
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::base::number::{self, Precision};
use crate::study::settings::data::ColumnRange;
use crate::study::settings::slot::Value;
use crate::table::pick;
use iced::widget::{Column, column as below, row, text_input};
use iced::{Alignment, Length};

/// What happens to the ranges.
#[derive(Clone, Debug)]
pub enum Message {
    /// A part of a name, or a range, is being typed.
    Typed(String),
    /// A column was taken as an end.
    Took(usize),
    /// What is typed is added.
    Add,
    /// A range is taken away.
    Remove(usize),
    /// All predictors that have no other role.
    All,
    /// The ranges are as they should be.
    Done,
}

/// Ranges that are being chosen.
#[derive(Clone, Debug)]
pub struct Columns {
    names: Names,
    ranges: Vec<ColumnRange>,
    /// The first end of a range whose other end is still wanted.
    from: Option<usize>,
    search: String,
    found: Vec<usize>,
    n_found: usize,
}

impl Columns {
    /// Begins with the ranges that stand.
    #[must_use]
    pub fn new(names: Names, value: Option<Value>) -> Self {
        let ranges = match value {
            Some(Value::Columns(ranges)) => ranges,
            Some(_) | None => Vec::new(),
        };
        let (found, n_found) = column::found(&names, "");
        Self {
            names,
            ranges,
            from: None,
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

    fn position(&self, name: &str) -> Option<usize> {
        self.names.iter().position(|known| known == name.trim())
    }

    fn push(&mut self, from: usize, to: usize) {
        let (first, last) = (from.min(to), from.max(to));
        if let (Some(first), Some(last)) = (self.names.get(first), self.names.get(last)) {
            let range = ColumnRange {
                first: first.clone(),
                last: last.clone(),
            };
            if !self.ranges.contains(&range) {
                self.ranges.push(range);
            }
        }
        self.from = None;
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
            Message::Took(at) => match self.from {
                Some(from) => self.push(from, at),
                None => self.from = Some(at),
            },
            Message::Add if self.picked().is_some_and(|picked| picked.len() > 1) => {
                for (from, to) in runs(&self.picked().unwrap_or_default()) {
                    self.push(from, to);
                }
            }
            Message::Add => {
                // “900 nm … 1700 nm”, or one name.
                let mut ends = self.search.split('…').map(|end| self.position(end));
                match (ends.next().flatten(), ends.next().flatten()) {
                    (Some(from), Some(to)) => self.push(from, to),
                    (Some(only), None) => self.push(self.from.unwrap_or(only), only),
                    (None, _) => {
                        if let [only] = self.found[..] {
                            self.push(self.from.unwrap_or(only), only);
                        }
                    }
                }
            }
            Message::Remove(at) => {
                if at < self.ranges.len() {
                    let _ = self.ranges.remove(at);
                }
            }
            Message::All => return Action::Commit(Value::Columns(Vec::new())),
            Message::Done => return Action::Commit(Value::Columns(self.ranges.clone())),
        }
        Action::None
    }

    /// The columns that what is typed chooses: ranges, patterns, stretches of an axis.
    fn picked(&self) -> Option<Vec<usize>> {
        let names: Vec<&str> = self.names.iter().map(String::as_str).collect();
        pick::columns(&names, &|_| true, &self.search).ok()
    }

    fn width(&self, range: &ColumnRange) -> Option<usize> {
        let first = self.position(&range.first)?;
        Some(self.position(&range.last)? - first + 1)
    }

    /// The ranges, the search, and what it finds.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let ranges = self.ranges.iter().enumerate().map(|(at, range)| {
            let words = if range.first == range.last {
                range.first.clone()
            } else {
                format!("{} … {}", range.first, range.last)
            };
            let width = self.width(range).map_or_else(
                || "not in the table".to_owned(),
                |width| number::text(width as f64, Precision::Whole),
            );
            row![
                text::body(words).width(Length::Fill),
                text::quiet(width),
                press::words("Remove", Message::Remove(at)).look(Look::Attention),
            ]
            .spacing(space::SMALL)
            .align_y(Alignment::Center)
            .into()
        });
        let hint = match self.from.and_then(|from| self.names.get(from)) {
            Some(from) => format!("From {from} to …: choose the other end."),
            None if self.ranges.is_empty() => {
                "Every column of numbers without another role is a predictor. Choose the two ends \
                 of a range to take fewer."
                    .to_owned()
            }
            None => "Choose the two ends of a range to add it.".to_owned(),
        };
        let field = text_input(
            "part of a name, first … last, or a pattern such as MAR-2*",
            &self.search,
        )
        .id(FIELD)
        .font(text::SANS)
        .size(text::BODY)
        .width(Length::Fill)
        .style(input::line)
        .on_input(Message::Typed)
        .on_submit(Message::Add);
        below![
            Column::with_children(ranges).spacing(space::TIGHT),
            text::quiet(hint),
            row![field, press::words("Add", Message::Add)]
                .spacing(space::SMALL)
                .align_y(Alignment::Center),
            column::listed(&self.names, &self.found, Message::Took),
            row![
                text::quiet(column::count(self.names.len(), self.n_found)).width(Length::Fill),
                press::words("Take all", Message::All),
                press::main("Set", Message::Done),
            ]
            .spacing(space::SMALL)
            .align_y(Alignment::Center),
        ]
        .spacing(space::SMALL)
        .into()
    }
}

/// Runs of neighbours: their first and last.
fn runs(columns: &[usize]) -> Vec<(usize, usize)> {
    let mut sorted = columns.to_vec();
    sorted.sort_unstable();
    sorted
        .chunk_by(|a, b| a + 1 == *b)
        .map(|run| (run[0], run[run.len() - 1]))
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::sync::Arc;

    fn wavelengths() -> Columns {
        let names = (900..1000).map(|nm| format!("{nm} nm")).collect();
        Columns::new(Arc::new(names), None)
    }

    #[test]
    fn two_ends_make_a_range_whichever_was_chosen_first() {
        let mut columns = wavelengths();
        let _ = columns.update(Message::Took(50));
        let _ = columns.update(Message::Took(10));
        assert_eq!(
            columns.ranges,
            [ColumnRange {
                first: "910 nm".to_owned(),
                last: "950 nm".to_owned()
            }]
        );
    }

    #[test]
    fn a_pattern_or_a_stretch_of_the_axis_can_be_typed() {
        let mut columns = wavelengths();
        let _ = columns.update(Message::Typed("9?5 nm".to_owned()));
        let _ = columns.update(Message::Add);
        assert_eq!(columns.ranges.len(), 10);
        let _ = columns.update(Message::Typed("910.5 … 912.5 nm".to_owned()));
        let _ = columns.update(Message::Add);
        let last = columns.ranges.last().unwrap();
        assert_eq!(
            (last.first.as_str(), last.last.as_str()),
            ("911 nm", "912 nm")
        );
    }

    #[test]
    fn a_range_can_be_typed() {
        let mut columns = wavelengths();
        let _ = columns.update(Message::Typed("905 nm … 907 nm".to_owned()));
        let _ = columns.update(Message::Add);
        assert_eq!(
            columns.ranges.first().and_then(|r| columns.width(r)),
            Some(3)
        );
    }
}

//! How the screen is put together.

use crate::app::editor;
use crate::app::screen::start::role::Role;
use crate::app::screen::start::taken::Shown;
use crate::app::screen::start::word::{self, Word};
use crate::app::screen::start::{Busy, EditorMessage, FIELD, Field, Message, Start};
use crate::app::theme::button::Look;
use crate::app::theme::{Mode, container, input, space, text};
use crate::app::widget::Element;
use crate::app::widget::grid::{Grid, Source};
use crate::app::widget::press::{self, Press};
use crate::app::widget::sentence::{Sentence, Setting};
use crate::base::number::{self, Precision};
use iced::widget::{
    Column, Row, column, container as boxed, row, rule, scrollable, space as gap, text_input,
};
use iced::{Alignment, Length, Padding, Size};

/// What stands above and below the grid, at most, when nothing is open.
const AROUND: f32 = 412.0;
/// What stands above and below the list of files.
const AROUND_FILES: f32 = 232.0;

impl Start {
    /// The screen, in a window of a size.
    #[must_use]
    pub fn view(&self, size: Size, mode: Mode) -> Element<'_, Message> {
        let is_idle = matches!(self.busy, Busy::No);
        let head = row![
            text::title("Start from tables"),
            gap().width(Length::Fill),
            press::words("Leave", Message::Leave),
            press::main("Make the study", Message::Make).only_if(self.shown.is_some() && is_idle),
        ]
        .spacing(space::SMALL)
        .align_y(Alignment::Center)
        .height(space::HEAD)
        .padding(Padding::from([0.0, space::GAP + space::SMALL]));
        let mut body = Column::new()
            .spacing(space::GAP)
            .padding(space::GAP + space::SMALL)
            .push(self.tables());
        if let Some(busy) = self.busy() {
            body = body.push(busy);
        }
        if let Some(problem) = &self.problem {
            body = body.push(text::wrong(problem.to_string()));
        }
        body = match &self.shown {
            Some(shown) if !self.has_files => body.push(self.preview(shown, size, mode)),
            Some(_) | None => body.push(self.files(size)),
        };
        let page = column![
            head,
            rule::horizontal(space::HAIR).style(container::hairline),
            scrollable(body)
                .direction(input::narrow())
                .style(input::scroller)
                .height(Length::Fill)
                .width(Length::Fill),
        ];
        boxed(page)
            .style(container::page)
            .width(Length::Fill)
            .height(Length::Fill)
            .into()
    }

    fn busy(&self) -> Option<Element<'_, Message>> {
        let words = match &self.busy {
            Busy::No => return None,
            Busy::Reading { name, .. } => format!("{name} is being read."),
            Busy::Making { .. } => "The study is being made.".to_owned(),
        };
        Some(
            row![
                text::body(words),
                press::words("Stop", Message::Stop).look(Look::Attention),
            ]
            .spacing(space::SMALL)
            .align_y(Alignment::Center)
            .into(),
        )
    }

    /// The tables that were taken, as words; the one that is shown stands out.
    fn tables(&self) -> Element<'_, Message> {
        if self.tables.is_empty() {
            return text::prose(
                "Choose a file with a table, or drop one or several on the window.",
            )
            .into();
        }
        let tables = self.tables.iter().enumerate().map(|(at, taken)| {
            let look = if at == self.at && !self.has_files {
                Look::Chosen
            } else {
                Look::Row
            };
            row![
                Press::new(
                    text::plain(taken.name.as_str(), text::STRONG),
                    Message::Show(at)
                )
                .look(look),
                press::words("Remove", Message::Remove(at)).look(Look::Attention),
            ]
            .align_y(Alignment::Center)
            .into()
        });
        let more = if self.has_files {
            "Back to the tables"
        } else {
            "Add a table"
        };
        Row::with_children(tables)
            .spacing(space::GAP)
            .align_y(Alignment::Center)
            .push(press::words(more, Message::Files).look(Look::Accent))
            .wrap()
            .into()
    }

    /// Where the next table lies, and what can be read.
    fn files(&self, size: Size) -> Element<'_, Message> {
        let height = (size.height - AROUND_FILES).max(space::LIST);
        let place = self.place.view(FIELD, "Take", height).map(Message::Place);
        let note = |heading: &'static str, words: &'static str| -> Element<'_, Message> {
            column![text::heading(heading), text::body(words)].into()
        };
        let notes = column![
            note(
                "Delimited text",
                "Commas, semicolons or tabs; decimal point or comma; also packed as .gz. Names \
                 end in .csv, .tsv, .txt, .tab or .dat."
            ),
            note(
                "Workbooks",
                "Any sheet of .xlsx, .xlsm, .xlsb, .xls or .ods; the names of the columns \
                 anywhere near the top, a row of units below them."
            ),
            note(
                "Samples in rows or in columns",
                "Wide tables are often delivered sideways; both are read."
            ),
            note(
                "Several tables",
                "They are joined on the column that names the same samples or units in each, \
                 with a list of who matched and who did not."
            ),
        ]
        .spacing(space::GAP);
        if size.width >= space::FOLD {
            row![
                boxed(place).max_width(space::PAGE).width(Length::Fill),
                boxed(notes).width(space::NOTE),
            ]
            .spacing(space::WIDE * 2.0)
            .into()
        } else {
            column![place, notes].spacing(space::GAP).into()
        }
    }

    fn preview<'a>(&'a self, shown: &'a Shown, size: Size, mode: Mode) -> Element<'a, Message> {
        let height = (size.height - AROUND).max(space::GRID);
        let grid = Grid::new(shown, height).on(Message::Did).show(self.show);
        let left = column![
            self.sentences(shown, mode),
            self.roles(shown),
            self.count_and_jump(shown),
            grid,
        ]
        .spacing(space::SMALL)
        .width(Length::Fill);
        let right = self.noticed(&shown.taken);
        if size.width >= space::FOLD {
            row![left, boxed(right).width(space::NOTE)]
                .spacing(space::WIDE)
                .into()
        } else {
            column![left, right].spacing(space::GAP).into()
        }
    }

    fn count_and_jump<'a>(&'a self, shown: &'a Shown) -> Element<'a, Message> {
        let jump = text_input("jump to a column", &self.jump)
            .font(text::SANS)
            .size(text::SMALL)
            .width(space::FIELD)
            .style(input::line)
            .on_input(Message::Jumping)
            .on_submit(Message::Jump);
        let whole = |count: usize| number::text(count as f64, Precision::Whole);
        let sizes = format!(
            "{} rows, {} columns",
            whole(shown.n_rows()),
            whole(shown.n_columns())
        );
        row![
            text::quiet(sizes).width(Length::Fill),
            jump,
            press::words("Jump", Message::Jump)
        ]
        .spacing(space::SMALL)
        .align_y(Alignment::Center)
        .into()
    }

    /// What has been said so far; a word that is pressed opens its editor below the sentence.
    fn sentences<'a>(&'a self, shown: &'a Shown, mode: Mode) -> Element<'a, Message> {
        let open = self.open.as_ref().map(|(ask, _)| *ask);
        let sentences = word::sentences(&self.roles, self.kind, &shown.taken, open);
        let mut parts = Column::new().spacing(space::TIGHT);
        for (nth, words) in sentences.into_iter().enumerate() {
            let has_open = words.iter().any(|(_, ask)| ask.is_some() && *ask == open);
            let pieces = words.into_iter().map(|(piece, _): Word| piece).collect();
            let sentence = Sentence::new(pieces, Setting::Reading, mode)
                .on_press(move |piece| Message::Word(nth, piece));
            parts = parts.push(boxed(sentence).max_width(space::PAGE));
            if let (true, Some((_, field))) = (has_open, &self.open) {
                parts = parts.push(boxed(self::field(field)).max_width(space::PAGE));
            }
        }
        parts.into()
    }

    /// The roles that the column that stands out can have.
    fn roles(&self, shown: &Shown) -> Element<'_, Message> {
        let Some(name) = &self.marked else {
            // As high as what stands here for a column, so that nothing moves.
            return boxed(text::quiet(
                "Press the head of a column to say what it is, or a word of the sentences above.",
            ))
            .height(text::SMALL_LINE * 2.0 + space::SMALL + space::TIGHT)
            .align_y(Alignment::Center)
            .into();
        };
        let given = self.roles.given(name);
        let is_text = shown
            .table()
            .columns()
            .iter()
            .any(|column| column.name == *name && !column.is_numeric());
        let present = given.unwrap_or(Role::Predictor);
        let roles = Role::ALL
            .into_iter()
            // A column of words cannot be a predictor: it is left out as long as it has no role.
            .map(|role| {
                let word = if is_text && role == Role::Predictor {
                    "without a role"
                } else {
                    role.word()
                };
                let look = if role == present {
                    Look::Chosen
                } else {
                    Look::Accent
                };
                press::words(word, Message::Give(role)).look(look).into()
            });
        let line = Row::new()
            .push(text::heading(name.as_str()))
            .push(text::body("is"))
            .extend(roles)
            .spacing(space::TIGHT)
            .align_y(Alignment::Center)
            .wrap();
        let meaning = if is_text && present == Role::Predictor {
            "words are left out as long as they have no role"
        } else {
            present.meaning()
        };
        column![line, text::quiet(format!("{}: {meaning}.", present.word()))]
            .spacing(space::TIGHT)
            .into()
    }
}

/// The editor that is open.
fn field(field: &Field) -> Element<'_, Message> {
    let inside = match field {
        Field::Choice(choice) => choice.view().map(EditorMessage::Choice),
        Field::Column(column) => column.view().map(EditorMessage::Column),
        Field::Names(names) => names.view().map(EditorMessage::Names),
    };
    editor::set_off(inside.map(Message::Editor))
}

//! The head line: the study's title and what can be done with the whole of it.

use crate::app::session::{Following, Session};
use crate::app::theme::button::Look;
use crate::app::theme::{container, input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press::{self, Press};
use iced::widget::{column, row, rule, space as gap, text_input};
use iced::{Alignment, Length, Padding};

/// What can be done in the head line.
#[derive(Clone, Debug)]
pub enum Message {
    /// Begins to change the study's title.
    Rename,
    /// The title is being typed.
    Typed(String),
    /// The title is as it should be.
    Renamed,
    /// Takes the last step back.
    Undo,
    /// Does it again.
    Redo,
    /// Shows or hides the controls.
    Read,
    /// Saves.
    Save,
    /// Opens the exports.
    HandOver,
    /// Evaluates what is due.
    BringUpToDate,
    /// Turns following on or off.
    Follow(Following),
    /// Back to the welcome page.
    Close,
    /// Shows the keys.
    Keys,
    /// Light or dark.
    Turn,
}

/// The field in which the title is typed.
pub const FIELD: &str = "study title";

/// The head line of a study that is being worked on.
#[must_use]
pub fn view<'a>(
    session: &'a Session,
    renaming: Option<&'a str>,
    mode: crate::app::theme::Mode,
    is_wide: bool,
) -> Element<'a, Message> {
    let title: Element<'a, Message> = match renaming {
        Some(draft) => text_input("title of the study", draft)
            .id(FIELD)
            .font(text::TITLE)
            .size(text::READING)
            .width(space::PROGRESS_LENGTH)
            .style(input::line)
            .on_input(Message::Typed)
            .on_submit(Message::Renamed)
            .into(),
        None => Press::new(text::title(session.study().title()), Message::Rename)
            .look(Look::Row)
            .into(),
    };
    let is_new = session.path().is_none();
    let saved = match (is_new, session.is_modified()) {
        (true, _) => "not saved yet",
        (false, true) => "changed since it was saved",
        (false, false) => "saved",
    };
    let step = |label: Option<&str>, plain: &str| match label {
        Some(label) if is_wide => format!("{plain} {label}"),
        Some(_) | None => plain.to_owned(),
    };
    let following = session.following();
    let update: Element<'a, Message> = match following {
        Following::AsIEdit => {
            press::words("Follows as I edit", Message::Follow(Following::WhenAsked)).into()
        }
        Following::WhenAsked => {
            press::words("Follows when asked", Message::Follow(Following::AsIEdit)).into()
        }
    };
    let line = row![
        title,
        text::quiet(saved),
        gap().width(Length::Fill),
        press::words(step(session.undo_label(), "Undo"), Message::Undo)
            .only_if(session.undo_label().is_some()),
        press::words(step(session.redo_label(), "Redo"), Message::Redo)
            .only_if(session.redo_label().is_some()),
        update,
        press::words("Reading view", Message::Read),
        press::words(
            match mode {
                crate::app::theme::Mode::Light => "Dark",
                crate::app::theme::Mode::Dark => "Light",
            },
            Message::Turn
        ),
        press::words("Save", Message::Save),
        press::words("Hand over", Message::HandOver),
        press::main("Bring up to date", Message::BringUpToDate).only_if(session.is_due()),
    ]
    .spacing(space::SMALL)
    .align_y(Alignment::Center)
    .height(space::HEAD)
    .padding(Padding::from([0.0, space::GAP]));
    column![
        line,
        rule::horizontal(space::HAIR).style(container::hairline)
    ]
    .into()
}

/// The head line of a study that is being read.
#[must_use]
pub fn reading<'a>(session: &'a Session) -> Element<'a, Message> {
    let line = row![
        gap().width(space::TIGHT),
        text::title(session.study().title()),
        gap().width(Length::Fill),
        press::words("Leave the reading view", Message::Read),
    ]
    .align_y(Alignment::Center)
    .height(space::HEAD)
    .padding(Padding::from([0.0, space::GAP]));
    column![
        line,
        rule::horizontal(space::HAIR).style(container::hairline)
    ]
    .into()
}

//! The head line: the study's title and what can be done with the whole of it.

use crate::app::session::{Following, Session};
use crate::app::theme::button::Look;
use crate::app::theme::{Mode, container, input, space, text};
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
    /// What is wanted less often is shown or hidden.
    More,
    /// Saves under another name.
    SaveAs,
    /// Opens another study.
    Open,
    /// Starts another study from tables.
    Start,
    /// Letters become larger.
    Larger,
    /// Letters become smaller.
    Smaller,
    /// Back to the welcome page.
    Close,
    /// Shows the keys.
    Keys,
    /// Light or dark.
    Turn,
}

/// The field in which the title is typed.
pub const FIELD: &str = "study title";

/// What there is room for in the head.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Room {
    /// One line, with the label of what undo would take back.
    Wide,
    /// Two lines.
    Narrow,
}

impl Room {
    /// The room in a window of a width.
    #[must_use]
    pub fn of(width: f32) -> Self {
        if width >= space::FOLD {
            Self::Wide
        } else {
            Self::Narrow
        }
    }
}

/// The head line of a study that is being worked on.
#[must_use]
pub fn view<'a>(
    session: &'a Session,
    renaming: Option<&'a str>,
    mode: Mode,
    room: Room,
    more: More,
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
    let update = press::main("Bring up to date", Message::BringUpToDate).only_if(session.is_due());
    let named = row![title, text::quiet(saved)]
        .spacing(space::SMALL)
        .align_y(Alignment::Center);
    let all = match room {
        Room::Wide => {
            let line = controls(session, room, more)
                .push(update)
                .align_y(Alignment::Center);
            column![
                row![named, gap().width(Length::Fill), line]
                    .align_y(Alignment::Center)
                    .height(space::HEAD)
            ]
        }
        Room::Narrow => column![
            row![named, gap().width(Length::Fill), update]
                .align_y(Alignment::Center)
                .height(space::HEAD - space::SMALL),
            controls(session, room, more)
                .align_y(Alignment::Center)
                .height(space::HEAD - space::GAP),
        ],
    };
    let mut all = column![all.padding(Padding::from([0.0, space::GAP]))];
    if more == More::Open {
        all = all
            .push(rule::horizontal(space::HAIR).style(container::hairline))
            .push(further(mode));
    }
    all.push(rule::horizontal(space::HAIR).style(container::hairline))
        .into()
}

/// Whether what is wanted less often is shown below the head line.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum More {
    /// It is not.
    #[default]
    Closed,
    /// It is.
    Open,
}

impl More {
    /// The other one.
    #[must_use]
    pub const fn other(self) -> Self {
        match self {
            Self::Closed => Self::Open,
            Self::Open => Self::Closed,
        }
    }
}

/// How many letters of what undo would take back are shown.
const LABEL: usize = 32;

fn controls<'a>(
    session: &'a Session,
    room: Room,
    more: More,
) -> iced::widget::Row<'a, Message, iced::Theme, iced::Renderer> {
    let undo = match (session.undo_label(), room) {
        (Some(label), Room::Wide) => format!("Undo {}", shortened(label)),
        (Some(_) | None, _) => "Undo".to_owned(),
    };
    let (words, other) = match session.following() {
        Following::AsIEdit => ("Updates as I edit", Following::WhenAsked),
        Following::WhenAsked => ("Updates when asked", Following::AsIEdit),
    };
    let more = match more {
        More::Closed => "And more",
        More::Open => "Hide",
    };
    row![
        press::words(undo, Message::Undo).only_if(session.undo_label().is_some()),
        press::words("Redo", Message::Redo).only_if(session.redo_label().is_some()),
        press::words(words, Message::Follow(other)),
        press::words("Reading view", Message::Read),
        press::words("Save", Message::Save),
        press::words("Hand over", Message::HandOver),
        press::words(more, Message::More),
    ]
    .spacing(space::SMALL)
}

fn shortened(label: &str) -> String {
    if label.chars().count() <= LABEL {
        return label.to_owned();
    }
    let short: String = label.chars().take(LABEL).collect();
    format!("{}…", short.trim_end())
}

/// What is wanted less often.
fn further<'a>(mode: Mode) -> Element<'a, Message> {
    let turn = match mode {
        Mode::Light => "Dark",
        Mode::Dark => "Light",
    };
    row![
        press::words("Save as", Message::SaveAs),
        press::words("Open a study", Message::Open),
        press::words("Start from tables", Message::Start),
        press::words("Close", Message::Close),
        gap().width(Length::Fill),
        press::words("Larger letters", Message::Larger),
        press::words("Smaller letters", Message::Smaller),
        press::words(turn, Message::Turn),
        press::words("Keys", Message::Keys),
    ]
    .spacing(space::SMALL)
    .align_y(Alignment::Center)
    .height(space::HEAD - space::SMALL)
    .padding(Padding::from([0.0, space::GAP]))
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

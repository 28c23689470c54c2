//! A cell on the page: kind and name, sentences with the editor that is open, the answer.

use crate::app::editor;
use crate::app::part::block::{self, Manner};
use crate::app::part::strip::Progress;
use crate::app::part::{offer, table};
use crate::app::sheet::{self, Sheet};
use crate::app::theme::button::Look;
use crate::app::theme::{Mode, container, input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press::{self, Press};
use crate::app::widget::sentence::{Force, Sentence, Setting};
use crate::eval::outcome::Failure;
use crate::eval::standing::State;
use crate::figure::Meaning;
use crate::study::cell::{Cell, CellId, Kind};
use iced::widget::{Column, Row, column, row, rule, text_input};
use iced::{Alignment, Length, Padding};

/// The field in which a title is typed.
pub const FIELD: &str = "cell title";

/// What can be done with a cell.
#[derive(Clone, Debug)]
pub enum Message {
    /// A word was pressed: which sentence, which piece.
    Word(usize, usize),
    /// About the editor that is open.
    Editor(editor::Message),
    /// Prose is to be typed.
    Write,
    /// About the prose that is typed.
    Prose(editor::prose::Message),
    /// The title is to be changed.
    Rename,
    /// The title is being typed.
    Typed(String),
    /// The title is as it should be.
    Renamed,
    /// What else can be done is shown or hidden.
    More,
    /// The cell goes up or down the page.
    Move(isize),
    /// The cell is doubled.
    Duplicate,
    /// The cell is taken away.
    Remove,
    /// What can be added below is shown.
    AddBelow,
    /// About the offer.
    Offer(offer::Message),
    /// A way out of a failure is taken.
    Remedy(usize),
    /// The details of a failure are copied.
    CopyDetails,
    /// About a block: which, and what.
    Block(usize, block::Message),
    /// The table is opened.
    OpenTable,
    /// About the open table.
    Table(table::Message),
    /// The run is stopped.
    Stop,
    /// The folded notes are shown or hidden.
    Notes,
}

/// What is open in a cell.
#[derive(Clone, Copy, Debug, Default)]
pub struct Opened<'a> {
    /// The editor of a word.
    pub editor: Option<&'a editor::Open>,
    /// The prose that is typed.
    pub prose: Option<&'a editor::prose::Prose>,
    /// The title that is typed.
    pub title: Option<&'a str>,
    /// What else can be done.
    pub is_more: bool,
    /// What can be added below.
    pub is_offering: bool,
    /// The table.
    pub table: Option<&'a table::Open>,
    /// What stands out in every figure.
    pub highlight: Option<&'a Meaning>,
    /// At which strength the fit is that the figures show.
    pub strength: Option<f64>,
    /// How far it is and how long it will take, while it is being evaluated.
    pub progress: Option<Progress>,
    /// Whether the notes stand in the page, because there is no margin.
    pub are_notes_folded: bool,
    /// Whether the folded notes are shown.
    pub are_notes_open: bool,
}

/// A cell.
#[must_use]
pub fn view<'a>(
    cell: &'a Cell,
    sheet: &'a Sheet,
    state: State,
    caveats: &[crate::eval::caveat::Caveat],
    opened: Opened<'a>,
    mode: Mode,
    is_reading: bool,
) -> Element<'a, Message> {
    let is_prose = cell.settings.kind() == Kind::Prose;
    let force = match state {
        State::Current => Force::Current,
        State::Due | State::Working(_) | State::Waiting | State::Stopped | State::Failed => {
            Force::Paled
        }
    };
    let manner = Manner {
        mode,
        force: if is_prose { Force::Current } else { force },
        highlight: opened.highlight,
        strength: opened.strength,
        is_reading,
        setting: if is_prose {
            Setting::Reading
        } else {
            Setting::Small
        },
        is_pending: matches!(state, State::Due | State::Working(_) | State::Waiting),
    };
    let mut parts = Column::new().spacing(space::SMALL + space::TIGHT);
    if !(is_reading && is_prose) {
        parts = parts.push(header(cell, state, opened, is_reading));
    }
    if opened.is_more && !is_reading {
        parts = parts.push(more(cell));
    }
    if let Some(prose) = opened.prose {
        parts = parts.push(prose.view().map(Message::Prose));
    } else if !is_prose {
        parts = parts.push(sentences(sheet, opened, mode, is_reading));
    }
    if let Some(failure) = sheet.report.failure.as_deref()
        && state == State::Failed
    {
        parts = parts.push(failed(failure, is_reading));
    }
    // Right below what was pressed, and not below the whole answer.
    if let Some(table) = opened.table {
        parts = parts.push(table.view(opened.highlight).map(Message::Table));
    }
    if opened.are_notes_folded && !caveats.is_empty() {
        parts = parts.push(folded(caveats, opened.are_notes_open));
    }
    if let Some(answer) = &sheet.report.answer {
        let answer = Sentence::new(sheet::pieces(answer), Setting::Answer, mode).force(force);
        parts = parts.push(answer);
    }
    if opened.prose.is_none() {
        let blocks = sheet.parts.iter().enumerate().map(|(at, part)| {
            block::view(part, at, manner).map(move |message| Message::Block(at, message))
        });
        let spacing = if is_prose { space::SMALL } else { space::GAP };
        parts = parts.push(Column::with_children(blocks).spacing(spacing));
        if is_prose && sheet.parts.is_empty() && !is_reading {
            parts = parts.push(press::words("Write here", Message::Write).look(Look::Accent));
        }
    }
    if opened.is_offering && !is_reading {
        let offer = offer::view().map(Message::Offer);
        parts = parts.push(editor::set_off(offer));
    }
    let body = iced::widget::container(parts).padding(Padding {
        top: space::SMALL,
        bottom: space::WIDE - space::SMALL,
        ..Padding::ZERO
    });
    let line = rule::horizontal(space::HAIR).style(container::hairline);
    column![line, body].into()
}

fn header<'a>(
    cell: &'a Cell,
    state: State,
    opened: Opened<'a>,
    is_reading: bool,
) -> Element<'a, Message> {
    let title: Element<'a, Message> = match opened.title {
        Some(draft) => text_input("title", draft)
            .id(FIELD)
            .font(text::TITLE)
            .size(text::BODY)
            .width(space::PROGRESS_LENGTH)
            .style(input::line)
            .on_input(Message::Typed)
            .on_submit(Message::Renamed)
            .into(),
        None if is_reading => text::name(cell.title.as_str()).into(),
        None => Press::new(text::name(cell.title.as_str()), Message::Rename)
            .look(Look::Row)
            .into(),
    };
    let word: Element<'a, Message> = match state {
        State::Current => text::accent(state.word()).into(),
        State::Working(share) => working(share, opened.progress, is_reading),
        State::Due | State::Waiting => text::quiet(state.word()).into(),
        State::Stopped => text::attention(state.word()).into(),
        State::Failed => text::wrong(state.word()).into(),
    };
    let mut line = Row::new()
        .spacing(space::SMALL)
        .align_y(Alignment::Center)
        .push(text::quiet(cell.settings.kind().name()))
        .push(title)
        .push(iced::widget::space().width(Length::Fill));
    if !is_reading {
        if cell.settings.kind() == Kind::Prose && opened.prose.is_none() {
            line = line.push(press::words("Write", Message::Write));
        }
        if cell.settings.kind() == Kind::Data && opened.table.is_none() {
            line = line.push(press::words("Table", Message::OpenTable));
        }
        line = line.push(press::words(
            if opened.is_more { "Less" } else { "More" },
            Message::More,
        ));
        line = line.push(word);
    }
    line.into()
}

/// How far a cell is that is being evaluated, and a way to stop it.
fn working<'a>(share: f32, progress: Option<Progress>, is_reading: bool) -> Element<'a, Message> {
    let progress = progress.unwrap_or(Progress { share, left: None });
    let words = format!("{}, {}", State::Working(share).word(), progress.in_words());
    let mut line = Row::new()
        .spacing(space::SMALL)
        .align_y(Alignment::Center)
        .push(text::quiet(words));
    if !is_reading {
        line = line.push(press::words("Stop", Message::Stop).look(Look::Attention));
    }
    line.into()
}

fn more<'a>(cell: &Cell) -> Element<'a, Message> {
    let _ = cell;
    Row::new()
        .spacing(space::SMALL)
        .push(press::words("Rename", Message::Rename))
        .push(press::words("Move up", Message::Move(-1)))
        .push(press::words("Move down", Message::Move(1)))
        .push(press::words("Duplicate", Message::Duplicate))
        .push(press::words("Add below", Message::AddBelow))
        .push(press::words("Remove", Message::Remove).look(Look::Attention))
        .into()
}

fn sentences<'a>(
    sheet: &'a Sheet,
    opened: Opened<'a>,
    mode: Mode,
    is_reading: bool,
) -> Element<'a, Message> {
    let mut parts = Column::new().spacing(space::TIGHT);
    for (nth, sentence) in sheet.report.sentences.iter().enumerate() {
        let open = opened.editor.filter(|open| open.sentence == nth);
        let pieces = sheet::sentence_pieces(sentence, open.map(|open| open.piece));
        let mut words = Sentence::new(pieces, Setting::Reading, mode);
        if !is_reading {
            words = words.on_press(move |piece| Message::Word(nth, piece));
        }
        parts = parts.push(words);
        if let Some(open) = open {
            parts = parts.push(open.view().map(Message::Editor));
        }
    }
    parts.into()
}

/// What went wrong, what would mend it, and the ways out.
fn failed<'a>(failure: &'a Failure, is_reading: bool) -> Element<'a, Message> {
    let problem = &failure.problem;
    let mut parts = Column::new().spacing(space::TIGHT);
    if !problem.place.is_nowhere() {
        parts = parts.push(text::quiet(problem.place.to_string()));
    }
    parts = parts.push(text::wrong(problem.found.as_str()));
    for instruction in &problem.mend {
        parts = parts.push(text::body(instruction.as_str()));
    }
    if !is_reading {
        let remedies = failure.remedies.iter().enumerate().map(|(at, remedy)| {
            press::words(remedy.label.as_str(), Message::Remedy(at))
                .look(Look::Accent)
                .into()
        });
        let mut line = Row::with_children(remedies).spacing(space::SMALL);
        if problem.details.is_some() {
            line = line.push(press::words("Copy details", Message::CopyDetails));
        }
        parts = parts.push(line.wrap());
    }
    let bar = iced::widget::container(iced::widget::space())
        .width(space::BAR + space::HAIR)
        .height(Length::Fill)
        .style(container::severity(crate::eval::caveat::Severity::Stop));
    row![bar, parts.width(Length::Fill)]
        .spacing(space::SMALL)
        .height(Length::Shrink)
        .into()
}

/// The notes of a window that is too narrow for a margin: a marker that opens in place.
fn folded<'a>(caveats: &[crate::eval::caveat::Caveat], are_open: bool) -> Element<'a, Message> {
    let words = match (caveats.len(), are_open) {
        (_, true) => "Hide the notes".to_owned(),
        (1, false) => format!("1 note: {}", caveats[0].heading),
        (count, false) => format!("{count} notes: {} …", caveats[0].heading),
    };
    let marker = press::words(words, Message::Notes).look(Look::Attention);
    if are_open {
        column![marker, crate::app::part::margin::notes(caveats)].into()
    } else {
        marker.into()
    }
}

/// The id by which the list knows a cell.
#[must_use]
pub fn key(id: CellId) -> u64 {
    u64::from(id.number())
}

//! Blocks of an answer: painter for the page.

use crate::app::part::facts;
use crate::app::sheet::{Figure, Part};
use crate::app::theme::Mode;
use crate::app::theme::button::Look;
use crate::app::theme::{container, space, text};
use crate::app::widget::Element;
use crate::app::widget::grid::{Grid, StandsOut};
use crate::app::widget::picture::{Shown, Told};
use crate::app::widget::press;
use crate::app::widget::sentence::{Force, Piece, Role, Sentence, Setting};
use crate::figure::Meaning;
use crate::report::block::Align;
use iced::widget::{Column, Row, column, container as boxed, row, rule, space as gap};
use iced::{Alignment, Length};

/// What can be done with a block.
#[derive(Clone, Debug)]
pub enum Message {
    /// A figure was pressed or dragged.
    Figure(Told),
    /// A row of a grid was pressed.
    Row(usize),
    /// A figure is to be copied as text of a drawing.
    CopyFigure(usize),
    /// A figure is to be written as a picture and a drawing.
    SaveFigure(usize),
    /// A table of facts is to be copied.
    CopyTable(usize),
    /// A setting is taken, as it is said.
    Offer(String),
}

/// How blocks are shown.
#[derive(Clone, Copy, Debug)]
pub struct Manner<'a> {
    /// Light or dark.
    pub mode: Mode,
    /// Whether they are current.
    pub force: Force,
    /// What stands out in every figure.
    pub highlight: Option<&'a Meaning>,
    /// At which strength the fit is that the figures show.
    pub strength: Option<f64>,
    /// Whether controls are hidden.
    pub is_reading: bool,
    /// In which letters running text is set.
    pub setting: Setting,
    /// Whether facts that do not exist may still come.
    pub is_pending: bool,
}

impl Manner<'_> {
    fn words<'b>(&self, pieces: &[Piece]) -> Sentence<'b, Message> {
        let mut pieces = pieces.to_vec();
        if self.is_pending {
            for piece in &mut pieces {
                if piece.role == Role::Missing {
                    piece.role = Role::Pending;
                }
            }
        }
        Sentence::new(pieces, self.setting, self.mode).force(self.force)
    }
}

/// A block of an answer; `at` is its position among the blocks of the cell.
#[must_use]
pub fn view<'a>(part: &'a Part, at: usize, manner: Manner<'a>) -> Element<'a, Message> {
    match part {
        Part::Heading(heading) => text::heading(heading.as_str()).into(),
        Part::Section(_, pieces) => {
            let strong = |piece: &Piece| Piece {
                text: piece.text.clone(),
                role: match piece.role {
                    Role::Plain | Role::Strong | Role::Fact | Role::Emphasis => Role::Strong,
                    Role::Code => Role::Code,
                    Role::Editable | Role::Open | Role::Missing | Role::Pending => piece.role,
                },
            };
            let pieces: Vec<Piece> = pieces.iter().map(strong).collect();
            manner.words(&pieces).into()
        }
        Part::Words(pieces) => manner.words(pieces).into(),
        Part::List(items) => list(items, manner),
        Part::Quote(parts) => {
            let parts = parts.iter().map(|part| view(part, at, manner));
            row![
                boxed(gap())
                    .width(space::BAR)
                    .height(Length::Fill)
                    .style(container::rule_like),
                Column::with_children(parts)
                    .spacing(space::SMALL)
                    .width(Length::Fill),
            ]
            .spacing(space::GAP)
            .height(Length::Shrink)
            .into()
        }
        Part::Code(letters) => boxed(text::code(letters.trim_end_matches('\n')))
            .padding(space::SMALL)
            .width(Length::Fill)
            .style(container::sheet)
            .into(),
        Part::Rule => rule::horizontal(space::HAIR)
            .style(container::hairline)
            .into(),
        Part::Tabular(align, rows) => tabular(align, rows, manner),
        Part::Grid(grid) if facts::is_for(grid) => facts::view(grid, at, manner),
        Part::Grid(grid) => {
            let mut shown = Grid::new(grid, space::GRID).stands_out(StandsOut {
                row: manner.highlight.and_then(|meaning| grid.row_of(meaning)),
                column: None,
            });
            if !manner.is_reading && grid.meaning(0).is_some() {
                shown = shown.on_row(Message::Row);
            }
            column![text::heading(grid.grid.title.as_str()), shown]
                .spacing(space::TIGHT)
                .into()
        }
        Part::Figure(figure) => self::figure(figure, at, manner),
        Part::Offers(_) if manner.is_reading => Column::new().into(),
        Part::Offers(offers) => {
            let offers = offers.iter().map(|offer| {
                press::words(offer.label.as_str(), Message::Offer(offer.setting.clone()))
                    .look(Look::Accent)
                    .into()
            });
            column![
                text::heading("What can be done about the findings"),
                Row::with_children(offers).spacing(space::SMALL).wrap(),
            ]
            .spacing(space::TIGHT)
            .into()
        }
    }
}

fn list<'a>(items: &'a [(u8, String, Vec<Piece>)], manner: Manner<'a>) -> Element<'a, Message> {
    let items = items.iter().map(|(depth, mark, pieces)| {
        let mark: Element<'a, Message> = match manner.setting {
            Setting::Reading => text::prose(mark.as_str()).into(),
            Setting::Answer | Setting::Small => text::body(mark.as_str()).into(),
        };
        row![
            gap().width(space::GAP * f32::from(*depth)),
            boxed(mark).width(space::GAP + space::SMALL),
            manner.words(pieces)
        ]
        .into()
    });
    Column::with_children(items).spacing(space::TIGHT).into()
}

fn tabular<'a>(
    align: &[Align],
    rows: &'a [Vec<Vec<Piece>>],
    manner: Manner<'a>,
) -> Element<'a, Message> {
    let mut table = Column::new().spacing(space::TIGHT);
    for (at, fields) in rows.iter().enumerate() {
        let fields = fields.iter().enumerate().map(|(column, pieces)| {
            let words: String = pieces.iter().map(|piece| piece.text.as_str()).collect();
            let words = if at == 0 {
                text::heading(words)
            } else {
                text::body(words)
            };
            let words = match align.get(column).copied().unwrap_or(Align::Start) {
                Align::Start => words.align_x(Alignment::Start),
                Align::Middle => words.align_x(Alignment::Center),
                Align::End => words.align_x(Alignment::End),
            };
            words.width(Length::Fill).into()
        });
        table = table.push(Row::with_children(fields).spacing(space::GAP));
        if at == 0 {
            table = table.push(rule::horizontal(space::HAIR).style(container::hairline));
        }
    }
    let _ = manner;
    table.into()
}

fn figure<'a>(figure: &'a Figure, at: usize, manner: Manner<'a>) -> Element<'a, Message> {
    let mut shown = Shown::new(figure.picture.clone(), figure.hash, manner.mode)
        .highlight(manner.highlight.cloned())
        .strength(manner.strength)
        .paled(manner.force == Force::Paled);
    if !manner.is_reading {
        shown = shown.tell(Message::Figure);
    }
    let reading =
        Sentence::new(figure.reading.clone(), Setting::Small, manner.mode).force(manner.force);
    let mut parts = column![shown].spacing(space::TIGHT);
    if !figure.reading.is_empty() {
        parts = parts.push(reading);
    }
    if !manner.is_reading {
        parts = parts.push(
            row![
                press::words("Copy as SVG", Message::CopyFigure(at)),
                press::words("Save as PNG and SVG", Message::SaveFigure(at)),
            ]
            .spacing(space::SMALL),
        );
    }
    parts.into()
}

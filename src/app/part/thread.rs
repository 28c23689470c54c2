//! The thread: the cells in the order in which they draw on each other, with their states.

use crate::app::theme::button::Look;
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press::Press;
use crate::app::widget::rail::{Place, Rail};
use crate::eval::plan;
use crate::eval::standing::{Standings, State};
use crate::study::Study;
use crate::study::cell::{Cell, CellId};
use crate::study::settings::Settings;
use iced::widget::{Column, column, row, scrollable};
use iced::{Length, Padding};

/// What can be done on the thread.
#[derive(Clone, Debug)]
pub enum Message {
    /// Brings a cell to the top of the page.
    GoTo(CellId),
}

/// The thread of a study.
#[must_use]
pub fn view<'a>(study: &'a Study, standings: &Standings) -> Element<'a, Message> {
    let order = order(study);
    let n_cells = order.len();
    let pieces = order.into_iter().enumerate().map(|(at, cell)| {
        let standing = standings.get(cell.id);
        let under = match standing.state {
            State::Current => brief(cell, standing.outcome.as_deref()),
            State::Working(share) => format!(
                "working, {}",
                crate::base::number::text(
                    f64::from(share),
                    crate::base::number::Precision::Percent(0)
                )
            ),
            State::Due | State::Waiting | State::Stopped | State::Failed => {
                standing.state.word().to_owned()
            }
        };
        let words =
            column![text::heading(cell.title.as_str()), text::quiet(under)].width(Length::Fill);
        let press = Press::new(words, Message::GoTo(cell.id))
            .look(Look::Row)
            .fill();
        row![
            Rail::new(standing.state, Place::of(at, n_cells)),
            iced::widget::container(press).padding(Padding {
                bottom: space::GAP,
                ..Padding::ZERO
            })
        ]
        .spacing(space::TIGHT)
        .height(Length::Shrink)
        .into()
    });
    let pieces = Column::with_children(pieces).padding(Padding {
        top: space::GAP,
        right: space::SMALL,
        bottom: space::GAP,
        left: space::GAP,
    });
    scrollable(pieces)
        .direction(input::narrow())
        .style(input::scroller)
        .width(space::THREAD)
        .height(Length::Fill)
        .into()
}

/// What draws on nothing first; cells in a circle last.
fn order(study: &Study) -> Vec<&Cell> {
    let plan = plan::plan(study);
    plan.order
        .iter()
        .chain(&plan.circular)
        .filter_map(|id| study.cell(*id))
        .collect()
}

/// A few words on what came of a cell.
fn brief(cell: &Cell, outcome: Option<&crate::eval::outcome::Outcome>) -> String {
    let Some(outcome) = outcome else {
        return "current".to_owned();
    };
    let fact = |name: &str| outcome.facts.get(name).map(crate::eval::fact::Fact::shown);
    let counted = |name: &str, words: &str| fact(name).map(|count| format!("{count} {words}"));
    match &cell.settings {
        Settings::Data(_) => counted("samples", "samples"),
        Settings::Prepare(_) => fact("steps").map(|count| match count.as_str() {
            "1" => "1 step".to_owned(),
            _ => format!("{count} steps"),
        }),
        Settings::Fit(_) => counted("chosen predictors", "chosen"),
        Settings::Question(_) => fact("stability index").map(|index| format!("index {index}")),
        Settings::Compare(_) | Settings::Score(_) => None,
        Settings::Prose(_) => Some("prose".to_owned()),
    }
    .unwrap_or_else(|| "current".to_owned())
}

//! The strip at the bottom: what is working, how far it is, and a way to stop it; or what was
//! last said.

use crate::app::run::{Run, Working};
use crate::app::theme::button::Look;
use crate::app::theme::{container, space, text};
use crate::app::widget::Element;
use crate::app::widget::press;
use crate::app::widget::progress;
use crate::base::number::{self, Precision};
use crate::study::Study;
use iced::widget::{column, row, rule, space as gap};
use iced::{Alignment, Length, Padding};
use std::time::Duration;

/// What can be done in the strip.
#[derive(Clone, Debug)]
pub enum Message {
    /// Stops the run under way.
    Stop,
    /// Takes what was said away.
    Dismiss,
}

/// How far a cell is.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Progress {
    /// From 0 to 1.
    pub share: f32,
    /// How long it will take, where that can be said.
    pub left: Option<Duration>,
}

impl Progress {
    /// How far the cell is that is being evaluated.
    #[must_use]
    pub fn of(working: Working) -> Self {
        Self {
            share: working.share,
            left: working.left(),
        }
    }

    /// The same in words.
    #[must_use]
    pub fn in_words(self) -> String {
        let share = number::text(f64::from(self.share), Precision::Percent(0));
        match self.left {
            Some(left) => format!("{share}, about {} left", in_words(left)),
            None => share,
        }
    }
}

/// The strip. What a run is at comes first; else what was last said.
#[must_use]
pub fn view<'a>(
    study: &'a Study,
    run: Option<&Run>,
    said: Option<&'a str>,
    state: &'a str,
) -> Element<'a, Message> {
    let working = run.and_then(Run::working);
    let line = match (working, said) {
        (Some(working), _) => {
            let title = study
                .cell(working.id)
                .map_or("a removed cell", |cell| cell.title.as_str());
            let progress = Progress::of(working);
            row![
                text::body(title),
                progress::bar(working.share, space::PROGRESS_LENGTH),
                text::quiet(progress.in_words()),
                press::words("Stop", Message::Stop).look(Look::Attention),
            ]
        }
        (None, Some(said)) => row![text::body(said), press::words("Dismiss", Message::Dismiss),],
        (None, None) => row![text::quiet(state)],
    };
    let line = line
        .spacing(space::GAP)
        .align_y(Alignment::Center)
        .width(Length::Fill)
        .height(Length::Fill)
        .padding(Padding::from([0.0, space::GAP + space::SMALL]));
    column![
        rule::horizontal(space::HAIR).style(container::hairline),
        row![line, gap().width(space::GAP)].height(space::HEAD - space::SMALL),
    ]
    .into()
}

/// A time that is left, no finer than anybody needs.
fn in_words(time: Duration) -> String {
    let seconds = time.as_secs();
    if seconds < 10 {
        format!("{} s", seconds.max(1))
    } else if seconds < 90 {
        format!("{} s", seconds.div_ceil(5) * 5)
    } else {
        format!("{} min", seconds.div_ceil(60))
    }
}

//! The welcome page: open, start from tables, recent studies, the demo.

use crate::app::disk;
use crate::app::theme::button::Look;
use crate::app::theme::{container, space, text};
use crate::app::widget::Element;
use crate::app::widget::press::{self, Press};
use crate::store::rescue::Rescued;
use iced::widget::{Column, column, container as boxed, row, rule};
use iced::{Length, Padding};
use std::path::PathBuf;

/// The name by which the first thing of the page is given the focus.
pub const FIELD: &str = "welcome";

/// What can be done on the page.
#[derive(Clone, Debug)]
pub enum Message {
    /// Starts from tables.
    Start,
    /// Asks for a study to open.
    Open,
    /// Opens a recent study.
    Recent(PathBuf),
    /// Begins with an empty study.
    Empty,
    /// Opens the demo.
    Demo,
    /// Opens what was rescued after a crash.
    Rescued(PathBuf),
    /// Gives up what was rescued.
    GiveUp(PathBuf),
    /// Shows the keys.
    Keys,
    /// Light or dark.
    Turn,
}

/// What the page knows.
#[derive(Clone, Debug, Default)]
pub struct Welcome {
    /// Studies that were open lately, the latest first.
    pub recent: Vec<PathBuf>,
    /// The demo, where it can be found.
    pub demo: Option<PathBuf>,
    /// What was rescued after a crash.
    pub rescued: Vec<Rescued>,
}

impl Welcome {
    /// The page.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let line = |words: &str, more: &str, message: Message| -> Press<'_, Message> {
            Press::new(
                column![text::name(words.to_owned()), text::quiet(more.to_owned())],
                message,
            )
            .look(Look::Row)
            .fill()
        };
        let mut parts = Column::new()
            .spacing(space::SMALL)
            .width(Length::Fill)
            .push(beside(text::title("Widefold").into()))
            .push(beside(
                text::prose(
                    "A study for wide data: tables with few samples and many predictors. It keeps \
                 itself up to date, says how honest each number is, and hands itself over.",
                )
                .into(),
            ))
            .push(iced::widget::space().height(space::SMALL));
        for rescued in &self.rescued {
            let from = rescued.original.as_ref().map_or_else(
                || "never saved".to_owned(),
                |path| format!("of {}", path.display()),
            );
            let more = format!(
                "The program ended before it was saved. Kept {} UTC, {from}.",
                rescued.when
            );
            let file = &rescued.file;
            parts = parts.push(
                row![
                    line(
                        &format!("Go on with “{}”", rescued.title),
                        &more,
                        Message::Rescued(file.clone()),
                    ),
                    press::words("Give it up", Message::GiveUp(file.clone())).look(Look::Attention),
                ]
                .spacing(space::SMALL)
                .align_y(iced::Alignment::Center),
            );
        }
        parts = parts
            .push(rule::horizontal(space::HAIR).style(container::hairline))
            .push(
                line(
                    "Start from tables",
                    "Choose files, say what is predicted, and get a ready study.",
                    Message::Start,
                )
                .id(FIELD),
            )
            .push(line(
                "Open a study",
                "A .widefold file, or its readable form.",
                Message::Open,
            ))
            .push(line(
                "An empty study",
                "Add cells one by one.",
                Message::Empty,
            ));
        if self.demo.is_some() {
            parts = parts.push(line(
                "The demo: Cellar light",
                "120 cheeses, three scans of 700 channels each, and the salt in them. Invented.",
                Message::Demo,
            ));
        }
        if !self.recent.is_empty() {
            parts = parts
                .push(rule::horizontal(space::HAIR).style(container::hairline))
                .push(beside(text::quiet("Open lately").into()));
            for path in &self.recent {
                let folder = path
                    .parent()
                    .map(|folder| folder.display().to_string())
                    .unwrap_or_default();
                parts = parts.push(line(
                    &disk::name(path),
                    &folder,
                    Message::Recent(path.clone()),
                ));
            }
        }
        parts = parts
            .push(rule::horizontal(space::HAIR).style(container::hairline))
            .push(iced::widget::row![
                press::words("Keys", Message::Keys),
                press::words("Light or dark", Message::Turn),
            ]);
        let page = boxed(parts).max_width(space::DIALOG).padding(Padding {
            top: space::WIDE * 3.0,
            right: space::GAP,
            bottom: space::WIDE,
            left: space::GAP,
        });
        let page = iced::widget::scrollable(boxed(page).center_x(Length::Fill))
            .direction(crate::app::theme::input::narrow())
            .style(crate::app::theme::input::scroller)
            .height(Length::Fill);
        boxed(page)
            .style(container::page)
            .width(Length::Fill)
            .height(Length::Fill)
            .into()
    }
}

/// Words that begin where the words of what can be pressed do.
fn beside(words: Element<'_, Message>) -> Element<'_, Message> {
    boxed(words)
        .padding(Padding::from([0.0, space::AIR + space::BAR]))
        .into()
}

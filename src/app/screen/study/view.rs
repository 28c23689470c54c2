//! How the study screen is put together.

use crate::app::part::{cell, head, margin, offer, strip, thread};
use crate::app::run::Run;
use crate::app::screen::study::{Columns, Message, StudyScreen};
use crate::app::theme::button::Look;
use crate::app::theme::{Mode, container, space};
use crate::app::widget::Element;
use crate::app::widget::list::List;
use crate::app::widget::press;
use crate::study::edit::Titled;
use iced::widget::{column, container as boxed, row, rule, space as gap, stack};
use iced::{Length, Padding};

/// The list knows the end of the page by this.
const END: u64 = u64::MAX;

impl StudyScreen {
    /// Head line, thread, page with margin, strip.
    pub(super) fn page(&self, mode: Mode) -> Element<'_, Message> {
        let columns = Columns::new(self.size.width, self.is_reading);
        let head = if self.is_reading {
            head::reading(&self.session)
        } else {
            let renaming = self.renaming.as_ref().and_then(|renaming| {
                (renaming.what == Titled::Study).then_some(renaming.draft.as_str())
            });
            head::view(
                &self.session,
                renaming,
                mode,
                head::Room::of(self.size.width),
                self.head_more,
            )
        };
        let mut middle = row![].height(Length::Fill);
        // Where the window is wider than the study needs, the whole of it stands in the middle.
        middle = middle.push(gap().width(columns.air));
        if columns.thread > 0.0 {
            middle = middle.push(
                thread::view(self.session.study(), self.session.standings()).map(Message::Thread),
            );
        }
        middle = middle.push(self.cells(columns, mode));
        let state = self.state_in_words();
        let mut all = column![head.map(Message::Head), middle];
        if !self.is_reading || self.session.run().is_some() {
            let strip = strip::view(
                self.session.study(),
                self.session.run(),
                self.said.as_deref(),
                state,
            );
            all = all.push(strip.map(Message::Strip));
        }
        boxed(all).style(container::page).into()
    }

    fn state_in_words(&self) -> &'static str {
        if self.session.study().cells().is_empty() {
            "An empty study. Add a cell to begin."
        } else if self.session.run().is_some() {
            "Working out what is due."
        } else if self.session.is_due() {
            "Some cells are due."
        } else {
            "Everything is up to date."
        }
    }

    fn cells(&self, columns: Columns, mode: Mode) -> Element<'_, Message> {
        let cells = self.session.study().cells();
        let mut keys: Vec<u64> = cells.iter().map(|cell| cell::key(cell.id)).collect();
        keys.push(END);
        let list = List::new(keys, move |at| match cells.get(at) {
            Some(cell) => self.cell(cell, columns, mode),
            None => self.end(columns),
        })
        .go_to(self.go_to);
        if columns.margin == 0.0 {
            return list.into();
        }
        // The line between page and margin runs behind the cells from top to bottom.
        let line = row![
            gap().width(space::WIDE + columns.page + space::WIDE),
            rule::vertical(space::HAIR).style(container::hairline),
        ]
        .height(Length::Fill);
        stack![line, list]
            .width(Length::Fill)
            .height(Length::Fill)
            .into()
    }

    fn beside<'a>(
        &self,
        columns: Columns,
        page: Element<'a, Message>,
        margin: Option<Element<'a, Message>>,
    ) -> Element<'a, Message> {
        let mut line = row![gap().width(space::WIDE), boxed(page).width(columns.page),];
        if let Some(margin) = margin
            && columns.margin > 0.0
        {
            line = line.push(gap().width(space::WIDE + space::GAP + space::SMALL));
            line = line.push(boxed(margin).width(columns.margin));
        }
        line.into()
    }

    fn cell<'a>(
        &'a self,
        cell: &'a crate::study::cell::Cell,
        columns: Columns,
        mode: Mode,
    ) -> Element<'a, Message> {
        let id = cell.id;
        let standing = self.session.standings().get(id);
        let Some(sheet) = self.sheet(id) else {
            return gap().into();
        };
        let caveats = standing
            .outcome
            .as_ref()
            .map(|outcome| outcome.caveats.clone())
            .unwrap_or_default();
        let is_renaming = |renaming: &&super::Renaming| renaming.what == Titled::Cell(id);
        let opened = cell::Opened {
            editor: self.editor.as_ref().filter(|open| open.cell == id),
            prose: self.prose.as_ref().filter(|prose| prose.cell == id),
            title: self
                .renaming
                .as_ref()
                .filter(is_renaming)
                .map(|renaming| renaming.draft.as_str()),
            is_more: self.more == Some(id),
            is_offering: self.offering == Some(Some(id)),
            table: self.table.as_ref().filter(|table| table.cell == id),
            highlight: self.highlight.as_ref(),
            strength: standing
                .outcome
                .as_ref()
                .and_then(|outcome| outcome.facts.value("chosen strength")),
            progress: self
                .session
                .run()
                .and_then(Run::working)
                .filter(|working| working.id == id)
                .map(strip::Progress::of),
            are_notes_folded: columns.margin == 0.0,
            are_notes_open: self.notes.contains(&id),
        };
        let page = cell::view(
            cell,
            sheet,
            standing.state,
            &caveats,
            opened,
            mode,
            self.is_reading,
        );
        let page = page.map(move |message| Message::Cell(id, Box::new(message)));
        let margin = (!caveats.is_empty()).then(|| margin::notes(&caveats));
        self.beside(columns, page, margin)
    }

    /// Below the last cell: what can be added.
    fn end(&self, columns: Columns) -> Element<'_, Message> {
        let inside: Element<'_, Message> = if self.is_reading {
            gap().height(space::WIDE).into()
        } else if self.offering == Some(None) || self.session.study().cells().is_empty() {
            crate::app::editor::set_off(offer::view().map(Message::Offered))
        } else {
            press::words("Add a cell", Message::Offer)
                .look(Look::Accent)
                .into()
        };
        let inside = boxed(inside).padding(Padding {
            top: space::GAP,
            bottom: space::WIDE * 3.0,
            ..Padding::ZERO
        });
        self.beside(columns, inside.into(), None)
    }
}

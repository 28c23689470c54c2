//! Prose, typed in place, with facts offered at an open brace.

use crate::app::theme::button::Look;
use crate::app::theme::{input, space, text};
use crate::app::widget::Element;
use crate::app::widget::press::{self, Press};
use crate::study::cell::CellId;
use iced::advanced::text::Wrapping;
use iced::keyboard;
use iced::widget::text_editor::{self, Binding, Content, Cursor, Edit};
use iced::widget::{Column, column, container, row, scrollable};
use iced::{Alignment, Length, Pixels};

/// The name by which the text is given the focus.
pub const FIELD: &str = "prose field";
/// How many facts are offered at a time.
const OFFERED: usize = 12;

/// A fact that can be put into the text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Offer {
    /// The title of the cell that gives it.
    pub title: String,
    /// Its name.
    pub fact: String,
    /// How it reads at present.
    pub shown: String,
}

/// What happens to the text.
#[derive(Clone, Debug)]
pub enum Message {
    /// It was edited, or the caret moved.
    Edited(text_editor::Action),
    /// A fact was taken.
    Took(usize),
    /// The next fact that is offered, or the one before.
    Moved(isize),
    /// The fact that stands out is taken.
    TookMarked,
    /// The last change of the text is taken back.
    Undo,
    /// The text is as it should be.
    Done,
    /// The text is left as it was.
    Leave,
}

/// What the text wants of the screen.
#[derive(Debug)]
pub enum Action {
    /// Nothing.
    None,
    /// The text is to be set.
    Commit(String),
    /// The editor is done.
    Close,
}

/// Prose that is being typed.
pub struct Prose {
    /// The cell whose text it is.
    pub cell: CellId,
    content: Content,
    began: String,
    offers: Vec<Offer>,
    /// Which offers fit what stands behind the open brace.
    fitting: Vec<usize>,
    marked: usize,
    past: Vec<(String, Cursor)>,
    is_typing: bool,
}

impl std::fmt::Debug for Prose {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Prose")
            .field("cell", &self.cell)
            .finish_non_exhaustive()
    }
}

impl Prose {
    /// Begins with the text as it stands.
    #[must_use]
    pub fn new(cell: CellId, typed: &str, offers: Vec<Offer>) -> Self {
        let mut content = Content::with_text(typed);
        content.perform(text_editor::Action::Move(text_editor::Motion::DocumentEnd));
        Self {
            cell,
            content,
            began: typed.to_owned(),
            offers,
            fitting: Vec::new(),
            marked: 0,
            past: Vec::new(),
            is_typing: false,
        }
    }

    /// The text as it is typed at present.
    #[must_use]
    pub fn typed(&self) -> String {
        let text = self.content.text();
        text.strip_suffix('\n').unwrap_or(&text).to_owned()
    }

    /// Whether the text differs from what it began with.
    #[must_use]
    pub fn is_changed(&self) -> bool {
        self.typed() != self.began
    }

    /// Takes a message in.
    pub fn update(&mut self, message: Message) -> Action {
        match message {
            Message::Edited(action) => {
                if action.is_edit() {
                    // Letters typed in a row are one step back.
                    let is_letter = matches!(
                        action,
                        text_editor::Action::Edit(Edit::Insert(letter)) if letter.is_alphanumeric()
                    );
                    if !(is_letter && self.is_typing) {
                        self.keep();
                    }
                    self.is_typing = is_letter;
                } else {
                    self.is_typing = false;
                }
                self.content.perform(action);
                self.look_for_brace();
                Action::None
            }
            Message::Took(at) => {
                self.take(at);
                Action::None
            }
            Message::Moved(by) => {
                let n_fitting = self.fitting.len().min(OFFERED);
                self.marked = self
                    .marked
                    .saturating_add_signed(by)
                    .min(n_fitting.saturating_sub(1));
                Action::None
            }
            Message::TookMarked => {
                if let Some(at) = self.fitting.get(self.marked) {
                    self.take(*at);
                }
                Action::None
            }
            Message::Undo => {
                if let Some((text, cursor)) = self.past.pop() {
                    self.content = Content::with_text(&text);
                    self.content.move_to(cursor);
                    self.look_for_brace();
                }
                Action::None
            }
            Message::Done if self.is_changed() => Action::Commit(self.typed()),
            Message::Done | Message::Leave => Action::Close,
        }
    }

    fn keep(&mut self) {
        self.past.push((self.content.text(), self.content.cursor()));
    }

    /// What stands between the caret and an open brace before it on the same line.
    fn behind_brace(&self) -> Option<String> {
        let cursor = self.content.cursor();
        let line = self.content.line(cursor.position.line)?;
        let before: &str = line.text.get(..byte(&line.text, cursor.position.column))?;
        let open = before.rfind('{')?;
        let behind = &before[open + 1..];
        (!behind.contains('}')).then(|| behind.to_owned())
    }

    fn look_for_brace(&mut self) {
        self.marked = 0;
        self.fitting = match self.behind_brace() {
            None => Vec::new(),
            Some(behind) => fitting(&self.offers, &behind),
        };
    }

    /// Puts a fact where the open brace is.
    fn take(&mut self, at: usize) {
        let (Some(behind), Some(offer)) = (self.behind_brace(), self.offers.get(at)) else {
            return;
        };
        let reference = format!("{}: {}}}", offer.title, offer.fact);
        self.keep();
        for _ in behind.chars() {
            self.content
                .perform(text_editor::Action::Edit(Edit::Backspace));
        }
        self.content
            .perform(text_editor::Action::Edit(Edit::Paste(reference.into())));
        self.look_for_brace();
    }

    /// The text, and the facts that are offered.
    #[must_use]
    pub fn view(&self) -> Element<'_, Message> {
        let is_offering = !self.fitting.is_empty();
        let field = iced::widget::text_editor(&self.content)
            .id(FIELD)
            .font(text::SERIF)
            .size(text::READING)
            .line_height(iced::advanced::text::LineHeight::Absolute(Pixels(
                text::READING_LINE,
            )))
            .wrapping(Wrapping::WordOrGlyph)
            // A long text scrolls inside, so that the facts that are offered below stay in sight.
            .max_height(space::GRID)
            .padding(space::SMALL)
            .style(input::editor)
            .key_binding(move |press| binding(&press, is_offering))
            .on_action(Message::Edited);
        let mut parts = column![field].spacing(space::SMALL);
        if is_offering {
            parts = parts.push(self.offered());
        }
        parts
            .push(
                row![
                    text::quiet("Markdown; a brace { offers facts; Ctrl Enter sets the text.")
                        .width(Length::Fill),
                    press::words("Leave", Message::Leave),
                    press::main("Set", Message::Done),
                ]
                .spacing(space::SMALL)
                .align_y(Alignment::Center),
            )
            .into()
    }

    fn offered(&self) -> Element<'_, Message> {
        let rows = self
            .fitting
            .iter()
            .take(OFFERED)
            .enumerate()
            .map(|(nth, at)| {
                let offer = &self.offers[*at];
                let words = row![
                    text::body(format!("{}: {}", offer.title, offer.fact)).width(Length::Fill),
                    text::quiet(offer.shown.as_str()),
                ]
                .spacing(space::SMALL);
                let look = if nth == self.marked {
                    Look::Chosen
                } else {
                    Look::Row
                };
                Press::new(words, Message::Took(*at))
                    .look(look)
                    .fill()
                    .into()
            });
        container(
            scrollable(Column::with_children(rows))
                .direction(input::narrow())
                .style(input::scroller)
                .width(Length::Fill),
        )
        .max_height(space::LIST)
        .into()
    }
}

/// Keys that mean something of our own.
fn binding(press: &text_editor::KeyPress, is_offering: bool) -> Option<Binding<Message>> {
    use keyboard::key::Named;
    let is_focused = matches!(press.status, text_editor::Status::Focused { .. });
    if !is_focused {
        return None;
    }
    match press.key.as_ref() {
        keyboard::Key::Named(Named::ArrowDown) if is_offering => {
            Some(Binding::Custom(Message::Moved(1)))
        }
        keyboard::Key::Named(Named::ArrowUp) if is_offering => {
            Some(Binding::Custom(Message::Moved(-1)))
        }
        keyboard::Key::Named(Named::Enter | Named::Tab) if is_offering => {
            Some(Binding::Custom(Message::TookMarked))
        }
        keyboard::Key::Named(Named::Enter) if press.modifiers.command() => {
            Some(Binding::Custom(Message::Done))
        }
        keyboard::Key::Character("z") if press.modifiers.command() => {
            Some(Binding::Custom(Message::Undo))
        }
        keyboard::Key::Named(_) | keyboard::Key::Character(_) | keyboard::Key::Unidentified => {
            Binding::from_key_press(press.clone())
        }
    }
}

/// The offers in whose title or name every word of the search occurs.
fn fitting(offers: &[Offer], search: &str) -> Vec<usize> {
    let words: Vec<String> = search
        .split([' ', ':'])
        .filter(|word| !word.is_empty())
        .map(str::to_lowercase)
        .collect();
    let fits = |offer: &Offer| {
        let whole = format!("{} {}", offer.title, offer.fact).to_lowercase();
        words.iter().all(|word| whole.contains(word.as_str()))
    };
    (0..offers.len()).filter(|at| fits(&offers[*at])).collect()
}

/// The byte at which a column of the caret begins. The toolkit counts columns in bytes; a caret
/// inside a letter is moved to its beginning.
fn byte(line: &str, column: usize) -> usize {
    let mut at = column.min(line.len());
    while !line.is_char_boundary(at) {
        at -= 1;
    }
    at
}

#[cfg(test)]
mod tests {
    use super::*;

    fn typed(letters: &str) -> Prose {
        let offer = |title: &str, fact: &str| Offer {
            title: title.to_owned(),
            fact: fact.to_owned(),
            shown: "5".to_owned(),
        };
        let offers = vec![
            offer("salt lasso", "chosen predictors"),
            offer("salt lasso", "nested r²"),
            offer("cellar scans", "samples"),
        ];
        let mut prose = Prose::new(CellId::new(1), "", offers);
        for letter in letters.chars() {
            let edit = text_editor::Action::Edit(Edit::Insert(letter));
            let _ = prose.update(Message::Edited(edit));
        }
        prose
    }

    #[test]
    fn an_open_brace_offers_the_facts_that_fit() {
        assert_eq!(typed("We found {").fitting.len(), 3);
        assert_eq!(typed("We found {sal").fitting, [0, 1]);
        assert_eq!(typed("We found {lasso nest").fitting, [1]);
        assert!(typed("We found {salt lasso: x}").fitting.is_empty());
    }

    #[test]
    fn a_fact_that_is_taken_stands_in_braces() {
        let mut prose = typed("We found {nes");
        let _ = prose.update(Message::TookMarked);
        assert_eq!(prose.typed(), "We found {salt lasso: nested r²}");
        let _ = prose.update(Message::Undo);
        assert_eq!(prose.typed(), "We found {nes");
    }
}

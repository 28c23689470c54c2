//! Drives a view without a display: for tests and benchmarks.
//!
//! The toolkit's own simulator loses focus between steps and has no clipboard. This one keeps
//! both, uses the bundled fonts only, and gives pictures that are the same on every machine.

use crate::app::fonts;
use crate::app::theme::Mode;
use crate::app::widget::Element;
use iced::advanced::renderer::{self, Headless};
use iced::advanced::widget::{Operation, operation};
use iced::advanced::{Clipboard, clipboard, mouse};
use iced::futures::StreamExt;
use iced::keyboard::{self, key};
use iced::{Event, Pixels, Point, Rectangle, Size, window};
use iced_runtime::UserInterface;
use iced_runtime::user_interface::Cache;
use std::time::Instant;

/// What came of a task that was done at once.
#[derive(Debug)]
pub struct Done<M> {
    /// What it told the window.
    pub messages: Vec<M>,
    /// What it copied.
    pub copied: Option<String>,
    /// Whether the window was to be closed.
    pub is_closed: bool,
}

/// Does a task to its end, on this thread, as the toolkit would do it beside the window.
pub fn done<M: 'static>(task: iced::Task<M>) -> Done<M> {
    let mut done = Done {
        messages: Vec::new(),
        copied: None,
        is_closed: false,
    };
    let Some(mut actions) = iced_runtime::task::into_stream(task) else {
        return done;
    };
    iced::futures::executor::block_on(async {
        while let Some(action) = actions.next().await {
            match action {
                iced_runtime::Action::Output(message) => done.messages.push(message),
                iced_runtime::Action::Clipboard(iced_runtime::clipboard::Action::Write {
                    contents,
                    ..
                }) => done.copied = Some(contents),
                iced_runtime::Action::Window(iced_runtime::window::Action::Close(_))
                | iced_runtime::Action::Exit => done.is_closed = true,
                // The focus and the like: there is no window whose it could be.
                _ => {}
            }
        }
    });
    done
}

/// A window that is not shown.
pub struct Harness {
    renderer: iced::Renderer,
    cache: Option<Cache>,
    size: Size,
    mode: Mode,
    cursor: mouse::Cursor,
    clipping: Clipping,
}

#[derive(Default)]
struct Clipping(Option<String>);

impl Clipboard for Clipping {
    fn read(&self, _kind: clipboard::Kind) -> Option<String> {
        self.0.clone()
    }

    fn write(&mut self, _kind: clipboard::Kind, contents: String) {
        self.0 = Some(contents);
    }
}

/// A picture of the window.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Shot {
    /// Its width in pixels.
    pub width: u32,
    /// Its height in pixels.
    pub height: u32,
    /// Red, green, blue and opacity of each pixel, row by row.
    pub pixels: Vec<u8>,
}

impl Harness {
    /// A window of this size.
    ///
    /// # Panics
    /// When the software renderer cannot be made, which does not depend on the machine.
    #[must_use]
    pub fn new(width: f32, height: f32, mode: Mode) -> Self {
        fonts::only_bundled();
        let renderer = iced::futures::executor::block_on(<iced::Renderer as Headless>::new(
            crate::app::theme::text::SANS,
            Pixels(crate::app::theme::text::SMALL),
            Some("tiny-skia"),
        ))
        .expect("the software renderer needs nothing of the machine");
        Self {
            renderer,
            cache: Some(Cache::new()),
            size: Size::new(width, height),
            mode,
            cursor: mouse::Cursor::Unavailable,
            clipping: Clipping::default(),
        }
    }

    /// What was last copied.
    #[must_use]
    pub fn copied(&self) -> Option<&str> {
        self.clipping.0.as_deref()
    }

    /// Feeds events to a view and returns the messages that come of them. A redraw follows, as
    /// it would in a window.
    pub fn feed<'a, M: 'a>(&mut self, view: Element<'a, M>, events: &[Event]) -> Vec<M> {
        let mut messages = Vec::new();
        let cache = self.cache.take().unwrap_or_default();
        let mut interface = UserInterface::build(view, self.size, cache, &mut self.renderer);
        for event in events {
            if let Event::Mouse(mouse::Event::CursorMoved { position }) = event {
                self.cursor = mouse::Cursor::Available(*position);
            }
            let _ = interface.update(
                std::slice::from_ref(event),
                self.cursor,
                &mut self.renderer,
                &mut self.clipping,
                &mut messages,
            );
        }
        #[expect(
            clippy::disallowed_methods,
            reason = "the toolkit wants to know when a redraw happens; nothing that is tested depends on it"
        )]
        let now = Instant::now();
        let _ = interface.update(
            &[Event::Window(window::Event::RedrawRequested(now))],
            self.cursor,
            &mut self.renderer,
            &mut self.clipping,
            &mut messages,
        );
        self.draw(&mut interface);
        self.cache = Some(interface.into_cache());
        messages
    }

    fn draw<M>(&mut self, interface: &mut UserInterface<'_, M, iced::Theme, iced::Renderer>) {
        let theme = self.mode.theme();
        interface.draw(
            &mut self.renderer,
            &theme,
            &renderer::Style {
                text_color: self.mode.colors().ink,
            },
            self.cursor,
        );
    }

    /// Runs an operation on a view, such as moving the focus.
    pub fn operate<'a, M: 'a>(&mut self, view: Element<'a, M>, operation: &mut dyn Operation) {
        let cache = self.cache.take().unwrap_or_default();
        let mut interface = UserInterface::build(view, self.size, cache, &mut self.renderer);
        interface.operate(&self.renderer, operation);
        let mut next = match operation.finish() {
            operation::Outcome::Chain(next) => Some(next),
            operation::Outcome::None | operation::Outcome::Some(()) => None,
        };
        while let Some(mut operation) = next.take() {
            interface.operate(&self.renderer, operation.as_mut());
            if let operation::Outcome::Chain(chained) = operation.finish() {
                next = Some(chained);
            }
        }
        self.cache = Some(interface.into_cache());
    }

    /// Where the smallest text that contains `words` lies, if it can be seen.
    pub fn find<'a, M: 'a>(&mut self, view: Element<'a, M>, words: &str) -> Option<Rectangle> {
        let mut find = Find {
            words: words.to_owned(),
            window: Rectangle::with_size(self.size),
            found: None,
        };
        self.operate(view, &mut find);
        find.found
    }

    /// Where the thing lies that has the focus.
    pub fn focused<'a, M: 'a>(&mut self, view: Element<'a, M>) -> Option<Rectangle> {
        let mut find = crate::app::widget::focus::Find::default();
        self.operate(view, &mut find);
        find.found
    }

    /// A picture of the view at a scale.
    pub fn shot<'a, M: 'a>(&mut self, view: Element<'a, M>, scale: f32) -> Shot {
        let _ = self.feed(view, &[]);
        self.painted(scale)
    }

    /// A picture of what was drawn last, at a scale.
    pub fn painted(&mut self, scale: f32) -> Shot {
        let width = (self.size.width * scale).round() as u32;
        let height = (self.size.height * scale).round() as u32;
        let pixels =
            self.renderer
                .screenshot(Size::new(width, height), scale, self.mode.colors().paper);
        Shot {
            width,
            height,
            pixels,
        }
    }
}

/// Looks for the smallest text that contains some words.
struct Find {
    words: String,
    window: Rectangle,
    found: Option<Rectangle>,
}

impl<T> Operation<T> for Find {
    fn traverse(&mut self, operate: &mut dyn FnMut(&mut dyn Operation<T>)) {
        operate(self);
    }

    fn text(&mut self, _id: Option<&iced::advanced::widget::Id>, bounds: Rectangle, text: &str) {
        let is_smaller = self
            .found
            .is_none_or(|found| bounds.width * bounds.height < found.width * found.height);
        let is_seen = self.window.contains(bounds.center());
        if text.contains(&self.words) && is_smaller && is_seen {
            self.found = Some(bounds);
        }
    }
}

/// The pointer moves to a place.
#[must_use]
pub fn moved(x: f32, y: f32) -> Event {
    Event::Mouse(mouse::Event::CursorMoved {
        position: Point::new(x, y),
    })
}

/// The left button is pressed and let go at a place.
#[must_use]
pub fn press(x: f32, y: f32) -> Vec<Event> {
    vec![
        moved(x, y),
        Event::Mouse(mouse::Event::ButtonPressed(mouse::Button::Left)),
        Event::Mouse(mouse::Event::ButtonReleased(mouse::Button::Left)),
    ]
}

/// The wheel is turned by lines.
#[must_use]
pub fn wheel(x: f32, y: f32) -> Event {
    Event::Mouse(mouse::Event::WheelScrolled {
        delta: mouse::ScrollDelta::Lines { x, y },
    })
}

/// A named key is pressed.
#[must_use]
pub fn named(named: key::Named, modifiers: keyboard::Modifiers) -> Event {
    pressed(keyboard::Key::Named(named), modifiers, None)
}

/// A letter is typed.
#[must_use]
pub fn letter(letter: &str, modifiers: keyboard::Modifiers) -> Event {
    let text = modifiers.is_empty().then_some(letter);
    pressed(keyboard::Key::Character(letter.into()), modifiers, text)
}

fn pressed(key: keyboard::Key, modifiers: keyboard::Modifiers, text: Option<&str>) -> Event {
    Event::Keyboard(keyboard::Event::KeyPressed {
        key: key.clone(),
        modified_key: key,
        physical_key: key::Physical::Unidentified(key::NativeCode::Unidentified),
        location: keyboard::Location::Standard,
        modifiers,
        text: text.map(Into::into),
        repeat: false,
    })
}

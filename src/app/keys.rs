//! Which keys reach the window although something else has the focus.

use crate::app::Message;
use crate::app::shortcut;
use iced::keyboard::{self, Key, key::Named};
use iced::{Event, event, window};

/// Hears keys that nothing took, and Escape and the function keys in any case.
pub fn listen(event: Event, status: event::Status, _window: window::Id) -> Option<Message> {
    let Event::Keyboard(keyboard::Event::KeyPressed { key, modifiers, .. }) = event else {
        return None;
    };
    let is_always = matches!(
        key,
        Key::Named(Named::Escape | Named::F1 | Named::F8 | Named::F9)
    );
    let is_free = status == event::Status::Ignored;
    if !is_always && !is_free {
        return None;
    }
    shortcut::of(&key, modifiers).map(Message::Shortcut)
}

//! Which fonts the window sets its letters in: the bundled ones.

use crate::figure::font::{self, Face};
use iced::advanced::graphics::text::font_system;
use std::borrow::Cow;
use std::sync::Once;

/// Which fonts of the machine are kept.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Keep {
    /// Those of other families: letters that the bundled ones lack are taken from them.
    OtherFamilies,
    /// None: what is drawn is the same everywhere.
    None,
}

/// Puts the bundled fonts in the place of the machine's fonts of the same names.
///
/// Those have other letters, and hints, which the toolkit works out anew for every space that it
/// draws: most of the time of a frame.
pub fn prefer_bundled() {
    load(Keep::OtherFamilies);
}

/// Loads the bundled fonts, once, and forgets those of the machine.
pub fn only_bundled() {
    static ONCE: Once = Once::new();
    ONCE.call_once(|| load(Keep::None));
}

fn load(keep: Keep) {
    let mut system = font_system()
        .write()
        .expect("no other thread panics while it holds the fonts");
    let database = system.raw().db_mut();
    let is_ours = |family: &str| {
        family == font::MONO_FAMILY || Face::ALL.iter().any(|face| face.family() == family)
    };
    let gone: Vec<_> = database
        .faces()
        .filter(|face| match keep {
            Keep::OtherFamilies => face.families.iter().any(|(family, _)| is_ours(family)),
            Keep::None => face.post_script_name != "Iced-Icons",
        })
        .map(|face| face.id)
        .collect();
    for face in gone {
        database.remove_face(face);
    }
    database.set_sans_serif_family(Face::Sans.family());
    database.set_serif_family(Face::Serif.family());
    for face in Face::ALL {
        system.load_font(Cow::Borrowed(face.bytes()));
    }
    system.load_font(Cow::Borrowed(font::MONO));
}

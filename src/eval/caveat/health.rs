//! Cautions where the work could hurt someone.

use crate::eval::caveat::{Caveat, Origin, Severity};
use crate::study::settings::data::Subject;

/// The caution that goes with a subject; both exports carry it.
#[must_use]
pub fn check(subject: Subject) -> Option<Caveat> {
    let (heading, text) = match subject {
        Subject::Ordinary => return None,
        Subject::Health => (
            "Not for decisions about health",
            "The model was developed on the samples described and has not been evaluated \
             elsewhere. It is not a medical device and not by itself a basis for decisions about \
             people or animals; local rules and licensed practice come first.",
        ),
        Subject::Safety => (
            "Not for decisions about safety",
            "The model was developed on the samples described and has not been evaluated \
             elsewhere. It is not by itself a basis for decisions about plant, machines or food \
             safety; local rules and licensed practice come first.",
        ),
        Subject::Compliance => (
            "Holds for this material only",
            "Validity holds only for the material, range and instrument evaluated; your procedure \
             or authority decides whether this may replace the reference method.",
        ),
    };
    Some(Caveat::new("subject", Severity::Note, heading, text).origin(Origin::Published))
}

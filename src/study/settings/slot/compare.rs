//! The places of a Compare cell's settings.

use crate::base::problem::Problem;
use crate::study::settings::compare::Compare;
use crate::study::settings::slot::{Value, take};

/// A place in the settings of a Compare cell.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum CompareSlot {
    /// One of the fits, counted from 0; none takes it away.
    Fit(usize),
    /// Takes one more fit. Nothing stands there.
    NextFit,
}

impl CompareSlot {
    /// The places that these settings have, in reading order.
    #[must_use]
    pub fn of(compare: &Compare) -> Vec<Self> {
        (0..compare.fits.len())
            .map(Self::Fit)
            .chain([Self::NextFit])
            .collect()
    }

    /// What the setting is called.
    #[must_use]
    pub const fn label(self) -> &'static str {
        match self {
            Self::Fit(_) => "fit that is compared",
            Self::NextFit => "next fit",
        }
    }

    /// What stands there; `None` when the settings have no such place.
    #[must_use]
    pub fn get(self, compare: &Compare) -> Option<Value> {
        match self {
            Self::Fit(at) => compare.fits.get(at).map(|link| Value::Cell(link.0)),
            Self::NextFit => Some(Value::Nothing),
        }
    }

    /// The settings with another value there.
    ///
    /// # Errors
    /// A [`Problem`] that says what may stand there.
    pub fn set(self, compare: &Compare, value: Value) -> Result<Compare, Problem> {
        let link = take::cell(self.label(), &value)?;
        let mut compare = compare.clone();
        let twice = link.0.is_some() && compare.fits.contains(&link);
        match self {
            Self::Fit(at) => {
                let Some(standing) = compare.fits.get_mut(at) else {
                    return Err(take::absent(self.label(), "fewer fits are compared"));
                };
                if *standing == link && link.0.is_some() {
                    return Ok(compare);
                }
                if link.0.is_none() {
                    let _ = compare.fits.remove(at);
                } else if twice {
                    return Err(compared_twice());
                } else {
                    *standing = link;
                }
            }
            Self::NextFit if twice => return Err(compared_twice()),
            Self::NextFit => compare.fits.extend(link.0.map(|_| link)),
        }
        Ok(compare)
    }
}

fn compared_twice() -> Problem {
    Problem::new(
        "compared-twice",
        "This fit is already among those compared.",
    )
    .mend("Choose another fit.")
}

//! Filling values that are known only to lie beyond a limit.

use crate::base::real::Real;
use crate::base::work::Work;
use crate::numeric::samples::{Limit, Samples, Side};
use crate::numeric::step::{Class, Preparation, StepStop};
use std::borrow::Cow;
use std::sync::Arc;

/// Fills a value below its limit with a fixed share of the limit (Schisterman et al. 2006 on
/// what that costs), and a value above its limit with the limit itself. The limit belongs to
/// the value, so nothing is learnt.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct LimitFill {
    rule: LimitRule,
}

/// What stands for a value below a limit L.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum LimitRule {
    /// L/2.
    Half,
    /// L/√2.
    OverRootTwo,
    /// L itself.
    Whole,
    /// This share of L.
    Share(Real),
}

impl LimitFill {
    /// Fills by this rule.
    #[must_use]
    pub fn new(rule: LimitRule) -> Self {
        Self { rule }
    }
}

impl Preparation for LimitFill {
    knows_enough!(Class::FixedReference);

    fn apply<'s>(
        &self,
        (): &(),
        mut samples: Cow<'s, Samples>,
        work: &Work<'_>,
    ) -> Result<Cow<'s, Samples>, StepStop> {
        let is_due = |samples: &Samples, limit: &Limit| {
            samples.active[limit.column] && samples.x[(limit.row, limit.column)].is_nan()
        };
        if !samples.limits.iter().any(|limit| is_due(&samples, limit)) {
            return Ok(samples);
        }
        work.check()?;
        let changed = samples.to_mut();
        let share = match self.rule {
            LimitRule::Half => 0.5,
            LimitRule::OverRootTwo => std::f64::consts::FRAC_1_SQRT_2,
            LimitRule::Whole => 1.0,
            LimitRule::Share(share) => share.get(),
        };
        let (due, rest): (Vec<Limit>, Vec<Limit>) = std::mem::take(&mut changed.limits)
            .into_iter()
            .partition(|limit| is_due(changed, limit));
        changed.limits = rest;
        let x = Arc::make_mut(&mut changed.x);
        for limit in due {
            x[(limit.row, limit.column)] = match limit.side {
                Side::Below => share * limit.limit,
                Side::Above => limit.limit,
            };
        }
        Ok(samples)
    }
}

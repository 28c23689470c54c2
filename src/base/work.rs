//! Long work: how far it is, and whether it has been called off.

use std::ops::Range;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

/// Says that work was called off. Not an error: never shown as one, logged or remembered.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Cancelled;

/// The end that calls work off. Dropping it calls the work off too.
#[derive(Debug, Default)]
pub struct CancelSource {
    flag: Arc<AtomicBool>,
}

impl CancelSource {
    /// A source whose work has not been called off.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// A token that sees when this source calls off.
    #[must_use]
    pub fn token(&self) -> CancelToken {
        CancelToken {
            flag: Arc::clone(&self.flag),
        }
    }

    /// Calls the work off.
    pub fn cancel(&self) {
        self.flag.store(true, Ordering::Relaxed);
    }
}

impl Drop for CancelSource {
    fn drop(&mut self) {
        self.cancel();
    }
}

/// The end that is asked by the work. Cheap to copy and to ask.
#[derive(Clone, Debug, Default)]
pub struct CancelToken {
    flag: Arc<AtomicBool>,
}

impl CancelToken {
    /// Whether the work has been called off.
    #[must_use]
    pub fn is_cancelled(&self) -> bool {
        self.flag.load(Ordering::Relaxed)
    }
}

type Report<'a> = dyn Fn(f32) + Sync + 'a;

/// A handle on which long work reports its steps and asks whether to go on.
///
/// One call does both, so no loop can do the one and forget the other.
#[derive(Clone)]
pub struct Work<'a> {
    token: CancelToken,
    report: Option<&'a Report<'a>>,
    from: f32,
    to: f32,
}

impl<'a> Work<'a> {
    /// Work that reports to `report`, as a share from 0 to 1, and can be called off by `token`.
    #[must_use]
    pub fn new(token: CancelToken, report: &'a Report<'a>) -> Self {
        Self {
            token,
            report: Some(report),
            from: 0.0,
            to: 1.0,
        }
    }

    /// Work that nobody watches or stops: for tests, examples and benchmarks.
    #[must_use]
    pub fn unattended() -> Work<'static> {
        Work {
            token: CancelToken::default(),
            report: None,
            from: 0.0,
            to: 1.0,
        }
    }

    /// Reports `done` of `total` steps, and stops the caller if it was called off.
    ///
    /// # Errors
    /// [`Cancelled`] when the work was called off.
    pub fn step(&self, done: usize, total: usize) -> Result<(), Cancelled> {
        self.check()?;
        if let Some(report) = self.report {
            let share = if total == 0 {
                1.0
            } else {
                (done as f32 / total as f32).clamp(0.0, 1.0)
            };
            report(self.from + share * (self.to - self.from));
        }
        Ok(())
    }

    /// Stops the caller if it was called off, and reports nothing.
    ///
    /// # Errors
    /// [`Cancelled`] when the work was called off.
    pub fn check(&self) -> Result<(), Cancelled> {
        if self.token.is_cancelled() {
            Err(Cancelled)
        } else {
            Ok(())
        }
    }

    /// A handle whose steps fill only a part of this one's bar.
    #[must_use]
    pub fn part(&self, part: Range<f32>) -> Work<'a> {
        let width = self.to - self.from;
        Work {
            token: self.token.clone(),
            report: self.report,
            from: self.from + part.start * width,
            to: self.from + part.end * width,
        }
    }

    /// A handle that can be called off with this one but reports nothing: for one of many
    /// pieces of work that run side by side, whose caller reports the count.
    #[must_use]
    pub fn silent(&self) -> Work<'a> {
        Work {
            report: None,
            ..self.clone()
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::sync::Mutex;

    #[test]
    fn a_part_fills_only_its_part_of_the_bar() {
        let seen = Mutex::new(Vec::new());
        let report = |share: f32| seen.lock().unwrap().push(share);
        let source = CancelSource::new();
        let work = Work::new(source.token(), &report);
        work.part(0.5..1.0).step(1, 2).unwrap();
        assert_eq!(*seen.lock().unwrap(), [0.75]);
    }

    #[test]
    fn work_stops_at_the_first_step_after_it_was_called_off() {
        let source = CancelSource::new();
        let report = |_: f32| ();
        let work = Work::new(source.token(), &report);
        assert_eq!(work.step(0, 3), Ok(()));
        source.cancel();
        assert_eq!(work.step(1, 3), Err(Cancelled));
        assert_eq!(work.silent().check(), Err(Cancelled));
    }

    #[test]
    fn dropping_the_source_calls_the_work_off() {
        let token = CancelSource::new().token();
        assert!(token.is_cancelled());
    }
}

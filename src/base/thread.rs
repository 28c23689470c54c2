//! The one way to do many pieces of work side by side: results come back in order.

use crate::base::work::{Cancelled, Work};
use std::sync::Mutex;
use std::sync::atomic::{AtomicUsize, Ordering};

/// How many threads to use. A result never depends on it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Threads(usize);

impl Threads {
    /// At least one thread.
    #[must_use]
    pub fn new(count: usize) -> Self {
        Self(count.max(1))
    }

    /// As many threads as the machine offers.
    #[must_use]
    pub fn all() -> Self {
        Self(std::thread::available_parallelism().map_or(1, std::num::NonZero::get))
    }

    /// The number of threads.
    #[must_use]
    pub fn count(self) -> usize {
        self.0
    }
}

/// Runs `job(0)`, …, `job(count − 1)` on at most `threads` threads and returns the results in
/// that order. `work` counts the finished pieces and stops the rest when it is called off.
///
/// A piece of work must not depend on which thread runs it; then the whole does not depend on
/// the number of threads.
///
/// # Errors
/// [`Cancelled`] when the work was called off, or when a job says so.
///
/// # Panics
/// When a job panics, with the job's own panic.
#[expect(
    clippy::disallowed_methods,
    reason = "this is the door to threads that the ban points to"
)]
pub fn in_order<T, F>(
    threads: Threads,
    count: usize,
    work: &Work<'_>,
    job: F,
) -> Result<Vec<T>, Cancelled>
where
    T: Send,
    F: Fn(usize) -> Result<T, Cancelled> + Sync,
{
    let next = AtomicUsize::new(0);
    let finished = AtomicUsize::new(0);
    let results: Mutex<Vec<Option<T>>> = Mutex::new((0..count).map(|_| None).collect());
    let run = || -> Result<(), Cancelled> {
        loop {
            work.check()?;
            let at = next.fetch_add(1, Ordering::Relaxed);
            if at >= count {
                return Ok(());
            }
            let result = job(at)?;
            results
                .lock()
                .expect("no job panics while it holds the lock")[at] = Some(result);
            work.step(finished.fetch_add(1, Ordering::Relaxed) + 1, count)?;
        }
    };
    let helpers = threads.count().min(count).saturating_sub(1);
    std::thread::scope(|scope| {
        let handles: Vec<_> = (0..helpers).map(|_| scope.spawn(run)).collect();
        let mut outcome = run();
        for handle in handles {
            match handle.join() {
                Ok(other) => outcome = outcome.and(other),
                Err(panic) => std::panic::resume_unwind(panic),
            }
        }
        outcome
    })?;
    let results = results
        .into_inner()
        .expect("no job panics while it holds the lock");
    Ok(results
        .into_iter()
        .map(|result| result.expect("every job has run"))
        .collect())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::base::work::CancelSource;

    #[test]
    fn results_come_in_order_whatever_the_number_of_threads() {
        for threads in [1, 2, 5] {
            let squares = in_order(Threads::new(threads), 100, &Work::unattended(), |at| {
                Ok(at * at)
            });
            assert_eq!(squares, Ok((0..100).map(|at| at * at).collect::<Vec<_>>()));
        }
    }

    #[test]
    fn calling_off_stops_all_threads() {
        let source = CancelSource::new();
        let report = |_: f32| source.cancel();
        let work = Work::new(source.token(), &report);
        assert_eq!(in_order(Threads::new(2), 1000, &work, Ok), Err(Cancelled));
    }
}

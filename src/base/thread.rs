//! The one way to do many pieces of work side by side: results come back in order.

use crate::base::work::{Cancelled, Work};
use std::sync::atomic::{AtomicUsize, Ordering};
use std::sync::{Mutex, mpsc};
use std::time::Duration;

/// How often a piece of work that runs apart is asked about.
const PATIENCE: Duration = Duration::from_millis(20);

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

/// Runs one piece of work that cannot be asked to stop, on a thread of its own, and asks on the
/// caller's behalf: when `work` is called off the caller goes on at once, while the piece runs to
/// its end in the background and is thrown away.
///
/// # Errors
/// [`Cancelled`] when the work was called off before the piece was done.
///
/// # Panics
/// When the job panics.
#[expect(
    clippy::disallowed_methods,
    reason = "this is the door to threads that the ban points to"
)]
pub fn apart<T, F>(work: &Work<'_>, job: F) -> Result<T, Cancelled>
where
    T: Send + 'static,
    F: FnOnce() -> T + Send + 'static,
{
    work.check()?;
    let (sender, receiver) = mpsc::channel();
    drop(std::thread::spawn(move || {
        // Nobody listens any more when the work was called off.
        let _ = sender.send(job());
    }));
    loop {
        match receiver.recv_timeout(PATIENCE) {
            Ok(result) => return Ok(result),
            Err(mpsc::RecvTimeoutError::Timeout) => work.check()?,
            Err(mpsc::RecvTimeoutError::Disconnected) => {
                panic!("the piece of work that ran apart has panicked")
            }
        }
    }
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

    #[test]
    fn a_piece_that_runs_apart_gives_its_result_and_is_left_behind_when_called_off() {
        let sum = apart(&Work::unattended(), || (1..=10).sum::<u32>());
        assert_eq!(sum, Ok(55));
        let source = CancelSource::new();
        let report = |_: f32| ();
        let work = Work::new(source.token(), &report);
        let (hold, held) = mpsc::channel::<()>();
        let answer = apart(&work, move || {
            source.cancel();
            // Until the answer is here and `hold` is dropped, this piece cannot end.
            let _ = held.recv();
        });
        assert_eq!(answer, Err(Cancelled));
        drop(hold);
    }
}

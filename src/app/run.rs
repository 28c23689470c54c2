//! A run under way, and what else happens off the window's thread.

use crate::base::work::CancelSource;
use crate::eval::desk::{self, Desk, Snapshot};
use crate::eval::standing::Event;
use crate::study::cell::CellId;
use iced::Task;
use iced::futures::channel::mpsc;
use iced::futures::{SinkExt, Stream};
use std::time::{Duration, Instant};

/// How often the window is told at most: twenty times a second.
const BEAT: Duration = Duration::from_millis(50);

/// A run under way. Dropping it calls it off.
#[derive(Debug)]
pub struct Run {
    number: u64,
    cancel: CancelSource,
    _task: iced::task::Handle,
    working: Option<Working>,
}

/// The cell that is being evaluated.
#[derive(Clone, Copy, Debug)]
pub struct Working {
    /// The cell.
    pub id: CellId,
    /// How far it is, from 0 to 1.
    pub share: f32,
    since: Instant,
}

impl Run {
    /// Starts a run and the stream of what it tells.
    pub fn start(desk: &Desk, snapshot: Snapshot, number: u64) -> (Self, Task<Vec<Event>>) {
        let desk::Run { events, cancel } = desk.run(snapshot);
        let stream = background(move |told: Tell<Vec<Event>>| {
            // Blocks until something is told, then gathers for a beat.
            while let Ok(first) = events.recv() {
                let mut batch = vec![first];
                std::thread::sleep(BEAT / 2);
                while let Ok(next) = events.try_recv() {
                    push(&mut batch, next);
                }
                if !told.tell(batch) {
                    return;
                }
                std::thread::sleep(BEAT / 2);
            }
        });
        let (task, handle) = Task::stream(stream).abortable();
        let run = Self {
            number,
            cancel,
            _task: handle.abort_on_drop(),
            working: None,
        };
        (run, task)
    }

    /// Which run it is.
    #[must_use]
    pub fn number(&self) -> u64 {
        self.number
    }

    /// Calls the run off. It still tells how it ended.
    pub fn stop(&self) {
        self.cancel.cancel();
    }

    /// The cell that is being evaluated.
    #[must_use]
    pub fn working(&self) -> Option<Working> {
        self.working
    }

    /// Takes in what the run tells.
    pub fn absorb(&mut self, event: &Event) {
        match event {
            Event::Started(id) => {
                self.working = Some(Working {
                    id: *id,
                    share: 0.0,
                    since: now(),
                });
            }
            Event::Progressed(id, share) => {
                if let Some(working) = &mut self.working
                    && working.id == *id
                {
                    working.share = *share;
                }
            }
            Event::Finished { id, .. } => {
                if self.working.is_some_and(|working| working.id == *id) {
                    self.working = None;
                }
            }
            Event::Planned(_) | Event::Ended { .. } => {}
        }
    }
}

impl Working {
    /// How long it will take, if it goes on as it went; `None` until that can be said.
    #[must_use]
    pub fn left(&self) -> Option<Duration> {
        let spent = now().duration_since(self.since);
        let can_say = self.share > 0.02 && spent > Duration::from_secs(1);
        can_say.then(|| spent.mul_f32((1.0 - self.share).max(0.0) / self.share))
    }
}

/// Progress that has been overtaken need not be told.
fn push(batch: &mut Vec<Event>, next: Event) {
    if let (Some(Event::Progressed(was, _)), Event::Progressed(is, _)) = (batch.last(), &next)
        && was == is
    {
        let _ = batch.pop();
    }
    batch.push(next);
}

#[expect(
    clippy::disallowed_methods,
    reason = "how long a cell will take is shown in the window and kept nowhere"
)]
fn now() -> Instant {
    Instant::now()
}

/// Tells the window something from another thread.
#[derive(Debug)]
pub struct Tell<T>(mpsc::Sender<T>);

impl<T> Tell<T> {
    /// Tells it; `false` when nobody listens any more.
    pub fn tell(&self, what: T) -> bool {
        let mut sender = self.0.clone();
        iced::futures::executor::block_on(sender.send(what)).is_ok()
    }
}

/// Does work on a thread of its own; what it tells is a stream.
#[expect(
    clippy::disallowed_methods,
    reason = "files are read and evaluation is listened to off the window's thread"
)]
pub fn background<T: Send + 'static>(
    job: impl FnOnce(Tell<T>) + Send + 'static,
) -> impl Stream<Item = T> + Send {
    let (sender, receiver) = mpsc::channel(8);
    let _thread = std::thread::spawn(move || job(Tell(sender)));
    receiver
}

/// Does work on a thread of its own and tells its result.
pub fn off_thread<T: Send + 'static>(job: impl FnOnce() -> T + Send + 'static) -> Task<T> {
    Task::stream(background(move |told: Tell<T>| {
        let _ = told.tell(job());
    }))
}

/// Tells a message after a time.
pub fn after<M: Send + 'static>(time: Duration, message: M) -> Task<M> {
    off_thread(move || {
        std::thread::sleep(time);
        message
    })
}

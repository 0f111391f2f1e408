//! Studies beside the window: threads, the newest request first, everything cancelled by a newer edit.
//!
//! Two threads serve the desk, as many as the smallest machine has cores. The *verdict* thread answers the level on the
//! board; the *aside* thread classifies its tiles and counts its folds once the verdict is known, and in between works
//! through the levels of the shelf. Each has one inbox in which the newest wish wins. Cancelling is by generation
//! ([`crate::study::Halt`]): [`Worker::ask`] moves the counter on before the request is even queued, so that running work
//! stops at its next check, whatever it does. A panic in a job is caught, told as [`Event::Failed`], and the thread goes on.

mod aside;
mod engine;
mod memory;
mod pool;
mod protocol;
mod pump;
mod verdict;

pub use engine::{Engine, Studies};
pub use pool::in_parallel;
pub use protocol::{Answer, Event, Request, ShelfLine, Verdict};

use crate::study::Halt;
use aside::{AsideJob, aside_loop};
use crossbeam_channel::{Receiver, Sender, unbounded};
use memory::Memory;
use pump::Pump;
use std::sync::{Arc, Mutex, PoisonError};
use std::thread::JoinHandle;
use std::time::Duration;
use verdict::{VerdictJob, verdict_loop};

/// What one search may spend.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(crate) struct Budget {
    pub(crate) time: Duration,
    pub(crate) bytes: u64,
}

impl Default for Budget {
    fn default() -> Budget {
        Budget {
            time: Duration::from_secs(60),
            bytes: 1024 << 20,
        }
    }
}

/// What both threads share.
pub(crate) struct Shared {
    pub(crate) engine: Box<dyn Engine>,
    pub(crate) pump: Pump,
    pub(crate) memory: Mutex<Memory>,
    budget: Mutex<Budget>,
}

impl Shared {
    /// The budget of one of the two threads: half of the memory each.
    pub(crate) fn budget(&self) -> Budget {
        *self.budget.lock().unwrap_or_else(PoisonError::into_inner)
    }
}

/// The worker's end that the desk holds. Dropping it cancels everything and waits for the threads to end.
pub struct Worker {
    shared: Arc<Shared>,
    study: Halt,
    shelf: Halt,
    verdict_inbox: Option<Sender<VerdictJob>>,
    aside_inbox: Option<Sender<AsideJob>>,
    events: Receiver<Event>,
    threads: Vec<JoinHandle<()>>,
}

impl Worker {
    /// Starts the threads. `wake` is called after each event; it must not block.
    pub fn start(wake: impl Fn() + Send + Sync + 'static) -> Worker {
        Worker::start_with(Box::new(Studies), wake)
    }

    /// The same with another engine, for tests of the worker itself.
    pub fn start_with(engine: Box<dyn Engine>, wake: impl Fn() + Send + Sync + 'static) -> Worker {
        let (event_sender, events) = unbounded();
        let (verdict_inbox, verdict_jobs) = unbounded();
        let (aside_inbox, aside_jobs) = unbounded();
        let shared = Arc::new(Shared {
            engine,
            pump: Pump::new(event_sender, Box::new(wake)),
            memory: Mutex::new(Memory::default()),
            budget: Mutex::new(Budget::default()),
        });
        let shelf = Halt::never();
        let verdict_thread = {
            let (shared, aside, shelf) = (Arc::clone(&shared), aside_inbox.clone(), shelf.clone());
            move || verdict_loop(&shared, &verdict_jobs, &aside, &shelf)
        };
        let aside_thread = {
            let (shared, shelf) = (Arc::clone(&shared), shelf.clone());
            move || aside_loop(&shared, &aside_jobs, &shelf)
        };
        Worker {
            shared,
            study: Halt::never(),
            shelf,
            verdict_inbox: Some(verdict_inbox),
            aside_inbox: Some(aside_inbox),
            events,
            threads: vec![
                std::thread::spawn(verdict_thread),
                std::thread::spawn(aside_thread),
            ],
        }
    }

    /// Asks. Never blocks. A `Study` or `Stop` cancels the running study at once.
    pub fn ask(&mut self, request: Request) {
        match request {
            Request::Study {
                revision,
                mechanics,
                level,
                prove,
                last_route,
                studies,
            } => {
                self.study = self.study.advance();
                let halt = self.study.clone();
                let job = VerdictJob {
                    revision,
                    mechanics,
                    level,
                    prove,
                    last_route,
                    studies,
                    halt,
                };
                if let Some(inbox) = &self.verdict_inbox {
                    let _ = inbox.send(job);
                }
            }
            Request::Shelf {
                mechanics,
                levels,
                prove,
            } => {
                if let Some(inbox) = &self.aside_inbox {
                    let _ = inbox.send(AsideJob::Shelf {
                        mechanics,
                        levels: levels.into(),
                        prove,
                    });
                }
                // After the wish is queued: the level that is being answered then finds it.
                let _ = self.shelf.advance();
            }
            Request::Budget { seconds, mebibytes } => {
                let time = Duration::try_from_secs_f64(seconds).unwrap_or(Duration::MAX);
                let bytes = (mebibytes << 20) / 2;
                *self
                    .shared
                    .budget
                    .lock()
                    .unwrap_or_else(PoisonError::into_inner) = Budget { time, bytes };
            }
            Request::Stop => self.study = self.study.advance(),
        }
    }

    /// What the worker has to tell. Drain it whenever `wake` was called.
    pub fn events(&self) -> &Receiver<Event> {
        &self.events
    }
}

impl Drop for Worker {
    fn drop(&mut self) {
        self.verdict_inbox = None;
        self.aside_inbox = None;
        while !self.threads.iter().all(JoinHandle::is_finished) {
            self.study = self.study.advance();
            self.shelf = self.shelf.advance();
            std::thread::sleep(Duration::from_millis(1));
        }
    }
}

/// Runs `job` on a thread of its own and hands its result to the receiver, for what blocks: file dialogs, pictures.
/// `wake` is called when the result is there. Without a result the receiver is disconnected: the job panicked.
pub fn run_aside<T: Send + 'static>(
    job: impl FnOnce() -> T + Send + 'static,
    wake: impl FnOnce() + Send + 'static,
) -> Receiver<T> {
    let (sender, receiver) = crossbeam_channel::bounded(1);
    std::thread::spawn(move || {
        let result = job();
        let _ = sender.send(result);
        wake();
    });
    receiver
}

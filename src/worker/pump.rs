//! Events on their way to the desk: sent, then the desk is woken; glimpses of progress at most 30 a second.

use super::protocol::Event;
use crate::level::Route;
use crate::study::{Progress, Watch};
use crossbeam_channel::Sender;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::time::{Duration, Instant};

/// The least time between two glimpses of one search: a little over a thirtieth of a second.
const BETWEEN_GLIMPSES: Duration = Duration::from_millis(34);

/// Sends events and wakes the desk.
pub(crate) struct Pump {
    events: Sender<Event>,
    wake: Box<dyn Fn() + Send + Sync>,
}

impl Pump {
    pub(crate) fn new(events: Sender<Event>, wake: Box<dyn Fn() + Send + Sync>) -> Pump {
        Pump { events, wake }
    }

    /// Sends one event. A desk that is gone is no error.
    pub(crate) fn send(&self, event: Event) {
        if self.events.send(event).is_ok() {
            (self.wake)();
        }
    }

    /// Runs a job; if it panics, tells the desk under `revision` and returns none.
    pub(crate) fn guard<T>(&self, revision: u64, job: impl FnOnce() -> T) -> Option<T> {
        match catch_unwind(AssertUnwindSafe(job)) {
            Ok(result) => Some(result),
            Err(payload) => {
                let text = payload.downcast_ref::<String>().map(String::as_str);
                let text = text
                    .or_else(|| payload.downcast_ref::<&str>().copied())
                    .unwrap_or("no message");
                self.send(Event::Failed {
                    revision,
                    message: text.to_owned(),
                });
                None
            }
        }
    }
}

/// Passes the glimpses and routes of one search on, stamped with its revision.
pub(crate) struct Glimpses<'a> {
    pub(crate) pump: &'a Pump,
    pub(crate) revision: u64,
    last: Option<Instant>,
}

impl<'a> Glimpses<'a> {
    pub(crate) fn new(pump: &'a Pump, revision: u64) -> Glimpses<'a> {
        Glimpses {
            pump,
            revision,
            last: None,
        }
    }
}

impl Watch for Glimpses<'_> {
    fn progress(&mut self, progress: &Progress) {
        let now = Instant::now();
        if self
            .last
            .is_none_or(|last| now.duration_since(last) >= BETWEEN_GLIMPSES)
        {
            self.last = Some(now);
            self.pump.send(Event::Progress {
                revision: self.revision,
                progress: progress.clone(),
            });
        }
    }

    fn route(&mut self, route: &Route) {
        self.pump.send(Event::Route {
            revision: self.revision,
            route: route.clone(),
        });
    }
}

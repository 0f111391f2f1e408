//! The route on the trail and where along it the desk stands.

use super::state::State;
use crate::level::{Cell, Route};
use crate::rules::{Played, Rules, View};
use std::sync::Arc;

/// A route laid out step by step, with the step that is shown.
#[derive(Clone, Debug)]
pub struct Playback {
    /// The route.
    pub route: Route,
    /// The revision of the level that it was laid out for.
    pub revision: u64,
    /// Steps of each fold along the route; they add up to its length. Empty while the folds are not known.
    pub spans: Vec<u32>,
    /// Whether the spans are folds of the whole map; else they are as the search folds, which may see more latches.
    pub exact: bool,
    /// The start.
    pub start: View,
    /// What each step did; as long as the route.
    pub steps: Vec<Played>,
    /// How many steps have been made, 0 to the length of the route.
    pub at: usize,
    /// Whether it is moving by itself.
    pub playing: bool,
    /// When the next step is due, in seconds of the window's clock.
    pub due_secs: f64,
    /// What the walker can reach from where it stands without leaving its roam.
    pub reach: Vec<Cell>,
    rules: Arc<Rules>,
}

impl Playback {
    /// Lays out a route from its start. None if the level does not take every step of it.
    pub fn new(
        rules: Arc<Rules>,
        revision: u64,
        route: Route,
        spans: Vec<u32>,
    ) -> Option<Playback> {
        let steps = rules.play(&route);
        if steps.len() != route.len() {
            return None;
        }
        let whole = spans.iter().sum::<u32>() as usize == route.len();
        let mut playback = Playback {
            spans: if whole { spans } else { Vec::new() },
            exact: false,
            route,
            revision,
            start: rules.start_view(),
            steps,
            at: 0,
            playing: false,
            due_secs: 0.0,
            reach: Vec::new(),
            rules,
        };
        playback.go(0);
        Some(playback)
    }

    /// What spans and latches of this trail are.
    pub fn spans_hint(&self) -> &'static str {
        if self.exact {
            "inside one, every step can be taken back in the end; a latch can't."
        } else {
            "as the search folded it: inside one, every step can be taken back at once; a latch leaves one."
        }
    }

    /// Takes the spans that the whole map gives.
    pub fn take_exact(&mut self, spans: Vec<u32>) {
        if spans.iter().sum::<u32>() as usize == self.len() {
            self.spans = spans;
            self.exact = true;
        }
    }

    /// Number of steps.
    pub fn len(&self) -> usize {
        self.steps.len()
    }

    /// Whether the level is finished at the start.
    pub fn is_empty(&self) -> bool {
        self.steps.is_empty()
    }

    /// The position that is shown.
    pub fn view(&self) -> &View {
        match self.at {
            0 => &self.start,
            at => &self.steps[at - 1].view,
        }
    }

    /// Shows the position after `at` steps, or after the last one.
    pub fn go(&mut self, at: usize) {
        self.at = at.min(self.len());
        self.reach = match self.at {
            0 => self.rules.reach(&self.rules.start()),
            at => self.rules.reach(&self.steps[at - 1].position),
        };
    }

    /// Index of the span that step `at` lies in, and the number of spans; none while the folds are not known.
    /// A position at the end of a span belongs to the next one: its last step was the commitment.
    pub fn span_at(&self) -> Option<(usize, usize)> {
        let mut end = 0;
        for (index, &span) in self.spans.iter().enumerate() {
            end += span as usize;
            if self.at < end {
                return Some((index, self.spans.len()));
            }
        }
        self.spans.len().checked_sub(1).map(|last| (last, last + 1))
    }
}

impl State {
    /// Puts a route on the trail. The step that is shown stays if the route is the one that was there.
    pub(super) fn lay_trail(&mut self, route: Route, spans: Vec<u32>) {
        let Some(rules) = self.rules.clone() else {
            self.playback = None;
            return;
        };
        let old = self.playback.take().filter(|old| old.route == route);
        self.playback = Playback::new(rules, self.revision, route, spans);
        if let (Some(new), Some(old)) = (&mut self.playback, old) {
            new.go(old.at);
            new.playing = old.playing;
            new.due_secs = old.due_secs;
        }
    }

    /// Shows the position after `at` steps and stops moving.
    pub(super) fn scrub(&mut self, at: usize) {
        if let Some(playback) = &mut self.playback {
            playback.playing = false;
            playback.go(at);
        }
    }

    /// Starts at the present step (at the first, if the last is shown) or stops.
    pub(super) fn play_or_pause(&mut self) {
        let now_secs = self.now_secs;
        if let Some(playback) = &mut self.playback {
            playback.playing = !playback.playing && !playback.is_empty();
            if playback.playing && playback.at == playback.len() {
                playback.go(0);
            }
            playback.due_secs = now_secs + 1.0 / f64::from(self.settings.steps_per_second.max(0.1));
        }
    }

    /// Moves on if a step is due. Returns the seconds until the next one, or none if nothing moves.
    pub fn advance_playback(&mut self) -> Option<f64> {
        let pause = 1.0 / f64::from(self.settings.steps_per_second.max(0.1));
        let now_secs = self.now_secs;
        let playback = self.playback.as_mut().filter(|playback| playback.playing)?;
        if now_secs >= playback.due_secs {
            playback.go(playback.at + 1);
            // A late frame makes one step, not many: the eye must be able to follow.
            playback.due_secs = now_secs + pause;
        }
        playback.playing = playback.at < playback.len();
        playback.playing.then_some(playback.due_secs - now_secs)
    }
}

//! What a state space must offer to be searched.

/// A state space whose positions may come in sets that are folded into one: the *roams*.
///
/// A position is a pair of a *key* (packed words) and a *place* (a small number, such as where a walker stands). A roam is a
/// set of positions of one key, linked by steps that a step takes back at once. Each position belongs to exactly one roam, and
/// the roam is the same whichever of its positions it is asked for. A space without roams has one place only.
///
/// Finished positions are never asked for their roam or edges: a search stops there. No roam of two or more positions
/// may hold a finished one.
pub trait StateSpace {
    /// Words of every key; at least 1.
    fn words(&self) -> usize;

    /// Number of places; at least 1, at most 2^14.
    fn places(&self) -> usize;

    /// Writes the key of the start and tells the rest of it.
    fn start(&mut self, key: &mut [u64]) -> Arrival;

    /// Adds the places of the roam of a position to `members`, its own among them. Called once for each roam that is met.
    fn roam(&mut self, key: &[u64], place: u16, members: &mut Vec<u16>);

    /// Adds all steps that lead out of the positions of a roam to other positions than by the roam's own links. A step to a
    /// position of the same roam is allowed.
    fn edges(&mut self, key: &[u64], place: u16, into: &mut EdgeList);

    /// Fills `distances`, one entry a place, with the fewest steps from a position to each of its roam over the roam's own
    /// links; `u16::MAX` elsewhere.
    fn distances(&mut self, key: &[u64], place: u16, distances: &mut [u16]);

    /// What is known ahead of a position that is not finished, from its key alone.
    fn outlook(&mut self, key: &[u64]) -> Outlook;

    /// Fewest steps from a position to a finished one, at least, given its place too; none if that is proved to be a dead end.
    /// Under the contract of [`Outlook`].
    fn steps_ahead(&mut self, key: &[u64], place: u16) -> Option<u32>;
}

/// Where a step leads, beside the key.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Arrival {
    /// The place.
    pub place: u16,
    /// Whether the position is finished.
    pub finished: bool,
}

/// What is known ahead of a position.
///
/// The contract of the bounds: never more than the true remaining cost from any position of the key, and along any step no
/// fall by more than the step costs (consistent), so that a search never has to open a position twice.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Outlook {
    /// A finished position may be reached.
    Open(Ahead),
    /// No finished position can be reached from any position of this key.
    Dead(SafeCut),
}

/// Costs that lie ahead, at least.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Ahead {
    /// Steps.
    pub steps: u16,
    /// Pushes.
    pub pushes: u16,
}

/// The rule by which a position was proved a dead end. Only safe rules have this type, and only with one of it does a
/// search leave a position out: there is no way to drop a position on a mere guess, and so no way to call a level unsolvable
/// because of one. Guesses go into the order in which positions are opened ([`Hint`]), never into what is left out.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct SafeCut(pub &'static str);

/// How promising a position looks; less is better. Promises nothing.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct Hint(pub u32);

/// One step out of a roam.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct EdgeOut {
    /// Place that the step is made from.
    pub from: u16,
    /// Place and state that it leads to.
    pub to: Arrival,
    /// What it costs in pushes, 0 or 1.
    pub pushes: u8,
    /// Whatever the space needs to make the step again from the place; see [`super::Trail`].
    pub label: u32,
}

/// Edges with the keys that they lead to, in one flat list; reusable room.
#[derive(Clone, Debug, Default)]
pub struct EdgeList {
    edges: Vec<EdgeOut>,
    keys: Vec<u64>,
}

impl EdgeList {
    /// Adds an edge and returns the room for the key that it leads to, `words` long and zero.
    pub fn add(&mut self, edge: EdgeOut, words: usize) -> &mut [u64] {
        self.edges.push(edge);
        let at = self.keys.len();
        self.keys.resize(at + words, 0);
        &mut self.keys[at..]
    }

    /// Takes all edges away.
    pub fn clear(&mut self) {
        self.edges.clear();
        self.keys.clear();
    }

    /// Number of edges.
    pub fn len(&self) -> usize {
        self.edges.len()
    }

    /// Whether there is no edge.
    pub fn is_empty(&self) -> bool {
        self.edges.is_empty()
    }

    /// The edge at a place of the list, and its key.
    pub fn get(&self, at: usize, words: usize) -> (EdgeOut, &[u64]) {
        (self.edges[at], &self.keys[at * words..(at + 1) * words])
    }
}

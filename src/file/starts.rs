//! Starting points for a new pack: the kinds of one sort of game, with one small finished level each.

/// One starting point, as it is offered.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Start {
    /// What it is called.
    pub name: &'static str,
    /// What can be made with it, in a few words.
    pub about: &'static str,
    /// The pack file.
    pub text: &'static [u8],
}

macro_rules! starts {
    ($($file:literal, $name:literal, $about:literal;)*) => {
        &[$(Start {
            name: $name,
            about: $about,
            text: include_bytes!(concat!("../../assets/starts/", $file, ".pack.ron")),
        }),*]
    };
}

/// All starting points, in the order in which they are offered.
pub const STARTS: &[Start] = starts![
    "pushing", "Pushing", "a walker, cargo and homes";
    "sliding-floors", "Sliding floors", "what enters slides on";
    "filling-holes", "Filling holes", "cargo that falls in and makes a way";
    "gates-and-plates", "Gates and plates", "doors that something must hold open";
    "keys-and-gems", "Keys and gems", "things to find, and locks";
    "several-walkers", "Several walkers", "they all move together";
    "dragging-blocks", "Dragging blocks", "no walker, blocks slide by hand";
    "everything", "Everything", "all mechanics of the greenhouse";
    "empty", "Empty", "two grounds, a walker and a way out";
];

#[cfg(test)]
mod tests {
    use super::*;
    use crate::file::{read_pack, write_pack};
    use crate::level::{Severity, problems};

    #[test]
    fn every_start_opens_without_a_fault_and_its_level_asks_a_question() {
        for start in STARTS {
            let read =
                read_pack(start.text).unwrap_or_else(|error| panic!("{}: {error}", start.name));
            assert!(read.refusals.is_empty(), "{}", start.name);
            assert_eq!(
                read.pack.levels.len(),
                usize::from(start.name != "Empty"),
                "{}",
                start.name
            );
            for level in &read.pack.levels {
                let found = problems(&read.pack.mechanics, level);
                assert!(
                    found
                        .iter()
                        .all(|problem| problem.severity != Severity::Invalid),
                    "{}: {found:?}",
                    start.name
                );
            }
            let again = read_pack(write_pack(&read.pack, "").as_bytes()).expect("what was written");
            assert_eq!(again.pack, read.pack, "{}", start.name);
        }
    }
}

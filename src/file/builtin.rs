//! What comes with the program: the sample pack, and pictures by the name of their file in `assets/kinds/`.

/// A sorted table of names and the bytes of `assets/kinds/NAME.svg`.
macro_rules! pictures {
    ($($name:literal),* $(,)?) => {
        &[$(($name, include_bytes!(concat!("../../assets/kinds/", $name, ".svg")).as_slice())),*]
    };
}

/// Sorted by name, so that a name is found by bisection; a test holds the order and that no file is forgotten.
const PICTURES: &[(&str, &[u8])] = pictures![
    "apprentice",
    "bench",
    "board",
    "brass-key",
    "cart",
    "copper-door",
    "copper-key",
    "door",
    "drain",
    "fern-bed",
    "fern-pot",
    "floorboard",
    "gardener",
    "glass",
    "gravel",
    "grit-sack",
    "hedge",
    "hose-reel",
    "ice",
    "iris-bed",
    "iris-pot",
    "kerb",
    "lamp-trolley",
    "lattice",
    "loading-bay",
    "moss",
    "planter",
    "puddle",
    "rose-bed",
    "rose-pot",
    "seed",
    "seed-tray",
    "shaft",
    "shaft-deep",
    "shelf-rack",
    "slab",
    "slab-blue",
    "slab-white",
    "sluice",
    "sluice-blue",
    "sluice-white",
    "stand",
    "stone",
    "sun-bed",
    "trolley",
    "turnstile",
    "urn",
    "vent",
    "vent-blue",
    "vent-white",
    "water-butt",
    "way-out",
];

/// The pack in the greenhouse scenario that comes with the program.
pub const SAMPLE_PACK: &[u8] = include_bytes!("../../sample-levels/night-greenhouse.pack.ron");

/// The SVG of the built-in picture of this name. A kind without a look is drawn with the picture of its id, if there is one.
pub fn builtin(name: &str) -> Option<&'static [u8]> {
    let place = PICTURES
        .binary_search_by_key(&name, |(name, _)| name)
        .ok()?;
    Some(PICTURES[place].1)
}

/// The names of all built-in pictures, sorted.
pub fn builtin_names() -> impl Iterator<Item = &'static str> {
    PICTURES.iter().map(|(name, _)| *name)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_table_is_sorted_and_holds_every_file() {
        let mut files: Vec<String> =
            std::fs::read_dir(concat!(env!("CARGO_MANIFEST_DIR"), "/assets/kinds"))
                .expect("the folder of pictures")
                .filter_map(|entry| entry.ok()?.file_name().into_string().ok())
                .filter_map(|name| Some(name.strip_suffix(".svg")?.to_owned()))
                .collect();
        files.sort();
        assert_eq!(builtin_names().collect::<Vec<_>>(), files);
    }

    #[test]
    fn names_are_found_and_others_are_not() {
        assert!(builtin("hedge").is_some_and(|svg| svg.windows(4).any(|four| four == b"<svg")));
        assert_eq!(builtin("Hedge"), None);
    }
}

//! Fold maps and tile classes against plain exploration of whole spaces: petgraph's components, and one breadth-first
//! search of the plain interpreter for each closed tile.

mod support;

use foldwright::level::Route;
use foldwright::study::{MapCounts, Prove, TileClass, fold_spans, map_counts, solve, tile_classes};
use foldwright::verify::plain::Act;
use support::brute;
use support::case::{Case, cases, limits};
use support::random::{MIXES, TINY, mix};

/// Levels of each mix whose map and tiles are compared.
const MAPPED_LEVELS: usize = 200;

struct Asked(Case);

impl std::ops::Deref for Asked {
    type Target = Case;
    fn deref(&self) -> &Case {
        &self.0
    }
}

impl Asked {
    fn check_map(&self) {
        let found = map_counts(&self.rules, &limits()).expect("no limit is met");
        let expected = self.space.map();
        let chance = expected.blind_finish_chance;
        let close = (found.blind_finish_chance - chance).abs() <= 1e-9;
        let found = MapCounts {
            blind_finish_chance: if close {
                chance
            } else {
                found.blind_finish_chance
            },
            ..found
        };
        assert_eq!(found, expected, "{}", self.text());
    }

    /// The spans of a found route against the components of the plain step graph; only for routes that are told by
    /// directions alone. Returns whether there was one.
    fn check_spans(&self) -> bool {
        let known = solve(&self.rules, Prove::Steps, &limits(), &mut ());
        let Some(Route::Steer(dirs)) = &known.route else {
            return false;
        };
        let (fold, _) = self.space.folds();
        let (mut at, mut span, mut expected) = (0, 0, Vec::new());
        for &dir in dirs {
            let edges = &self.space.edges[at];
            let edge = edges.iter().find(|edge| edge.act == Act::Walk(dir));
            let to = edge.expect("a step of the route").to;
            span += 1;
            if fold[at] != fold[to] {
                expected.push(std::mem::take(&mut span));
            }
            at = to;
        }
        expected.extend(Some(span).filter(|&span| span > 0));
        let route = Route::Steer(dirs.clone());
        let found = fold_spans(&self.rules, &route, &limits());
        assert_eq!(found, Ok(Some(expected)), "{}", self.text());
        true
    }

    fn check_tiles(&self, most: usize) -> Option<Vec<TileClass>> {
        let expected = brute::tile_classes(&self.mechanics, &self.level, &self.space, most)?;
        let known = solve(&self.rules, Prove::Steps, &limits(), &mut ());
        let mut told = vec![None; expected.len()];
        let found = tile_classes(
            &self.mechanics,
            &self.level,
            &known,
            &limits(),
            &mut |cell, class| told[self.level.size.index(cell)] = Some(class),
        );
        for cell in self.level.size.cells() {
            let at = self.level.size.index(cell);
            let expected = Some(expected[at]);
            assert_eq!(found[at], expected, "{cell:?} of {}", self.text());
            assert!(told[at].is_none_or(|told| Some(told) == expected));
        }
        Some(expected)
    }
}

#[track_caller]
fn check_studies(name: &str) {
    let mut classes = Vec::new();
    let (mut compared, mut routes) = (0, 0);
    for case in cases(mix(name), TINY, 2_000_000, MAPPED_LEVELS, 800) {
        let case = Asked(case);
        case.check_map();
        routes += u32::from(case.check_spans());
        if let Some(found) = case.check_tiles(1_500) {
            classes.extend(found);
            compared += 1;
        }
    }
    assert!(compared > MAPPED_LEVELS * 3 / 4, "{name}: {compared}");
    assert!(routes > 20 || name == "drag", "{name}: {routes} routes");
    for class in [TileClass::CutOff, TileClass::Idle, TileClass::Furnished] {
        assert!(classes.contains(&class), "{name}: no {class:?}");
    }
    assert!(
        classes.contains(&TileClass::Useful) && classes.contains(&TileClass::Vital),
        "{name}"
    );
}

macro_rules! mixes {
    ($($test:ident $name:literal;)*) => {
        $(
            #[test]
            fn $test() {
                check_studies($name);
            }
        )*

        #[test]
        fn every_mix_is_asked_about() {
            let named = [$($name),*];
            assert!(MIXES.iter().all(|mix| named.contains(&mix.name)));
        }
    };
}

mixes! {
    map_and_tiles_with_pushing_only "push-only";
    map_and_tiles_with_rows "rows";
    map_and_tiles_with_slides "slides";
    map_and_tiles_with_gates "gates";
    map_and_tiles_with_sinks "sinks";
    map_and_tiles_with_locks_and_gems "locks and gems";
    map_and_tiles_with_frail_ground "frail";
    map_and_tiles_with_warps "warps";
    map_and_tiles_with_tow_and_glide "tow and glide";
    map_and_tiles_with_two_walkers "two walkers";
    map_and_tiles_with_everything "everything";
    map_and_tiles_with_dragged_blocks "drag";
}

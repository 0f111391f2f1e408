//! Characters for kinds that the legend of a pack lacks.

use crate::level::{BodyIx, GroundIx, ItemIx, KindId, Legend, Mechanics, Pack};
use std::collections::BTreeSet;

/// The legend of a pack, cleared of entries that could not be read again and completed for every kind on a board.
///
/// New characters go by the id of the kind, so that the same pack always gets the same ones: plain ground is `.`, ground
/// closed to everything `X`; then the first letter of the id that is free, small before capital; then any free letter or
/// digit.
pub(super) fn complete_legend(pack: &Pack) -> Legend {
    let mechanics = &*pack.mechanics;
    let used_grounds: BTreeSet<GroundIx> = pack
        .levels
        .iter()
        .flat_map(|level| level.ground.iter().copied())
        .collect();
    let used_bodies: BTreeSet<BodyIx> = pack
        .levels
        .iter()
        .flat_map(|level| level.bodies.iter().copied().flatten())
        .collect();
    let used_items: BTreeSet<ItemIx> = pack
        .levels
        .iter()
        .flat_map(|level| level.items.iter().copied().flatten())
        .collect();
    let legend = &mechanics.legend;
    Legend {
        grounds: complete(&legend.grounds, &used_grounds, |ix| {
            ground_wishes(mechanics, ix)
        }),
        bodies: complete(&legend.bodies, &used_bodies, |ix| {
            mechanics
                .bodies
                .get(usize::from(ix.0))
                .map(|kind| id_wishes(&kind.id))
        }),
        items: complete(&legend.items, &used_items, |ix| {
            mechanics
                .items
                .get(usize::from(ix.0))
                .map(|kind| id_wishes(&kind.id))
        }),
    }
}

fn ground_wishes(mechanics: &Mechanics, ix: GroundIx) -> Option<String> {
    let kind = mechanics.grounds.get(usize::from(ix.0))?;
    let special = if kind.closed_to_all() {
        "X"
    } else if kind.is_plain() {
        "."
    } else {
        ""
    };
    Some(format!("{special}{}", id_wishes(&kind.id)))
}

fn id_wishes(id: &KindId) -> String {
    let letters: String = id.as_str().chars().filter(|&c| c != '-').collect();
    format!("{letters}{}", letters.to_uppercase())
}

/// `wishes` gives the characters that suit a kind, the best first; none for an index that is no kind of the pack.
fn complete<Ix: Copy + Ord>(
    given: &[(char, Ix)],
    used: &BTreeSet<Ix>,
    wishes: impl Fn(Ix) -> Option<String>,
) -> Vec<(char, Ix)> {
    let mut taken = BTreeSet::from(['-']);
    let mut legend: Vec<(char, Ix)> = Vec::with_capacity(given.len());
    for &(c, ix) in given {
        if wishes(ix).is_some() && taken.insert(c) {
            legend.push((c, ix));
        }
    }
    for &ix in used {
        if legend.iter().any(|&(_, other)| other == ix) {
            continue;
        }
        let wished = wishes(ix).unwrap_or_default();
        let found = wished
            .chars()
            .chain(spare_characters())
            .find(|c| !taken.contains(c));
        if let Some(c) = found {
            taken.insert(c);
            legend.push((c, ix));
        }
    }
    legend
}

/// More printable characters than a layer may have kinds.
fn spare_characters() -> impl Iterator<Item = char> {
    let latin = ('a'..='z').chain('A'..='Z').chain('0'..='9');
    let greek_and_cyrillic = ('\u{3b1}'..='\u{3c9}').chain('\u{430}'..='\u{44f}');
    // Syllables and ideographs: 6,592 letters that every font for text has or draws as one box.
    latin
        .chain(greek_and_cyrillic)
        .chain('\u{3400}'..='\u{4dbf}')
}

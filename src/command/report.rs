//! The report of `check` as JSON, schema 1: the form of the document and the order of its fields.

use super::answer::Answer;
use super::check::CheckedPack;
use crate::level::{Level, Route};
use crate::study::{Figure, TileClass};
use serde::Serialize;

#[derive(Serialize)]
struct Document<'a> {
    schema: u32,
    packs: Vec<PackPart<'a>>,
}

#[derive(Serialize)]
struct PackPart<'a> {
    file: &'a str,
    name: Option<&'a str>,
    error: Option<&'a str>,
    levels: Vec<LevelPart<'a>>,
}

#[derive(Serialize)]
struct LevelPart<'a> {
    number: usize,
    name: &'a str,
    verdict: &'static str,
    steps: Option<FigurePart>,
    pushes: Option<FigurePart>,
    route: Option<RoutePart>,
    positions: u64,
    folds: u64,
    seconds: f64,
    message: Option<String>,
    tiles: Option<TilesPart>,
    map: Option<MapPart>,
}

#[derive(Serialize)]
struct FigurePart {
    fewest: u32,
    proved: bool,
}

impl From<Figure> for FigurePart {
    fn from(figure: Figure) -> FigurePart {
        FigurePart {
            fewest: figure.fewest,
            proved: figure.proved,
        }
    }
}

#[derive(Serialize)]
#[serde(untagged)]
enum RoutePart {
    Letters(String),
    Blocks(Vec<(u16, char)>),
}

#[derive(Default, Serialize)]
struct TilesPart {
    cut_off: Vec<[u8; 2]>,
    idle: Vec<[u8; 2]>,
    useful: Vec<[u8; 2]>,
    vital: Vec<[u8; 2]>,
    furnished: Vec<[u8; 2]>,
}

#[derive(Serialize)]
struct MapPart {
    folds: u64,
    alive: u64,
    commitments: u64,
    traps: u64,
    positions: u64,
    blind_finish_chance: f64,
}

/// The whole document, ending in a line feed.
///
/// # Errors
/// None that can be expected: the document has no map with odd keys.
pub(super) fn json(packs: &[CheckedPack]) -> serde_json::Result<String> {
    let document = Document {
        schema: 1,
        packs: packs
            .iter()
            .map(|pack| PackPart {
                file: &pack.file,
                name: pack.name.as_deref(),
                error: pack.error.as_deref(),
                levels: pack
                    .levels
                    .iter()
                    .map(|(number, level, answer)| level_part(*number, level, answer))
                    .collect(),
            })
            .collect(),
    };
    Ok(serde_json::to_string_pretty(&document)? + "\n")
}

fn level_part<'a>(number: usize, level: &'a Level, answer: &Answer) -> LevelPart<'a> {
    let report = answer.report.as_ref();
    LevelPart {
        number,
        name: &level.name,
        verdict: answer.verdict.word(),
        steps: answer.steps.map(FigurePart::from),
        pushes: answer.pushes.map(FigurePart::from),
        route: report
            .and_then(|report| report.route.as_ref())
            .map(route_part),
        positions: report.map_or(0, |report| report.positions),
        folds: report.map_or(0, |report| report.folds),
        seconds: report.map_or(0.0, |report| microseconds(report.seconds)),
        message: (!answer.messages.is_empty()).then(|| answer.messages.join(" ")),
        tiles: answer.tiles.as_deref().map(tiles_part),
        map: answer.map.map(|map| MapPart {
            folds: map.folds,
            alive: map.alive,
            commitments: map.commitments,
            traps: map.traps,
            positions: map.positions,
            blind_finish_chance: map.blind_finish_chance,
        }),
    }
}

fn microseconds(seconds: f64) -> f64 {
    (seconds * 1e6).round() / 1e6
}

fn route_part(route: &Route) -> RoutePart {
    match route {
        Route::Steer(_) => RoutePart::Letters(route.text()),
        Route::Drag(steps) => RoutePart::Blocks(
            steps
                .iter()
                .map(|step| (step.block, step.dir.letter()))
                .collect(),
        ),
    }
}

fn tiles_part(tiles: &[(crate::level::Cell, TileClass)]) -> TilesPart {
    let mut part = TilesPart::default();
    for (cell, class) in tiles {
        let list = match class {
            TileClass::CutOff => &mut part.cut_off,
            TileClass::Idle => &mut part.idle,
            TileClass::Useful => &mut part.useful,
            TileClass::Vital => &mut part.vital,
            TileClass::Furnished => &mut part.furnished,
        };
        list.push([cell.x, cell.y]);
    }
    part
}

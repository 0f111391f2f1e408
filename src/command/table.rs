//! The report of `check` as a table for people.

use super::answer::{Answer, Verdict};
use super::check::CheckedPack;
use crate::level::{Control, Level};
use crate::study::{Figure, TileClass};
use std::fmt::Write;

/// Names longer than this many characters are cut.
const MOST_NAME: usize = 32;

/// The table of all packs and the line of totals. When `quiet`, only what is not well.
pub(super) fn table(packs: &[CheckedPack], quiet: bool) -> String {
    let mut out = String::new();
    for pack in packs {
        if pack.error.is_some() {
            // The reason stands on standard error.
            let _ = writeln!(out, "{}  can't be read\n", pack.file);
            continue;
        }
        let rows: Vec<&(usize, std::sync::Arc<Level>, Answer)> = pack
            .levels
            .iter()
            .filter(|(_, _, answer)| !quiet || answer.status() != 0)
            .collect();
        if quiet && rows.is_empty() {
            continue;
        }
        let _ = writeln!(out, "{}  {}", pack.file, pack.name.as_deref().unwrap_or(""));
        let measure = match pack.control {
            Control::Steer => "pushes",
            Control::Drag => "moves",
        };
        let heads = [
            "#",
            "level",
            "verdict",
            "steps",
            measure,
            "positions",
            "folds",
            "seconds",
        ];
        let mut lines = vec![heads.map(str::to_owned)];
        lines.extend(
            rows.iter()
                .map(|(number, level, answer)| cells(*number, level, answer)),
        );
        write_lines(&mut out, &lines, |row| match row {
            0 => Vec::new(),
            row => remarks(&rows[row - 1].2),
        });
        out.push('\n');
    }
    if !quiet {
        out.push_str(&totals(packs));
    }
    out
}

fn cells(number: usize, level: &Level, answer: &Answer) -> [String; 8] {
    let report = answer.report.as_ref();
    let figure = |figure: Option<Figure>| match figure {
        None => "-".to_owned(),
        Some(Figure {
            fewest,
            proved: true,
        }) => format!("{fewest}"),
        Some(Figure { fewest, .. }) => format!("<={fewest}"),
    };
    let count = |count: Option<u64>| count.map_or("-".to_owned(), |count| count.to_string());
    let name: String = match level.name.chars().count() {
        0..=MOST_NAME => level.name.clone(),
        _ => level
            .name
            .chars()
            .take(MOST_NAME - 3)
            .chain("...".chars())
            .collect(),
    };
    [
        number.to_string(),
        name.replace(|c: char| c.is_control(), " "),
        answer.verdict.word().to_owned(),
        figure(answer.steps),
        figure(answer.pushes),
        count(report.map(|report| report.positions)),
        count(report.map(|report| report.folds)),
        report.map_or("-".to_owned(), |report| format!("{:.3}", report.seconds)),
    ]
}

/// What goes below a level's line.
fn remarks(answer: &Answer) -> Vec<String> {
    let mut remarks = answer.messages.clone();
    if let Some(map) = &answer.map {
        remarks.push(format!(
            "Fold map: {} folds, {} of them alive; {} commitments, {} of them traps; {} positions; blind finish chance {:.4}.",
            map.folds, map.alive, map.commitments, map.traps, map.positions, map.blind_finish_chance
        ));
    }
    if let Some(tiles) = &answer.tiles {
        let count = |wanted: TileClass| tiles.iter().filter(|(_, class)| *class == wanted).count();
        remarks.push(format!(
            "Tiles: {} cut off, {} idle, {} useful, {} vital, {} furnished.",
            count(TileClass::CutOff),
            count(TileClass::Idle),
            count(TileClass::Useful),
            count(TileClass::Vital),
            count(TileClass::Furnished)
        ));
    }
    remarks
}

/// Columns as wide as their widest cell; words to the left, numbers to the right.
fn write_lines(out: &mut String, lines: &[[String; 8]], below: impl Fn(usize) -> Vec<String>) {
    let width = |column: usize| {
        lines
            .iter()
            .map(|cells| cells[column].chars().count())
            .max()
            .unwrap_or(0)
    };
    let widths: [usize; 8] = std::array::from_fn(width);
    for (row, cells) in lines.iter().enumerate() {
        let mut line = String::new();
        for (column, (cell, width)) in cells.iter().zip(widths).enumerate() {
            let fill = " ".repeat(width - cell.chars().count());
            line.push_str("  ");
            match column {
                1 | 2 => line.extend([cell, fill.as_str()]),
                _ => line.extend([fill.as_str(), cell]),
            }
        }
        let _ = writeln!(out, "{}", line.trim_end());
        for remark in below(row) {
            let _ = writeln!(out, "{}{remark}", " ".repeat(widths[0] + 4));
        }
    }
}

fn totals(packs: &[CheckedPack]) -> String {
    let answers: Vec<&Answer> = packs
        .iter()
        .flat_map(|pack| &pack.levels)
        .map(|(_, _, answer)| answer)
        .collect();
    let count = |verdict: Verdict| {
        answers
            .iter()
            .filter(|answer| answer.verdict == verdict)
            .count()
    };
    let noun =
        |count: usize, noun: &str| format!("{count} {noun}{}", if count == 1 { "" } else { "s" });
    let mut text = format!(
        "{} in {}: {} solvable, {} unsolvable, {} undecided, {} invalid",
        noun(answers.len(), "level"),
        noun(packs.len(), "pack"),
        count(Verdict::Solvable),
        count(Verdict::Unsolvable),
        count(Verdict::Undecided),
        count(Verdict::Invalid)
    );
    let broken = answers.iter().filter(|answer| answer.broken).count();
    if broken > 0 {
        let _ = write!(text, "; {} with a broken watch", noun(broken, "level"));
    }
    let unreadable = packs.iter().filter(|pack| pack.error.is_some()).count();
    if unreadable > 0 {
        let _ = write!(text, "; {} unreadable", noun(unreadable, "pack"));
    }
    text + "\n"
}

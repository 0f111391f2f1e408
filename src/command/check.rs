//! `foldwright check`.

use super::answer::{Answer, Questions, Verdict, answer};
use super::arguments::CheckArguments;
use super::gather::{Found, gather, keep_level};
use super::{certify, print, report, table};
use crate::level::{Control, Level};
use crate::worker::in_parallel;
use std::io::{IsTerminal, Write, stderr};
use std::num::NonZeroUsize;
use std::sync::Arc;

/// A pack after its check.
pub(super) struct CheckedPack {
    pub file: String,
    pub name: Option<String>,
    pub error: Option<String>,
    pub control: Control,
    pub levels: Vec<(usize, Arc<Level>, Answer)>,
}

/// Checks and prints; returns the exit status.
pub(super) fn check(arguments: &CheckArguments) -> u8 {
    let mut found = gather(&arguments.paths);
    if let Some(wish) = &arguments.level
        && !keep_level(&mut found, wish)
    {
        warn_unreadable(&found);
        eprintln!(
            "foldwright: There is no level {wish:?} in what was named. Give its name, or its number from 1."
        );
        return 2;
    }
    check_found(found, arguments)
}

pub(super) fn check_found(found: Vec<Found>, arguments: &CheckArguments) -> u8 {
    let quiet = arguments.search.quiet;
    warn_unreadable(&found);
    let questions = Questions {
        prove: arguments.search.prove.into(),
        limits: arguments.search.limits(),
        map: arguments.map,
        tiles: arguments.tiles,
    };
    let certifying = arguments.certificate.as_deref().map(|folder| {
        let asked = certify::levels(&found);
        (folder, asked)
    });
    let packs = answer_all(found, &questions, arguments.search.jobs, quiet);
    let written = certifying.is_none_or(|(folder, asked)| {
        certify::write_all(folder, &asked, &packs, &questions.limits)
    });
    if !quiet {
        warn_advice(&packs);
    }
    let text = if arguments.json {
        match report::json(&packs) {
            Ok(text) => text,
            Err(error) => {
                eprintln!("foldwright: The report can't be written: {error}.");
                return 2;
            }
        }
    } else {
        table::table(&packs, quiet)
    };
    print(&text);
    if written { status(&packs) } else { 2 }
}

pub(super) fn answer_all(
    found: Vec<Found>,
    questions: &Questions,
    threads: NonZeroUsize,
    quiet: bool,
) -> Vec<CheckedPack> {
    let jobs: Vec<_> = found.iter().flat_map(|pack| &pack.levels).collect();
    let show_progress = !quiet && stderr().is_terminal();
    let mut done = 0;
    let results = in_parallel(
        threads,
        jobs.len(),
        |at| answer(&jobs[at].1, &jobs[at].2, questions),
        |at| {
            done += 1;
            if show_progress {
                let name: String = jobs[at]
                    .2
                    .name
                    .chars()
                    .filter(|c| !c.is_control())
                    .take(40)
                    .collect();
                eprint!("\r\x1b[K{done} of {} levels: {name}", jobs.len());
            }
        },
    );
    if show_progress && !jobs.is_empty() {
        eprint!("\r\x1b[K");
    }
    let _ = stderr().flush();
    let mut answers = results.into_iter().map(|result| {
        let failed =
            |reason| format!("Undecided: the search failed by a fault of this program ({reason}).");
        result.unwrap_or_else(|reason| Answer::failed(Verdict::Undecided, failed(reason)))
    });
    found
        .into_iter()
        .map(|pack| CheckedPack {
            control: pack
                .levels
                .first()
                .map_or(Control::Steer, |(_, mechanics, _)| mechanics.control),
            levels: pack
                .levels
                .into_iter()
                .zip(&mut answers)
                .map(|((number, _, level), answer)| (number, level, answer))
                .collect(),
            file: pack.file,
            name: pack.name,
            error: pack.error,
        })
        .collect()
}

fn warn_unreadable(found: &[Found]) {
    for error in found.iter().filter_map(|pack| pack.error.as_ref()) {
        eprintln!("{error}");
    }
}

fn warn_advice(packs: &[CheckedPack]) {
    for pack in packs {
        for (number, level, answer) in &pack.levels {
            for advice in &answer.advice {
                eprintln!("{}: level {number} ({}): {advice}", pack.file, level.name);
            }
        }
    }
}

/// 2 before 1 before 3 before 0.
pub(super) fn status(packs: &[CheckedPack]) -> u8 {
    let of_levels = packs
        .iter()
        .flat_map(|pack| &pack.levels)
        .map(|(_, _, answer)| answer.status());
    let of_packs = packs.iter().filter(|pack| pack.error.is_some()).map(|_| 2);
    let all: Vec<u8> = of_levels.chain(of_packs).collect();
    [2, 1, 3]
        .into_iter()
        .find(|status| all.contains(status))
        .unwrap_or(0)
}

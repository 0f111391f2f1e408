//! `foldwright export`.

use super::answer::{Answer, Questions, Verdict};
use super::arguments::{
    ExportTask, FilmArguments, PictureArguments, ShelfArguments, TableArguments,
};
use super::check::{CheckedPack, answer_all, status};
use super::gather::gather;
use super::pictures::KindPictures;
use super::print;
use crate::export::{Line, Scene, Timing, csv, film_gif, scene_png, scene_svg};
use crate::file::{open_pack, save_atomic};
use crate::level::{Level, Pack, Route};
use crate::rules::Rules;
use crate::study::{Outcome, Prove, solve};
use std::path::Path;
use std::sync::Arc;

/// Why nothing was written, and the exit status.
struct Failed(u8, String);

/// Writes what was asked for; returns the exit status.
pub(super) fn export(task: &ExportTask) -> u8 {
    let done = match task {
        ExportTask::Picture(arguments) => picture(arguments),
        ExportTask::Shelf(arguments) => shelf(arguments),
        ExportTask::Film(arguments) => film(arguments),
        ExportTask::Table(arguments) => table(arguments),
    };
    match done {
        Ok(status) => status,
        Err(Failed(status, reason)) => {
            eprintln!("{reason}");
            status
        }
    }
}

fn open(file: &Path) -> Result<Pack, Failed> {
    let read = open_pack(file)
        .map_err(|error| Failed(2, error.to_string()))?
        .read;
    match read.refusals.first() {
        None => Ok(read.pack),
        Some(error) => Err(Failed(2, format!("{}:{error}", file.display()))),
    }
}

fn level_of<'a>(pack: &'a Pack, wish: &str) -> Result<&'a Arc<Level>, Failed> {
    let named = pack.levels.iter().find(|level| level.name == wish);
    let numbered = || pack.levels.get(wish.parse::<usize>().ok()?.checked_sub(1)?);
    named.or_else(numbered).ok_or_else(|| {
        let reason =
            format!("There is no level {wish:?} in the pack. Give its name, or its number from 1.");
        Failed(2, reason)
    })
}

fn pictures_of(pack: &Pack, file: &Path) -> KindPictures {
    let folder = file.parent().unwrap_or(Path::new(""));
    KindPictures::of(&pack.mechanics, folder, &mut |warning| {
        eprintln!("{}: {warning}", file.display())
    })
}

fn write(out: &Path, bytes: &[u8]) -> Result<(), Failed> {
    save_atomic(out, bytes)
        .map(drop)
        .map_err(|error| Failed(2, format!("{}: {error}", out.display())))
}

fn is_svg(out: &Path) -> Result<bool, Failed> {
    match out
        .extension()
        .and_then(|end| end.to_str())
        .map(str::to_ascii_lowercase)
        .as_deref()
    {
        Some("svg") => Ok(true),
        Some("png") => Ok(false),
        _ => Err(Failed(
            2,
            format!("{}: Name a file that ends in .png or .svg.", out.display()),
        )),
    }
}

fn drawn(level: &Level, pictures: &KindPictures, svg: bool, side: u32) -> Result<Vec<u8>, Failed> {
    let scene = Scene::of_level(level);
    if svg {
        return Ok(scene_svg(&scene, pictures, &level.name).into_bytes());
    }
    scene_png(&scene, pictures, side)
        .map_err(|error| Failed(2, format!("The picture can't be made: {error}.")))
}

fn picture(arguments: &PictureArguments) -> Result<u8, Failed> {
    let svg = is_svg(&arguments.out)?;
    let pack = open(&arguments.pack)?;
    let level = level_of(&pack, &arguments.level)?;
    let pictures = pictures_of(&pack, &arguments.pack);
    write(
        &arguments.out,
        &drawn(level, &pictures, svg, arguments.cell)?,
    )?;
    Ok(0)
}

fn shelf(arguments: &ShelfArguments) -> Result<u8, Failed> {
    let pack = open(&arguments.pack)?;
    let pictures = pictures_of(&pack, &arguments.pack);
    let folder = &arguments.out;
    std::fs::create_dir_all(folder).map_err(|error| {
        Failed(
            2,
            format!("{}: The folder can't be made: {error}.", folder.display()),
        )
    })?;
    let digits = pack.levels.len().to_string().len();
    for (at, level) in pack.levels.iter().enumerate() {
        let end = if arguments.svg { "svg" } else { "png" };
        let name = format!("{:0digits$}-{}.{end}", at + 1, slug(&level.name));
        write(
            &folder.join(name),
            &drawn(level, &pictures, arguments.svg, arguments.cell)?,
        )?;
    }
    Ok(0)
}

/// A name that every file system takes.
fn slug(name: &str) -> String {
    let letters = name.chars().map(|c| {
        if c.is_ascii_alphanumeric() {
            c.to_ascii_lowercase()
        } else {
            '-'
        }
    });
    let joined: String = letters.take(48).collect();
    let words: Vec<&str> = joined.split('-').filter(|word| !word.is_empty()).collect();
    if words.is_empty() {
        "level".to_owned()
    } else {
        words.join("-")
    }
}

fn film(arguments: &FilmArguments) -> Result<u8, Failed> {
    let pack = open(&arguments.pack)?;
    let level = level_of(&pack, &arguments.level)?;
    let rules = Rules::compile(&pack.mechanics, level).map_err(|problems| {
        let texts: Vec<String> = problems.into_iter().map(|problem| problem.text).collect();
        Failed(1, texts.join(" "))
    })?;
    let route = if arguments.intended {
        let none = || Failed(2, "The level has no intended route.".to_owned());
        level.intended.clone().ok_or_else(none)?
    } else {
        found_route(&rules, arguments)?
    };
    let played = rules.play(&route);
    if played.len() < route.len() {
        let reason = format!(
            "Step {} of the intended route changes nothing.",
            played.len() + 1
        );
        return Err(Failed(1, reason));
    }
    let mut scenes = vec![Scene::of_level(level)];
    scenes.extend(
        played
            .iter()
            .map(|played| Scene::of_view(level.size, &played.view)),
    );
    let pictures = pictures_of(&pack, &arguments.pack);
    let timing = Timing {
        step_ms: arguments.ms,
        rest_ms: arguments.ms.saturating_mul(4),
    };
    let bytes = film_gif(&scenes, &pictures, arguments.cell, timing)
        .map_err(|error| Failed(2, error.to_string()))?;
    write(&arguments.out, &bytes)?;
    Ok(0)
}

fn found_route(rules: &Rules, arguments: &FilmArguments) -> Result<Route, Failed> {
    let report = solve(rules, Prove::Steps, &arguments.search.limits(), &mut ());
    match (report.outcome, report.route) {
        (_, Some(route)) => Ok(route),
        (Outcome::Unsolvable, _) => Err(Failed(
            1,
            "The level can't be finished, so there is no route to show.".to_owned(),
        )),
        _ => Err(Failed(
            3,
            "No route was found within the limits.".to_owned(),
        )),
    }
}

fn table(arguments: &TableArguments) -> Result<u8, Failed> {
    let found = gather(&arguments.paths);
    for error in found.iter().filter_map(|pack| pack.error.as_ref()) {
        eprintln!("{error}");
    }
    let questions = Questions {
        prove: arguments.search.prove.into(),
        limits: arguments.search.limits(),
        map: false,
        tiles: false,
    };
    let packs = answer_all(
        found,
        &questions,
        arguments.search.jobs,
        arguments.search.quiet,
    );
    let text = csv(&packs.iter().flat_map(lines).collect::<Vec<_>>());
    match &arguments.out {
        None => print(&text),
        Some(out) => write(out, text.as_bytes())?,
    }
    // A table of levels that can't be finished is a good table.
    Ok(if status(&packs) == 2 { 2 } else { 0 })
}

fn lines(pack: &CheckedPack) -> Vec<Line> {
    let line = |(number, level, answer): &(usize, Arc<Level>, Answer)| {
        let report = answer
            .report
            .as_ref()
            .filter(|_| answer.verdict != Verdict::Invalid);
        Line {
            file: pack.file.clone(),
            number: *number,
            name: level.name.clone(),
            size: (level.size.width(), level.size.height()),
            verdict: answer.verdict.word().to_owned(),
            steps: answer.steps.map(|figure| (figure.fewest, figure.proved)),
            pushes: answer.pushes.map(|figure| (figure.fewest, figure.proved)),
            route: report
                .and_then(|report| report.route.as_ref())
                .map(Route::text),
            positions: report.map(|report| report.positions),
            seconds: report.map(|report| report.seconds),
            message: answer.messages.join(" "),
        }
    };
    pack.levels.iter().map(line).collect()
}

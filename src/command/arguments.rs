//! The words of the command line.

use crate::study::{Halt, Limits, Prove};
use clap::{Args, Parser, Subcommand, ValueEnum};
use std::num::NonZeroUsize;
use std::path::PathBuf;
use std::time::Duration;

const LONG_VERSION: &str = concat!(
    env!("CARGO_PKG_VERSION"),
    "\nReads packs of format 1, writes reports of schema 1.",
    "\nLicence: MIT OR Apache-2.0."
);

const EXAMPLES: &str = "\
Examples:
  foldwright                                  the desk, with the sample pack
  foldwright open night.pack.ron              the desk, with a pack of yours
  foldwright check levels/                    a table of every pack in a folder
  foldwright check levels/ --json --jobs 2    the same for machines
  foldwright check a.pack.ron --level 3 --prove both --map --tiles
  foldwright check a.pack.ron --certificate proofs/   and why, for levels that can't be finished
  foldwright verify proofs/a-3.certificate.json       such a proof, checked again by itself
  foldwright export film a.pack.ron --level 3 --out route.gif

RUST_LOG=debug shows the log on standard error.";

const CHECK_AFTER: &str = "\
A level that carries an intended route or a par is watched: the route must still finish the level, and the par must equal the \
fewest that is proved. What a par needs proved is proved, whatever --prove says, except for --prove none: then only a cheaper \
route breaks it.

Exit status:
  0  every level can be finished
  1  a level can't be finished or is invalid, or a watched route or par is broken
  2  a file can't be read, or the command was used wrongly
  3  none of these, but a level or its par is undecided within the limits

Numbers go to standard output, progress (on a terminal) and warnings to standard error.";

const VERIFY_AFTER: &str = "\
The certificate holds the level itself. It is read, its start, every step from every position of its closed set and the reason \
for every cut are gone through again, and nothing of the search is used for that.

Exit status:
  0  it proves that its level can't be finished
  1  it proves nothing
  2  the file can't be read";

/// A desk for the levels of grid puzzles that proves, after every edit, whether a level can be finished.
///
/// Without a command the desk opens with the sample pack. Without a display it says which packages to install and checks the
/// sample pack in the terminal instead.
#[derive(Debug, Parser)]
#[command(name = "foldwright", version, long_version = LONG_VERSION, after_help = EXAMPLES, max_term_width = 110)]
pub(super) struct Arguments {
    #[command(subcommand)]
    pub task: Option<Task>,
}

#[derive(Debug, Subcommand)]
pub(super) enum Task {
    /// Open a pack on the desk
    Open {
        /// The pack file
        file: PathBuf,
    },
    /// Check packs without a window: verdict, par and route of every level
    #[command(after_help = CHECK_AFTER)]
    Check(CheckArguments),
    /// Write pictures, films of routes and tables
    #[command(subcommand)]
    Export(ExportTask),
    /// Verify a certificate that a level can't be finished, by the plain rules alone
    #[command(after_help = VERIFY_AFTER)]
    Verify {
        /// A file that check --certificate wrote
        file: PathBuf,
    },
}

#[derive(Debug, Subcommand)]
pub(super) enum ExportTask {
    /// Draw one level as PNG or SVG
    Picture(PictureArguments),
    /// Draw every level of a pack into a folder
    Shelf(ShelfArguments),
    /// Show a cheapest route, or the intended one, as an endless GIF
    Film(FilmArguments),
    /// Check packs and write their levels as a table (CSV)
    Table(TableArguments),
}

#[derive(Debug, Args)]
pub(super) struct PictureArguments {
    /// The pack file
    pub pack: PathBuf,
    /// Which level, by its name or its number from 1
    #[arg(long, value_name = "NAME-OR-NUMBER")]
    pub level: String,
    /// The picture file, ending in .png or .svg
    #[arg(long, short, value_name = "FILE")]
    pub out: PathBuf,
    /// Side of a cell in a PNG, in pixels
    #[arg(long, value_name = "PIXELS", default_value_t = 48, value_parser = clap::value_parser!(u32).range(1..=256))]
    pub cell: u32,
}

#[derive(Debug, Args)]
pub(super) struct ShelfArguments {
    /// The pack file
    pub pack: PathBuf,
    /// The folder for the pictures; it is made where there is none
    #[arg(long, short, value_name = "FOLDER")]
    pub out: PathBuf,
    /// Write SVG and not PNG
    #[arg(long)]
    pub svg: bool,
    /// Side of a cell in a PNG, in pixels
    #[arg(long, value_name = "PIXELS", default_value_t = 16, value_parser = clap::value_parser!(u32).range(1..=256))]
    pub cell: u32,
}

#[derive(Debug, Args)]
pub(super) struct FilmArguments {
    /// The pack file
    pub pack: PathBuf,
    /// Which level, by its name or its number from 1
    #[arg(long, value_name = "NAME-OR-NUMBER")]
    pub level: String,
    /// The film, a GIF
    #[arg(long, short, value_name = "FILE")]
    pub out: PathBuf,
    /// Show the intended route of the level, and not one of fewest steps
    #[arg(long)]
    pub intended: bool,
    /// Side of a cell, in pixels
    #[arg(long, value_name = "PIXELS", default_value_t = 32, value_parser = clap::value_parser!(u32).range(1..=256))]
    pub cell: u32,
    /// Milliseconds that each step is shown
    #[arg(long, value_name = "MS", default_value_t = 250, value_parser = clap::value_parser!(u32).range(20..=10_000))]
    pub ms: u32,
    #[command(flatten)]
    pub search: SearchArguments,
}

#[derive(Debug, Args)]
pub(super) struct TableArguments {
    /// Pack files, and folders that are searched for *.pack.ron
    #[arg(required = true, value_name = "PATH")]
    pub paths: Vec<PathBuf>,
    /// The table; standard output without it
    #[arg(long, short, value_name = "FILE")]
    pub out: Option<PathBuf>,
    #[command(flatten)]
    pub search: SearchArguments,
}

/// What a search may spend, and what it is to prove.
#[derive(Clone, Debug, Args)]
pub(super) struct SearchArguments {
    /// Seconds that each question about a level may take
    #[arg(long, value_name = "SECONDS", default_value = "10", value_parser = seconds)]
    pub limit: Duration,
    /// Memory that the search of one level may hold, in MiB; each of --jobs may hold as much
    #[arg(long, value_name = "MIB", default_value_t = 2048, value_parser = clap::value_parser!(u64).range(1..=1 << 24))]
    pub memory: u64,
    /// Which measure to prove; the route is a cheapest by it (by steps for both and none)
    #[arg(long, value_name = "MEASURE", default_value = "steps")]
    pub prove: Measure,
    /// Levels that are searched at the same time
    #[arg(long, value_name = "N", default_value = "1")]
    pub jobs: NonZeroUsize,
    /// No progress, no warnings, and in the table only levels that are not well
    #[arg(long, short)]
    pub quiet: bool,
}

impl Default for SearchArguments {
    fn default() -> SearchArguments {
        SearchArguments {
            limit: Duration::from_secs(10),
            memory: 2048,
            prove: Measure::Steps,
            jobs: NonZeroUsize::MIN,
            quiet: false,
        }
    }
}

impl SearchArguments {
    pub(super) fn limits(&self) -> Limits {
        Limits {
            time: Some(self.limit),
            bytes: self.memory << 20,
            positions: None,
            halt: Halt::never(),
        }
    }
}

#[derive(Debug, Args)]
pub(super) struct CheckArguments {
    /// Pack files, and folders that are searched for *.pack.ron
    #[arg(required = true, value_name = "PATH")]
    pub paths: Vec<PathBuf>,
    /// Print one JSON document instead of a table
    #[arg(long)]
    pub json: bool,
    /// Check this level alone, by its name or its number from 1
    #[arg(long, value_name = "NAME-OR-NUMBER")]
    pub level: Option<String>,
    /// Count the whole fold map as well: folds, commitments, traps
    #[arg(long)]
    pub map: bool,
    /// Tell for every tile as well whether it is needed
    #[arg(long)]
    pub tiles: bool,
    /// Write a certificate into this folder for every level that can't be finished, for foldwright verify
    #[arg(long, value_name = "DIR")]
    pub certificate: Option<PathBuf>,
    #[command(flatten)]
    pub search: SearchArguments,
}

#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub(super) enum Measure {
    Steps,
    Pushes,
    Both,
    None,
}

impl From<Measure> for Prove {
    fn from(measure: Measure) -> Prove {
        match measure {
            Measure::Steps => Prove::Steps,
            Measure::Pushes => Prove::Pushes,
            Measure::Both => Prove::Both,
            Measure::None => Prove::None,
        }
    }
}

fn seconds(text: &str) -> Result<Duration, String> {
    let number: f64 = text
        .parse()
        .map_err(|_| "not a number of seconds".to_owned())?;
    match Duration::try_from_secs_f64(number) {
        Ok(limit) if limit <= Duration::from_secs(1 << 32) => Ok(limit),
        _ => Err("not a number of seconds that can be waited".to_owned()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use clap::CommandFactory;

    #[test]
    fn the_command_line_is_well_formed() {
        Arguments::command().debug_assert();
    }

    #[test]
    fn seconds_are_read_and_nonsense_is_refused() {
        assert_eq!(seconds("0.25"), Ok(Duration::from_millis(250)));
        for text in ["", "-1", "NaN", "inf", "1e300", "ten"] {
            assert!(seconds(text).is_err(), "{text}");
        }
    }
}

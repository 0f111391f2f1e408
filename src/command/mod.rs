//! The command line: what was asked, answered in the terminal, and the exit status.

mod answer;
mod arguments;
mod certify;
mod check;
mod export;
mod gather;
mod pictures;
mod report;
mod table;
mod watched;

use arguments::{Arguments, CheckArguments, SearchArguments, Task};
use clap::Parser;
use std::ffi::OsString;
use std::io::{Write, stdout};
use std::path::PathBuf;
use std::process::ExitCode;

/// The packages that a window needs on a bare system, for the line that is printed when it can't be opened.
const WINDOW_PACKAGES: &str =
    "libgl1 libegl1 libxkbcommon-x11-0 libwayland-client0 libxcursor1 libxi6 libxrandr2";

/// What is left to do after the command line was read.
#[derive(Debug)]
pub enum Next {
    /// Open the desk, with this pack or with the sample pack.
    Desk(Option<PathBuf>),
    /// Nothing: end with this status.
    End(ExitCode),
}

/// Reads a command line, the program's own name included, and answers what can be answered in the terminal.
///
/// Statuses: 0 all is well; 1 a level can't be finished or is invalid, or a watched route or par is broken; 2 unreadable input
/// or wrong use; 3 none of these, but something is undecided.
pub fn run(words: impl IntoIterator<Item = OsString>) -> Next {
    let arguments = match Arguments::try_parse_from(words) {
        Ok(arguments) => arguments,
        Err(error) => {
            let _ = error.print();
            return Next::End(ExitCode::from(u8::try_from(error.exit_code()).unwrap_or(2)));
        }
    };
    match arguments.task {
        None => Next::Desk(None),
        Some(Task::Open { file }) => Next::Desk(Some(file)),
        Some(Task::Check(arguments)) => Next::End(ExitCode::from(check::check(&arguments))),
        Some(Task::Export(task)) => Next::End(ExitCode::from(export::export(&task))),
        Some(Task::Verify { file }) => Next::End(ExitCode::from(certify::verify(&file))),
    }
}

/// Says in one line why there is no desk and what to install, then checks the pack that it would have shown.
pub fn without_desk(reason: &str, path: Option<PathBuf>) -> ExitCode {
    eprintln!(
        "foldwright: {reason}. A desk needs a display and, on Debian: apt install {WINDOW_PACKAGES}. Checking in the terminal instead."
    );
    let arguments = CheckArguments {
        paths: path.into_iter().collect(),
        json: false,
        level: None,
        map: false,
        tiles: false,
        certificate: None,
        search: SearchArguments::default(),
    };
    if !arguments.paths.is_empty() {
        return ExitCode::from(check::check(&arguments));
    }
    match crate::file::read_pack(crate::file::SAMPLE_PACK) {
        Ok(read) => {
            let found = gather::Found::of_pack("sample pack".to_owned(), &read.pack);
            ExitCode::from(check::check_found(vec![found], &arguments))
        }
        Err(error) => {
            eprintln!("sample pack:{error}");
            ExitCode::from(2)
        }
    }
}

/// Prints to standard output. A reader that has gone away (`| head`) is no fault.
fn print(text: &str) {
    let mut out = stdout().lock();
    let _ = out.write_all(text.as_bytes()).and_then(|()| out.flush());
}

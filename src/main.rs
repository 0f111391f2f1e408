//! Desk or command.

use foldwright::command::{self, Next};
use std::path::PathBuf;
use std::process::ExitCode;

fn main() -> ExitCode {
    env_logger::Builder::from_env(env_logger::Env::default().default_filter_or("warn")).init();
    match command::run(std::env::args_os()) {
        Next::End(status) => status,
        Next::Desk(path) => open_desk(path),
    }
}

#[cfg(feature = "desk")]
fn open_desk(path: Option<PathBuf>) -> ExitCode {
    match foldwright::desk::run(path.clone()) {
        Ok(()) => ExitCode::SUCCESS,
        Err(error) => command::without_desk(&error.to_string(), path),
    }
}

#[cfg(not(feature = "desk"))]
fn open_desk(path: Option<PathBuf>) -> ExitCode {
    command::without_desk("this program was built without the desk", path)
}

//! What is wrong with a pack file, and where.

use super::locate::{Locator, Turn};
use ron::error::SpannedError;
use std::fmt;

/// A fault of a pack file: its place and a sentence that says what is wrong and what to do.
///
/// It prints as `LINE:COLUMN: sentence`, so that the name of the file and a colon can go before it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct PackError {
    /// Line, from 1.
    pub line: usize,
    /// Column in characters, from 1. A byte order mark is not counted.
    pub column: usize,
    /// The sentence.
    pub message: String,
}

impl fmt::Display for PackError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}:{}: {}", self.line, self.column, self.message)
    }
}

impl std::error::Error for PackError {}

/// A fault that is known by its path in the document and not yet by its line.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Fault {
    pub path: Vec<Turn>,
    pub message: String,
}

impl Fault {
    pub(super) fn new(path: &[Turn], message: impl Into<String>) -> Fault {
        Fault {
            path: path.to_vec(),
            message: message.into(),
        }
    }

    /// The same fault seen from the part of the document that `path` leads to.
    pub(super) fn under(mut self, path: &[Turn]) -> Fault {
        self.path.splice(0..0, path.iter().copied());
        self
    }

    pub(super) fn placed(self, locator: &Locator<'_>) -> PackError {
        let (line, column) = locator.find(&self.path);
        PackError {
            line,
            column,
            message: self.message,
        }
    }
}

/// The fault of bytes that are not UTF-8.
pub(super) fn not_text(bytes: &[u8], error: std::str::Utf8Error) -> PackError {
    let good = &bytes[..error.valid_up_to()];
    let line = 1 + good.iter().filter(|&&byte| byte == b'\n').count();
    let start = good
        .iter()
        .rposition(|&byte| byte == b'\n')
        .map_or(0, |at| at + 1);
    let column = 1 + String::from_utf8_lossy(&good[start..]).chars().count();
    PackError {
        line,
        column,
        message: "This is not text in UTF-8. Save the pack as UTF-8, or choose another file."
            .to_owned(),
    }
}

/// The fault that the RON reader met, in words.
pub(super) fn not_ron(text: &str, error: SpannedError) -> PackError {
    let (line, column) = token_place(text, error.span.start.line, error.span.start.col);
    PackError {
        line,
        column,
        message: sentence(&error.code),
    }
}

/// The place of the token at or after a place that the RON reader named: it may name the space before a token, or the
/// digits after a sign.
fn token_place(text: &str, line: usize, column: usize) -> (usize, usize) {
    let lines: Vec<&str> = text.split('\n').collect();
    let (mut line, mut column) = (line.clamp(1, lines.len()), column.max(1));
    let before = lines[line - 1].chars().nth(column.wrapping_sub(2));
    if matches!(before, Some('-' | '+')) {
        return (line, column - 1);
    }
    let stated = (line, column);
    loop {
        let rest = lines[line - 1].chars().skip(column - 1);
        match rest.enumerate().find(|(_, c)| !c.is_whitespace()) {
            Some((spaces, _)) => return (line, column + spaces),
            None if line == lines.len() => return stated,
            None => (line, column) = (line + 1, 1),
        }
    }
}

fn sentence(code: &ron::Error) -> String {
    use ron::Error as E;
    let of = |outer: &Option<String>| match outer {
        Some(outer) if outer.starts_with('I') => format!("an {}", outer.to_lowercase()),
        Some(outer) => format!("a {}", outer.to_lowercase()),
        None => "this record".to_owned(),
    };
    match code {
        E::NoSuchStructField {
            expected,
            found,
            outer,
        } => format!(
            "There is no field {found} in {}. Use {}, or take it out.",
            of(outer),
            one_of(expected)
        ),
        E::MissingStructField { field, outer } => {
            format!("The field {field} of {} is missing. Add it.", of(outer))
        }
        E::DuplicateStructField { field, outer } => format!(
            "The field {field} of {} is given twice. Take one out.",
            of(outer)
        ),
        E::NoSuchEnumVariant {
            expected, found, ..
        } => {
            format!("{found} is not known here. Use {}.", one_of(expected))
        }
        E::IntegerOutOfBounds => "This number is too great or too small here.".to_owned(),
        E::Eof => "The file ends too early. Close what is still open, or restore the rest of it."
            .to_owned(),
        E::TrailingCharacters => {
            "Something follows the pack's closing parenthesis. Take it out.".to_owned()
        }
        E::ExpectedComma => "A comma is missing before this.".to_owned(),
        E::ExceededRecursionLimit => "Parentheses are nested too deeply for a pack.".to_owned(),
        E::Message(text) => full_stop(text),
        other => full_stop(&other.to_string().replace('`', "")),
    }
}

fn full_stop(text: &str) -> String {
    let end = if text.ends_with('.') { "" } else { "." };
    format!("{text}{end}")
}

fn one_of(names: &[&str]) -> String {
    match names {
        [] => "nothing".to_owned(),
        [name] => (*name).to_owned(),
        [names @ .., last] => format!("{} or {last}", names.join(", ")),
    }
}

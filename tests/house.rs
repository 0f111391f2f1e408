//! House rules of the source that no compiler checks.

#[path = "support/source.rs"]
mod source;

use source::{line_of, sources, without_tests};

/// The most lines of one file under `src`; past it a file is usually two ideas.
const MOST_LINES: usize = 500;

fn lines_with(words: &[&str]) -> Vec<String> {
    let mut found = Vec::new();
    let is_tested_code = |source: &source::Source| !source.path.ends_with("tests.rs");
    for source in sources().into_iter().filter(is_tested_code) {
        let code = without_tests(&source.code);
        for word in words {
            for (at, _) in code.match_indices(word) {
                found.push(format!("{}:{}: {word}", source.path, line_of(&code, at)));
            }
        }
    }
    found
}

#[test]
fn nothing_outside_tests_unwraps_or_is_left_to_do() {
    let words = [
        ".unwrap()",
        "todo!",
        "dbg!",
        "unimplemented!",
        "unsafe {",
        "unsafe fn",
    ];
    assert_eq!(lines_with(&words), Vec::<String>::new());
}

#[test]
fn no_source_file_is_longer_than_500_lines() {
    let too_long: Vec<String> = sources()
        .iter()
        .map(|source| (source.path.clone(), source.text.lines().count()))
        .filter(|(_, lines)| *lines >= MOST_LINES)
        .map(|(path, lines)| format!("{path}: {lines}"))
        .collect();
    assert_eq!(too_long, Vec::<String>::new());
}

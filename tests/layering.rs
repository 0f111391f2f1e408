//! Who may import whom. The source itself is read, so that a layer can't be crossed unnoticed.

#[path = "support/source.rs"]
mod source;

use source::{Source, code_only, line_of, sources, without_tests};

/// Every part of the crate and the other parts that it may name. `verify` sees only what a level is and how it is written,
/// because a checker that shared code with the search could share its mistakes.
const MAY_IMPORT: &[(&str, &[&str])] = &[
    ("level", &[]),
    ("file", &["level"]),
    ("rules", &["level"]),
    ("search", &[]),
    ("study", &["level", "rules", "search", "verify"]),
    ("verify", &["level", "file"]),
    ("worker", &["level", "rules", "study", "file"]),
    ("export", &["level", "rules", "study"]),
    (
        "desk",
        &[
            "level", "file", "rules", "search", "study", "verify", "worker", "export",
        ],
    ),
    (
        "command",
        &[
            "level", "file", "rules", "search", "study", "verify", "worker", "export",
        ],
    ),
    ("main", &["command", "desk"]),
];

fn is_name(letter: char) -> bool {
    letter.is_alphanumeric() || letter == '_'
}

/// The parts of the crate that some code names from the root, with the byte at which it does.
fn named_parts(code: &str) -> Vec<(usize, String)> {
    let mut named = Vec::new();
    for root in ["crate::", "foldwright::", "super::super::"] {
        for (at, _) in code.match_indices(root) {
            let part_of_a_longer_name = code[..at].ends_with(is_name);
            if part_of_a_longer_name {
                continue;
            }
            let rest = &code[at + root.len()..];
            let names = match rest.strip_prefix('{') {
                Some(group) => first_names(group),
                None => vec![rest.chars().take_while(|&c| is_name(c)).collect()],
            };
            named.extend(names.into_iter().map(|name| (at, name)));
        }
    }
    named
}

/// The first name of each path of a braced group, up to its closing brace.
fn first_names(group: &str) -> Vec<String> {
    let mut names = Vec::new();
    let (mut depth, mut name, mut done) = (0, String::new(), false);
    for letter in group.chars() {
        match letter {
            '{' => depth += 1,
            '}' if depth == 0 => break,
            '}' => depth -= 1,
            ',' if depth == 0 => {
                names.push(std::mem::take(&mut name));
                done = false;
            }
            _ if depth == 0 && is_name(letter) && !done => name.push(letter),
            _ if depth == 0 && letter == ':' => done = true,
            _ => {}
        }
    }
    names.push(name);
    names
}

/// What a file of `part` may not import, as `line: name`.
fn trespasses(part: &str, code: &str) -> Vec<String> {
    let may = MAY_IMPORT
        .iter()
        .find(|(name, _)| *name == part)
        .map_or(&[][..], |(_, may)| may);
    let is_part = |name: &str| MAY_IMPORT.iter().any(|(part, _)| *part == name);
    named_parts(code)
        .into_iter()
        .filter(|(_, name)| is_part(name) && name != part && !may.contains(&name.as_str()))
        .map(|(at, name)| format!("{}: {name}", line_of(code, at)))
        .collect()
}

/// The lines on which files outside `allowed` use one of `words`.
fn uses(allowed: &[&str], words: &[&str]) -> Vec<String> {
    let outside = |source: &&Source| !allowed.contains(&source.part());
    let mut found = Vec::new();
    for source in sources().iter().filter(outside) {
        found.extend(
            words_in(&without_tests(&source.code), words)
                .into_iter()
                .map(|hit| format!("{}:{hit}", source.path)),
        );
    }
    found
}

fn words_in(code: &str, words: &[&str]) -> Vec<String> {
    let mut found = Vec::new();
    for word in words {
        for (at, _) in code.match_indices(word) {
            if !code[..at].ends_with(is_name) {
                found.push(format!("{}: {word}", line_of(code, at)));
            }
        }
    }
    found
}

#[test]
fn every_part_imports_only_what_it_may() {
    for source in sources().iter().filter(|source| source.part() != "lib") {
        assert!(
            MAY_IMPORT.iter().any(|(part, _)| *part == source.part()),
            "{} belongs to no part that this test knows",
            source.path
        );
        let found = trespasses(source.part(), &source.code);
        assert_eq!(found, Vec::<String>::new(), "{}", source.path);
    }
}

#[test]
fn only_the_desk_names_the_window_toolkit() {
    let words = ["egui", "eframe", "egui_extras", "rfd"];
    // The command line may hand a pack over to the desk, but may not draw.
    assert_eq!(uses(&["desk"], &words), Vec::<String>::new());
}

#[test]
fn only_the_worker_starts_threads() {
    let words = ["thread::spawn", "thread::scope", "thread::Builder"];
    assert_eq!(uses(&["worker"], &words), Vec::<String>::new());
}

#[test]
fn only_desk_command_and_main_print_or_exit() {
    let words = [
        "println!",
        "eprintln!",
        "print!",
        "eprint!",
        "process::exit",
        "stdout(",
        "stderr(",
        "stdin(",
    ];
    assert_eq!(
        uses(&["desk", "command", "main"], &words),
        Vec::<String>::new()
    );
}

#[track_caller]
fn check(part: &str, text: &str, expected: &[&str]) {
    assert_eq!(trespasses(part, &code_only(text)), expected);
}

#[test]
fn a_forbidden_import_is_found_however_it_is_written() {
    check("rules", "use crate::level::Cell;", &[]);
    check("rules", "use crate::study::solve;", &["1: study"]);
    check("search", "\nuse crate::level::Cell;", &["2: level"]);
    check(
        "rules",
        "use crate::{level::{Cell, Dir}, study::{self, solve}};",
        &["1: study"],
    );
    check("level", "fn f() { crate::rules::f() }", &["1: rules"]);
    check("level", "use super::super::file::read;", &["1: file"]);
    check("command", "use foldwright::desk;", &["1: desk"]);
}

#[test]
fn comments_and_texts_import_nothing() {
    check("level", "/// See [`crate::rules`].\nfn f() {}", &[]);
    check("level", "/* crate::rules */ let a = \"crate::study\";", &[]);
    check("level", "let quote = '\"'; use crate::file;", &["1: file"]);
    check("level", "let a = r#\"\" crate::file\"#;", &[]);
}

#[test]
fn code_under_test_only_may_print() {
    let code = "fn f() {}\n#[cfg(test)]\nmod tests { fn g() { println!() } }\nfn h() { print!() }";
    assert_eq!(
        words_in(&without_tests(code), &["println!", "print!"]),
        ["4: print!"]
    );
}

//! The project's own source as the house tests see it: files, and their code without comments, texts and tests.

#![allow(dead_code)]

use std::fs;
use std::path::{Path, PathBuf};

/// One file under `src`.
pub struct Source {
    /// Path relative to the project, with `/` between folders.
    pub path: String,
    /// As it stands on disk.
    pub text: String,
    /// With comments and the insides of string and character literals blanked; line breaks are kept.
    pub code: String,
}

impl Source {
    /// The folder under `src` that the file belongs to, or the file's own name for those directly under `src`.
    pub fn part(&self) -> &str {
        let inside = self.path.trim_start_matches("src/");
        let end = inside.find('/').unwrap_or(inside.len());
        inside[..end].trim_end_matches(".rs")
    }
}

/// Every Rust file under `src`, by path.
pub fn sources() -> Vec<Source> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let mut paths = Vec::new();
    collect(&root.join("src"), &mut paths);
    paths.sort();
    let sources: Vec<Source> = paths
        .iter()
        .map(|path| {
            let text = fs::read_to_string(path).expect("a readable source file");
            let relative = path.strip_prefix(root).expect("a path of the project");
            Source {
                path: relative.to_string_lossy().replace('\\', "/"),
                code: code_only(&text),
                text,
            }
        })
        .collect();
    assert!(sources.len() > 20, "the source was not found");
    sources
}

fn collect(folder: &Path, paths: &mut Vec<PathBuf>) {
    for entry in fs::read_dir(folder).expect("a readable folder") {
        let path = entry.expect("a readable entry").path();
        if path.is_dir() {
            collect(&path, paths);
        } else if path.extension().is_some_and(|extension| extension == "rs") {
            paths.push(path);
        }
    }
}

/// Blanks comments and the insides of string and character literals.
pub fn code_only(text: &str) -> String {
    let letters: Vec<char> = text.chars().collect();
    let mut code = String::with_capacity(text.len());
    let mut at = 0;
    while at < letters.len() {
        let end = match opaque_end(&letters, at) {
            Some(end) => end,
            None => {
                code.push(letters[at]);
                at += 1;
                continue;
            }
        };
        for &letter in &letters[at..end] {
            code.push(if letter == '\n' { '\n' } else { ' ' });
        }
        at = end;
    }
    code
}

/// Where the comment or literal that begins at `at` ends, if one begins there.
fn opaque_end(letters: &[char], at: usize) -> Option<usize> {
    let next = letters.get(at + 1).copied();
    let before = at.checked_sub(1).map(|at| letters[at]);
    let in_word = before.is_some_and(|c| c.is_alphanumeric() || c == '_');
    match letters[at] {
        '/' if next == Some('/') => Some(find(letters, at, |rest| rest[0] == '\n', 0)),
        '/' if next == Some('*') => {
            Some(find(letters, at, |rest| rest.starts_with(&['*', '/']), 2))
        }
        'r' if !in_word || before == Some('b') => raw_string_end(letters, at),
        '"' => Some(quoted_end(letters, at, '"')),
        // 'a' and '\n' are characters, 'a alone is a lifetime.
        '\'' if next == Some('\\') || letters.get(at + 2) == Some(&'\'') => {
            Some(quoted_end(letters, at, '\''))
        }
        _ => None,
    }
}

fn find(letters: &[char], from: usize, found: impl Fn(&[char]) -> bool, width: usize) -> usize {
    (from + width..letters.len())
        .find(|&at| found(&letters[at..]))
        .map_or(letters.len(), |at| at + width)
}

fn quoted_end(letters: &[char], open: usize, quote: char) -> usize {
    let mut at = open + 1;
    while at < letters.len() && letters[at] != quote {
        at += if letters[at] == '\\' { 2 } else { 1 };
    }
    (at + 1).min(letters.len())
}

fn raw_string_end(letters: &[char], at: usize) -> Option<usize> {
    let hashes = letters[at + 1..].iter().take_while(|&&c| c == '#').count();
    (letters.get(at + 1 + hashes) == Some(&'"')).then(|| {
        let mut end = vec!['"'];
        end.extend(vec!['#'; hashes]);
        let inside = at + 2 + hashes;
        (inside..letters.len())
            .find(|&at| letters[at..].starts_with(&end))
            .map_or(letters.len(), |at| at + end.len())
    })
}

/// Blanks every item that follows `#[cfg(test)]`.
pub fn without_tests(code: &str) -> String {
    let mut kept = String::with_capacity(code.len());
    let mut rest = code;
    while let Some(start) = rest.find("#[cfg(test)]") {
        kept.push_str(&rest[..start]);
        let end = start + item_end(&rest[start..]);
        kept.extend(rest[start..end].chars().filter(|&c| c == '\n'));
        rest = &rest[end..];
    }
    kept + rest
}

/// The length of an item: to its `;`, or to the brace that closes its first one.
fn item_end(code: &str) -> usize {
    let mut depth = 0;
    for (at, letter) in code.char_indices() {
        match letter {
            ';' if depth == 0 => return at + 1,
            '{' => depth += 1,
            '}' => {
                depth -= 1;
                if depth == 0 {
                    return at + 1;
                }
            }
            _ => {}
        }
    }
    code.len()
}

/// The line, from 1, of a byte of a text.
pub fn line_of(text: &str, byte: usize) -> usize {
    1 + text[..byte].matches('\n').count()
}

//! Where a part of a RON text stands: from a path such as `levels[3].ground[2]`, character 5, to line and column.
//!
//! Serde forgets positions once a value is built, and most faults of a pack are seen only then. So the text is scanned a
//! second time, for spans alone, when there is a fault to report. The scan takes any text: where it meets something that
//! is no RON, it stops and answers with the last place that it understood.

/// One turn on the way from the whole document to a part of it.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Turn {
    /// The value of this field of a record.
    Field(&'static str),
    /// The element of a list or tuple.
    At(usize),
    /// The key of the entry of a map.
    Key(usize),
    /// The value of the entry of a map.
    Value(usize),
    /// A character of a text.
    Char(usize),
}

/// The greatest depth that is scanned. A pack is nowhere deeper than ten.
const MOST_DEPTH: usize = 64;

/// A scanned document, ready to be asked.
pub(super) struct Locator<'a> {
    text: &'a str,
    line_starts: Vec<usize>,
    root: Node<'a>,
}

impl<'a> Locator<'a> {
    pub(super) fn new(text: &'a str) -> Locator<'a> {
        let mut scan = Scan { text, at: 0 };
        let root = scan.value(0);
        let line_ends = text.match_indices('\n').map(|(at, _)| at + 1);
        Locator {
            text,
            line_starts: std::iter::once(0).chain(line_ends).collect(),
            root,
        }
    }

    /// Line and column of the part at the end of `path`, or of the last part on the way that is there.
    pub(super) fn find(&self, path: &[Turn]) -> (usize, usize) {
        let mut node = &self.root;
        for turn in path {
            if let Turn::Char(at) = *turn {
                return self.place(char_of_string(self.text, node.start, at));
            }
            match node.turn(*turn) {
                Some(next) => node = next,
                None => break,
            }
        }
        self.place(node.start)
    }

    /// Line and column, both from 1; columns count characters.
    fn place(&self, byte: usize) -> (usize, usize) {
        let line = self.line_starts.partition_point(|&start| start <= byte);
        let start = self
            .line_starts
            .get(line.wrapping_sub(1))
            .copied()
            .unwrap_or(0);
        let before = self.text.get(start..byte).unwrap_or("");
        (line.max(1), 1 + before.chars().count())
    }
}

struct Node<'a> {
    start: usize,
    shape: Shape<'a>,
}

enum Shape<'a> {
    Leaf,
    /// Something in parentheses, brackets or braces, with the name before it. Parts have a field name, a key, or neither.
    Group {
        name: &'a str,
        parts: Vec<Part<'a>>,
    },
}

struct Part<'a> {
    field: Option<&'a str>,
    key: Option<Node<'a>>,
    value: Node<'a>,
}

impl<'a> Node<'a> {
    fn turn(&self, turn: Turn) -> Option<&Node<'a>> {
        let Shape::Group { name, parts } = &self.shape else {
            return None;
        };
        if *name == "Some" {
            return parts.first().and_then(|part| part.value.turn(turn));
        }
        match turn {
            Turn::Field(field) => parts
                .iter()
                .find(|part| part.field == Some(field))
                .map(|part| &part.value),
            Turn::At(at) | Turn::Value(at) => parts.get(at).map(|part| &part.value),
            Turn::Key(at) => parts.get(at).and_then(|part| part.key.as_ref()),
            Turn::Char(_) => None,
        }
    }
}

struct Scan<'a> {
    text: &'a str,
    at: usize,
}

impl<'a> Scan<'a> {
    fn rest(&self) -> &'a str {
        self.text.get(self.at..).unwrap_or("")
    }

    fn peek(&self) -> Option<char> {
        self.rest().chars().next()
    }

    fn take(&mut self, expected: char) -> bool {
        let found = self.peek() == Some(expected);
        if found {
            self.at += expected.len_utf8();
        }
        found
    }

    fn trivia(&mut self) {
        self.at += leading_trivia(self.rest())
            .iter()
            .map(|t| t.bytes)
            .sum::<usize>();
    }

    fn word(&mut self) -> &'a str {
        let rest = self.rest();
        let end = rest
            .find(|c: char| !(c.is_alphanumeric() || "_.+-#".contains(c)))
            .unwrap_or(rest.len());
        self.at += end;
        &rest[..end]
    }

    fn value(&mut self, depth: usize) -> Node<'a> {
        self.trivia();
        let start = self.at;
        if let Some(bytes) = literal_bytes(self.rest()) {
            self.at += bytes;
            return Node {
                start,
                shape: Shape::Leaf,
            };
        }
        let name = self.word();
        if !name.is_empty() {
            self.trivia();
        }
        let close = match self.peek() {
            Some('(') => ')',
            Some('[') if name.is_empty() => ']',
            Some('{') if name.is_empty() => '}',
            _ => {
                return Node {
                    start,
                    shape: Shape::Leaf,
                };
            }
        };
        self.at += 1;
        let parts = self.parts(close, depth);
        Node {
            start,
            shape: Shape::Group { name, parts },
        }
    }

    fn parts(&mut self, close: char, depth: usize) -> Vec<Part<'a>> {
        let mut parts = Vec::new();
        if depth >= MOST_DEPTH {
            return parts;
        }
        loop {
            self.trivia();
            if self.take(close) || self.peek().is_none() {
                return parts;
            }
            let before = self.at;
            parts.push(self.part(close, depth));
            self.trivia();
            if !self.take(',') && (self.at == before || self.peek() != Some(close)) {
                return parts;
            }
        }
    }

    fn part(&mut self, close: char, depth: usize) -> Part<'a> {
        let start = self.at;
        let first = self.value(depth + 1);
        let end = self.at;
        self.trivia();
        if !self.take(':') {
            return Part {
                field: None,
                key: None,
                value: first,
            };
        }
        let field = (close == ')').then(|| self.text[start..end].trim());
        let value = self.value(depth + 1);
        Part {
            field,
            key: Some(first),
            value,
        }
    }
}

/// A comment, a run of white space or an attribute.
pub(super) struct Trivium {
    pub bytes: usize,
    pub comment: bool,
}

/// White space, comments and attributes at the beginning of a text.
pub(super) fn leading_trivia(text: &str) -> Vec<Trivium> {
    let mut found = Vec::new();
    let mut at = 0;
    loop {
        let rest = &text[at..];
        let space = rest.len() - rest.trim_start().len();
        let (bytes, comment) = if space > 0 {
            (space, false)
        } else if rest.starts_with("//") {
            (rest.find('\n').unwrap_or(rest.len()), true)
        } else if rest.starts_with("/*") {
            match block_comment_bytes(rest) {
                Some(bytes) => (bytes, true),
                None => return found,
            }
        } else if rest.starts_with("#!") {
            (rest.find(']').map_or(rest.len(), |end| end + 1), false)
        } else {
            return found;
        };
        at += bytes;
        found.push(Trivium { bytes, comment });
    }
}

/// Length of the comment that `text` begins with, or `None` if it is never closed.
fn block_comment_bytes(text: &str) -> Option<usize> {
    let bytes = text.as_bytes();
    let (mut at, mut depth) = (0, 0usize);
    while at < bytes.len() {
        if bytes[at..].starts_with(b"/*") {
            depth += 1;
            at += 2;
        } else if bytes[at..].starts_with(b"*/") {
            depth -= 1;
            at += 2;
            if depth == 0 {
                return Some(at);
            }
        } else {
            at += 1;
        }
    }
    None
}

/// Length of the text or character literal that `text` begins with.
pub(super) fn literal_bytes(text: &str) -> Option<usize> {
    let body = text.strip_prefix('b').unwrap_or(text);
    let prefix = text.len() - body.len();
    let end = if body.starts_with('"') {
        closing_quote(body, '"')
    } else if body.starts_with('\'') {
        closing_quote(body, '\'')
    } else {
        let hashes = raw_hashes(body)?;
        let close = format!("\"{}", "#".repeat(hashes));
        let inside = 2 + hashes;
        body[inside..]
            .find(&close)
            .map_or(body.len(), |at| inside + at + close.len())
    };
    Some(prefix + end)
}

/// Number of hash signs of a raw text such as `r#"..."#`, if `text` begins with one.
fn raw_hashes(text: &str) -> Option<usize> {
    let rest = text.strip_prefix('r')?;
    let hashes = rest.len() - rest.trim_start_matches('#').len();
    rest[hashes..].starts_with('"').then_some(hashes)
}

fn closing_quote(text: &str, quote: char) -> usize {
    let mut chars = text.char_indices().skip(1);
    while let Some((at, c)) = chars.next() {
        if c == '\\' || (quote == '\'' && at == 1) {
            // An escaped character, or the one character of a literal such as ''', does not end it.
            if c == '\\' {
                chars.next();
            }
        } else if c == quote {
            return at + quote.len_utf8();
        }
    }
    text.len()
}

/// The byte where character `wanted` of the text literal at byte `start` stands, escapes counted as one character.
fn char_of_string(text: &str, start: usize, wanted: usize) -> usize {
    let literal = &text[start..];
    if let Some(hashes) = raw_hashes(literal) {
        let inside = start + 2 + hashes;
        return text[inside..]
            .char_indices()
            .nth(wanted)
            .map_or(inside, |(at, _)| inside + at);
    }
    let mut chars = literal.char_indices().skip(1).peekable();
    for _ in 0..wanted {
        let Some((_, c)) = chars.next() else { break };
        if c != '\\' {
            continue;
        }
        match chars.next() {
            Some((_, 'u')) => while chars.next().is_some_and(|(_, c)| c != '}') {},
            Some((_, 'x')) => {
                chars.next();
                chars.next();
            }
            _ => {}
        }
    }
    chars.peek().map_or(start, |(at, _)| start + at)
}

//! The levels of packs as a table for spreadsheets.

/// One level, as it stands in the table. What is not known is left empty.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Line {
    /// File of the pack.
    pub file: String,
    /// Number of the level, from 1.
    pub number: usize,
    /// Its name.
    pub name: String,
    /// Columns and rows of its board.
    pub size: (usize, usize),
    /// solvable, unsolvable, undecided or invalid.
    pub verdict: String,
    /// Fewest steps known, and whether they are proved.
    pub steps: Option<(u32, bool)>,
    /// Fewest pushes (moves under Drag) known, and whether they are proved.
    pub pushes: Option<(u32, bool)>,
    /// A cheapest route known.
    pub route: Option<String>,
    /// Positions that the search looked at.
    pub positions: Option<u64>,
    /// Time spent.
    pub seconds: Option<f64>,
    /// What is not well.
    pub message: String,
}

const HEADS: [&str; 14] = [
    "file",
    "number",
    "name",
    "width",
    "height",
    "verdict",
    "steps",
    "steps proved",
    "pushes",
    "pushes proved",
    "route",
    "positions",
    "seconds",
    "message",
];

/// A table with a line of heads, as RFC 4180 has it.
pub fn csv(lines: &[Line]) -> String {
    let mut out = String::new();
    write_line(&mut out, &HEADS.map(str::to_owned));
    for line in lines {
        let figure = |figure: Option<(u32, bool)>| {
            figure.map_or(String::new(), |(fewest, _)| fewest.to_string())
        };
        let proved = |figure: Option<(u32, bool)>| {
            figure.map_or("", |(_, proved)| if proved { "yes" } else { "no" })
        };
        write_line(
            &mut out,
            &[
                line.file.clone(),
                line.number.to_string(),
                line.name.clone(),
                line.size.0.to_string(),
                line.size.1.to_string(),
                line.verdict.clone(),
                figure(line.steps),
                proved(line.steps).to_owned(),
                figure(line.pushes),
                proved(line.pushes).to_owned(),
                line.route.clone().unwrap_or_default(),
                line.positions
                    .map_or(String::new(), |positions| positions.to_string()),
                line.seconds
                    .map_or(String::new(), |seconds| format!("{seconds:.6}")),
                line.message.clone(),
            ],
        );
    }
    out
}

fn write_line(out: &mut String, fields: &[String]) {
    for (at, field) in fields.iter().enumerate() {
        if at > 0 {
            out.push(',');
        }
        if field.contains(['"', ',', '\r', '\n']) {
            out.push('"');
            out.push_str(&field.replace('"', "\"\""));
            out.push('"');
        } else {
            out.push_str(field);
        }
    }
    out.push_str("\r\n");
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn fields_are_quoted_where_they_must_be() {
        let line = Line {
            file: "a.pack.ron".to_owned(),
            number: 3,
            name: "Say \"when\", gardener".to_owned(),
            size: (6, 4),
            verdict: "solvable".to_owned(),
            steps: Some((5, true)),
            pushes: Some((2, false)),
            ..Line::default()
        };
        let text = csv(&[line]);
        let mut lines = text.split_terminator("\r\n");
        assert_eq!(lines.next().map(|heads| heads.split(',').count()), Some(14));
        let expected = "a.pack.ron,3,\"Say \"\"when\"\", gardener\",6,4,solvable,5,yes,2,no,,,,";
        assert_eq!(lines.collect::<Vec<_>>(), [expected]);
    }
}

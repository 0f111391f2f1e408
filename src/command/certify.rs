//! Certificates of unsolvability: `check --certificate DIR` writes them, `foldwright verify FILE` checks one.

use super::answer::Verdict;
use super::check::CheckedPack;
use super::gather::Found;
use super::print;
use crate::level::{Level, Mechanics};
use crate::study::{Limits, Uncertified, certificate};
use crate::verify::{Refusal, check};
use std::fs::{self, File};
use std::io::{self, BufWriter, Write};
use std::path::{Path, PathBuf};
use std::sync::Arc;

/// The levels of what was found, in the order in which they are answered.
pub(super) fn levels(found: &[Found]) -> Vec<(Arc<Mechanics>, Arc<Level>)> {
    let both = |(_, mechanics, level): &(usize, Arc<Mechanics>, Arc<Level>)| {
        (Arc::clone(mechanics), Arc::clone(level))
    };
    found
        .iter()
        .flat_map(|pack| pack.levels.iter().map(both))
        .collect()
}

/// Writes a certificate for every level that can't be finished. Returns whether all could be written that fit the limits.
pub(super) fn write_all(
    folder: &Path,
    asked: &[(Arc<Mechanics>, Arc<Level>)],
    packs: &[CheckedPack],
    limits: &Limits,
) -> bool {
    let answered = packs
        .iter()
        .flat_map(|pack| pack.levels.iter().map(move |answered| (pack, answered)));
    let mut all_well = true;
    for ((mechanics, level), (pack, (number, _, answer))) in asked.iter().zip(answered) {
        if answer.verdict != Verdict::Unsolvable {
            continue;
        }
        let path = folder.join(file_name(&pack.file, *number));
        if let Err(error) = write_one(&path, mechanics, level, limits) {
            eprintln!("{}: level {number} ({}): {error}", pack.file, level.name);
            all_well &= !matches!(error, NotWritten::Disk { .. });
        }
    }
    all_well
}

/// Why there is no certificate file.
#[derive(Debug, thiserror::Error)]
enum NotWritten {
    #[error("No certificate: {0}.")]
    None(Uncertified),
    #[error("The certificate {} can't be written: {error}.", path.display())]
    Disk { path: PathBuf, error: io::Error },
}

fn write_one(
    path: &Path,
    mechanics: &Mechanics,
    level: &Level,
    limits: &Limits,
) -> Result<(), NotWritten> {
    let certificate = certificate(mechanics, level, limits).map_err(NotWritten::None)?;
    let write = || -> io::Result<()> {
        if let Some(folder) = path.parent() {
            fs::create_dir_all(folder)?;
        }
        let mut out = BufWriter::new(File::create(path)?);
        certificate.write(&mut out)?;
        out.flush()
    };
    write().map_err(|error| NotWritten::Disk {
        path: path.to_path_buf(),
        error,
    })
}

/// `NAME.pack.ron` and 3 give `NAME-3.certificate.json`.
fn file_name(pack: &str, number: usize) -> String {
    let name = Path::new(pack)
        .file_name()
        .map(|name| name.to_string_lossy());
    let name = name.as_deref().unwrap_or("pack");
    let stem = name.strip_suffix(".pack.ron").unwrap_or(name);
    format!("{stem}-{number}.certificate.json")
}

/// Checks one certificate and says what it proves; returns the exit status.
pub(super) fn verify(file: &Path) -> u8 {
    let text = match fs::read_to_string(file) {
        Ok(text) => text,
        Err(error) => {
            eprintln!("{}: {error}", file.display());
            return 2;
        }
    };
    match check(&text) {
        Ok(verified) => {
            print(&format!(
                "{}: proved, {:?} can't be finished ({} positions closed under all steps, {} cut)\n",
                file.display(),
                verified.level,
                verified.positions,
                verified.cut
            ));
            0
        }
        Err(error) => {
            eprintln!("{}: {error}", file.display());
            if matches!(error, Refusal::Unreadable(_)) {
                2
            } else {
                1
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::file_name;

    #[test]
    fn a_certificate_is_named_after_its_pack_and_level() {
        assert_eq!(
            file_name("levels/night.pack.ron", 3),
            "night-3.certificate.json"
        );
        assert_eq!(file_name("odd name", 12), "odd name-12.certificate.json");
    }
}

//! Certificates of unsolvability: those that are written are verified, and those that were tampered with are refused.

mod support;

use foldwright::level::{GroundIx, Level, Mechanics};
use foldwright::study::{Limits, Uncertified, certificate};
use foldwright::verify::certificate::{Certificate, Reason, Unreadable};
use foldwright::verify::hopeless::Relaxed;
use foldwright::verify::plain::World;
use foldwright::verify::{Refusal, check};
use support::brute::{Space, explore, par_steps};
use support::random::{self, MIXES, TINY};

/// Levels of every mix that can't be finished, the first few valid ones of each.
fn unsolvable(most: usize) -> Vec<(Mechanics, Level, Space)> {
    let mut found = Vec::new();
    for mix in MIXES {
        let mut count = 0;
        for seed in 0..200 {
            let (mechanics, level) = random::level(mix, TINY, seed);
            let is_valid = foldwright::rules::Rules::compile(&mechanics, &level).is_ok();
            let space = explore(&World::new(&mechanics, &level), 1_000);
            if let Some(space) = space.filter(|space| is_valid && space.par_steps().is_none())
                && space.positions.len() > 5
            {
                found.push((mechanics, level, space));
                count += 1;
            }
            if count == most {
                break;
            }
        }
        assert_eq!(count, most, "{}", mix.name);
    }
    found
}

fn text_of(certificate: &Certificate) -> String {
    let mut out = Vec::new();
    certificate.write(&mut out).expect("a vector takes all");
    String::from_utf8(out).expect("a certificate is text")
}

/// The certificate that holds a whole explored space.
fn whole(mechanics: &Mechanics, level: &Level, space: &Space) -> Certificate {
    let mut certificate = Certificate::new(mechanics, level);
    for position in &space.positions {
        certificate.add_closed(position);
    }
    certificate
}

#[test]
fn what_the_study_writes_is_verified() {
    let (mut whole, mut cut) = (0, 0);
    for (mechanics, level, space) in unsolvable(12) {
        let certificate = certificate(&mechanics, &level, &Limits::default()).expect(&level.name);
        let verified = check(&text_of(&certificate)).expect(&level.name);
        assert!(verified.positions <= space.positions.len() as u64);
        whole += u32::from(verified.positions == space.positions.len() as u64);
        cut += verified.cut;
        assert_eq!(verified.level, level.name);
    }
    assert!(whole > 20 && cut > 100, "{whole} {cut}");
}

#[test]
fn a_level_that_can_be_finished_gets_no_certificate() {
    let mut asked = 0;
    for mix in MIXES {
        for seed in 0..60 {
            let (mechanics, level) = random::level(mix, TINY, seed);
            let solvable = par_steps(&World::new(&mechanics, &level), 500)
                .flatten()
                .is_some();
            if solvable && foldwright::rules::Rules::compile(&mechanics, &level).is_ok() {
                let refused = certificate(&mechanics, &level, &Limits::default()).err();
                assert_eq!(refused, Some(Uncertified::Solvable), "{}", level.name);
                asked += 1;
            }
        }
    }
    assert!(asked > 100, "{asked}");
}

#[test]
fn a_closed_set_with_any_position_left_out_is_refused() {
    for (mechanics, level, space) in unsolvable(3) {
        for missing in 0..space.positions.len().min(40) {
            let mut certificate = Certificate::new(&mechanics, &level);
            for (number, position) in space.positions.iter().enumerate() {
                if number != missing {
                    certificate.add_closed(position);
                }
            }
            let refused = check(&text_of(&certificate)).expect_err(&level.name);
            if missing == 0 {
                assert!(matches!(refused, Refusal::StartOutside), "{refused}");
            } else {
                assert!(matches!(refused, Refusal::Open(..)), "{refused}");
            }
        }
    }
}

#[test]
fn a_closed_set_with_a_finished_position_is_refused() {
    let mut refused = 0;
    for seed in 0..100 {
        let (mechanics, level) = random::level(random::mix("push-only"), TINY, seed);
        let space = explore(&World::new(&mechanics, &level), 500);
        let Some(space) = space.filter(|space| space.par_steps().is_some()) else {
            continue;
        };
        if foldwright::rules::Rules::compile(&mechanics, &level).is_ok() {
            let error = check(&text_of(&whole(&mechanics, &level, &space))).err();
            let expected = matches!(error, Some(Refusal::Finished(_) | Refusal::Open(..)));
            assert!(expected, "{}: {error:?}", level.name);
            refused += 1;
        }
    }
    assert!(refused > 10, "{refused}");
}

#[test]
fn a_certificate_with_any_byte_changed_is_refused() {
    let (mechanics, level, space) = unsolvable(1).swap_remove(0);
    let text = text_of(&whole(&mechanics, &level, &space));
    assert!(check(&text).is_ok());
    for at in 0..text.len() {
        let mut bytes = text.clone().into_bytes();
        bytes[at] ^= 1;
        if let Ok(damaged) = String::from_utf8(bytes) {
            assert!(check(&damaged).is_err(), "byte {at} of {}", text.len());
        }
    }
    for length in 0..text.len() - 1 {
        assert!(check(&text[..length]).is_err(), "the first {length} bytes");
    }
}

#[test]
fn a_record_that_is_no_position_is_refused() {
    let (mechanics, level, space) = unsolvable(1).swap_remove(0);
    let mut certificate = whole(&mechanics, &level, &space);
    let mut doubled = space.positions[0].clone();
    let body = doubled.bodies[0].clone();
    doubled.bodies.push(body.clone());
    doubled.bodies.push(body);
    certificate.add_closed(&doubled);
    let refused = check(&text_of(&certificate)).expect_err("two bodies on one cell");
    assert!(
        matches!(refused, Refusal::Unreadable(Unreadable::Record(_))),
        "{refused}"
    );
    assert!(matches!(
        check("{}"),
        Err(Refusal::Unreadable(Unreadable::Form(_)))
    ));
}

/// Leaves out of the closed set what is reached through hopeless positions only, and lists these as cut.
fn with_cuts(mechanics: &Mechanics, level: &Level, space: &Space) -> (Certificate, u64) {
    let mut relaxed = Relaxed::new(mechanics, level);
    let mut certificate = Certificate::new(mechanics, level);
    let mut seen = vec![false; space.positions.len()];
    seen[0] = true;
    let (mut open, mut cut) = (vec![0], 0);
    while let Some(at) = open.pop() {
        certificate.add_closed(&space.positions[at]);
        for edge in &space.edges[at] {
            if std::mem::replace(&mut seen[edge.to], true) {
                continue;
            }
            if relaxed.hopeless(&space.positions[edge.to]) {
                certificate.add_cut(&space.positions[edge.to], Reason::HomesOutOfReach);
                cut += 1;
            } else {
                open.push(edge.to);
            }
        }
    }
    (certificate, cut)
}

#[test]
fn cut_positions_are_accepted_where_the_reason_holds() {
    let mut all = 0;
    for (mechanics, level, space) in unsolvable(12) {
        let (certificate, cut) = with_cuts(&mechanics, &level, &space);
        let verified = check(&text_of(&certificate)).expect(&level.name);
        assert_eq!(verified.cut, cut, "{}", level.name);
        all += cut;
    }
    assert!(all > 100, "{all}");
}

#[test]
fn a_cut_position_from_which_the_level_can_be_finished_is_refused() {
    let mut refused = 0;
    for mix in MIXES {
        for seed in 0..40 {
            let (mechanics, level) = random::level(mix, TINY, seed);
            let space = explore(&World::new(&mechanics, &level), 500);
            let is_valid = foldwright::rules::Rules::compile(&mechanics, &level).is_ok();
            let Some(space) = space.filter(|_| is_valid) else {
                continue;
            };
            let alive = space.alive();
            for at in (1..space.positions.len()).filter(|&at| alive[at]) {
                let mut certificate = Certificate::new(&mechanics, &level);
                certificate.add_closed(&space.positions[0]);
                certificate.add_cut(&space.positions[at], Reason::HomesOutOfReach);
                let error = check(&text_of(&certificate)).err();
                assert!(matches!(error, Some(Refusal::Reason(0))), "{}", level.name);
                refused += 1;
            }
        }
    }
    assert!(refused > 500, "{refused}");
}

#[test]
fn the_relaxation_never_calls_a_position_hopeless_that_can_be_finished() {
    let (mut alive_ones, mut hopeless_ones) = (0, 0);
    for mix in MIXES {
        for seed in 0..400 {
            let (mechanics, level) = random::level(mix, TINY, seed);
            let Some(space) = explore(&World::new(&mechanics, &level), 400) else {
                continue;
            };
            let alive = space.alive();
            let mut relaxed = Relaxed::new(&mechanics, &level);
            for (position, alive) in space.positions.iter().zip(&alive) {
                let hopeless = relaxed.hopeless(position);
                assert!(!(hopeless && *alive), "{}: {position:?}", level.name);
                alive_ones += usize::from(*alive);
                hopeless_ones += usize::from(hopeless);
            }
        }
    }
    assert!(
        alive_ones > 5_000 && hopeless_ones > 5_000,
        "{alive_ones} {hopeless_ones}"
    );
}

#[test]
fn a_certificate_about_another_board_does_not_hold() {
    let mut refused = 0;
    for (mechanics, level, space) in unsolvable(3) {
        let mut other = level.clone();
        for cell in 0..other.ground.len() {
            let before = other.ground[cell];
            other.ground[cell] = GroundIx(0);
            let solvable = par_steps(&World::new(&mechanics, &other), 2_000).flatten();
            if solvable.is_some() && before != GroundIx(0) {
                let mut certificate = Certificate::new(&mechanics, &other);
                for position in &space.positions {
                    let mut position = position.clone();
                    if position.ground[cell] == before {
                        position.ground[cell] = GroundIx(0);
                    }
                    certificate.add_closed(&position);
                }
                assert!(check(&text_of(&certificate)).is_err(), "{}", level.name);
                refused += 1;
            }
            other.ground[cell] = before;
        }
    }
    assert!(refused > 0);
}

/// Runs the program and returns its exit status and what it printed.
fn run(arguments: &[&std::ffi::OsStr]) -> (Option<i32>, String) {
    let output = std::process::Command::new(env!("CARGO_BIN_EXE_foldwright"))
        .args(arguments)
        .output()
        .expect("the program runs");
    let text = String::from_utf8_lossy(&output.stdout).into_owned();
    (output.status.code(), text)
}

#[test]
fn the_command_line_writes_certificates_and_verifies_them() {
    let folder = tempfile::tempdir().expect("a folder");
    let proofs = folder.path().join("proofs");
    let pack = std::path::Path::new(env!("CARGO_MANIFEST_DIR"))
        .join("sample-levels/unsolvable-on-purpose.pack.ron");
    let (status, _) = run(&[
        "check".as_ref(),
        pack.as_ref(),
        "--certificate".as_ref(),
        proofs.as_ref(),
    ]);
    assert_eq!(status, Some(1), "its levels can't be finished");
    let mut written: Vec<_> = std::fs::read_dir(&proofs)
        .expect("the folder was made")
        .map(|entry| entry.expect("an entry").path())
        .collect();
    written.sort();
    assert!(written.len() >= 3, "{written:?}");
    for file in &written {
        let (status, text) = run(&["verify".as_ref(), file.as_ref()]);
        assert_eq!(status, Some(0), "{file:?}");
        assert!(text.contains("can't be finished"), "{text}");
    }
    let text = std::fs::read_to_string(&written[0]).expect("a text");
    let damaged = folder.path().join("damaged.json");
    std::fs::write(&damaged, text.replacen("closed", "clomed", 1)).expect("written");
    assert_eq!(run(&["verify".as_ref(), damaged.as_ref()]).0, Some(2));
    let missing = folder.path().join("missing.json");
    assert_eq!(run(&["verify".as_ref(), missing.as_ref()]).0, Some(2));
    let certificate = Certificate::read(&text).expect("it was verified");
    let empty = Certificate::new(certificate.mechanics(), certificate.level());
    std::fs::write(&missing, text_of(&empty)).expect("written");
    assert_eq!(run(&["verify".as_ref(), missing.as_ref()]).0, Some(1));
}

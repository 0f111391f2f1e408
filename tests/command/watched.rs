//! Watched routes and pars.

use super::*;

/// Checks the corridor with a watch, and holds the status and the words of the message.
fn check_watch(watch: &str, more: &[&str], status: i32, words: &str) {
    let report = check(&[corridor(watch)], more, status, &["solvable"]);
    let message = &report["packs"][0]["levels"][0]["message"];
    match words {
        "" => assert_eq!(*message, Value::Null, "{watch}"),
        words => assert!(
            message.as_str().is_some_and(|text| text.contains(words)),
            "{watch}: {message}"
        ),
    }
}

#[test]
fn a_watched_route_must_still_finish_the_level() {
    check_watch("intended: \"ee\"", &[], 0, "");
    check_watch("intended: \"ewee\"", &[], 0, "");
    check_watch(
        "intended: \"e\"",
        &[],
        1,
        "after its 1 steps the level is not finished",
    );
    check_watch("intended: \"\"", &[], 1, "after its 0 steps");
    check_watch(
        "intended: \"ene\"",
        &[],
        1,
        "its step 2 of 3 changes nothing",
    );
    check_watch(
        "intended: \"ww\"",
        &["--quiet"],
        1,
        "its step 1 of 2 changes nothing",
    );
}

#[test]
fn a_watched_par_must_be_the_fewest_that_is_proved() {
    check_watch("par: (steps: 2)", &[], 0, "");
    check_watch("par: (steps: 2, pushes: 2)", &["--prove", "pushes"], 0, "");
    check_watch("par: (steps: 2, pushes: 2)", &["--prove", "both"], 0, "");
    check_watch(
        "par: (steps: 3)",
        &[],
        1,
        "The par of 3 steps is broken: the fewest are 2",
    );
    check_watch(
        "par: (steps: 1)",
        &[],
        1,
        "The par of 1 steps is broken: the fewest are 2",
    );
    check_watch(
        "par: (pushes: 1)",
        &[],
        1,
        "The par of 1 pushes is broken: the fewest are 2",
    );
    check_watch("par: (pushes: 3)", &["--prove", "none"], 1, "is broken");
    let watched = stuck().replace("name:", "par: (steps: 4), name:");
    let report = check(&[watched], &[], 1, &["unsolvable"]);
    assert!(
        report["packs"][0]["levels"][0]["message"]
            .as_str()
            .is_some_and(|text| text.contains("par of 4 steps"))
    );
}

//! Files in clause syntax: imported, checked, saved, refused.

use super::program::Place;

const AXIOMS: &str = "\
cnf(bracket, axiom, merge(merge(X,Y),Z) = merge(X,merge(Y,Z))).
cnf(start, axiom, merge(start,X) = X).
cnf(back, axiom, merge(turn(X),X) = start).
";

/// A left unit and left inverses make right inverses (the usual axioms of groups).
const GOAL: &str = "include('tides.ax').\n\
    cnf(goal, negated_conjecture, merge(gauge,turn(gauge)) != start).\n";

#[test]
fn a_file_is_checked_by_its_ending_and_saved_as_a_theory() {
    let place = Place::new();
    place.file("tides.ax", AXIOMS);
    place.file("tides.p", GOAL);
    let ran = place.run(&["check", "--json", "tides.p"], "");
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    assert!(ran.out.contains(r#""claim":"goal""#) && ran.out.contains(r#""verdict":"equal""#));
    let lines = "import tides.p\nlaws\nsave tides.theory\nopen tides.theory\ncheck\n";
    let ran = place.run(&[], lines);
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    assert!(
        ran.out.contains("tides: 4 symbols, 3 laws, 1 claim"),
        "{}",
        ran.out
    );
    assert!(!ran.err.contains("not saved"), "{}", ran.err);
    let ran = place.run(&["tides.p"], "claims\n");
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    assert!(
        ran.out.contains("merge(gauge, turn(gauge)) = start"),
        "{}",
        ran.out
    );
}

#[test]
fn the_library_is_named_by_an_option_or_the_environment() {
    let place = Place::new();
    std::fs::create_dir(place.path().join("library")).unwrap();
    place.file("library/tides.ax", AXIOMS);
    place.file("tides.p", GOAL);
    let ran = place.run(&["check", "tides.p"], "");
    assert_eq!(ran.status, 3, "{}{}", ran.out, ran.err);
    assert!(
        ran.err.contains("tides.p:1:9") && ran.err.contains("--library"),
        "{}",
        ran.err
    );
    let ran = place.run(&["check", "tides.p", "--library", "library"], "");
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    let mut command = place.command(&["check", "tides.p"]);
    command.env("EQUABLE_LIBRARY", "library");
    let ran = super::program::finish(command, b"");
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
}

#[test]
fn import_says_what_it_puts_away_and_what_it_cannot_read() {
    let place = Place::new();
    place.file("tides.ax", AXIOMS);
    let ran = place.run(&[], "constant harbour\nimport tides.ax\nlaws\n");
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    assert!(
        ran.err.contains("has changes that were not saved"),
        "{}",
        ran.err
    );
    place.file("bad.p", "cnf(low, axiom, low(X) | high(X)).\n");
    let ran = place.run(
        &[],
        "new kept\nconstant harbour\nimport bad.p\nharbour = harbour\n",
    );
    assert_eq!(ran.status, 3, "{}{}", ran.out, ran.err);
    assert!(ran.err.contains("bad.p:1:17"), "{}", ran.err);
    assert!(
        ran.out.contains("equal"),
        "the open theory stays: {}",
        ran.out
    );
    for line in ["import", "import nowhere.p", "import ."] {
        let ran = place.run(&[], line);
        assert_eq!(ran.status, 3, "{line}: {}{}", ran.out, ran.err);
        assert!(ran.err.contains("Help"), "{line}: {}", ran.err);
    }
}

#[test]
fn a_goal_with_unknowns_is_a_claim_that_asks_for_values() {
    let place = Place::new();
    place.file("tides.ax", AXIOMS);
    place.file(
        "tides.p",
        "include('tides.ax').\ncnf(goal, negated_conjecture, merge(gauge,X) != harbour).\n",
    );
    let ran = place.run(&["check", "--json", "--evidence", "out", "tides.p"], "");
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    let answer: serde_json::Value = serde_json::from_str(&ran.out).expect("JSON");
    assert_eq!(answer["question"], "find X: merge(gauge, X) = harbour");
    assert_eq!(answer["verdict"], "equal");
    assert!(answer["values"]["X"].is_string(), "{answer}");
    let path = answer["evidence"].as_str().expect("a path");
    let ran = place.run(&["verify", path, "--theory", "tides.p"], "");
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);

    let ask = |question: &str| place.run(&["ask", "tides.p", question, "--within", "20s"], "");
    let ran = ask("find X: merge(X, Y) = Z");
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    assert!(ran.out.contains("    X = "), "{}", ran.out);
    let ran = ask("find X: merge(X, X) = Y");
    assert_eq!(ran.status, 1, "{}{}", ran.out, ran.err);
    assert!(
        ran.out.contains("differ for all values of X"),
        "{}",
        ran.out
    );
    let ran = ask("find X: merge(X, X) = Y within 3s");
    assert_eq!(ran.status, 3, "{}{}", ran.out, ran.err);
    assert!(ran.err.contains("question:1:"), "{}", ran.err);
}

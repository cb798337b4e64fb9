//! Bad input: a message with place and remedy, status 3, and the rest goes on.

use super::program::{GROUP, Place};

#[test]
fn files_that_are_no_theories() {
    let place = Place::new();
    place.file("empty.theory", "");
    place.file("latin.theory", b"constant caf\xe9\n");
    place.file("nul.theory", b"constant a\0b\n");
    std::fs::create_dir(place.path().join("folder.theory")).unwrap();
    for (file, said) in [
        ("empty.theory", "the file is empty"),
        ("latin.theory", "not UTF-8"),
        ("nul.theory", "NUL"),
        ("folder.theory", "is a folder"),
        ("missing.theory", "missing.theory"),
    ] {
        for arguments in [&["check", file][..], &[file]] {
            let ran = place.run(arguments, "");
            assert_eq!(ran.status, 3, "{file}: {}", ran.err);
            assert!(ran.err.contains(said), "{file}: {}", ran.err);
            assert!(ran.err.contains("Help"), "{file}: {}", ran.err);
        }
        let ran = place.run(&[], format!("constant a\nopen {file}\na = a\n"));
        assert_eq!(ran.status, 3);
        assert!(ran.err.contains(said), "{file}: {}", ran.err);
        assert!(
            ran.out.contains("equal        answer 1"),
            "what was open stays open"
        );
    }
}

#[cfg(target_os = "linux")]
#[test]
fn places_that_cannot_be_written() {
    let place = Place::new();
    let ran = place.run(
        &[],
        "constant a\nsave nowhere/a.theory\nsave /dev/full\nsave\na = a\n",
    );
    assert_eq!(ran.status, 3);
    assert!(ran.err.contains("3 lines were at fault."), "{}", ran.err);
    assert!(ran.out.contains("equal        answer 1"), "{}", ran.out);
}

#[test]
fn bytes_that_are_no_text() {
    let place = Place::new();
    let ran = place.run(&[], b"constant a\na = \xff\na = a\0\na = a\n");
    assert_eq!(ran.status, 3);
    assert!(ran.err.contains("input:2:5"), "{}", ran.err);
    assert!(ran.err.contains("input:3:6"), "{}", ran.err);
    assert!(ran.err.contains("2 lines were at fault."), "{}", ran.err);
    assert!(ran.out.contains("equal        answer 1"), "{}", ran.out);
}

/// Each line is at fault at the named column, and says what to do.
#[test]
fn commands_with_wrong_arguments() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    for (line, column) in [
        ("proof", 1),
        ("proof x", 7),
        ("proof 0", 7),
        ("complete now", 10),
        ("complete within", 16),
        ("complete within soon", 17),
        ("prove x", 7),
        ("prove x = e within", 19),
        ("prove x = e for 2s", 13),
        ("trace x = e", 7),
        ("trace", 6),
        ("why", 4),
        ("why assoc", 5),
        ("why 9999", 5),
        ("budget ask", 11),
        ("budget tea 2s", 8),
        ("budget memory 2GiB", 8),
        ("drop", 5),
        ("drop asoc", 6),
        ("laws all", 6),
        ("undo", 1),
        ("redo", 1),
        ("new", 4),
        ("new 2b", 5),
        ("open", 5),
        ("help nonsense", 6),
        ("separate x = e, at most none", 25),
        ("separate x", 10),
        ("evaluate x in A1", 15),
        ("find", 5),
        ("find e: x = e", 6),
        ("find x x: x = e", 8),
        ("find x: x = e within", 21),
        ("import", 7),
        ("within 3s", 1),
        ("order kbo q", 11),
        ("? q", 3),
    ] {
        let ran = place.run(&["group.theory"], format!("{line}\n"));
        assert_eq!(ran.status, 3, "{line}: {}", ran.err);
        let at = format!("input:1:{column}");
        assert!(ran.err.contains(&at), "{line}: {}", ran.err);
        assert!(ran.err.contains("Help"), "{line}: {}", ran.err);
        assert!(
            ran.err.contains("1 line was at fault."),
            "{line}: {}",
            ran.err
        );
    }
}

#[test]
fn words_of_other_trades_are_understood_as_hints() {
    let place = Place::new();
    for (word, meant) in [
        ("exit", "quit"),
        ("complte", "complete"),
        ("symbls", "symbols"),
    ] {
        let ran = place.run(&[], format!("{word}\n"));
        let hint = format!("if a command was meant: {meant}");
        assert!(ran.err.contains(&hint), "{}", ran.err);
    }
}

/// A line of 50 MB and a million brackets must neither hang nor end the program.
#[test]
fn enormous_lines() {
    let place = Place::new();
    let long = format!("constant a\n{}\na = a\n", "x".repeat(50 << 20));
    let ran = place.run(&[], long);
    assert_eq!(ran.status, 3);
    assert!(ran.err.len() < 10_000, "the message stays small");
    assert!(ran.out.contains("equal        answer 1"), "{}", ran.out);
    let deep = format!(
        "constant a\n{}a{}\na = a\n",
        "(".repeat(1_000_000),
        ")".repeat(1_000_000)
    );
    let ran = place.run(&[], deep);
    assert!(matches!(ran.status, 0 | 3), "{}", ran.status);
    assert!(ran.out.contains("equal        answer 1"), "{}", ran.out);
}

#[test]
fn the_places_of_one_message_agree() {
    let place = Place::new();
    let lines = "infix * 40 left\nconstant e\n\n(e * e = e\n";
    let ran = place.run(&[], lines);
    assert_eq!(ran.status, 3);
    assert!(ran.err.contains("input:4:1"), "{}", ran.err);
    let notes = ran.err.match_indices("(line ").count();
    assert_eq!(ran.err.matches("(line 4,").count(), notes, "{}", ran.err);
    assert!(notes > 0, "{}", ran.err);
}

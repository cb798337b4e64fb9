//! What one process writes another accepts, and so does a reading by hand.

use super::place::{Place, theory};
use crate::common::by_hand;
use serde_json::Value;

/// Groups have a complete set, lists are many-sorted, quandles and loops have algebras,
/// semilattices rules that are not oriented.
const THEORIES: &[&str] = &["group", "list", "quandle", "loop", "semilattice", "stack"];

fn json(place: &Place, file: &str) -> Value {
    let text = std::fs::read_to_string(place.path(file)).expect("the file");
    assert!(text.ends_with('\n') && text.lines().count() == 1);
    serde_json::from_str(&text).expect("JSON")
}

#[test]
fn every_claim_leaves_evidence_that_another_process_accepts() {
    let place = Place::new();
    let theories: Vec<String> = THEORIES.iter().map(|name| theory(name)).collect();
    let mut arguments = vec!["check", "--json", "--evidence", "new/out"];
    arguments.extend(theories.iter().map(String::as_str));
    let checked = place.run(&arguments);
    assert_eq!(checked.status, 0, "{}{}", checked.out, checked.err);
    let files = place.files("new/out");
    let answers: Vec<Value> = checked
        .out
        .lines()
        .map(|line| serde_json::from_str(line).expect("JSON"))
        .collect();
    let mut named: Vec<&str> = answers
        .iter()
        .map(|answer| answer["evidence"].as_str().expect("a path"))
        .collect();
    named.sort_unstable();
    assert_eq!(named, files, "one file for each answer");
    let mut kinds = std::collections::BTreeMap::new();
    for file in &files {
        let json = json(&place, file);
        by_hand::judge(&json).unwrap_or_else(|why| panic!("{file}: {why}"));
        *kinds
            .entry(json["kind"].as_str().expect("a kind").to_owned())
            .or_insert(0) += 1;
    }
    assert!(kinds["proof"] >= 5 && kinds["algebra"] >= 3, "{kinds:?}");

    let mut arguments = vec!["verify"];
    arguments.extend(files.iter().map(String::as_str));
    let verified = place.run(&arguments);
    assert_eq!(verified.status, 0, "{}{}", verified.out, verified.err);
    let lines: Vec<&str> = verified.out.lines().collect();
    assert_eq!(lines.len(), files.len());
    for (line, file) in lines.iter().zip(&files) {
        assert!(line.starts_with(&format!("{file}: accepted: ")), "{line}");
    }

    // With a theory the files of that theory are accepted, and no others.
    let theory = theory("group");
    arguments.extend(["--json", "--theory", &theory]);
    let verified = place.run(&arguments);
    assert_eq!(verified.status, 1);
    for line in verified.out.lines() {
        let line: Value = serde_json::from_str(line).expect("JSON");
        let file = line["file"].as_str().expect("a file");
        let of_group = file.starts_with("new/out/group-");
        // A file without laws says something about every theory.
        let has_laws = json(&place, file)["laws"]
            .as_array()
            .is_some_and(|laws| !laws.is_empty());
        if of_group || has_laws {
            let expected = if of_group { "accepted" } else { "rejected" };
            assert_eq!(line["outcome"], expected, "{line}");
        }
    }
}

#[test]
fn complete_sets_leave_evidence() {
    let place = Place::new();
    let theory = theory("group");
    let ran = place.run(&["complete", &theory, "--evidence", "out", "--json=full"]);
    assert_eq!(ran.status, 0, "{}", ran.err);
    let answer: Value = serde_json::from_str(ran.out.trim()).expect("JSON");
    assert_eq!(answer["evidence_file"], "out/group-complete.json");
    let written = json(&place, "out/group-complete.json");
    assert_eq!(answer["evidence"], written);
    assert_eq!(written["rules"].as_array().map(Vec::len), Some(10));
    by_hand::judge(&written).unwrap();
    let ran = place.run(&["verify", "out/group-complete.json", "--theory", &theory]);
    assert_eq!(ran.status, 0);
    assert_eq!(
        ran.out,
        "out/group-complete.json: accepted: complete rules\n"
    );
}

#[test]
fn ask_keeps_the_evidence_of_earlier_questions() {
    let place = Place::new();
    let theory = theory("group");
    for (question, file) in [
        ("x * i(x) = e", "out/group-question.json"),
        ("i(i(x)) = x", "out/group-question-2.json"),
    ] {
        let ran = place.run(&["ask", &theory, question, "--json", "--evidence", "out"]);
        assert_eq!(ran.status, 0, "{}", ran.err);
        let answer: Value = serde_json::from_str(ran.out.trim()).expect("JSON");
        assert_eq!(answer["evidence"], file);
        by_hand::judge(&json(&place, file)).unwrap();
    }
    let ran = place.run(&["ask", &theory, "x * y != y * x", "--evidence", "out"]);
    assert!(
        ran.out.ends_with("evidence in out/group-question-3.json\n"),
        "{}",
        ran.out
    );
    let ran = place.run(&["ask", &theory, "x * e = x", "--json=full"]);
    let answer: Value = serde_json::from_str(ran.out.trim()).expect("JSON");
    assert_eq!(answer["evidence"]["kind"], "proof");
    by_hand::judge(&answer["evidence"]).unwrap();
    assert_eq!(answer.get("evidence_file"), None);
}

#[test]
fn two_theories_of_one_name() {
    let place = Place::new();
    std::fs::create_dir(place.path("a")).unwrap();
    std::fs::create_dir(place.path("b")).unwrap();
    let text = "constant low high\nlaw same: low = high\nclaim level: high = low\n";
    place.file("a/tide.theory", text);
    place.file("b/tide.theory", text.replace("high", "higher"));
    let ran = place.run(&[
        "check",
        "a/tide.theory",
        "b/tide.theory",
        "--evidence",
        "out",
    ]);
    assert_eq!(ran.status, 0, "{}", ran.err);
    let files = place.files("out");
    assert_eq!(files, ["out/tide-level-2.json", "out/tide-level.json"]);
    let ran = place.run(&["verify", &files[0], "--theory", "b/tide.theory"]);
    assert_eq!(ran.status, 0, "{}", ran.out);
    let ran = place.run(&["verify", &files[0], "--theory", "a/tide.theory"]);
    assert_eq!(ran.status, 1, "{}", ran.out);
}

#[test]
fn a_folder_that_cannot_be_made_is_told_before_any_work() {
    let place = Place::new();
    place.file("out", "");
    let ran = place.run(&["check", &theory("group"), "--evidence", "out"]);
    assert_eq!(ran.status, 3);
    assert_eq!(ran.out, "");
    assert!(
        ran.err.contains("out is a file, not a folder"),
        "{}",
        ran.err
    );
}

#[test]
fn the_command_in_the_shell() {
    let place = Place::new();
    let lines = "evidence early.json\nopen group\nx * i(x) = e\nx * y = y * x\n\
                 evidence 1 one.json\nevidence \"two words.json\"\nevidence 1\nevidence 7 a.json\n\
                 evidence 1 nowhere/a.json\n";
    place.file("lines", lines);
    let ran = place.run(&["run", "lines"]);
    assert_eq!(ran.status, 3);
    assert!(
        ran.out
            .contains("evidence of answer 1 written to one.json\n"),
        "{}",
        ran.out
    );
    assert!(
        ran.out
            .contains("evidence of answer 2 written to two words.json\n"),
        "{}",
        ran.out
    );
    for said in [
        "there is no answer yet",
        "the file is missing",
        "there is no answer 7",
        "there is no such folder",
        "4 lines were at fault.",
    ] {
        assert!(ran.err.contains(said), "{said}: {}", ran.err);
    }
    for file in ["one.json", "two words.json"] {
        by_hand::judge(&json(&place, file)).unwrap();
    }
    let ran = place.run(&["verify", "one.json", "two words.json"]);
    assert_eq!(ran.status, 0, "{}", ran.out);
}

/// Asks for a list of so many constants reversed, and gives its evidence as written, verified.
fn reversed(place: &Place, elements: usize) -> String {
    let names: Vec<String> = (1..=elements).map(|n| format!("a{n}")).collect();
    let text = std::fs::read_to_string(theory("list")).expect("the theory");
    place.file(
        "long.theory",
        format!("{text}constant {} : Item\n", names.join(" ")),
    );
    let there = names.join(" :: ");
    let back: Vec<&str> = names.iter().rev().map(String::as_str).collect();
    let question = format!("reverse({there} :: nil) = {} :: nil", back.join(" :: "));
    let arguments = ["ask", "long.theory", &question, "--evidence", "out"];
    let ran = place.run(&arguments);
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    let ran = place.run(&[
        "verify",
        "out/long-question.json",
        "--theory",
        "long.theory",
    ]);
    assert_eq!(ran.status, 0, "{}", ran.out);
    by_hand::judge(&json(place, "out/long-question.json")).unwrap();
    std::fs::read_to_string(place.path("out/long-question.json")).expect("it was written")
}

/// Longer than can be written in single steps, so that lemmas are needed, and used again: the
/// number of steps in all grows with the square of the list.
#[test]
fn a_long_computation() {
    let place = Place::new();
    let short = reversed(&place, 60).len();
    let long = reversed(&place, 240).len();
    assert!(short < 100_000, "{short} bytes");
    // Sixteen times the steps.
    assert!(
        long < 8 * short,
        "{long} bytes, and {short} for a quarter of the elements"
    );
}

/// Both sides are long, and need the same lemmas: each is written once.
#[test]
fn two_long_computations() {
    let place = Place::new();
    place.file(
        "pairs.theory",
        "variable x y\nfunction d 1\nfunction f 2\nfunction g 2\n\
         law double: d(x) = f(x, x)\nlaw turn: f(x, y) = g(y, x)\n",
    );
    let doubled = format!("{}x{}", "d(".repeat(60), ")".repeat(60));
    let question = format!("f({doubled}, x) = g(x, {doubled})");
    let arguments = ["ask", "pairs.theory", &question, "--evidence", "out"];
    let ran = place.run(&arguments);
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    let ran = place.run(&["verify", "out/pairs-question.json"]);
    assert_eq!(ran.status, 0, "{}", ran.out);
    // Without sharing there would be 2⁶⁰ subterms.
    let written = json(&place, "out/pairs-question.json");
    assert!(
        written["terms"]
            .as_array()
            .is_some_and(|terms| terms.len() < 500)
    );
}

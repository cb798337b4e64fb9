//! One JSON object a line, with the fields that scripts rely on.

use super::program::{GROUP, OPEN, Place};
use serde_json::{Value, json};

fn lines(text: &str) -> Vec<Value> {
    let parse = |line| serde_json::from_str(line).expect("each line is one JSON object");
    text.lines().map(parse).collect()
}

#[test]
fn ask() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    place.file("open.theory", OPEN);
    let ask = |file, question| {
        let ran = place.run(&["ask", file, question, "--json", "--within", "500ms"], "");
        let mut lines = lines(&ran.out);
        assert_eq!(lines.len(), 1);
        lines.remove(0)
    };
    let equal = ask("group.theory", "x * i(x) = e");
    assert_eq!(equal["file"], "group.theory");
    assert_eq!(equal["claim"], Value::Null);
    assert_eq!(equal["question"], "x * i(x) = e");
    assert_eq!(equal["verdict"], "equal");
    assert_eq!(equal["expected"], "equal");
    assert!(equal["by"].is_string());
    assert!(equal["seconds"].is_number());
    assert_eq!(equal["evidence"], Value::Null);
    let other = ask("group.theory", "x * y != y * x");
    assert_eq!(other["question"], "x * y != y * x");
    assert_eq!(other["verdict"], "not equal");
    assert_eq!(other["expected"], "not equal");
    assert_eq!(other["by"], "complete");
    let open = ask("open.theory", "f(g(x)) = x");
    assert_eq!(open["verdict"], "undecided");
    assert_eq!(open["by"], Value::Null);
}

#[test]
fn check() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    let ran = place.run(&["check", "group.theory", "group.theory", "--json"], "");
    assert_eq!(ran.status, 0);
    let lines = lines(&ran.out);
    assert_eq!(lines.len(), 4);
    assert_eq!(lines[0]["claim"], "flip");
    assert_eq!(lines[0]["verdict"], "equal");
    assert_eq!(lines[1]["claim"], Value::Null);
    assert_eq!(lines[1]["expected"], "not equal");
}

#[test]
fn normal_and_complete() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    let ran = place.run(&["normal", "group.theory", "e * (e * x)", "--json"], "");
    let normal = lines(&ran.out).remove(0);
    assert_eq!(normal["term"], "e * (e * x)");
    assert_eq!(normal["normal"], "x");
    assert_eq!(normal["steps"], 2);
    let ran = place.run(&["complete", "group.theory", "--json"], "");
    let complete = lines(&ran.out).remove(0);
    assert_eq!(complete["complete"], true);
    assert_eq!(complete["rules"], 10);
    assert_eq!(complete["oriented"], 10);
    assert!(complete["pairs"].is_number());
    let precedence = &complete["order"]["precedence"];
    assert_eq!(precedence.as_array().map(Vec::len), Some(3));
    place.file(
        "kbo.theory",
        format!("{GROUP}order kbo i, *, e; weights i 0; variables 1\n"),
    );
    let ran = place.run(&["complete", "kbo.theory", "--json"], "");
    let complete = lines(&ran.out).remove(0);
    let order = json!({
        "kind": "kbo", "precedence": ["i", "*", "e"], "weights": {"i": 0}, "variable": 1
    });
    assert_eq!(complete["order"], order);
}

#[test]
fn what_cannot_be_read_is_an_object_too() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    place.file("bad.theory", "constant a\nlaw one: a = b\nlaw two: c = a\n");
    let files = [
        "check",
        "missing.theory",
        "bad.theory",
        "group.theory",
        "--json",
    ];
    let ran = place.run(&files, "");
    assert_eq!(ran.status, 3);
    let made = lines(&ran.out);
    assert_eq!(made.len(), 4);
    assert_eq!(made[0]["file"], "missing.theory");
    assert_eq!(made[0]["error"]["place"], Value::Null);
    let text = made[0]["error"]["text"].as_str();
    assert!(
        text.is_some_and(|text| text.contains("no theory")),
        "{}",
        made[0]
    );
    let error = json!({
        "text": "`b` was never declared", "more": 1,
        "place": { "source": "bad.theory", "line": 2, "column": 14 },
    });
    assert_eq!(made[1], json!({ "file": "bad.theory", "error": error }));
    assert_eq!(made[2]["verdict"], "equal");
    let ran = place.run(&["ask", "group.theory", "x * = e", "--json"], "");
    assert_eq!(ran.status, 3);
    assert_eq!(lines(&ran.out)[0]["error"]["place"]["source"], "question");
}

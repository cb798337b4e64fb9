//! `verify` on files that nobody vouches for: the right status, one line each, bounded memory.

use super::place::{Place, Ran, ran};
use serde_json::Value;

/// A proof of e * e = e from the unit law.
const PROOF: &str = r#"{"kind":"proof","terms":["x",["e"],["*",1,0],["*",1,1]],
"laws":[{"name":"unit","left":2,"right":0}],
"claim":{"left":3,"right":1,"steps":[{"by":"unit","way":"forward","at":[],"with":{"x":1},"to":1}]}}"#;

const ALGEBRA: &str = r#"{"kind":"algebra","terms":["x","y",["*",0,1],["*",1,0]],"laws":[],
"sorts":{"":2},"tables":{"*":[[0,0],[1,1]]},
"claim":{"left":2,"right":3,"with":{"x":0,"y":1},"values":[0,1]}}"#;

/// Runs `verify` with no more than a gigabyte of memory, where the system can be told so.
fn verify(place: &Place, files: &[&str]) -> Ran {
    if cfg!(target_os = "linux") {
        let mut limited = std::process::Command::new("sh");
        let program = place.command();
        limited.current_dir(program.get_current_dir().expect("a folder"));
        limited.args(["-c", "ulimit -v 1048576 && exec \"$0\" verify \"$@\""]);
        return ran(limited.arg(program.get_program()).args(files));
    }
    let mut arguments = vec!["verify"];
    arguments.extend(files);
    place.run(&arguments)
}

#[track_caller]
fn ends(place: &Place, file: &str, text: impl AsRef<[u8]>, status: i32, said: &str) {
    place.file(file, text);
    let ran = verify(place, &[file]);
    assert_eq!(ran.status, status, "{file}: {}{}", ran.out, ran.err);
    assert_eq!(ran.out.lines().count(), 1, "{}", ran.out);
    assert!(
        ran.out.len() < 1_000 && ran.out.contains(said),
        "{}",
        ran.out
    );
    assert_eq!(ran.err, "");
}

#[test]
fn what_is_not_so_is_rejected_with_its_place() {
    let place = Place::new();
    ends(
        &place,
        "proof",
        PROOF,
        0,
        "proof: accepted: proof of *(e, e) = e (by the 1 law in the file; --theory FILE compares it \
         with a theory)\n",
    );
    ends(
        &place,
        "algebra",
        ALGEBRA,
        0,
        "algebra with *(x, y) != *(y, x) (without any law)\n",
    );
    let unknown = ALGEBRA
        .replace(",\"y\":1}", "},\"unknowns\":[\"y\"]")
        .replace(",\"values\":[0,1]", "")
        .replace("[\"*\",1,0]", "[\"f\",0]")
        .replace("\"tables\":{", "\"tables\":{\"f\":[1,0],");
    ends(&place, "unknown", unknown, 0, "*(x, y) != f(x) for all y (");
    let values = ALGEBRA.replace("[0,1]}}", "[1,0]}}");
    let said = "rejected at claim.values: the values of the sides are 0 and 1 for x = 0, y = 1\n";
    ends(&place, "values", values, 1, said);
    let same = ALGEBRA.replace("\"y\":1", "\"y\":0");
    let said = "rejected at claim: both sides have the value 0 for x = 0, y = 0\n";
    ends(&place, "same", same, 1, said);
    let fails = ALGEBRA.replace(
        "\"laws\":[]",
        "\"laws\":[{\"name\":\"turn\",\"left\":2,\"right\":3}]",
    );
    ends(&place, "fails", fails, 1, "rejected at laws[0] (turn): ");
    ends(
        &place,
        "json",
        "{\"kind\" 1}",
        1,
        "at line 1 column 9: not JSON: expected `:`\n",
    );
    let truncated = &PROOF[..PROOF.len() / 2];
    ends(&place, "short", truncated, 1, "rejected at line 2 column");
    ends(&place, "empty", "", 1, "rejected at line 1 column 0");
    let other = PROOF.replace("\"x\":1", "\"x\":3");
    ends(&place, "altered", other, 1, "rejected at claim.steps[0]");
    let arity = PROOF.replace("[\"*\",1,1]", "[\"*\",1]");
    ends(&place, "arity", arity, 1, "rejected at terms[3]: ");
    let law = PROOF.replace("\"unit\",\"left\"", "\"un\",\"left\"");
    ends(&place, "law", law, 1, "rejected at claim.steps[0].by: ");
    let entry = ALGEBRA.replace("[1,1]]", "[1,2]]");
    ends(&place, "entry", entry, 1, "rejected at tables.*");
    let size = ALGEBRA.replace("\"\":2", "\"\":1000000000");
    ends(&place, "size", size, 1, "rejected at tables.*");
    let size = ALGEBRA
        .replace("\"\":2", "\"\":1000000000")
        .replace("{\"*\":[[0,0],[1,1]]}", "{}");
    ends(&place, "no-table", size, 1, "rejected at ");
    let escape = PROOF.replace("\"kind\"", "\"\\u001b[2J\":1,\"kind\"");
    ends(&place, "escape", escape, 1, "rejected at \\u{1b}[2J: ");
}

#[test]
fn deep_nesting() {
    let place = Place::new();
    let nested = "[".repeat(1_000_000) + &"]".repeat(1_000_000);
    ends(&place, "arrays", &nested, 1, "rejected at line 1");
    let inside = PROOF.replace("\"at\":[]", &format!("\"at\":{nested}"));
    ends(&place, "inside", inside, 1, "rejected at line 3");
    let objects = "{\"kind\":".repeat(1_000_000);
    ends(&place, "objects", objects, 1, "rejected at line 1");
}

/// A term a million levels deep is as good as any other.
#[test]
fn a_deep_term() {
    let place = Place::new();
    let mut terms = String::from("[\"e\"]");
    for below in 0..1_000_000 {
        terms += &format!(",[\"f\",{below}]");
    }
    let text = format!(
        "{{\"kind\":\"proof\",\"terms\":[{terms}],\"laws\":[],\
         \"claim\":{{\"left\":1000000,\"right\":1000000,\"steps\":[]}}}}"
    );
    ends(&place, "deep", text, 0, "accepted: proof of f(f(");
}

#[test]
fn large_files() {
    let place = Place::new();
    // Names of many megabytes, written so that they cannot be borrowed from the file.
    let name = format!("\"\\u0061{}\"", "a".repeat(100_000_000));
    let named = PROOF.replace("[\"e\"]", &format!("[{name}]"));
    ends(&place, "names", named, 0, "accepted");
    let zeros = "0,".repeat(20_000_000);
    let text = ALGEBRA.replace("[[0,0]", &format!("[[{zeros}0]"));
    ends(&place, "zeros", text, 2, "zeros: too costly to check\n");
    let zeros = "0,".repeat(13_000_000);
    let text = ALGEBRA.replace("[[0,0]", &format!("[[{zeros}0]"));
    ends(&place, "fewer", text, 1, "rejected at tables.*[1]");
    let big = std::fs::File::create(place.path("big")).unwrap();
    big.set_len(1 << 40).unwrap();
    let ran = verify(&place, &["big"]);
    assert_eq!(
        (ran.status, ran.out.as_str()),
        (2, "big: too costly to check\n")
    );
    if cfg!(target_os = "linux") {
        let ran = verify(&place, &["/dev/zero"]);
        assert_eq!(ran.status, 2, "{}{}", ran.out, ran.err);
    }
}

#[test]
fn the_worst_is_reported_and_the_rest_goes_on() {
    let place = Place::new();
    place.file("good", PROOF);
    place.file("bad", "{}");
    let zeros = "0,".repeat(20_000_000);
    place.file("costly", format!("[{zeros}0]"));
    let status = |files: &[&str]| {
        let ran = verify(&place, files);
        (ran.status, ran.out.lines().count())
    };
    assert_eq!(status(&["good", "good"]), (0, 2));
    assert_eq!(status(&["costly", "good"]), (2, 2));
    assert_eq!(status(&["good", "bad", "costly"]), (1, 3));
    assert_eq!(status(&["missing", "bad", "good"]), (3, 2));
    assert_eq!(status(&[".", "good"]), (3, 1));
    assert_eq!(status(&[]), (3, 0));
    let ran = place.run(&["verify", "--json", "missing", "good"]);
    let first: Value = serde_json::from_str(ran.out.lines().next().expect("a line")).expect("JSON");
    assert_eq!((ran.status, &first["file"]), (3, &Value::from("missing")));
    assert!(first["error"]["text"].is_string(), "{first}");
    let mut reading = place.command();
    let input = std::fs::File::open(place.path("good")).expect("the file");
    let ran = super::place::ran(reading.args(["verify", "-"]).stdin(input));
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    assert!(ran.out.starts_with("-: accepted: "), "{}", ran.out);
    let ran = place.run(&["verify", "good", "--theory", "missing.theory"]);
    assert_eq!(ran.status, 3);
    let ran = place.run(&["verify", "bad", "good", "--json"]);
    let lines: Vec<Value> = ran
        .out
        .lines()
        .map(|line| serde_json::from_str(line).expect("JSON"))
        .collect();
    assert_eq!(lines[0]["outcome"], "rejected");
    assert_eq!(lines[0]["place"], "kind");
    assert_eq!(lines[1]["outcome"], "accepted");
    assert_eq!(lines[1]["kind"], "proof");
    assert_eq!(lines[1]["claim"][0], "*(e, e)");
}

/// The laws, the sorts and the symbols of the theory count, whoever wrote the file.
#[test]
fn a_theory_says_what_its_laws_are() {
    let place = Place::new();
    let head = "infix * 40 left\nconstant e\nfunction f 1\nvariable x y\n";
    place.file("unit.theory", format!("{head}law unit: e * x = x\n"));
    place.file("other.theory", format!("{head}law unit: x * e = x\n"));
    place.file(
        "more.theory",
        format!("{head}law unit: e * x = x\nlaw again: x * x = x\n"),
    );
    place.file(
        "sorts.theory",
        "sort S\ninfix * 40 left : S S -> S\nconstant e : S\nvariable x : S\nlaw unit: e * x = x\n",
    );
    place.file("proof", PROOF);
    let judged = |file: &str, theory: &str| {
        let ran = place.run(&["verify", file, "--theory", theory]);
        (ran.status, ran.out)
    };
    assert_eq!(judged("proof", "unit.theory").0, 0);
    assert_eq!(judged("proof", "more.theory").0, 0);
    let (status, out) = judged("proof", "other.theory");
    assert_eq!(status, 1);
    assert!(out.contains("unit is not the law of that name"), "{out}");
    let (status, out) = judged("proof", "sorts.theory");
    assert!(status == 1 && out.contains("leaves the sorts out"), "{out}");
    // An algebra needs every law.
    place.file("algebra", ALGEBRA);
    let (status, out) = judged("algebra", "unit.theory");
    assert!(
        status == 1 && out.contains("leaves out the law unit"),
        "{out}"
    );
    // A definition of a symbol that the theory has would be one more law.
    let defined = PROOF
        .replace("[\"*\",1,1]]", "[\"*\",1,1],[\"f\",0],[\"f\",1]]")
        .replace(
            "\"claim\"",
            "\"definitions\":[{\"name\":\"d\",\"left\":4,\"right\":0}],\"claim\"",
        );
    place.file("defined", &defined);
    let (status, out) = judged("defined", "unit.theory");
    assert!(status == 1 && out.contains("it defines f"), "{out}");
    place.file("fresh", defined.replace("\"f\"", "\"g\""));
    assert_eq!(judged("fresh", "unit.theory").0, 0);
    assert_eq!(place.run(&["verify", "defined", "fresh"]).status, 0);
    // Two sorts of elements in a theory that has one would make more claims false.
    let sorted = ALGEBRA.replace(
        "\"laws\":[]",
        "\"laws\":[],\"types\":{\"*\":[\"\",\"\",\"\"]},\"variables\":{\"x\":\"\",\"y\":\"T\"}",
    );
    place.file("sorted", sorted);
    place.file("no.theory", "infix * 40 left\nvariable x y\n");
    assert_eq!(judged("algebra", "no.theory").0, 0);
    assert_eq!(judged("sorted", "no.theory").0, 1);
}

//! 0 as asked, 1 not, 2 undecided, 3 the input is at fault.

use super::program::{GROUP, OPEN, Place};

#[test]
fn a_pipe_gets_the_answers_of_the_shell() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    let input =
        "open group.theory\ncomplete\ni(x * y) = i(y) * i(x)\nx * y = y * x\ni(e) * (e * x)\n";
    let ran = place.run(&[], input);
    assert_eq!(ran.status, 0, "{}", ran.err);
    assert!(ran.out.contains("complete     10 rules"), "{}", ran.out);
    let equal = "equal        answer 1 · proof checked · ";
    assert!(ran.out.contains(equal), "{}", ran.out);
    let other = "not equal    answer 2 · rules complete, checked · ";
    assert!(ran.out.contains(other), "{}", ran.out);
    assert!(ran.out.contains("    left    x * y\n    right   y * x\n"));
    assert!(!ran.out.contains("group>"), "no prompts in a pipe");
}

#[test]
fn ask_ends_with_what_was_asked() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    place.file("open.theory", OPEN);
    let status = |arguments: &[&str]| place.run(arguments, "").status;
    assert_eq!(status(&["ask", "group.theory", "x * i(x) = e"]), 0);
    assert_eq!(status(&["ask", "group.theory", "x * y = y * x"]), 1);
    assert_eq!(status(&["ask", "group.theory", "x * y != y * x"]), 0);
    assert_eq!(status(&["ask", "group.theory", "x * i(x) != e"]), 1);
    let question = ["ask", "open.theory", "f(g(x)) = x", "--within", "100ms"];
    assert_eq!(status(&question), 2);
    assert_eq!(status(&["ask", "group.theory", "x"]), 3);
    assert_eq!(status(&["ask", "group.theory", ""]), 3);
    assert_eq!(status(&["ask", "group.theory", "x * q = e"]), 3);
    assert_eq!(status(&["ask", "missing.theory", "x = x"]), 3);
    assert_eq!(
        status(&["ask", "group.theory", "x = x", "--within", "3"]),
        3
    );
    assert_eq!(status(&["ask", "group.theory"]), 3);
    assert_eq!(status(&["--help"]), 0);
    assert_eq!(status(&["--version"]), 0);
}

#[test]
fn check_ends_with_the_worst() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    place.file("open.theory", OPEN);
    place.file("wrong.theory", format!("{GROUP}claim wrong: x = e\n"));
    place.file("broken.theory", "law x = y\n");
    let check = |files: &[&str]| {
        let arguments = [&["check", "--within", "200ms"], files].concat();
        place.run(&arguments, "")
    };
    let fine = check(&["group.theory"]);
    assert_eq!(fine.status, 0);
    assert!(
        fine.out.contains("2 claims: 2 as claimed\n"),
        "{}",
        fine.out
    );
    assert_eq!(check(&["open.theory"]).status, 2);
    let wrong = check(&["wrong.theory"]);
    assert_eq!(wrong.status, 1);
    assert!(wrong.out.contains("NOT as claimed"), "{}", wrong.out);
    assert_eq!(check(&["open.theory", "wrong.theory"]).status, 1);
    let broken = check(&["broken.theory", "group.theory"]);
    assert_eq!(broken.status, 3);
    assert!(
        broken.out.contains("2 as claimed"),
        "one bad file does not stop the rest"
    );
}

#[test]
fn normal_and_complete() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    place.file("open.theory", OPEN);
    let normal = place.run(&["normal", "group.theory", "e * (e * x)"], "");
    assert_eq!((normal.status, normal.out.as_str()), (0, "x\n"));
    let open = ["normal", "open.theory", "g(f(x)) * x", "--within", "100ms"];
    let open = place.run(&open, "");
    assert_eq!((open.status, open.out.as_str()), (0, "x\n"));
    assert!(open.err.contains("not complete"), "{}", open.err);
    assert_eq!(
        place.run(&["normal", "group.theory", "x = e"], "").status,
        3
    );
    let complete = place.run(&["complete", "group.theory"], "");
    assert_eq!(complete.status, 0);
    assert!(
        complete.out.contains("i(x * y) -> i(y) * i(x)\n"),
        "{}",
        complete.out
    );
    let endless = place.run(&["complete", "open.theory", "--within", "100ms"], "");
    assert_eq!(endless.status, 2, "{}", endless.out);
}

#[test]
fn a_failing_line_of_a_script_does_not_stop_the_rest() {
    let place = Place::new();
    place.file(
        "a.script",
        "constant a\n\n# a remark\nnonsense\na = (a\n)\nproof 7\na = a\n",
    );
    let ran = place.run(&["run", "a.script"], "");
    assert_eq!(ran.status, 3);
    assert!(ran.out.contains("equal        answer 2"), "{}", ran.out);
    assert!(ran.err.contains("a.script:4:1"), "{}", ran.err);
    assert!(ran.err.contains("a.script:7:7"), "{}", ran.err);
    assert!(ran.err.contains("2 lines were at fault."), "{}", ran.err);
    let ran = place.run(&["run", "-"], "constant a\na = a\n");
    assert_eq!(ran.status, 0);
    assert_eq!(place.run(&["run", "missing.script"], "").status, 3);
    assert_eq!(place.run(&["run", "."], "").status, 3);
}

#[test]
fn an_open_bracket_is_reported_where_the_next_line_begins() {
    let place = Place::new();
    let input = "infix * 40 left\nconstant a\nlaw one: a * (a = a\nconstant b\nb = b\n";
    let ran = place.run(&[], input);
    assert_eq!(ran.status, 3);
    assert!(ran.err.contains("input:4:1"), "{}", ran.err);
    assert!(ran.err.contains("1 line was at fault."), "{}", ran.err);
    assert!(ran.out.contains("equal        answer 1"), "{}", ran.out);
}

#[test]
fn a_theory_named_like_a_command_is_opened_by_its_path() {
    let place = Place::new();
    place.file("check", GROUP);
    let ran = place.run(&["./check"], "x * i(x) = e\n");
    assert_eq!(ran.status, 0, "{}", ran.err);
    assert!(ran.out.contains("3 laws"), "{}", ran.out);
}

#[test]
fn what_is_not_saved_is_said() {
    let place = Place::new();
    let ran = place.run(&[], "new gauges\nconstant a\n");
    assert_eq!(ran.status, 0);
    let said = "gauges has changes that were not saved";
    assert!(ran.err.contains(said), "{}", ran.err);
    let ran = place.run(&[], "new gauges\nconstant a\nsave gauges.theory\n");
    assert_eq!((ran.status, ran.err.as_str()), (0, ""));
    let kept = std::fs::read_to_string(place.path().join("gauges.theory")).unwrap();
    assert_eq!(kept, "theory gauges\nconstant a\n");
    let ran = place.run(&[], "new gauges\nconstant a\nnew other\nquit\n");
    assert!(ran.err.contains(said), "{}", ran.err);
}

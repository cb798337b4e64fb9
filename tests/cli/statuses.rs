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

#[test]
fn options_may_stand_before_the_word_for_the_task() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    for arguments in [
        &["--plain", "check", "group.theory"][..],
        &["--within", "5s", "--json", "check", "group.theory"],
        &["--json=full", "ask", "group.theory", "x * e = x"],
        &["--evidence", "out", "check", "--plain", "group.theory"],
        &["--json", "verify", "out/group-flip.json"],
    ] {
        let ran = place.run(arguments, "");
        assert_eq!(ran.status, 0, "{arguments:?}: {}{}", ran.out, ran.err);
    }
    for (arguments, said) in [
        (
            &["--json", "group.theory"][..],
            "the shell has no option --json",
        ),
        (
            &["run", "-", "--within", "5s"],
            "run has no option --within",
        ),
        (
            &["--evidence", "out", "normal", "group.theory", "x"],
            "normal has no option --evidence",
        ),
        (&["verify", "--json=full", "a"], "verify writes no evidence"),
        (&["group.theory", "check", "group.theory"], "stands before"),
    ] {
        let ran = place.run(arguments, "");
        assert_eq!(ran.status, 3, "{arguments:?}: {}{}", ran.out, ran.err);
        assert!(ran.err.contains(said), "{arguments:?}: {}", ran.err);
    }
}

#[test]
fn what_is_not_as_claimed_says_why() {
    let place = Place::new();
    let laws = "variable x y z\nconstant a b\nfunction f 1\nfunction g 2\n\
                law same: f(f(x)) = f(x)\nlaw first: g(x, y) = g(y, x)\n";
    place.file(
        "fleet.theory",
        format!("{laws}claim high: f(x) != f(f(x))\nclaim low: g(x, a) = x\n"),
    );
    let ran = place.run(&["check", "fleet.theory"], "");
    assert_eq!(ran.status, 1, "{}{}", ran.out, ran.err);
    for said in [
        "             proved in 1 step\n             equable ask fleet.theory 'f(x) = f(f(x))'\n",
        "equable ask fleet.theory 'g(x, a) = x'\n",
    ] {
        assert!(ran.out.contains(said), "{said}: {}", ran.out);
    }
    let ran = place.run(&["fleet.theory"], "check\n");
    assert!(ran.out.contains("proof 1 shows more"), "{}", ran.out);
    let ran = place.run(&["ask", "fleet.theory", "find z: f(z) = f(g(a, b))"], "");
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
}

#[test]
fn what_is_undecided_says_what_to_try() {
    let place = Place::new();
    place.file("open.theory", OPEN);
    let ask = |question| place.run(&["ask", "open.theory", question, "--within", "300ms"], "");
    for question in ["f(g(x)) = x", "find y: f(y) = x"] {
        let ran = ask(question);
        assert_eq!(ran.status, 2, "{}{}", ran.out, ran.err);
        let said = "next: the same with --within 60s";
        assert!(ran.out.contains(said), "{}", ran.out);
    }
    let lines = "find y: f(y) = x within 300ms\nevidence 1 a.json\n";
    let ran = place.run(&["open.theory"], lines);
    assert!(ran.err.contains("find x: s = t within 60s"), "{}", ran.err);
    let ran = place.run(&["complete", "open.theory", "--within", "300ms"], "");
    assert_eq!(ran.status, 2);
    assert!(
        ran.out.lines().count() < 12 && ran.out.contains("--all prints"),
        "{}",
        ran.out
    );
    let all = ["complete", "open.theory", "--within", "300ms", "--all"];
    let ran = place.run(&all, "");
    assert!(
        ran.out.contains("\nf(f(") || ran.out.contains("x * x -> x"),
        "{}",
        ran.out
    );
}

#[test]
fn an_algebra_that_was_printed_is_only_named_again() {
    let place = Place::new();
    let theory = "sort Layer Value\nconstant a b : Layer\nfunction get : Layer -> Value\n\
                  function lay : Layer Layer -> Layer\nvariable x y z : Layer\n\
                  law lay(x, lay(y, z)) = lay(lay(x, y), z)\nlaw lay(x, x) = x\n";
    place.file("sorts.theory", theory);
    let lines = "get(x) = get(y)\nget(x) = get(a)\nlay(a, b) = lay(b, a)\nproof 2\n";
    let ran = place.run(&["sorts.theory"], lines);
    assert_eq!(ran.status, 0, "{}{}", ran.out, ran.err);
    assert!(
        ran.out.contains("get: Layer across, gives Value\n"),
        "{}",
        ran.out
    );
    assert!(
        ran.out
            .contains("lay: Layer down, Layer across, gives Layer\n"),
        "{}",
        ran.out
    );
    let parts: Vec<&str> = ran.out.split("not equal").collect();
    assert_eq!(parts.len(), 5, "{}", ran.out);
    assert!(
        parts[2].contains("A1 is shown above") && !parts[2].contains('|'),
        "{}",
        parts[2]
    );
    assert!(
        parts[4].contains('|'),
        "proof shows the whole: {}",
        parts[4]
    );
}

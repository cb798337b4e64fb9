//! Bad input: a message with place and remedy, whatever the terminal.

use equable::language::{Diagnostic, NoLoader, decode, parse_question, read_theory};
use equable::theory::Theory;

const BASE: &str = "infix * 40 left\ninfix + 40 right\ninfix < 20 none\nprefix - 60\nconstant e\n\
                    function f 2\nvariable x y z\n";

fn faults(text: &str) -> Vec<Diagnostic> {
    read_theory("bad.theory", text, &NoLoader)
        .err()
        .unwrap_or_else(|| panic!("this should be at fault: {text}"))
}

/// The only message about a line below the base, which is line 8.
fn line(line: &str) -> Diagnostic {
    let mut faults = faults(&format!("{BASE}{line}\n"));
    assert_eq!(faults.len(), 1, "{faults:?}");
    faults.remove(0)
}

fn good(text: &str) -> Theory {
    read_theory("good.theory", text, &NoLoader).unwrap_or_else(|f| panic!("{}", f[0]))
}

#[test]
fn every_fault_has_its_place_and_a_remedy() {
    // line; column and length of the place; words of the message; words of a remedy.
    for (text, column, length, message, help) in [
        (
            "law x * w = x",
            9,
            1,
            "`w` was never declared",
            "variable w, or constant w",
        ),
        (
            "law g(x, y) = x",
            5,
            1,
            "`g` was never declared",
            "function g 2",
        ),
        (
            "law x ⊕ y = x",
            7,
            3,
            "`⊕` was never declared",
            "infix ⊕ 40 left",
        ),
        ("law ⊖x = x", 5, 3, "`⊖` was never declared", "prefix ⊖ 60"),
        (
            "law f(x) = x",
            5,
            4,
            "takes 2 arguments, and here is 1",
            "f(x, y)",
        ),
        ("law f(x, y, z) = x", 5, 10, "here are 3", "f(x, y)"),
        ("law f = x", 5, 1, "takes 2 arguments", "f(x, y)"),
        ("law e(x) = x", 6, 1, "is a constant", "infix operator"),
        (
            "law x * y + z = x",
            11,
            1,
            "equally strongly",
            "(a * b) + c",
        ),
        (
            "law x < y < z = x",
            11,
            1,
            "equally strongly",
            "(a < b) < c",
        ),
        ("law (x * y = x", 5, 1, "not closed before `=`", "close it"),
        ("law (x = y) = x", 5, 1, "not closed before `=`", "close it"),
        ("law x * y) = x", 10, 1, "never opened", "take it away"),
        ("law x = y)", 10, 1, "never opened", "take it away"),
        (
            "law () = x",
            6,
            1,
            "nothing in these brackets",
            "write a term",
        ),
        ("law (x, y) = x", 7, 1, "comma", "function"),
        ("law f(x y) = x", 9, 1, "operator is missing", "infix"),
        ("law x y = x", 7, 1, "operator is missing", "infix"),
        ("law x f y = x", 7, 1, "does not stand between", "f(x, y)"),
        ("law x (y) = x", 7, 1, "takes no arguments", "infix"),
        ("law (x)(y) = x", 8, 1, "operator is missing", "infix"),
        ("law * x = x", 5, 1, "stands between", "x * y"),
        ("law x = y *", 12, 0, "nothing behind it", "write the term"),
        ("law x =", 8, 0, "term is missing", "write a term"),
        ("law x", 6, 0, "second term", "law NAME: s = t"),
        ("law x = y = z", 11, 1, "two sides", "two equations"),
        ("law x != y", 7, 2, "laws are equations", "claim"),
        ("law x -> y", 7, 2, "arrow", "rule"),
        ("rule x = y", 8, 1, "arrow", "law"),
        (
            "law x: x = x",
            5,
            1,
            "is a variable and cannot name",
            "another name",
        ),
        ("law prove: x = x", 5, 5, "word of the shell", "\"prove\""),
        ("law 1st: x = x", 5, 3, "cannot name", "in quotes"),
        ("law x = new", 9, 3, "word of the shell", "\"new\""),
        (
            "law x = y when x = e",
            11,
            4,
            "conditional laws are not supported",
            "without",
        ),
        (
            "variable x",
            10,
            1,
            "declared already, as a variable",
            "another name",
        ),
        ("variable a b a", 14, 1, "declared already", "another name"),
        (
            "constant x",
            10,
            1,
            "declared already, as a variable",
            "another name",
        ),
        (
            "function e 2",
            10,
            1,
            "declared already, as a constant",
            "another name",
        ),
        (
            "infix * 30 left",
            7,
            1,
            "declared already, as an infix",
            "another name",
        ),
        (
            "postfix * 30",
            9,
            1,
            "declared already, as an infix",
            "another name",
        ),
        (
            "prefix - 30",
            8,
            1,
            "declared already, as a prefix",
            "another name",
        ),
        (
            "infix ^ 100 left",
            9,
            3,
            "strength, from 0 to 99",
            "infix * 40 left",
        ),
        ("infix ^ left", 9, 4, "strength", "infix * 40 left"),
        ("infix ^ 40", 11, 0, "side is missing", "left"),
        ("infix ^ 40 up", 12, 2, "side is missing", "left"),
        (
            "function g",
            11,
            0,
            "number of arguments is missing",
            "mask 2",
        ),
        ("function g : A -> B", 14, 1, "no sort `A`", "sort A"),
        ("constant", 9, 0, "name or a sign is missing", "constant e"),
        ("constant =", 10, 1, "name or a sign is missing", "quotes"),
        ("sort A", 6, 1, "sorts come before", "move this line"),
        ("theory 1x", 8, 2, "name of the theory", "theory NAME"),
        ("use", 4, 0, "name of a theory is missing", "use NAME"),
        ("define f(x) = x", 8, 1, "declared already", "another name"),
        (
            "define g(e) = x",
            10,
            1,
            "arguments of a definition are variables",
            "variable e",
        ),
        ("define g(x, x) = x", 13, 1, "twice", "different"),
        ("define g(x) = y", 15, 1, "not among the arguments", "add y"),
        (
            "define g(x) = g(x)",
            15,
            1,
            "its own definition",
            "function",
        ),
        ("order kbo q", 11, 1, "no symbol `q`", "declare it"),
        ("order kbo *, *", 14, 1, "twice", "out"),
        ("order rpo *", 7, 3, "kbo, lpo or auto", "order kbo"),
        (
            "order kbo *; weights *",
            23,
            0,
            "weight is expected",
            "weights i 0",
        ),
        (
            "order kbo *; variables 0",
            24,
            1,
            "at least 1",
            "variables 1",
        ),
        (
            "law * is asociative",
            10,
            10,
            "no property",
            "did you mean associative",
        ),
        ("law * is", 9, 0, "property is missing", "associative"),
        (
            "law * is unit f",
            15,
            1,
            "a constant is expected",
            "declare it",
        ),
        ("complete", 1, 8, "does not begin a declaration", "shell"),
        ("x * y = z", 1, 9, "not a declaration", "law NAME"),
        (
            "vraiable w",
            1,
            8,
            "no line of a theory",
            "did you mean variable",
        ),
        ("law \"open = x", 5, 9, "not closed", "another \""),
        ("law x\u{1} = x", 6, 1, "control character U+0001", "quotes"),
        (
            "law x [ y = x",
            7,
            1,
            "`[` was never declared",
            "infix [ 40 left",
        ),
    ] {
        let d = line(text);
        assert_eq!(d.line, 8, "{text}: {d}");
        assert_eq!((d.column, d.span.len()), (column, length), "{text}: {d}");
        assert!(d.message.contains(message), "{text}: {d}");
        assert!(
            d.help.iter().any(|h| h.contains(help)),
            "{text}: {:?}",
            d.help
        );
        for width in [20, 80] {
            let drawn = d.render(false, width);
            assert!(drawn.contains(&format!("bad.theory:8:{column}")), "{drawn}");
            // The place itself is shown however narrow the terminal is.
            assert!(drawn.contains('─') && drawn.contains(" 8 │"), "{drawn}");
        }
    }
}

#[test]
fn sorts_that_do_not_fit_say_so() {
    let base = "sort Key Layer\nconstant k : Key\nconstant l : Layer\nvariable x : Layer\n\
                function get : Layer Key -> Key\ninfix * 40 left : Layer Layer -> Layer\n";
    for (text, message, help) in [
        (
            "law get(k, k) = k",
            "takes a Layer as argument 1, not a Key",
            "Layer Key -> Key",
        ),
        (
            "law l * k = l",
            "takes a Layer on its right, not a Key",
            "Layer Layer -> Layer",
        ),
        (
            "law k * l = l",
            "takes a Layer on its left, not a Key",
            "Layer Layer -> Layer",
        ),
        ("law l = k", "of the same sort", "check"),
        (
            "law get(w, k) = k",
            "never declared",
            "variable w : Layer, or constant w : Layer",
        ),
        (
            "law k = w",
            "never declared",
            "variable w : Key, or constant w : Key",
        ),
        ("law w * l = l", "never declared", "variable w : Layer"),
        ("constant m", "several sorts", "constant e : S"),
        ("variable v : Kye", "no sort `Kye`", "did you mean `Key`"),
        ("function g 2", "several sorts", "S S -> S"),
        (
            "infix + 40 left : Key -> Key",
            "takes 2 arguments",
            "S S -> S",
        ),
        ("sort Key", "declared already", "another name"),
    ] {
        let d = &faults(&format!("{base}{text}"))[0];
        assert_eq!(d.line, 7, "{text}");
        assert!(d.message.contains(message), "{text}: {d}");
        assert!(
            d.help.iter().any(|h| h.contains(help)),
            "{text}: {:?}",
            d.help
        );
    }
}

/// The sort is that of the place, whichever operator takes the name.
#[test]
fn a_name_that_was_never_declared_gets_the_sort_of_its_place() {
    let base = "sort Item List\nconstant nil : List\nconstant a : Item\n\
                infix :: 50 right : Item List -> List\ninfix ++ 40 left : List List -> List\n\
                prefix - 60 : List -> List\npostfix ! 80 : Item -> List\n\
                function reverse : List -> List\n";
    for (text, sort) in [
        ("law reverse(a :: w :: nil) = nil", "Item"),
        ("law reverse(a :: a :: w) = nil", "List"),
        ("law reverse(w :: nil) = nil", "Item"),
        ("law reverse(w) = nil", "List"),
        ("law (w :: nil) = nil", "Item"),
        ("law a :: w ++ nil = nil", "List"),
        ("law nil ++ w :: nil = nil", "Item"),
        ("law nil ++ w ++ nil = nil", "List"),
        ("law - w ++ nil = nil", "List"),
        ("law a :: w! = nil", "Item"),
    ] {
        let d = &faults(&format!("{base}{text}"))[0];
        assert!(d.message.contains("`w` was never declared"), "{text}: {d}");
        let wanted = format!("variable w : {sort}, or constant w : {sort}");
        assert!(
            d.help.iter().any(|h| h.contains(&wanted)),
            "{text}: {:?}",
            d.help
        );
    }
    let d = &faults(&format!("{base}law nil :: nil = nil"))[0];
    assert!(
        d.message.contains("takes an Item on its left, not a List"),
        "{d}"
    );
}

#[test]
fn duplicate_names() {
    for (text, message) in [
        ("law a: x = y\nlaw a: y = x", "there is a law `a` already"),
        ("law a: x = y\nclaim a: y = x", "there is a law `a` already"),
        (
            "claim a: x = y\nrule a: x -> y",
            "there is a claim `a` already",
        ),
        ("law w: x = y\nvariable w", "is the name of a law or claim"),
        ("theory a\ntheory b", "has a name already"),
        ("order auto\norder auto", "set already"),
    ] {
        let d = &faults(&format!("{BASE}{text}"))[0];
        assert_eq!(d.line, 9, "{text}");
        assert!(d.message.contains(message), "{text}: {d}");
    }
}

#[test]
fn several_faults_are_reported_at_once_but_not_too_many() {
    let text = format!("{BASE}law w = x\nlaw x = x\nlaw w = y\nlaw f(x) = y\n");
    let lines: Vec<usize> = faults(&text).iter().map(|d| d.line).collect();
    assert_eq!(lines, [8, 11], "an undeclared name is reported once");
    let many = "law x y = z\n".repeat(1000);
    let many = faults(&format!("{BASE}{many}"));
    assert_eq!(many.len(), 20);
    assert!(many[19].notes[0].contains("reading stopped here"));
}

#[test]
fn files_that_are_no_text() {
    let at = |bytes: &[u8]| {
        let d = decode("f", bytes.to_vec()).unwrap_err();
        let drawn = d.render(false, 80);
        assert!(
            drawn.contains(&format!("f:{}:{}", d.line, d.column)),
            "{drawn}"
        );
        (d.line, d.column, d.message.clone())
    };
    assert_eq!(
        at(b"abc\n\nde\0f\n"),
        (3, 3, "there is a NUL byte in the file".into())
    );
    assert_eq!(at(b"\xffabc"), (1, 1, "the file is not UTF-8 text".into()));
    let (line, column, message) = at("é\néa\u{fe}".as_bytes().split_last().unwrap().1);
    assert_eq!((line, column), (2, 3), "{message}");
    assert_eq!(
        decode("f", b"\xef\xbb\xbftheory a".to_vec()).unwrap(),
        "\u{feff}theory a"
    );
    for empty in ["", "\n\n", "\u{feff} "] {
        let d = &faults(empty)[0];
        assert_eq!(d.message, "the file is empty");
        assert!(d.render(false, 20).contains("bad.theory:1:1"));
    }
    good("# only a remark\n");
}

#[test]
fn a_derived_line_that_was_changed_does_not_keep_the_rest_from_opening() {
    let text = format!(
        "{BASE}law a: -(-x) = x\nderived 1: -(-x) -> x : law a\nderived 2: -w(x) -> x : law a\n\
         derived 1: x = x : rule 1\nderived 4: x -> x; law a\nderived 5: x = y : overlap 1 at 0\n"
    );
    let theory = good(&text);
    assert_eq!(theory.derived.len(), 1);
    let lines: Vec<(usize, usize)> = theory
        .refusals()
        .iter()
        .map(|d| (d.line, d.column))
        .collect();
    assert_eq!(lines, [(10, 14), (11, 9), (12, 18), (13, 30)]);
    assert!(theory.refusals().iter().all(|d| !d.help.is_empty()));
    assert_eq!(theory.document.text(), text);
    // What is found out later has its place as well.
    let d = theory.diagnostic(
        theory.derived[0].line,
        "the record does not give this rule",
        "drop it",
    );
    assert_eq!((d.line, d.column), (9, 1));
    let mut theory = theory;
    let kept = theory.derived.clone();
    equable::language::set_derived(&mut theory, kept);
    assert_eq!(theory.document.text().matches("derived").count(), 1);
}

#[test]
fn a_message_about_control_characters_shows_none() {
    let mut theory = good(BASE);
    for text in [
        "x \u{1b}[31m y",
        "x \0 y",
        "x \u{202e} y",
        "\t\r\u{b}w",
        "\u{7f}",
    ] {
        let d = parse_question(&mut theory, "prompt\u{1b}", text, None).unwrap_err();
        for width in [1, 20, 80, 10_000] {
            let drawn = d.render(false, width);
            assert!(
                drawn.chars().all(|c| c == '\n' || !c.is_control()),
                "{drawn:?}"
            );
            assert!(!drawn.contains('\u{202e}'));
        }
        assert!(!d.brief().contains('\u{1b}'));
    }
}

#[test]
fn a_narrow_terminal_gets_narrow_messages() {
    let long = format!("{BASE}law {} = w\n", vec!["x"; 200].join(" * "));
    let d = &faults(&long)[0];
    let drawn = d.render(false, 20);
    for line in drawn.lines().filter(|line| !line.contains("bad.theory")) {
        assert!(line.chars().count() <= 20, "{line:?}");
    }
    assert!(drawn.contains("* x = w"), "{drawn}");
}

//! What is read from clause syntax, as the text of the theory that it becomes.

use super::read::open;
use crate::session::{Library, OpenFault, Session};
use std::path::{Path, PathBuf};
use tempfile::TempDir;

struct Place(TempDir);

impl Place {
    fn new() -> Place {
        Place(tempfile::tempdir().expect("a temporary folder"))
    }

    fn file(&self, name: &str, text: &str) -> PathBuf {
        let path = self.0.path().join(name);
        std::fs::create_dir_all(path.parent().expect("a folder")).expect("it can be made");
        std::fs::write(&path, text).expect("it can be written");
        path
    }
}

fn read(path: &Path) -> Session {
    match open(path, Library::default()) {
        Ok(opened) => opened.session,
        Err(OpenFault::Text(faults)) => panic!("{}", faults[0].render(false, 100)),
        Err(fault) => panic!("{fault:?}"),
    }
}

/// The text of the theory that a file becomes; reading it again gives the same theory.
fn text(clauses: &str) -> String {
    let place = Place::new();
    let session = read(&place.file("gauges.p", clauses));
    assert!(!session.is_changed() && session.path().is_none());
    let text = session.theory().document.text();
    let again = Session::read("again", &text, Library::default());
    let again = again.unwrap_or_else(|faults| panic!("{}", faults[0].render(false, 100)));
    assert_eq!(again.session.theory().laws, session.theory().laws);
    assert_eq!(again.session.theory().claims, session.theory().claims);
    text
}

/// The first line of the message about a file, with its place, and the remedies.
fn fault(clauses: &str) -> String {
    let place = Place::new();
    let path = place.file("gauges.p", clauses);
    match open(&path, Library::default()) {
        Err(OpenFault::Text(faults)) => {
            let fault = &faults[0];
            assert!(!fault.help.is_empty(), "{clauses}");
            format!("{}:{}: {}", fault.line, fault.column, fault.message)
        }
        Err(other) => panic!("{clauses}: {other:?}"),
        Ok(opened) => panic!("{clauses}: {}", opened.session.theory().document.text()),
    }
}

#[test]
fn clauses_become_laws_and_a_claim() {
    let made = text(
        "% readings of a tide gauge\n\
         cnf(bracket, axiom, /* sums */ merge(merge(X,Y),Z) = merge(X,merge(Y,Z)) ).\n\
         cnf(start,hypothesis,( merge(start,X) = X )).\n\
         cnf(same,negated_conjecture, merge(a,start) != a, file('x.p', [same]), [a(b)]).\n",
    );
    assert_eq!(
        made,
        "theory gauges\n\
         constant start a\n\
         function merge 2\n\
         variable X Y Z\n\
         law bracket: merge(merge(X, Y), Z) = merge(X, merge(Y, Z))\n\
         law start: merge(start, X) = X\n\
         claim same: merge(a, start) = a\n"
    );
}

#[test]
fn quantified_formulas_too() {
    let made = text(
        "fof(low, axiom, ![X,Y]: (![Z]: f(X,Z) = f(Y,Z))).\n\
         fof(odd, axiom, ~ ?[X]: ~ (g(X) = c)).\n\
         fof(goal, conjecture, ![X]: f(X,c) = c).\n\
         fof(known, negated_conjecture, g(c) = c).\n",
    );
    let lines: Vec<&str> = made.lines().skip(5).collect();
    assert_eq!(
        lines,
        [
            "law low: f(X, Z) = f(Y, Z)",
            "law odd: g(X) = c",
            "law known: g(c) = c",
            "claim goal: f(X, c) = c",
        ]
    );
}

#[test]
fn a_negated_conjecture_is_turned_round() {
    let made = text("fof(other, negated_conjecture, ~ ![X]: (g(X) = X)).\n");
    assert!(made.ends_with("claim other: g(X) = X\n"), "{made}");
}

#[test]
fn a_goal_with_unknowns_asks_for_values() {
    let made = text("cnf(goal, negated_conjecture, f(X,c,Y) != f(Y,X,c)).\n");
    assert!(
        made.ends_with("claim goal: find X Y: f(X, c, Y) = f(Y, X, c)\n"),
        "{made}"
    );
    let made = text("fof(goal, conjecture, ![X,Z]: ?[Y]: f(X,c,Y) = f(Y,X,c)).\n");
    assert!(
        made.ends_with("claim goal: find Y: f(X, c, Y) = f(Y, X, c)\n"),
        "{made}"
    );
    let made = text("fof(goal, axiom, ~ ?[X]: f(X) = c).\n");
    assert!(made.ends_with("claim goal: find X: f(X) = c\n"), "{made}");
    assert_eq!(
        fault("fof(goal, conjecture, ?[Y]: ![X]: f(X,Y) = X).\n"),
        "1:23: this asks for a value that suits all values of another variable"
    );
}

#[test]
fn an_inequation_is_a_goal_whatever_its_role() {
    let made = text("cnf(apart, axiom, c != d).\ncnf(a, axiom, f(c) = d).\n");
    assert!(
        made.ends_with("law a: f(c) = d\nclaim apart: c = d\n"),
        "{made}"
    );
}

#[test]
fn names_stay_readable_and_become_legal() {
    let made = text(
        "cnf(same, axiom, 'it\\'s'(X) = 'a b').\n\
         cnf(same, axiom, 'a \"b\"' = order).\n\
         cnf('X', axiom, f(X) = 'X').\n\
         cnf(7, axiom, f(X,X) = 'f').\n\
         cnf(order, axiom, '#'('?', '') = '?').\n"
            .replace("''", "'!'")
            .as_str(),
    );
    let lines: Vec<&str> = made.lines().collect();
    assert_eq!(
        lines,
        [
            "theory gauges",
            "constant \"a b\" \"a _b_\" \"order\" X_2 f_3 \"?\" \"!\"",
            "function \"it's\" 1",
            "function f 1",
            "function f_2 2",
            "function \"#\" 2",
            "variable X",
            "law same: \"it's\"(X) = \"a b\"",
            "law same_2: \"a _b_\" = \"order\"",
            "law X_2: f(X) = X_2",
            "law \"7\": f_2(X, X) = f_3",
            "law \"order\": \"#\"(\"?\", \"!\") = \"?\"",
        ]
    );
}

#[test]
fn signs_between_two_arguments_stand_between_them() {
    let made = text(
        "cnf(swap, axiom, '+'(X,'*'(Y,'-'(Z))) = '*'('+'(X,Y),f('+'(X,X)))).\n\
         cnf(arrow, axiom, '->'(X,Y) = '-'(X,Y)).\n",
    );
    assert!(made.contains("infix + 40 none\n"), "{made}");
    assert!(made.contains("law swap: X + (Y * \"-\"(Z)) = (X + Y) * f(X + X)\n"));
    assert!(made.contains("law arrow: \"->\"(X, Y) = X -_2 Y\n") || made.contains("\"-_2\"(X, Y)"));
}

#[test]
fn included_files_are_found_above_and_below() {
    let place = Place::new();
    place.file(
        "lib/Axioms/a.ax",
        "cnf(a, axiom, f(X) = X).\ncnf(b, axiom, g(X) = X).\n",
    );
    place.file("lib/Axioms/both.ax", "include('Axioms/a.ax').\n");
    let all = place.file(
        "lib/Problems/deep/all.p",
        "include('Axioms/both.ax').\ninclude('Axioms/a.ax').\ncnf(c, axiom, c = f(c)).\n",
    );
    let names = |session: &Session| -> Vec<String> {
        let laws = session.theory().laws.iter();
        laws.map(|law| law.name.clone()).collect()
    };
    assert_eq!(names(&read(&all)), ["a", "b", "c"]);
    let part = place.file("part.p", "include('Axioms/a.ax', [b]).\n");
    let library = Library {
        clauses: Some(place.0.path().join("lib")),
        ..Library::default()
    };
    let opened = open(&part, library.clone()).unwrap_or_else(|_| panic!("it is there"));
    assert_eq!(names(&opened.session), ["b"]);
    let says = |path: &Path, library: &Library| match open(path, library.clone()) {
        Err(OpenFault::Text(faults)) => faults[0].brief(),
        _ => panic!("{path:?} is at fault"),
    };
    assert!(says(&part, &Library::default()).contains("part.p:1:9: there is no file Axioms/a.ax"));
    let missing = place.file("missing.p", "include('Axioms/a.ax', [b, d]).\n");
    assert!(says(&missing, &library).contains("missing.p:1:28: Axioms/a.ax has no statement d"));
    let bad = place.file("bad.p", "include('lib/Axioms/bad.ax').");
    place.file("lib/Axioms/bad.ax", "\ncnf(a, axiom, p(X)).");
    let said = says(&bad, &Library::default());
    assert!(
        said.contains("bad.ax:2:15: this is not an equation"),
        "{said}"
    );
    let circle = place.file("circle.p", "include('circle.p').");
    assert!(says(&circle, &library).contains("there is no file"));
    assert!(says(&circle, &Library::default()).contains("without end"));
}

#[test]
fn whatever_is_no_unit_equation_is_refused_with_its_place() {
    for (clauses, expected) in [
        (
            "cnf(a, axiom, f(X) = X | g(X) = X).",
            "1:24: this is not a unit equation",
        ),
        (
            "fof(a, axiom, (c = d) & (d = e)).",
            "1:23: this is not a unit equation",
        ),
        (
            "fof(a, axiom, (c = d => d = e)).",
            "1:22: this is not a unit equation",
        ),
        ("cnf(a, axiom, p(X)).", "1:15: this is not an equation"),
        ("cnf(a, axiom, ~ p).", "1:17: this is not an equation"),
        (
            "cnf(a, axiom, $true).",
            "1:15: words with $ have a meaning that equations cannot give",
        ),
        (
            "cnf(a, axiom, f($i) = c).",
            "1:17: words with $ have a meaning that equations cannot give",
        ),
        (
            "cnf(a, axiom, f(12) = c).",
            "1:17: numbers are not supported",
        ),
        (
            "cnf(a, axiom, \"c\" = c).",
            "1:15: objects in double quotes are not supported",
        ),
        (
            "fof(a, axiom, ?[X]: f(X) = c).",
            "1:15: only universally quantified equations can be laws",
        ),
        (
            "fof(a, axiom, f(X) = c).",
            "1:15: X is bound by no quantifier",
        ),
        (
            "cnf(a, axiom, ![X]: f(X) = c).",
            "1:15: a clause has no quantifiers",
        ),
        (
            "fof(a, axiom, ![X: int]: f(X) = c).",
            "1:18: variables with a type are not supported",
        ),
        (
            "fof(a, conjecture, c != d).",
            "1:20: no equations imply that two things differ",
        ),
        (
            "cnf(a, negated_conjecture, c != d).\ncnf(b, negated_conjecture, c != e).",
            "2:8: there is an inequation beside another goal",
        ),
        (
            "fof(a, conjecture, c = d).\nfof(b, axiom, c != e).",
            "2:8: there is an inequation beside another goal",
        ),
        ("cnf(a, type, c = d).", "1:8: this role is not supported"),
        (
            "tff(a, axiom, c = d).",
            "1:1: tff statements are not supported",
        ),
        ("law a: c = d", "1:1: no statement begins like this"),
        (
            "cnf(a, axiom, f(X = X).",
            "1:19: a comma or ) is expected here",
        ),
        (
            "cnf(a, axiom, (f(X) = X.",
            "1:24: a comma or ) is expected here",
        ),
        ("cnf(a, axiom, c = d)", "1:21: . is expected here"),
        ("cnf(a, axiom, c = d, [", "1:20: the statement does not end"),
        (
            "cnf(a, axiom, c = d d).",
            "1:21: a comma or ) is expected here",
        ),
        (
            "cnf(a, axiom, c = d = e).",
            "1:21: an equation has two sides",
        ),
        (
            "cnf(a, axiom, c = X(d)).",
            "1:19: X is a variable and takes no arguments",
        ),
        (
            "cnf(a, axiom, 'c = d).",
            "1:15: a quotation mark is not closed",
        ),
        ("/* cnf", "1:1: a remark is not closed"),
        (
            "cnf(a, axiom, c = ü).",
            "1:19: `ü` (U+00FC) has no meaning in clause syntax",
        ),
    ] {
        assert_eq!(fault(clauses), expected, "{clauses}");
    }
}

#[test]
fn a_file_is_known_by_its_ending_or_its_beginning() {
    let place = Place::new();
    let kind = |name: &str, text: &str| super::is_clauses(&place.file(name, text));
    assert!(kind("a.p", "") && kind("a.ax", "law"));
    assert!(kind("a.txt", "% cnf\n/* x */ fof(a, axiom, c = c)."));
    assert!(!kind("b.txt", "law a: c = c") && !kind("c.txt", "cnf = fof"));
    assert!(!super::is_clauses(&place.0.path().join("none.p")));
}

#[test]
fn a_term_of_a_million_levels_is_read() {
    let deep = 1_000_000;
    let term = format!("{}c{}", "f(".repeat(deep), ")".repeat(deep));
    let place = Place::new();
    let path = place.file("deep.p", &format!("cnf(deep, axiom, {term} = c)."));
    let session = read(&path);
    let theory = session.theory();
    assert_eq!(theory.bank.size(theory.laws[0].left), deep as u32 + 1);
}

#[test]
fn names_with_different_numbers_of_arguments_are_told() {
    let place = Place::new();
    let notes = |clauses: &str| {
        let opened = open(&place.file("gauges.p", clauses), Library::default());
        opened.unwrap_or_else(|_| panic!("{clauses}")).notes
    };
    assert_eq!(
        notes("cnf(a, axiom, f(X) = f(X,g)).\ncnf(b, axiom, g = f(g)).\n"),
        ["f is used with 1 and 2 arguments, as two symbols f and f_2"]
    );
    assert_eq!(
        notes("cnf(a, axiom, h(h,h(X),f(f)) = h(h)).\n"),
        [
            "h is used with 3, 0 and 1 arguments, as 3 symbols h, h_2 and h_3",
            "f is used with 1 and 0 arguments, as two symbols f and f_2"
        ]
    );
    assert!(notes("cnf(a, axiom, f(X,g) = f(g,X)).\n").is_empty());
}

#[test]
fn two_goals_are_both_shown() {
    let place = Place::new();
    let faults = |path: &Path| match open(path, Library::default()) {
        Err(OpenFault::Text(faults)) => faults,
        _ => panic!("it should be refused"),
    };
    let goals = "cnf(a, axiom, b != c).\ncnf(d, negated_conjecture, c != b).\n";
    let one = &faults(&place.file("one.p", goals))[0];
    assert_eq!((one.line, one.column), (2, 8));
    assert_eq!(one.notes, ["the first goal is here (line 1, column 8)"]);
    place.file("first.ax", "\ncnf(a, axiom, b != c).\n");
    let goals = "include('first.ax').\ncnf(d, negated_conjecture, c != b).\n";
    let two = &faults(&place.file("two.p", goals))[0];
    assert_eq!(two.line, 2);
    assert!(two.help[0].ends_with("first.ax, line 2"), "{:?}", two.help);
}

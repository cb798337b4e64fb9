//! Complete rule sets that were published, as sets of rules modulo renaming.

use crate::common::tree::{Tree, renamed};
use crate::common::{complete, session};
use equable::session::Session;
use std::collections::BTreeSet;

/// Rules given as text, with the variables `x`, `y`, `z` of the session.
fn read(session: &mut Session, rules: &[&str]) -> BTreeSet<String> {
    let one = |rule: &&str| {
        let (left, right) = rule.split_once(" -> ").expect("an oriented rule");
        let (left, right) = renamed(&Tree::read(session, left), &Tree::read(session, right));
        format!("{left} -> {right}")
    };
    rules.iter().map(one).collect()
}

/// The rules of a session. Those that are not oriented have another sign.
fn found(session: &mut Session) -> BTreeSet<String> {
    // Rules are printed with the theory's own variables first, so that they can be read again.
    let rules = session.rules();
    let one = |rule: equable::session::RuleView| {
        let sign = if rule.oriented { " -> " } else { " = " };
        let (left, right) = rule.text.split_once(sign).expect("two sides");
        let (left, right) = renamed(&Tree::read(session, left), &Tree::read(session, right));
        format!("{left}{sign}{right}")
    };
    rules.into_iter().map(one).collect()
}

fn completes_to(theory: &str, rules: &[&str]) {
    let mut session = session(theory);
    // The names that the printer takes for the variables of rules.
    for name in ["x1", "x2", "x3", "x4", "x5", "x6"] {
        session
            .declare(&format!("variable {name}"))
            .expect("a free name");
    }
    let completion = complete(&mut session);
    let expected = read(&mut session, rules);
    assert_eq!(found(&mut session), expected);
    assert_eq!(completion.rules, rules.len());
    assert!(!completion.ordered);
}

const GROUP: &str = "\
infix * 40 left
function i 1
constant e
variable x y z
law left-unit: e * x = x
law left-inverse: i(x) * x = e
law assoc: (x * y) * z = x * (y * z)
";

/// Knuth & Bendix 1970, Simple Word Problems in Universal Algebras, example 1 (from memory).
const TEN: &[&str] = &[
    "e * x -> x",
    "i(x) * x -> e",
    "(x * y) * z -> x * (y * z)",
    "i(x) * (x * y) -> y",
    "x * e -> x",
    "i(e) -> e",
    "i(i(x)) -> x",
    "x * i(x) -> e",
    "x * (i(x) * y) -> y",
    "i(x * y) -> i(y) * i(x)",
];

#[test]
fn groups_by_an_order_that_is_found() {
    completes_to(GROUP, TEN);
}

#[test]
fn groups_by_the_order_of_the_paper() {
    // A weightless inverse, the greatest symbol.
    let order = "order kbo i, *, e; weights i 0, * 1; variables 1\n";
    completes_to(&format!("{GROUP}{order}"), TEN);
}

#[test]
fn groups_by_a_path_order() {
    completes_to(&format!("{GROUP}order lpo i, *, e\n"), TEN);
}

#[test]
fn central_groupoids() {
    // Knuth & Bendix 1970, example 6 (from memory).
    completes_to(
        "infix * 40 none\nvariable x y z\nlaw (x * y) * (y * z) = y\n",
        &[
            "(x * y) * (y * z) -> y",
            "x * ((x * y) * z) -> x * y",
            "(x * (y * z)) * z -> y * z",
        ],
    );
}

#[test]
fn loops() {
    // Evans 1951; Knuth & Bendix 1970 (from memory).
    let laws = [
        "x \\ (x * y) = y",
        "x * (x \\ y) = y",
        "(y / x) * x = y",
        "(y * x) / x = y",
        "e * x = x",
        "x * e = x",
    ];
    let new = [
        "e \\ x -> x",
        "x / e -> x",
        "x \\ x -> e",
        "x / x -> e",
        "x / (y \\ x) -> y",
        "(x / y) \\ x -> y",
    ];
    let mut theory = "infix * 40 none\ninfix / 40 none\ninfix \\ 40 none\nconstant e\n\
                      variable x y z\n"
        .to_owned();
    for law in laws {
        theory += &format!("law {law}\n");
    }
    let directed = laws.map(|law| law.replace(" = ", " -> "));
    let rules = directed.iter().map(String::as_str).chain(new);
    completes_to(&theory, &rules.collect::<Vec<_>>());
}

#[test]
fn monoids() {
    // Elementary: the laws themselves.
    completes_to(
        "infix * 40 left\nconstant e\nvariable x y z\nlaw * is associative unit e\n",
        &["e * x -> x", "x * e -> x", "(x * y) * z -> x * (y * z)"],
    );
}

#[test]
fn semilattices_are_complete_on_ground_terms() {
    // Martin & Nipkow 1990 (from memory): with commutativity and associativity as ordered
    // equations; no orientation of commutativity exists.
    let mut session =
        session("infix * 40 left\nvariable x y z\nlaw * is associative commutative idempotent\n");
    let completion = complete(&mut session);
    assert!(completion.ordered);
}

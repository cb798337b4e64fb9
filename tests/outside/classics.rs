//! Classic results of equational reasoning, each with its source. The search for a proof has much
//! more time than it needs, so that a slow machine changes nothing.

use crate::common::{ask, session};
use equable::session::Verdict;
use std::time::Duration;

const WITHIN: Duration = Duration::from_secs(240);

/// All these equations follow from the theory.
fn follow(theory: &str, equations: &[&str]) {
    let mut session = session(theory);
    for equation in equations {
        let (left, right) = equation.split_once(" = ").expect("an equation");
        let answer = ask(&mut session, left, right, WITHIN);
        assert_eq!(answer.verdict, Verdict::Equal, "{equation}");
    }
}

/// Higman & Neumann 1952, "Groups as groupoids with one law": a group by division alone. The law
/// is from memory.
#[test]
fn the_single_law_of_higman_and_neumann_gives_division_in_a_group() {
    let theory = "infix / 50 left\nvariable x y z\n\
        law x / ((((x / x) / y) / z) / (((x / x) / x) / z)) = y\n";
    let equations = [
        "x / x = y / y",
        "x / (x / x) = x",
        "(x / z) / (y / z) = x / y",
        "(x / x) / (x / y) = y / x",
    ];
    follow(theory, &equations);
}

/// McCune, Veroff, Fitelson, Harris, Feist & Wos 2002, "Short single axioms for Boolean algebra":
/// the law Sh₁, from memory.
#[test]
fn the_short_sheffer_law_makes_the_stroke_commutative() {
    let theory = "infix | 50 left\nvariable x y z\n\
        law ((x | y) | z) | (x | ((x | z) | x)) = z\n";
    follow(theory, &["x | y = y | x"]);
}

/// Huntington 1933, "New sets of independent postulates for the algebra of logic".
#[test]
fn the_axiom_of_huntington_gives_boolean_algebra() {
    let theory = "infix + 40 left\nfunction n 1\nvariable x y z\n\
        law + is associative commutative\n\
        law n(n(x) + y) + n(n(x) + n(y)) = x\n";
    let equations = [
        "n(n(x)) = x",
        "x + n(x) = y + n(y)",
        "x + x = x",
        "x + n(n(x) + n(y)) = x",
    ];
    follow(theory, &equations);
}

const RING: &str = "infix + 40 left\ninfix * 50 left\nfunction m 1\nconstant zero\nconstant one\n\
    variable x y z\n\
    law (x + y) + z = x + (y + z)\nlaw x + zero = x\nlaw x + m(x) = zero\n\
    law (x * y) * z = x * (y * z)\n\
    law x * (y + z) = x * y + x * z\nlaw (x + y) * z = x * z + y * z\n";

/// Hankel 1867; Burris & Sankappanavar 1981, exercises on rings: in a ring with unit addition
/// commutes by the other axioms.
#[test]
fn addition_commutes_in_a_ring_with_unit() {
    let theory = format!("{RING}law x * one = x\nlaw one * x = x\n");
    follow(&theory, &["x + y = y + x"]);
}

/// Jacobson 1945, "Structure theory for algebraic algebras of bounded degree", for exponent 3.
#[test]
fn a_ring_in_which_cubes_are_their_roots_is_commutative() {
    let theory = format!("{RING}law x + y = y + x\nlaw x * x * x = x\n");
    follow(&theory, &["x * y = y * x"]);
}

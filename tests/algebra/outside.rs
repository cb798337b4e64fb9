//! The smallest algebras of some kinds, against values from outside the project.

use super::{Search, check};
use equable::algebra::{Limits, Outcome, Problem};
use equable::language::{NoLoader, read_theory};
use std::sync::Arc;

const GROUP: &str = "infix * 40 left\nfunction i 1\nconstant e\nvariable x y z\n\
    law lu: e * x = x\nlaw li: i(x) * x = e\nlaw as: (x * y) * z = x * (y * z)\n";

const LOOP: &str = "infix * 40 left\ninfix / 40 left\ninfix \\ 40 left\nconstant e\nvariable x y z\n\
    law a: x \\ (x * y) = y\nlaw b: x * (x \\ y) = y\nlaw c: (y / x) * x = y\n\
    law d: (y * x) / x = y\nlaw l: e * x = x\nlaw r: x * e = x\n";

const LATTICE: &str = "infix \\/ 30 left\ninfix /\\ 40 left\nvariable x y z\n\
    law ja: (x \\/ y) \\/ z = x \\/ (y \\/ z)\nlaw jc: x \\/ y = y \\/ x\n\
    law ma: (x /\\ y) /\\ z = x /\\ (y /\\ z)\nlaw mc: x /\\ y = y /\\ x\n\
    law j: x \\/ (x /\\ y) = x\nlaw m: x /\\ (x \\/ y) = x\n";

const RING: &str = "infix + 30 left\ninfix * 40 left\nprefix - 60\nconstant 0\nvariable x y z\n\
    law a: (x + y) + z = x + (y + z)\nlaw c: x + y = y + x\nlaw u: x + 0 = x\n\
    law i: x + (-x) = 0\nlaw m: (x * y) * z = x * (y * z)\n\
    law l: x * (y + z) = x * y + x * z\nlaw r: (x + y) * z = x * z + y * z\n";

/// The sizes of the smallest counterexample to the claim, found by search alone.
fn smallest(declarations: &str, claim: &str) -> Vec<u32> {
    let text = format!("{declarations}claim wrong: {claim}\n");
    let theory = read_theory("outside", &text, &NoLoader);
    let theory = theory.unwrap_or_else(|faults| panic!("{claim}: {}", faults[0].message));
    let sides = (theory.claims[0].left, theory.claims[0].right);
    let laws = theory.laws.iter().map(|law| (law.left, law.right));
    let problem = Problem::new(&theory.bank, theory.signature.sorts().len(), laws, sides);
    let variables = problem.claim.variables().to_vec();
    let mut search = Search::new(Arc::new(problem), 30);
    match search.run(&mut Limits::none()) {
        Outcome::Found(found) => {
            check(&theory, sides, &found, &variables);
            assert!(
                found.smallest,
                "{claim}: smaller sizes should have been ruled out"
            );
            found.algebra.sizes().to_vec()
        }
        other => panic!("{claim}: {other:?}"),
    }
}

#[test]
fn groups() {
    // The smallest group that is not commutative is S3, of 6 elements: every textbook.
    assert_eq!(smallest(GROUP, "x * y != y * x"), [6]);
    // The group of two elements has x·x = e, the next one has not.
    assert_eq!(smallest(GROUP, "x * x != e"), [3]);
    // All groups of order below 8 whose squares are central are abelian; D4 and Q8 are not.
    let squares = format!("{GROUP}law central: (x * x) * y = y * (x * x)\n");
    assert_eq!(smallest(&squares, "x * y != y * x"), [8]);
}

#[test]
fn presented_groups() {
    // The triangle group (2, 3, 4) is S4, of order 24; in its proper quotients (S3, Z/2, 1) the
    // product of the generators has order at most 2 (Coxeter & Moser, Generators and Relations
    // for Discrete Groups, 6.4).
    let triangle = format!(
        "{GROUP}constant a\nconstant b\nlaw a: a * a = e\nlaw b: b * b * b = e\n\
         law ab: a * b * a * b * a * b * a * b = e\n"
    );
    assert_eq!(smallest(&triangle, "a * b * a * b != e"), [24]);
    // The Fibonacci group F(2, 5) is cyclic of order 11 (Conway 1965, from memory).
    let fibonacci = format!(
        "{GROUP}constant a\nconstant b\nconstant c\nconstant d\nconstant f\nlaw n1: a * b = c\n\
         law n2: b * c = d\nlaw n3: c * d = f\nlaw n4: d * f = a\nlaw n5: f * a = b\n"
    );
    assert_eq!(smallest(&fibonacci, "a != b"), [11]);
}

#[test]
fn loops_and_quasigroups() {
    // The loops of at most 4 elements are groups; of the six with 5 elements five are not
    // (OEIS A057771: 1, 1, 1, 2, 6 against groups, OEIS A000001: 1, 1, 1, 2, 1).
    assert_eq!(smallest(LOOP, "(x * y) * z != x * (y * z)"), [5]);
    // Steiner quasigroups belong to Steiner triple systems, of 1, 3, 7, 9, … points; that of the
    // line is medial, that of the Fano plane is not (from memory).
    let steiner = "infix * 40 none\nvariable x y z w\nlaw i: x * x = x\nlaw c: x * y = y * x\n\
        law t: x * (x * y) = y\n";
    assert_eq!(smallest(steiner, "x * y != x"), [3]);
    assert_eq!(
        smallest(steiner, "(x * y) * (z * w) != (x * z) * (y * w)"),
        [7]
    );
}

#[test]
fn lattices() {
    // The pentagon and the diamond (Birkhoff, Lattice Theory, chapter I).
    assert_eq!(
        smallest(
            LATTICE,
            "(x /\\ y) \\/ (x /\\ z) != x /\\ (y \\/ (x /\\ z))"
        ),
        [5]
    );
    assert_eq!(
        smallest(LATTICE, "x /\\ (y \\/ z) != (x /\\ y) \\/ (x /\\ z)"),
        [5]
    );
    let modular = format!("{LATTICE}law mod: (x /\\ y) \\/ (x /\\ z) = x /\\ (y \\/ (x /\\ z))\n");
    assert_eq!(
        smallest(&modular, "x /\\ (y \\/ z) != (x /\\ y) \\/ (x /\\ z)"),
        [5]
    );
}

#[test]
fn rings() {
    // Of the 11 rings with 4 elements (OEIS A027623) two are not commutative; smaller ones are
    // commutative.
    assert_eq!(smallest(RING, "x * y != y * x"), [4]);
    // With unit the smallest is that of the upper triangular matrices over Z/2, of 8 elements
    // (OEIS A127708, from memory).
    let unital = format!("{RING}constant 1\nlaw lu: 1 * x = x\nlaw ru: x * 1 = x\n");
    assert_eq!(smallest(&unital, "x * y != y * x"), [8]);
}

#[test]
fn central_groupoids() {
    // Their sizes are squares (Knuth, Notes on central groupoids, 1970).
    let central = "infix * 40 none\nvariable x y z\nlaw c: (x * y) * (y * z) = y\n";
    assert_eq!(smallest(central, "x * y != x"), [4]);
}

#[test]
fn vector_spaces_over_two_elements() {
    // A scalar and a vector sort; 2 + 2 elements are the smallest where vectors differ.
    let space = "sort Scalar Vector\nconstant 0 : Scalar\nconstant 1 : Scalar\nconstant o : Vector\n\
        infix + 30 left : Vector Vector -> Vector\ninfix . 50 none : Scalar Vector -> Vector\n\
        variable u v w : Vector\nvariable s : Scalar\n\
        law a: (u + v) + w = u + (v + w)\nlaw c: u + v = v + u\nlaw n: u + o = u\n\
        law k: u + u = o\nlaw z: 0 . u = o\nlaw i: 1 . u = u\nlaw d: s . (u + v) = s . u + s . v\n";
    assert_eq!(smallest(space, "u != v"), [2, 2]);
    // With the scalar 0 the two sides are v and o.
    assert_eq!(smallest(space, "s . u + v != s . (u + v)"), [2, 2]);
}

//! Sizes of free algebras: as many normal forms of terms in the generators as elements.

use super::finite_groups::reached;
use crate::common::{complete, session};

/// The number of normal forms that the steps lead to from the generators `g1`, `g2`, …. In the
/// steps, `_` stands for a normal form that was reached, and `@` for each generator in turn.
fn count(theory: &str, generators: usize, steps: &[&str]) -> usize {
    let mut theory = theory.to_owned();
    let names: Vec<String> = (1..=generators).map(|n| format!("g{n}")).collect();
    for name in &names {
        theory += &format!("constant {name}\n");
    }
    let mut session = session(&theory);
    complete(&mut session);
    let mut each = Vec::new();
    for step in steps {
        each.extend(names.iter().map(|name| step.replace('@', name)));
    }
    let steps = each;
    names
        .iter()
        .flat_map(|name| reached(&mut session, name, &steps))
        .collect::<std::collections::BTreeSet<_>>()
        .len()
}

const PRODUCT: &str = "infix * 40 left\nvariable x y z\n";

#[test]
fn semilattices() {
    // 2ⁿ - 1, elementary: the non-empty sets of generators.
    let theory = format!("{PRODUCT}law * is associative commutative idempotent\n");
    let sizes = [1, 2, 3, 4].map(|n| count(&theory, n, &["_ * @", "@ * _"]));
    assert_eq!(sizes, [1, 3, 7, 15]);
}

#[test]
fn groups_of_exponent_two() {
    // 2ⁿ, elementary: they are commutative, so the elements are the sets of generators.
    let theory = format!("{PRODUCT}constant e\nlaw * is associative unit e\nlaw x * x = e\n");
    let sizes = [1, 2, 3].map(|n| count(&theory, n, &["_ * @", "@ * _"]));
    assert_eq!(sizes, [2, 4, 8]);
}

#[test]
fn rectangular_bands() {
    // n², elementary: a product is known by its first and its last factor.
    let theory = format!("{PRODUCT}law * is associative idempotent\nlaw x * y * x = x\n");
    let sizes = [1, 2, 3].map(|n| count(&theory, n, &["_ * @", "@ * _"]));
    assert_eq!(sizes, [1, 4, 9]);
}

#[test]
fn left_and_right_zero_bands() {
    // n, elementary: a product is its first, or its last, factor.
    for law in ["x * y = x", "x * y = y"] {
        let theory = format!("{PRODUCT}law {law}\n");
        assert_eq!(count(&theory, 3, &["_ * @", "@ * _"]), 3);
    }
}

#[test]
fn closure_and_complement() {
    // Kuratowski 1922 (from memory): 14 operators, the identity among them.
    let theory = "function k 1\nfunction c 1\nvariable x\n\
                  law k(k(x)) = k(x)\nlaw c(c(x)) = x\n\
                  law k(c(k(c(k(c(k(x))))))) = k(c(k(x)))\n";
    assert_eq!(count(theory, 1, &["k(_)", "c(_)"]), 14);
}

#[test]
fn closure_and_complement_as_products() {
    let mut session = session(
        "infix * 40 left\nconstant e\nconstant k\nconstant c\nvariable x y z\n\
         law * is associative unit e\nlaw k * k = k\nlaw c * c = e\n\
         law k * c * k * c * k * c * k = k * c * k\n",
    );
    complete(&mut session);
    let steps = ["_ * k", "_ * c", "k * _", "c * _"].map(str::to_owned);
    assert_eq!(reached(&mut session, "e", &steps).len(), 14);
}

#[test]
fn boolean_rings() {
    // 2^(2ⁿ), elementary (Hsiang 1985 for the rules; both from memory): the Boolean functions.
    let theory = "infix + 30 left\ninfix * 40 left\nconstant 0\nconstant 1\nvariable x y z\n\
                  law + is associative commutative unit 0\nlaw x + x = 0\n\
                  law * is associative commutative idempotent unit 1\nlaw x * 0 = 0\n\
                  law * is distributes over +\n";
    let sizes = [1, 2].map(|n| count(theory, n, &["_ * @", "_ + @", "_ + 1"]));
    assert_eq!(sizes, [4, 16]);
}

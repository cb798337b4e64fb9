//! Finite groups by generators and relations: as many normal forms as elements.
//!
//! Orders from Coxeter & Moser, Generators and Relations for Discrete Groups; those of the
//! Fibonacci groups from Conway 1965 (both from memory).

use crate::common::{complete, normal, session};
use equable::session::Session;
use std::collections::BTreeSet;

/// All normal forms that lead from a start, breadth first. In the steps, `_` stands for a normal
/// form that was reached.
pub fn reached(session: &mut Session, start: &str, steps: &[String]) -> BTreeSet<String> {
    let first = normal(session, start);
    let mut found = BTreeSet::from([first.clone()]);
    let mut layer = vec![first];
    while !layer.is_empty() {
        let mut next = Vec::new();
        for word in &layer {
            for step in steps {
                let word = normal(session, &step.replace('_', &format!("({word})")));
                if found.insert(word.clone()) {
                    next.push(word);
                }
            }
        }
        layer = next;
        assert!(found.len() <= 1_000, "there is no end to it");
    }
    found
}

/// A presentation with a unary function for each generator; a word is applied from right to left.
fn by_functions(generators: &str, inverses: bool, relations: &[(&str, &str)]) -> usize {
    let mut theory = "constant e\nvariable x\n".to_owned();
    let mut letters: Vec<char> = generators.chars().collect();
    for letter in generators.chars() {
        theory += &format!("function {letter} 1\n");
        if inverses {
            let upper = letter.to_ascii_uppercase();
            theory += &format!("function {upper} 1\n");
            theory += &format!("law {letter}({upper}(x)) = x\nlaw {upper}({letter}(x)) = x\n");
            letters.push(upper);
        }
    }
    let term = |word: &str| {
        let open: String = word.chars().map(|letter| format!("{letter}(")).collect();
        format!("{open}x{}", ")".repeat(word.len()))
    };
    for (left, right) in relations {
        theory += &format!("law {} = {}\n", term(left), term(right));
    }
    let mut session = session(&theory);
    complete(&mut session);
    let steps: Vec<String> = letters
        .iter()
        .map(|letter| format!("{letter}(_)"))
        .collect();
    reached(&mut session, "e", &steps).len()
}

/// The same with constants and a product.
fn by_products(generators: &str, inverses: bool, relations: &[(&str, &str)]) -> usize {
    let mut theory =
        "infix * 40 left\nconstant e\nvariable x y z\nlaw * is associative unit e\n".to_owned();
    if inverses {
        theory += "function i 1\nlaw * is inverse i\n";
    }
    let product = |word: &str| {
        let factors: Vec<String> = word.chars().map(String::from).collect();
        if word.is_empty() {
            "e".to_owned()
        } else {
            factors.join(" * ")
        }
    };
    for letter in generators.chars() {
        theory += &format!("constant {letter}\n");
    }
    for (left, right) in relations {
        theory += &format!("law {} = {}\n", product(left), product(right));
    }
    let mut session = session(&theory);
    complete(&mut session);
    let steps: Vec<String> = generators
        .chars()
        .map(|letter| format!("_ * {letter}"))
        .collect();
    reached(&mut session, "e", &steps).len()
}

fn triangle(n: usize) -> Vec<(&'static str, &'static str)> {
    let turns = ["ababab", "abababab", "ababababab"][n - 3];
    vec![("aa", ""), ("bbb", ""), (turns, "")]
}

#[test]
fn triangle_groups() {
    for (n, order) in [(3, 12), (4, 24), (5, 60)] {
        assert_eq!(
            by_functions("ab", false, &triangle(n)),
            order,
            "(2, 3, {n})"
        );
    }
}

#[test]
fn triangle_groups_by_products() {
    for (n, order) in [(3, 12), (4, 24), (5, 60)] {
        assert_eq!(by_products("ab", false, &triangle(n)), order, "(2, 3, {n})");
    }
}

#[test]
fn the_simple_group_of_168_elements() {
    // With a * a = b * b * b = 1 the commutator of a and b is a * b * a * b * b.
    let relations = [
        ("aa", ""),
        ("bbb", ""),
        ("ababababababab", ""),
        ("ababbababbababbababb", ""),
    ];
    assert_eq!(by_functions("ab", false, &relations), 168);
}

/// Generators, relations and order.
type Presentation = (&'static str, &'static [(&'static str, &'static str)], usize);

const FIBONACCI: [Presentation; 3] = [
    ("abc", &[("ab", "c"), ("bc", "a"), ("ca", "b")], 8),
    (
        "abcd",
        &[("ab", "c"), ("bc", "d"), ("cd", "a"), ("da", "b")],
        5,
    ),
    (
        "abcdf",
        &[
            ("ab", "c"),
            ("bc", "d"),
            ("cd", "f"),
            ("df", "a"),
            ("fa", "b"),
        ],
        11,
    ),
];

#[test]
fn fibonacci_groups() {
    for (generators, relations, order) in FIBONACCI {
        assert_eq!(
            by_functions(generators, true, relations),
            order,
            "{generators}"
        );
    }
}

#[test]
fn fibonacci_groups_by_products() {
    for (generators, relations, order) in FIBONACCI {
        assert_eq!(
            by_products(generators, true, relations),
            order,
            "{generators}"
        );
    }
}

//! Theories whose equations are decided here in another way, from the definition of their free
//! algebras. Every verdict, under every order, has to agree.

use crate::common::tree::Tree::{self, App, Var};
use crate::common::tree::{Symbols, app, var};
use crate::common::{ask, complete_within, session};
use crate::rewriting::{laws, walk};
use crate::{for_all, trees, verify};
use equable::session::Verdict;
use proptest::prelude::*;
use std::collections::{BTreeMap, BTreeSet};
use std::time::Duration;

struct Decided {
    laws: &'static str,
    orders: &'static [&'static str],
    constants: &'static [&'static str],
    inner: &'static [(&'static str, usize)],
    size: u32,
    /// Do the laws have a complete set? Then nothing is undecided.
    complete: bool,
    equal: fn(&Tree, &Tree) -> bool,
}

/// Asks random questions under all orders. Gives the numbers of true and of false ones settled.
fn agree(decided: &Decided) -> (u32, u32) {
    let mut leaves: Vec<Tree> = ["x", "y", "z"].map(var).to_vec();
    leaves.extend(decided.constants.iter().map(|name| app(name, vec![])));
    let symbols = Symbols {
        leaves: decided.constants,
        variables: &["x", "y", "z"],
        inner: decided.inner,
    };
    let (mut right, mut wrong) = (0, 0);
    for order in decided.orders {
        let text = format!("variable x y z\n{}{order}\n", decided.laws);
        let mut session = session(&text);
        let within = Duration::from_millis(if decided.complete { 10_000 } else { 100 });
        let completion = complete_within(&mut session, within);
        assert_eq!(
            completion.complete, decided.complete,
            "{order}: {completion:?}"
        );
        let laws = laws(&session);
        let terms = trees(&leaves, decided.inner, decided.size);
        for_all(
            80,
            (terms.clone(), terms, any::<u64>()),
            |(s, other, seed)| {
                // Two random terms are seldom equal, so every second question is true by the laws.
                let t = if seed % 2 == 0 {
                    other
                } else {
                    walk(&s, &laws, &symbols, seed)
                };
                let within = Duration::from_millis(20);
                let answer = ask(&mut session, &s.to_string(), &t.to_string(), within);
                verify(&session, &s, &t, &answer);
                let equal = (decided.equal)(&s, &t);
                let expected = if equal {
                    Verdict::Equal
                } else {
                    Verdict::NotEqual
                };
                match answer.verdict {
                    Verdict::Undecided => assert!(!decided.complete, "{order}: {s} = {t}"),
                    verdict => assert_eq!(verdict, expected, "{order}: {s} = {t}"),
                }
                right += u32::from(answer.verdict == Verdict::Equal);
                wrong += u32::from(answer.verdict == Verdict::NotEqual);
            },
        );
    }
    (right, wrong)
}

/// The factors of a product from left to right; `false` marks an inverse.
fn word(tree: &Tree, positive: bool, letters: &mut Vec<(String, bool)>) {
    match tree {
        Var(name) => letters.push((name.clone(), positive)),
        App(name, arguments) => match &arguments[..] {
            [] if name == "e" || name == "0" => {}
            [] => letters.push((name.clone(), positive)),
            [argument] => word(argument, !positive, letters),
            [left, right] if positive => {
                word(left, positive, letters);
                word(right, positive, letters);
            }
            [left, right] => {
                word(right, positive, letters);
                word(left, positive, letters);
            }
            _ => unreachable!("there are no such symbols"),
        },
    }
}

fn letters(tree: &Tree) -> Vec<(String, bool)> {
    let mut letters = Vec::new();
    word(tree, true, &mut letters);
    letters
}

/// Free groups: reduced words (elementary).
fn reduced(tree: &Tree) -> Vec<(String, bool)> {
    let mut kept: Vec<(String, bool)> = Vec::new();
    for (letter, positive) in letters(tree) {
        if kept.last() == Some(&(letter.clone(), !positive)) {
            kept.pop();
        } else {
            kept.push((letter, positive));
        }
    }
    kept
}

/// Free abelian groups: exponents (elementary).
fn exponents(tree: &Tree) -> BTreeMap<String, i32> {
    let mut sums = BTreeMap::new();
    for (letter, positive) in letters(tree) {
        *sums.entry(letter).or_insert(0) += if positive { 1 } else { -1 };
    }
    sums.retain(|_, sum| *sum != 0);
    sums
}

fn occurring(tree: &Tree) -> BTreeSet<String> {
    letters(tree)
        .into_iter()
        .map(|(letter, _)| letter)
        .collect()
}

/// Boolean rings: the two-element one decides (elementary).
fn truth(tree: &Tree, values: u32) -> bool {
    match tree {
        Var(name) => values >> (name.as_bytes()[0] - b'x') & 1 == 1,
        App(name, arguments) => match (name.as_str(), &arguments[..]) {
            ("0", _) => false,
            ("1", _) => true,
            ("+", [s, t]) => truth(s, values) != truth(t, values),
            ("*", [s, t]) => truth(s, values) && truth(t, values),
            _ => unreachable!("there are no such symbols"),
        },
    }
}

/// Whitman 1941, Free lattices (from memory): when s ≤ t holds in all lattices.
fn below(s: &Tree, t: &Tree) -> bool {
    let parts = |tree: &Tree, sign: &str| match tree {
        App(name, arguments) if name == sign => Some((arguments[0].clone(), arguments[1].clone())),
        _ => None,
    };
    if let Some((a, b)) = parts(s, "∨") {
        return below(&a, t) && below(&b, t);
    }
    if let Some((c, d)) = parts(t, "∧") {
        return below(s, &c) && below(s, &d);
    }
    match (parts(s, "∧"), parts(t, "∨")) {
        (None, None) => s == t,
        (meet, join) => {
            meet.is_some_and(|(a, b)| below(&a, t) || below(&b, t))
                || join.is_some_and(|(c, d)| below(s, &c) || below(s, &d))
        }
    }
}

/// Bands (Green & Rees 1952, from memory): two words are equal if they have the same letters, the
/// same last first letter with equal words before it, and likewise from behind.
fn same_band_word(s: &[String], t: &[String]) -> bool {
    let content = |w: &[String]| w.iter().cloned().collect::<BTreeSet<_>>();
    if content(s) != content(t) {
        return false;
    }
    if s.is_empty() {
        return true;
    }
    // The longest beginning with one letter less than all, and the letter behind it.
    let start = |w: &[String]| {
        let all = content(w).len();
        let at = (0..w.len())
            .find(|n| content(&w[..=*n]).len() == all)
            .expect("all letters");
        (w[..at].to_vec(), w[at].clone())
    };
    let reversed = |w: &[String]| w.iter().rev().cloned().collect::<Vec<_>>();
    let ((s1, a), (t1, b)) = (start(s), start(t));
    let ((s2, c), (t2, d)) = (start(&reversed(s)), start(&reversed(t)));
    a == b && c == d && same_band_word(&s1, &t1) && same_band_word(&reversed(&s2), &reversed(&t2))
}

fn same_in_bands(s: &Tree, t: &Tree) -> bool {
    let of = |tree| {
        letters(tree)
            .into_iter()
            .map(|(letter, _)| letter)
            .collect::<Vec<_>>()
    };
    same_band_word(&of(s), &of(t))
}

#[test]
fn groups() {
    let (equal, different) = agree(&Decided {
        laws: "infix * 40 left\nfunction i 1\nconstant e\nlaw * is associative left unit e left inverse i\n",
        orders: &[
            "order lpo i, *, e",
            "order kbo i, *, e; weights i 0, * 1; variables 1",
            "",
        ],
        constants: &["e"],
        inner: &[("*", 2), ("*", 2), ("i", 1)],
        size: 5,
        complete: true,
        equal: |s, t| reduced(s) == reduced(t),
    });
    assert!(
        equal > 10 && different > 10,
        "{equal} equal, {different} different"
    );
}

#[test]
fn monoids() {
    let (equal, different) = agree(&Decided {
        laws: "infix * 40 left\nconstant e\nlaw * is associative unit e\n",
        orders: &["order lpo *, e", "order kbo *, e", "order lpo e, *", ""],
        constants: &["e", "e"],
        inner: &[("*", 2)],
        size: 5,
        complete: true,
        equal: |s, t| letters(s) == letters(t),
    });
    assert!(
        equal > 10 && different > 10,
        "{equal} equal, {different} different"
    );
}

#[test]
fn semilattices() {
    let (equal, different) = agree(&Decided {
        laws: "infix * 40 left\nlaw * is associative commutative idempotent\n",
        orders: &["order lpo *", "order kbo *", ""],
        constants: &[],
        inner: &[("*", 2)],
        size: 6,
        complete: true,
        equal: |s, t| occurring(s) == occurring(t),
    });
    assert!(
        equal > 10 && different > 10,
        "{equal} equal, {different} different"
    );
}

#[test]
fn abelian_groups() {
    let (equal, different) = agree(&Decided {
        laws: "infix + 40 left\nprefix - 60\nconstant 0\nlaw + is associative commutative unit 0 inverse -\n",
        orders: &["order lpo -, +, 0", "order kbo -, +, 0; weights - 0", ""],
        constants: &["0"],
        inner: &[("+", 2), ("+", 2), ("-", 1)],
        size: 4,
        complete: false,
        equal: |s, t| exponents(s) == exponents(t),
    });
    // The complete set needs matching modulo AC (Peterson & Stickel 1981, from memory); algebras
    // tell the sides apart.
    assert!(
        equal > 10 && different > 10,
        "{equal} equal, {different} different"
    );
}

#[test]
fn boolean_rings() {
    let (equal, different) = agree(&Decided {
        laws: "infix + 30 left\ninfix * 40 left\nconstant 0\nconstant 1\n\
               law + is associative commutative unit 0\nlaw x + x = 0\n\
               law * is associative commutative idempotent unit 1 distributes over +\nlaw x * 0 = 0\n",
        orders: &["order lpo *, +, 1, 0", ""],
        constants: &["0", "1"],
        inner: &[("+", 2), ("*", 2)],
        size: 6,
        complete: true,
        equal: |s, t| (0..8).all(|values| truth(s, values) == truth(t, values)),
    });
    assert!(
        equal > 10 && different > 10,
        "{equal} equal, {different} different"
    );
}

#[test]
fn lattices() {
    let (equal, different) = agree(&Decided {
        laws: "infix ∨ 30 left\ninfix ∧ 40 left\nlaw ∨ is associative commutative absorbs ∧\n\
               law ∧ is associative commutative absorbs ∨\n",
        orders: &["order lpo ∧, ∨", "order kbo ∧, ∨", ""],
        constants: &[],
        inner: &[("∨", 2), ("∧", 2)],
        size: 5,
        complete: false,
        equal: |s, t| below(s, t) && below(t, s),
    });
    // There is no complete set; algebras tell the sides apart.
    assert!(
        equal > 10 && different > 10,
        "{equal} equal, {different} different"
    );
}

#[test]
fn bands() {
    let (equal, different) = agree(&Decided {
        laws: "infix * 40 left\nlaw * is associative idempotent\n",
        orders: &["order lpo *", "order kbo *", ""],
        constants: &[],
        inner: &[("*", 2)],
        size: 6,
        complete: false,
        equal: same_in_bands,
    });
    assert!(
        equal > 10 && different > 10,
        "{equal} equal, {different} different"
    );
}

#[test]
fn the_solutions_of_these_tests_know_their_free_algebras() {
    // Free bands without unit have 1, 6 and 159 elements (Green & Rees 1952; OEIS A005345 less 1).
    for (letters, size) in [(1, 1), (2, 6), (3, 159)] {
        let mut found: Vec<Vec<String>> = Vec::new();
        let mut layer = vec![Vec::new()];
        while !layer.is_empty() {
            let mut next = Vec::new();
            for word in &layer {
                for letter in &["x", "y", "z"][..letters] {
                    let mut longer: Vec<String> = word.clone();
                    longer.push((*letter).to_owned());
                    if found.iter().all(|known| !same_band_word(known, &longer)) {
                        found.push(longer.clone());
                        next.push(longer);
                    }
                }
            }
            layer = next;
        }
        assert_eq!(found.len(), size);
    }
    // Of the equations of lattices: absorption holds, distributivity does not.
    let (x, y, z) = (var("x"), var("y"), var("z"));
    let meet = |s: &Tree, t: &Tree| app("∧", vec![s.clone(), t.clone()]);
    let join = |s: &Tree, t: &Tree| app("∨", vec![s.clone(), t.clone()]);
    let absorbed = meet(&x, &join(&y, &x));
    assert!(below(&absorbed, &x) && below(&x, &absorbed));
    let (left, right) = (meet(&x, &join(&y, &z)), join(&meet(&x, &y), &meet(&x, &z)));
    assert!(below(&right, &left) && !below(&left, &right));
}

//! Joining modulo associativity and commutativity.
//!
//! Let the rules have, for an operator f, f(f(x, y), z) → f(x, f(y, z)), f(x, y) = f(y, x) and
//! f(x, f(y, z)) = f(y, f(x, z)), the last two used where an instance decreases. Then two ground
//! terms that are equal modulo the associativity and commutativity of f join by these rules alone
//! (Martin & Nipkow 1990): the first nests everything to the right; where of two neighbours a, b
//! the first is greater, f(a, f(b, r)) > f(b, f(a, r)) and f(a, b) > f(b, a), both in the
//! Knuth–Bendix and in the lexicographic path order, whose arguments compare from the left; so the
//! arguments come to stand in ascending order. Therefore two terms with variables that are equal
//! modulo the two laws join on all ground instances.

use rustc_hash::{FxHashMap, FxHashSet};

use super::check_rewrite::Directed;
use super::terms::{Name, Node, TermIndex, Terms};
use super::work::{Stop, Work};

/// The operators for which the rules have all three.
pub(super) fn operators(terms: &Terms, rules: &[Directed]) -> FxHashSet<Name> {
    let mut found: [FxHashSet<Name>; 3] = Default::default();
    for rule in rules {
        if let Some((operator, kind)) = kind(terms, rule) {
            found[kind].insert(operator);
        }
    }
    let [associative, commutative, exchange] = found;
    let both = associative.intersection(&commutative);
    both.filter(|operator| exchange.contains(operator))
        .copied()
        .collect()
}

/// Which of the three a rule is: 0 for associativity, 1 for commutativity, 2 for the exchange.
fn kind(terms: &Terms, rule: &Directed) -> Option<(Name, usize)> {
    let (f, [a, b]) = binary(terms, rule.left)?;
    let (g, [c, d]) = binary(terms, rule.right)?;
    let variable = |term| matches!(terms.node(term), Node::Variable(_));
    let inside = |term| {
        binary(terms, term)
            .filter(|(h, _)| *h == f)
            .map(|(_, below)| below)
    };
    let three = |x, y, z| [x, y, z].into_iter().all(variable) && x != y && y != z && x != z;
    if f != g {
        return None;
    }
    if let (Some([x, y]), Some([u, v])) = (inside(a), inside(d)) {
        let same = (c, u, v) == (x, y, b);
        return (!rule.ordered && same && three(x, y, b)).then_some((f, 0));
    }
    if let (Some([y, z]), Some([v, w])) = (inside(b), inside(d)) {
        let same = (c, v, w) == (y, a, z);
        return (rule.ordered && same && three(a, y, z)).then_some((f, 2));
    }
    let swapped = (c, d) == (b, a) && variable(a) && variable(b) && a != b;
    (rule.ordered && swapped).then_some((f, 1))
}

fn binary(terms: &Terms, term: TermIndex) -> Option<(Name, [TermIndex; 2])> {
    match terms.node(term) {
        Node::Apply(operator, &[left, right]) => Some((operator, [left, right])),
        _ => None,
    }
}

/// Larger terms are not compared modulo associativity and commutativity.
const LARGEST: u64 = 10_000;

/// Are two terms equal modulo associativity and commutativity of these operators?
pub(super) fn equal(
    terms: &mut Terms,
    operators: &FxHashSet<Name>,
    left: TermIndex,
    right: TermIndex,
    work: &mut Work,
) -> Result<bool, Stop> {
    // Sums are written out, which shared terms may not survive; such terms are not tried.
    if operators.is_empty() || terms.size(left) != terms.size(right) || terms.size(left) > LARGEST {
        return Ok(false);
    }
    work.spend(terms.size(left))?;
    Ok(sorted(terms, operators, left, work)? == sorted(terms, operators, right, work)?)
}

/// The term with the flattened arguments of these operators sorted and nested to the right.
fn sorted(
    terms: &mut Terms,
    operators: &FxHashSet<Name>,
    term: TermIndex,
    work: &mut Work,
) -> Result<TermIndex, Stop> {
    let mut known: FxHashMap<TermIndex, TermIndex> = FxHashMap::default();
    let mut stack = vec![term];
    while let Some(&top) = stack.last() {
        work.spend(1)?;
        let Node::Apply(operator, below) = terms.node(top) else {
            known.insert(top, top);
            stack.pop();
            continue;
        };
        let is_sum = operators.contains(&operator);
        let mut parts = below.to_vec();
        if is_sum {
            parts = flattened(terms, operator, top);
            work.spend(parts.len() as u64)?;
        }
        let before = stack.len();
        stack.extend(parts.iter().filter(|part| !known.contains_key(part)));
        if stack.len() > before {
            continue;
        }
        parts.iter_mut().for_each(|part| *part = known[part]);
        let made = if is_sum {
            parts.sort_unstable();
            let (&last, front) = parts.split_last().expect("a sum has parts");
            let mut made = last;
            for &part in front.iter().rev() {
                made = terms.apply_charged(operator, &[part, made], work)?;
            }
            made
        } else {
            terms.apply_charged(operator, &parts, work)?
        };
        known.insert(top, made);
        stack.pop();
    }
    Ok(known[&term])
}

fn flattened(terms: &Terms, operator: Name, term: TermIndex) -> Vec<TermIndex> {
    let mut parts = Vec::new();
    let mut stack = vec![term];
    while let Some(term) = stack.pop() {
        match binary(terms, term) {
            Some((found, [left, right])) if found == operator => stack.extend([right, left]),
            _ => parts.push(term),
        }
    }
    parts
}

//! Random rule sets: where the checker says that a set is complete, terms that were made from each
//! other by random replacements have the same normal form.

use super::made::*;
use super::mutations::Random;
use crate::proof::check_complete::directions;
use crate::proof::check_join::Joining;
use crate::proof::check_order::{Order, least_terms};
use crate::proof::check_rewrite::{Rewriting, match_term};
use crate::proof::signature::Signature;
use crate::proof::work::Work;
use crate::proof::*;

/// A random term of at most the given depth as text, over f/1, m/2, a/0 and the leaves.
fn text(random: &mut Random, depth: usize, leaves: &[&str]) -> String {
    match random.below(if depth == 0 { 2 } else { 5 }) {
        0 | 1 => leaves[random.below(leaves.len())].to_owned(),
        2 => format!("f({})", text(random, depth - 1, leaves)),
        _ => {
            let [one, other] = [(); 2].map(|()| text(random, depth - 1, leaves));
            format!("m({one},{other})")
        }
    }
}

fn random_set(random: &mut Random) -> CompleteSet {
    let count = 1 + random.below(3);
    let leaves = ["x", "y", "z", "x", "y", "a()"];
    let sides: Vec<[String; 2]> = (0..count)
        .map(|_| [(); 2].map(|()| text(random, 2, &leaves)))
        .collect();
    // Each law is oriented if that is possible one way; the checker is asked.
    let operators = [("f", random.below(2) as u64), ("m", 1), ("a", 1)];
    let kind = [OrderKind::KnuthBendix, OrderKind::LexicographicPath][random.below(2)];
    let mut laws = Vec::new();
    for [left, right] in &sides {
        let ways = [
            (left, right, true),
            (right, left, true),
            (left, right, false),
        ];
        let decreases = |&(left, right, oriented): &(&String, &String, bool)| {
            let mut set = laws_only(&[(left, right, oriented)], &operators);
            set.order.kind = kind;
            match check(&Evidence::Complete(set), WorkLimit(2_000_000)) {
                Outcome::Rejected { reason, .. } => !reason.contains("stated order"),
                _ => true,
            }
        };
        let (left, right, oriented) = ways.into_iter().find(decreases).unwrap_or(ways[2]);
        laws.push((left.as_str(), right.as_str(), oriented));
    }
    // The claim makes c and d constants of what is certified.
    let mut set = claiming(laws_only(&laws, &operators), ["c", "d"], ["c", "d"]);
    set.order.kind = kind;
    set
}

/// Ground rewriting over f, m, a and two constants below them, as the checker does it.
fn ground_system(set: &CompleteSet, work: &mut Work) -> Joining {
    let mut terms = set.terms.clone();
    let below = ["c", "d"].map(|name| terms.name(name));
    let a = terms.apply("a", &[]);
    for constant in below {
        terms.apply_named(constant, &[]);
    }
    terms.apply("f", &[a]);
    terms.apply("m", &[a, a]);
    let signature = Signature::read(&mut terms, None, work).unwrap();
    let order = Order::new(&terms, &signature, &set.order, &below).unwrap();
    let rules = directions(set, &terms, &signature, work).unwrap();
    let least = least_terms(&order, &mut terms, &signature, work).unwrap();
    Joining::new(Rewriting::new(terms, signature, order, rules, least))
}

/// `from` after one random replacement by a law, if the chosen one applies at the chosen place.
fn replaced(
    system: &mut Rewriting,
    set: &CompleteSet,
    from: TermIndex,
    random: &mut Random,
) -> TermIndex {
    let mut work = Work::new(WorkLimit::default());
    let law = &set.laws[random.below(set.laws.len())];
    let (mut source, mut target) = (law.left, law.right);
    if random.below(2) == 0 {
        std::mem::swap(&mut source, &mut target);
    }
    let (mut above, mut inner) = (Vec::new(), from);
    while random.below(3) != 0 && !system.terms.arguments(inner).is_empty() {
        let number = random.below(system.terms.arguments(inner).len());
        above.push((inner, number));
        inner = system.terms.arguments(inner)[number];
    }
    let found = match_term(&system.terms, &system.signature, source, inner, &mut work).unwrap();
    let Some(mut with) = found else { return from };
    for name in system.terms.variables(&[target], &mut work).unwrap() {
        let free = text(random, 1, &["a()", "c()", "d()"]);
        let free = term(&mut system.terms, &free);
        with.entry(name).or_insert(free);
    }
    let mut result = system.terms.instantiate(target, &with, &mut work).unwrap();
    for (whole, number) in above.into_iter().rev() {
        let Node::Apply(operator, arguments) = system.terms.node(whole) else {
            unreachable!("it has arguments");
        };
        let mut arguments = arguments.to_vec();
        arguments[number] = result;
        result = system.terms.apply_named(operator, &arguments);
    }
    if system.terms.size(result) > 60 {
        from
    } else {
        result
    }
}

#[test]
fn what_is_accepted_is_confluent_on_ground_terms() {
    let mut random = Random(0x5eed_1234_5678);
    let (mut accepted, mut ordered, mut extra) = (0, 0, 0);
    for _ in 0..6_000 {
        let set = random_set(&mut random);
        if !check(&Evidence::Complete(set.clone()), WorkLimit(2_000_000)).is_accepted() {
            continue;
        }
        let mut work = Work::new(WorkLimit::default());
        let mut joining = ground_system(&set, &mut work);
        accepted += 1;
        ordered += usize::from(set.rules.iter().any(|rule| !rule.oriented));
        extra += usize::from(
            joining
                .system
                .rules
                .iter()
                .any(|rule| !rule.extra.is_empty()),
        );
        for _ in 0..5 {
            let start = text(&mut random, 3, &["a()", "c()", "d()"]);
            let start = term(&mut joining.system.terms, &start);
            let mut end = start;
            for _ in 0..12 {
                end = replaced(&mut joining.system, &set, end, &mut random);
            }
            let Joining { system, plain, .. } = &mut joining;
            let one = plain.normal_form(system, start, &mut work).unwrap();
            let other = plain.normal_form(system, end, &mut work).unwrap();
            assert_eq!(one, other, "{}", to_json(&Evidence::Complete(set.clone())));
        }
    }
    // The test means something: sets of every kind have been accepted.
    assert!(
        accepted > 300 && ordered > 100 && extra > 30,
        "{accepted} {ordered} {extra}"
    );
}

use crate::proof::check_order::{Assumption, Comparison, Order};
use crate::proof::signature::Signature;
use crate::proof::terms::Substitution;
use crate::proof::work::Work;
use crate::proof::*;
use proptest::prelude::*;

/// How to build a term: each entry picks an operator or a variable, and earlier terms.
type Recipe = Vec<(u8, u8, u8)>;

fn recipe() -> impl Strategy<Value = Recipe> {
    proptest::collection::vec((any::<u8>(), any::<u8>(), any::<u8>()), 1..9)
}

fn build(terms: &mut Terms, recipe: &Recipe, ground: bool) -> TermIndex {
    let mut made: Vec<TermIndex> = Vec::new();
    for &(pick, first, second) in recipe {
        let leaf = |terms: &mut Terms, ground: bool| match (pick % 4, ground) {
            (0 | 1, false) => terms.variable(["x", "y", "z"][usize::from(first) % 3]),
            (0 | 2, _) => terms.apply("a", &[]),
            _ => terms.apply("b", &[]),
        };
        let term = if made.is_empty() || pick >= 192 {
            leaf(terms, ground)
        } else {
            let [one, other] = [first, second].map(|n| made[usize::from(n) % made.len()]);
            match pick % 3 {
                0 => terms.apply("i", &[one]),
                1 => terms.apply("m", &[one, other]),
                _ => terms.apply("p", &[other, one]),
            }
        };
        made.push(term);
    }
    made[made.len() - 1]
}

/// Two orders of each kind on i/1, m/2, p/2, a and b.
fn orders(terms: &mut Terms) -> Vec<Order> {
    for (name, arity) in [("i", 1), ("m", 2), ("p", 2), ("a", 0), ("b", 0)] {
        let x = terms.variable("x");
        terms.apply(name, &vec![x; arity]);
    }
    let mut work = Work::new(WorkLimit::default());
    let signature = Signature::read(terms, None, &mut work).unwrap();
    let mut made = Vec::new();
    for kind in [OrderKind::KnuthBendix, OrderKind::LexicographicPath] {
        for parameters in [
            [("i", 0), ("m", 1), ("p", 1), ("b", 1), ("a", 1)],
            [("i", 2), ("b", 3), ("m", 0), ("a", 1), ("p", 0)],
        ] {
            let stated = super::made::order(terms, kind, &parameters);
            made.push(Order::new(terms, &signature, &stated, &[]).unwrap());
        }
    }
    made
}

fn greater(terms: &Terms, order: &Order, one: TermIndex, other: TermIndex) -> bool {
    let mut work = Work::new(WorkLimit::default());
    Comparison::default()
        .is_greater(order, terms, one, other, &mut work)
        .unwrap()
}

/// The Knuth–Bendix order with all weights 1 but that of `i`, 0, read off its definition on trees.
fn naive(terms: &Terms, one: TermIndex, other: TermIndex) -> bool {
    fn count(terms: &Terms, term: TermIndex, leaf: TermIndex) -> usize {
        let inner = terms.arguments(term).iter().map(|&a| count(terms, a, leaf));
        usize::from(term == leaf) + inner.sum::<usize>()
    }
    fn weight(terms: &Terms, term: TermIndex) -> usize {
        let own = match terms.node(term) {
            Node::Apply(name, _) if terms.text(name) == "i" => 0,
            _ => 1,
        };
        own + terms
            .arguments(term)
            .iter()
            .map(|&a| weight(terms, a))
            .sum::<usize>()
    }
    let variables = terms
        .all()
        .filter(|&t| matches!(terms.node(t), Node::Variable(_)));
    for variable in variables {
        if count(terms, one, variable) < count(terms, other, variable) {
            return false;
        }
    }
    match weight(terms, one).cmp(&weight(terms, other)) {
        std::cmp::Ordering::Greater => return true,
        std::cmp::Ordering::Less => return false,
        std::cmp::Ordering::Equal => {}
    }
    match (terms.node(one), terms.node(other)) {
        (Node::Variable(_), _) => false,
        // Of the same weight and containing x, so it is i(…i(x)…).
        (Node::Apply(..), Node::Variable(_)) => true,
        (Node::Apply(f, some), Node::Apply(g, others)) => {
            let rank = |name| {
                ["a", "b", "p", "m", "i"]
                    .iter()
                    .position(|&n| n == terms.text(name))
            };
            if f != g {
                return rank(f) > rank(g);
            }
            let first = some.iter().zip(others).find(|(one, other)| one != other);
            first.is_some_and(|(&one, &other)| naive(terms, one, other))
        }
    }
}

proptest! {
    #[test]
    fn total_on_ground_terms(one in recipe(), other in recipe(), third in recipe()) {
        let mut terms = Terms::default();
        let orders = orders(&mut terms);
        let [one, other, third] = [one, other, third].map(|r| build(&mut terms, &r, true));
        for order in &orders {
            let ways = [greater(&terms, order, one, other), one == other, greater(&terms, order, other, one)];
            prop_assert_eq!(ways.iter().filter(|&&way| way).count(), 1);
            if ways[0] && greater(&terms, order, other, third) {
                prop_assert!(greater(&terms, order, one, third));
            }
        }
    }

    #[test]
    fn stable_and_monotone(one in recipe(), other in recipe(), put in [recipe(), recipe(), recipe()]) {
        let mut terms = Terms::default();
        let orders = orders(&mut terms);
        let [one, other] = [one, other].map(|r| build(&mut terms, &r, false));
        let put = put.map(|r| build(&mut terms, &r, false));
        let names = ["x", "y", "z"].map(|n| terms.name(n));
        let with: Substitution = names.into_iter().zip(put).collect();
        let mut work = Work::new(WorkLimit::default());
        let [left, right] = [one, other].map(|t| terms.instantiate(t, &with, &mut work).unwrap());
        let [above, below] = [one, other].map(|t| terms.apply("m", &[put[0], t]));
        for order in &orders {
            prop_assert!(!greater(&terms, order, one, one));
            // Every subterm is smaller.
            prop_assert!(greater(&terms, order, above, one));
            if greater(&terms, order, one, other) {
                prop_assert!(!greater(&terms, order, other, one));
                prop_assert!(greater(&terms, order, left, right));
                prop_assert!(greater(&terms, order, above, below));
            }
        }
    }

    #[test]
    fn as_the_definition_says(one in recipe(), other in recipe()) {
        let mut terms = Terms::default();
        let orders = orders(&mut terms);
        let [one, other] = [one, other].map(|r| build(&mut terms, &r, false));
        prop_assert_eq!(greater(&terms, &orders[0], one, other), naive(&terms, one, other));
    }

    /// What holds under the assumption x < y, and z above the least term, holds for all ground
    /// instances that obey it.
    #[test]
    fn assumptions_are_sound(one in recipe(), other in recipe(), put in [recipe(), recipe(), recipe()]) {
        let mut terms = Terms::default();
        let orders = orders(&mut terms);
        let [one, other] = [one, other].map(|r| build(&mut terms, &r, false));
        let put = put.map(|r| build(&mut terms, &r, true));
        let [x, y, z] = ["x", "y", "z"].map(|n| terms.name(n));
        for order in &orders {
            let [mut smaller, mut larger, any] = put;
            if greater(&terms, order, smaller, larger) {
                std::mem::swap(&mut smaller, &mut larger);
            }
            let (a, b) = (terms.apply("a", &[]), terms.apply("b", &[]));
            let least = if greater(&terms, order, a, b) { b } else { a };
            if smaller == larger || any == least {
                continue;
            }
            let mut assumption = Assumption::default();
            assumption.rank.extend([(x, 0), (y, 1)]);
            assumption.above.insert(z, least);
            let mut work = Work::new(WorkLimit::default());
            let mut comparison = Comparison::under(assumption);
            if comparison.is_greater(order, &terms, one, other, &mut work).unwrap() {
                let with: Substitution = [(x, smaller), (y, larger), (z, any)].into_iter().collect();
                let [left, right] =
                    [one, other].map(|t| terms.instantiate(t, &with, &mut work).unwrap());
                prop_assert!(greater(&terms, order, left, right));
            }
        }
    }
}

#[test]
fn assumptions_decide_what_is_open_without() {
    let mut terms = Terms::default();
    let orders = orders(&mut terms);
    let (x, y) = (terms.variable("x"), terms.variable("y"));
    let (one, other) = (terms.apply("m", &[y, x]), terms.apply("m", &[x, y]));
    let mut assumption = Assumption::default();
    assumption
        .rank
        .extend([(terms.name("x"), 0), (terms.name("y"), 1)]);
    for order in &orders {
        let mut work = Work::new(WorkLimit::default());
        assert!(!greater(&terms, order, one, other));
        let mut comparison = Comparison::under(assumption.clone());
        assert!(
            comparison
                .is_greater(order, &terms, one, other, &mut work)
                .unwrap()
        );
        assert!(
            !comparison
                .is_greater(order, &terms, other, one, &mut work)
                .unwrap()
        );
    }
}

#[test]
fn deep_and_doubled_terms_are_compared() {
    let mut terms = Terms::default();
    let orders = orders(&mut terms);
    let mut work = Work::new(WorkLimit::default());
    let (mut deep, mut deeper) = (terms.apply("a", &[]), terms.apply("b", &[]));
    for _ in 0..1_000_000 {
        deep = terms.apply("i", &[deep]);
        deeper = terms.apply("i", &[deeper]);
    }
    let mut comparison = Comparison::default();
    assert!(
        comparison
            .is_greater(&orders[0], &terms, deeper, deep, &mut work)
            .unwrap()
    );
    let (mut small, mut large) = (terms.variable("x"), terms.variable("x"));
    large = terms.apply("i", &[large]);
    for _ in 0..60 {
        small = terms.apply("m", &[small, small]);
        large = terms.apply("m", &[large, large]);
    }
    for order in &orders {
        let mut work = Work::new(WorkLimit(200_000));
        let mut comparison = Comparison::default();
        assert!(
            comparison
                .is_greater(order, &terms, large, small, &mut work)
                .unwrap()
        );
    }
}

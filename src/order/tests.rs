//! The orders against their textbook definitions, written naively, and against their laws.

mod textbook;
mod world;

use super::*;
use crate::term::{Sort, Substitution, Symbol, SymbolInfo, TermId, instantiate};
use proptest::prelude::*;
use textbook::Textbook;
use world::Tree::{App, Var};
use world::*;

proptest! {
    #![proptest_config(ProptestConfig::with_cases(3000))]

    #[test]
    fn agrees_with_the_textbook(setting in settings(), s in open(), t in open()) {
        let mut world = World::new(&setting);
        let expected = if s == t {
            Comparison::Equal
        } else if Textbook(&setting).greater(&s, &t) {
            Comparison::Greater
        } else if Textbook(&setting).greater(&t, &s) {
            Comparison::Less
        } else {
            Comparison::Incomparable
        };
        prop_assert_eq!(world.compare(&s, &t), expected);
        let (s, t) = (world.term(&s), world.term(&t));
        prop_assert_eq!(world.greater(s, t), expected == Comparison::Greater);
        prop_assert_eq!(world.greater(t, s), expected == Comparison::Less);
        let nothing = VariableOrder::default();
        let assuming = world.order.greater_assuming(&world.bank, s, t, &nothing);
        prop_assert_eq!(assuming, expected == Comparison::Greater);
    }

    #[test]
    fn is_total_on_ground_terms(setting in settings(), s in ground(), t in ground()) {
        let mut world = World::new(&setting);
        let found = world.compare(&s, &t);
        prop_assert_ne!(found, Comparison::Incomparable);
        prop_assert_eq!(found == Comparison::Equal, s == t);
        let back = world.compare(&t, &s);
        prop_assert_eq!(found == Comparison::Greater, back == Comparison::Less);
    }

    #[test]
    fn is_transitive(setting in settings(), s in open(), t in open(), u in open()) {
        let mut world = World::new(&setting);
        let [s, t, u] = [&s, &t, &u].map(|tree| world.term(tree));
        for [s, t, u] in [[s, t, u], [s, u, t], [t, s, u], [t, u, s], [u, s, t], [u, t, s]] {
            prop_assert!(!(world.greater(s, t) && world.greater(t, u)) || world.greater(s, u));
        }
    }

    #[test]
    fn contains_the_subterm_relation(setting in settings(), s in open()) {
        let mut world = World::new(&setting);
        let s = world.term(&s);
        for (place, part) in crate::term::preorder(&world.bank, s) {
            prop_assert_eq!(world.greater(s, part), !place.is_empty());
        }
    }

    #[test]
    fn is_stable_and_monotone(
        setting in settings(),
        (s, t) in (open(), open()),
        values in prop::array::uniform4(open()),
        symbol in 3usize..8,
        place in 0usize..3,
    ) {
        let mut world = World::new(&setting);
        let (s, t) = (world.term(&s), world.term(&t));
        let before = world.order.compare(&world.bank, s, t);
        if before == Comparison::Incomparable {
            return Ok(());
        }
        let mut substitution = Substitution::default();
        for (variable, value) in VARIABLES.iter().zip(&values) {
            let value = world.term(value);
            substitution.set(*variable, value);
        }
        let [u, v] = [s, t].map(|term| instantiate(&mut world.bank, term, &substitution));
        prop_assert_eq!(world.order.compare(&world.bank, u, v), before);
        let arity = ARITIES[symbol];
        let filler = world.term(&values[0]);
        let [u, v] = [s, t].map(|term| {
            let mut arguments = vec![filler; arity];
            arguments[place % arity] = term;
            world.bank.apply(Symbol(symbol as u32), &arguments)
        });
        prop_assert_eq!(world.order.compare(&world.bank, u, v), before);
    }

    #[test]
    fn an_assumption_holds_of_ground_instances(
        setting in settings(),
        (s, t) in (open(), open()),
        names in Just(VARIABLES.to_vec()).prop_shuffle(),
        placed in 0usize..5,
        values in prop::collection::vec(prop::array::uniform4(ground()), 8),
    ) {
        let mut world = World::new(&setting);
        let (s, t) = (world.term(&s), world.term(&t));
        let assumed = VariableOrder::new(&names[..placed]);
        let [more, less] = [(s, t), (t, s)]
            .map(|(s, t)| world.order.greater_assuming(&world.bank, s, t, &assumed));
        prop_assert!(!(more && less));
        // A weaker assumption allows less.
        prop_assert!(more || !world.greater(s, t));
        for values in values {
            let mut values = values.map(|tree| world.term(&tree));
            let mut distinct = true;
            values.sort_by(|&s, &t| {
                let found = world.order.compare(&world.bank, t, s);
                distinct &= found != Comparison::Equal;
                match found {
                    Comparison::Greater => std::cmp::Ordering::Greater,
                    Comparison::Less => std::cmp::Ordering::Less,
                    _ => std::cmp::Ordering::Equal,
                }
            });
            if !distinct {
                continue;
            }
            // The variables without a place get the values that are left, in either order.
            values[placed..].reverse();
            let mut substitution = Substitution::default();
            for (variable, value) in names.iter().zip(values) {
                substitution.set(*variable, value);
            }
            let [u, v] = [s, t].map(|term| instantiate(&mut world.bank, term, &substitution));
            let found = world.order.compare(&world.bank, u, v);
            prop_assert!(!more || found == Comparison::Greater);
            prop_assert!(!less || found == Comparison::Less);
        }
    }

    #[test]
    fn what_was_relied_on_is_enough(
        setting in settings(),
        (s, t) in (open(), open()),
        names in Just(VARIABLES.to_vec()).prop_shuffle(),
        others in Just(VARIABLES.to_vec()).prop_shuffle(),
    ) {
        let mut world = World::new(&setting);
        let (s, t) = (world.term(&s), world.term(&t));
        let assumed = VariableOrder::new(&names);
        if world.order.greater_assuming(&world.bank, s, t, &assumed) {
            let place = |name: u32| others.iter().position(|&other| other == name);
            let agrees = assumed.used().all(|(i, j)| place(names[i]) < place(names[j]));
            let again = VariableOrder::new(&others);
            prop_assert!(!agrees || world.order.greater_assuming(&world.bank, s, t, &again));
        }
    }

    #[test]
    fn under_a_total_assumption_the_path_order_sees_constants(
        (s, t) in (open(), open()),
        precedence in Just((0..8).map(Symbol).collect::<Vec<_>>()).prop_shuffle(),
        names in Just(VARIABLES.to_vec()).prop_shuffle(),
    ) {
        // A constant with the rank of the variable is a ground instance, so that whatever is
        // assumed greater is greater there; this checks that the atoms compare by rank.
        let mut world = World::new(&setting(OrderKind::Lpo, precedence, vec![], 1));
        let (s, t) = (world.term(&s), world.term(&t));
        let mut substitution = Substitution::default();
        for (rank, &name) in names.iter().rev().enumerate() {
            let shape = SymbolInfo { arguments: Box::new([]), result: Sort(0), weight: 1 };
            let symbol = world.bank.declare(shape);
            world.order.add_least(symbol, rank as u64);
            let constant = world.bank.apply(symbol, &[]);
            substitution.set(name, constant);
        }
        let assumed = VariableOrder::new(&names);
        let [u, v] = [s, t].map(|term| instantiate(&mut world.bank, term, &substitution));
        let more = world.order.greater_assuming(&world.bank, s, t, &assumed);
        prop_assert!(!more || world.greater(u, v));
    }
}

fn group_like(kind: OrderKind) -> World {
    World::new(&setting(kind, (3..8).map(Symbol).collect(), vec![], 1))
}

const KINDS: [OrderKind; 2] = [OrderKind::Kbo, OrderKind::Lpo];

#[test]
fn an_assumption_orders_what_commutativity_leaves_open() {
    for kind in KINDS {
        let mut world = group_like(kind);
        let pair = |x, y| App(5, vec![Var(x), Var(y)]);
        let (xy, yx) = (world.term(&pair(0, 1)), world.term(&pair(1, 0)));
        let under = |names: &[u32], s, t| {
            let assumed = VariableOrder::new(names);
            world.order.greater_assuming(&world.bank, s, t, &assumed)
        };
        assert!(under(&[0, 1], xy, yx) && !under(&[0, 1], yx, xy));
        assert!(under(&[1, 0], yx, xy) && !under(&[1, 0], xy, yx));
        assert!(!under(&[0], xy, yx) && !under(&[1], xy, yx));
        let (wide, back) = (world.term(&pair(20, 1)), world.term(&pair(1, 20)));
        let assumed = VariableOrder::new(&[20, 1]);
        assert!(
            world
                .order
                .greater_assuming(&world.bank, wide, back, &assumed)
        );
        assert!(
            !world
                .order
                .greater_assuming(&world.bank, back, wide, &assumed)
        );
    }
}

#[test]
fn weights_follow_the_assumption() {
    // Terms in x cover terms in y of the same weight if x > y, but not heavier ones.
    let mut world = group_like(OrderKind::Kbo);
    let small = world.term(&App(6, vec![Var(1), App(3, vec![Var(1)])]));
    let large = world.term(&App(6, vec![Var(0), App(4, vec![Var(0)])]));
    let heavy = world.term(&App(6, vec![Var(1), App(4, vec![App(4, vec![Var(1)])])]));
    let assumed = VariableOrder::new(&[0, 1]);
    let under = |s, t| world.order.greater_assuming(&world.bank, s, t, &assumed);
    assert!(under(large, small) && !under(small, large));
    assert!(!under(large, heavy) && !under(heavy, large));
}

#[test]
fn question_constants_are_least_and_follow_their_ranks() {
    for kind in KINDS {
        let mut world = group_like(kind);
        let shape = SymbolInfo {
            arguments: Box::new([]),
            result: Sort(0),
            weight: world.order.variable_weight(),
        };
        let [low, high] = [0, 1].map(|_| world.bank.declare(shape.clone()));
        world.order.add_least(low, 1);
        world.order.add_least(high, 2);
        let [low_term, high_term] = [low, high].map(|symbol| world.bank.apply(symbol, &[]));
        let constants: Vec<_> = (0..3).map(|c| world.term(&App(c, vec![]))).collect();
        assert!(world.greater(high_term, low_term));
        assert!(constants.iter().all(|&c| world.greater(c, high_term)));
        assert_eq!(world.order.weight(high), world.order.variable_weight());
        world.order.add_least(low, 3);
        assert!(world.greater(low_term, high_term));
        // Symbols that the setting does not name come after the named ones, as declared.
        let expected = [3, 4, 5, 6, 7, 0, 1, 2, low.0, high.0].map(Symbol);
        assert_eq!(world.order.precedence(), expected);
    }
}

#[test]
fn a_million_levels_compare() {
    for kind in KINDS {
        let mut world = group_like(kind);
        let (x, y, c) = (
            world.variable(0),
            world.variable(1),
            world.term(&App(0, vec![])),
        );
        // Unary towers, one a subterm of the other; combs that differ at the bottom only, with a
        // variable at each level, so that counts are wide; and a comb against a tower.
        let [f, g, h] = [3, 4, 5].map(Symbol);
        let tower = |world: &mut World, symbol, bottom| {
            (0..1_000_000).fold(bottom, |top, _| world.bank.apply(symbol, &[top]))
        };
        let comb = |world: &mut World, bottom| {
            (0..1_000_000).fold(bottom, |top, _| world.bank.apply(h, &[top, y]))
        };
        let short = tower(&mut world, f, x);
        let long = world.bank.apply(f, &[short]);
        assert!(world.greater(long, short) && !world.greater(short, long));
        let other = tower(&mut world, g, x);
        assert!(world.greater(short, other) && !world.greater(other, short));
        let step = world.bank.apply(f, &[x]);
        let replaced = world.bank.apply(g, &[x]);
        let (upper, lower) = (comb(&mut world, step), comb(&mut world, replaced));
        assert_eq!(
            world.order.compare(&world.bank, upper, lower),
            Comparison::Greater
        );
        let ground = comb(&mut world, c);
        assert!(!world.greater(ground, upper));
        let stranger = world.variable(20);
        let stranger = world.bank.apply(g, &[stranger]);
        let stranger = comb(&mut world, stranger);
        assert_eq!(
            world.order.compare(&world.bank, upper, stranger),
            Comparison::Incomparable
        );
    }
}

#[test]
fn doubled_terms_compare() {
    for kind in KINDS {
        let mut world = group_like(kind);
        let doubled = |world: &mut World, bottom: &Tree, times| {
            let bottom = world.term(bottom);
            (0..times).fold(bottom, |top, _| world.bank.apply(Symbol(5), &[top, top]))
        };
        for leaf in [App(0, vec![]), Var(0), Var(20)] {
            let large = doubled(&mut world, &App(3, vec![leaf.clone()]), 60);
            let small = doubled(&mut world, &App(4, vec![leaf.clone()]), 60);
            let other = doubled(&mut world, &App(4, vec![Var(1)]), 60);
            assert!(world.greater(large, small) && !world.greater(small, large));
            assert!(!world.greater(large, other));
            // Saturated weights decide nothing.
            let larger = doubled(&mut world, &leaf, 200);
            let largest = world.bank.apply(Symbol(3), &[larger]);
            assert!(!world.greater(larger, largest));
            assert_eq!(world.greater(largest, larger), kind == OrderKind::Lpo);
        }
    }
}

#[test]
fn settings_that_are_no_orders_are_refused() {
    let refused = |setting: OrderSetting| Order::new(&setting, &shapes()).err();
    let kbo = |precedence: &[u32], weights: &[(u32, u32)], variable_weight| {
        let precedence = precedence.iter().map(|&s| Symbol(s)).collect();
        let weights = weights.iter().map(|&(s, w)| (Symbol(s), w)).collect();
        setting(OrderKind::Kbo, precedence, weights, variable_weight)
    };
    assert_eq!(refused(kbo(&[], &[], 1)), None);
    assert_eq!(refused(kbo(&[3], &[(3, 0), (5, 0)], 1)), None);
    assert_eq!(
        refused(kbo(&[9], &[], 1)),
        Some(OrderProblem::UnknownSymbol(Symbol(9)))
    );
    assert_eq!(
        refused(kbo(&[1, 1], &[], 1)),
        Some(OrderProblem::NamedTwice(Symbol(1)))
    );
    assert_eq!(
        refused(kbo(&[], &[(1, 1), (1, 2)], 1)),
        Some(OrderProblem::WeighedTwice(Symbol(1)))
    );
    assert_eq!(
        refused(kbo(&[], &[], 0)),
        Some(OrderProblem::VariableWithoutWeight)
    );
    assert_eq!(
        refused(kbo(&[], &[(0, 2)], 2)),
        Some(OrderProblem::LightConstant {
            constant: Symbol(1),
            weight: 1,
            variable_weight: 2
        })
    );
    assert_eq!(
        refused(kbo(&[5, 3], &[(3, 0)], 1)),
        Some(OrderProblem::WeightlessNotGreatest {
            symbol: Symbol(3),
            greatest: Symbol(5)
        })
    );
    assert_eq!(
        refused(kbo(&[], &[(3, 0)], 1)),
        Some(OrderProblem::WeightlessNotGreatest {
            symbol: Symbol(3),
            greatest: Symbol(0)
        })
    );
}

#[test]
fn an_order_can_go_to_another_thread() {
    fn sendable<T: Send + Clone>() {}
    sendable::<Order>();
}

#[test]
fn the_variables_must_allow_every_level_of_the_descent() {
    // The first arguments decide by the precedence, and their variables allow it, but the second
    // arguments spoil it; once with packed and once with wide counts.
    let mut world = group_like(OrderKind::Kbo);
    let both = |symbol, s: &Tree, t: &Tree| App(symbol, vec![s.clone(), t.clone()]);
    let (x, c) = (Var(0), App(0, vec![]));
    for stranger in [1, 20] {
        let y = Var(stranger);
        let upper = both(5, &both(5, &x, &y), &both(5, &c, &c));
        let lower = both(5, &both(6, &x, &c), &both(5, &y, &y));
        assert_eq!(world.compare(&upper, &lower), Comparison::Incomparable);
        assert_eq!(world.compare(&lower, &upper), Comparison::Incomparable);
        let fair = both(5, &both(6, &x, &c), &both(5, &y, &c));
        assert_eq!(world.compare(&upper, &fair), Comparison::Greater);
        assert_eq!(world.compare(&fair, &upper), Comparison::Less);
    }
}

/// Prints what a comparison costs; run by hand with `--ignored --nocapture`, with optimisation.
#[test]
#[ignore = "a measurement"]
fn cost_of_a_comparison() {
    use proptest::strategy::ValueTree;
    let mut runner = proptest::test_runner::TestRunner::deterministic();
    for kind in KINDS {
        let mut world = group_like(kind);
        let terms: Vec<_> = (0..1000)
            .map(|_| {
                let tree = open().new_tree(&mut runner).expect("a tree").current();
                world.term(&tree)
            })
            .collect();
        let narrow = |term: &TermId| !world.bank.counts(*term).is_wide();
        let terms: Vec<_> = terms.into_iter().filter(narrow).collect();
        let start = std::time::Instant::now();
        let mut greater = 0;
        for &s in &terms {
            greater += terms.iter().filter(|&&t| world.greater(s, t)).count();
        }
        let each = start.elapsed().as_nanos() / (terms.len() * terms.len()) as u128;
        println!(
            "{kind:?}: {each} ns a comparison, {greater} of {} greater",
            terms.len().pow(2)
        );
    }
}

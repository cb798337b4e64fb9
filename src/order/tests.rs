//! The orders against their textbook definitions, written naively, and against their laws.

use super::*;
use crate::term::{Bank, Sort, Substitution, Symbol, SymbolInfo, TermId, Variable, instantiate};
use proptest::prelude::*;
use std::collections::BTreeMap;

/// Arities of the symbols: three constants, two unary, two binary, one ternary symbol.
const ARITIES: [usize; 8] = [0, 0, 0, 1, 1, 2, 2, 3];

/// Variables 0 to 2 have packed counts; a term with variable 20 is wide.
const VARIABLES: [u32; 4] = [0, 1, 2, 20];

#[derive(Clone, Debug, PartialEq, Eq)]
enum Tree {
    Var(u32),
    App(usize, Vec<Tree>),
}
use Tree::{App, Var};

fn trees(leaf: BoxedStrategy<Tree>) -> impl Strategy<Value = Tree> {
    leaf.prop_recursive(5, 24, 3, |inner| {
        (3usize..8, prop::collection::vec(inner, 3)).prop_map(|(symbol, mut arguments)| {
            arguments.truncate(ARITIES[symbol]);
            App(symbol, arguments)
        })
    })
}

fn ground() -> impl Strategy<Value = Tree> {
    trees((0usize..3).prop_map(|symbol| App(symbol, vec![])).boxed())
}

fn open() -> impl Strategy<Value = Tree> {
    let constants = (0usize..3).prop_map(|symbol| App(symbol, vec![]));
    let few = (0usize..2).prop_map(|index| Var(VARIABLES[index]));
    let any = prop::sample::select(VARIABLES.to_vec()).prop_map(Var);
    trees(prop_oneof![1 => constants, 4 => few, 1 => any].boxed())
}

/// Settings that are admissible by construction; half of them have a weightless unary symbol.
fn settings() -> impl Strategy<Value = OrderSetting> {
    let precedence = Just((0..8).map(Symbol).collect::<Vec<_>>()).prop_shuffle();
    (
        any::<[bool; 2]>(),
        precedence,
        prop::array::uniform8(0u32..3),
        1u32..3,
    )
        .prop_map(
            |([kbo, weightless], mut precedence, weights, variable_weight)| {
                if !kbo {
                    return setting(OrderKind::Lpo, precedence, vec![], 1);
                }
                let mut weights = weights.to_vec();
                for (weight, arity) in weights.iter_mut().zip(ARITIES) {
                    match arity {
                        0 => *weight += variable_weight,
                        1 => *weight += 1,
                        _ => {}
                    }
                }
                if weightless {
                    weights[3] = 0;
                    precedence.retain(|&symbol| symbol != Symbol(3));
                    precedence.insert(0, Symbol(3));
                }
                let weights = (0..8).map(Symbol).zip(weights).collect();
                setting(OrderKind::Kbo, precedence, weights, variable_weight)
            },
        )
}

fn setting(
    kind: OrderKind,
    precedence: Vec<Symbol>,
    weights: Vec<(Symbol, u32)>,
    variable_weight: u32,
) -> OrderSetting {
    OrderSetting {
        kind,
        precedence,
        weights,
        variable_weight,
    }
}

fn shapes() -> Vec<SymbolInfo> {
    let shape = |&arity: &usize| SymbolInfo {
        arguments: vec![Sort(0); arity].into(),
        result: Sort(0),
        weight: 1,
    };
    ARITIES.iter().map(shape).collect()
}

struct World {
    order: Order,
    bank: Bank,
}

impl World {
    fn new(setting: &OrderSetting) -> World {
        let order = Order::new(setting, &shapes()).expect("the setting is admissible");
        let mut bank = Bank::new(order.variable_weight());
        for (index, mut info) in shapes().into_iter().enumerate() {
            info.weight = order.weight(Symbol(index as u32));
            bank.declare(info);
        }
        World { order, bank }
    }

    fn term(&mut self, tree: &Tree) -> TermId {
        match tree {
            Var(index) => self.variable(*index),
            App(symbol, arguments) => {
                let arguments: Vec<_> = arguments.iter().map(|tree| self.term(tree)).collect();
                self.bank.apply(Symbol(*symbol as u32), &arguments)
            }
        }
    }

    fn variable(&mut self, index: u32) -> TermId {
        let sort = Sort(0);
        self.bank.variable(Variable { index, sort })
    }

    fn compare(&mut self, s: &Tree, t: &Tree) -> Comparison {
        let (s, t) = (self.term(s), self.term(t));
        self.order.compare(&self.bank, s, t)
    }

    fn greater(&self, s: TermId, t: TermId) -> bool {
        self.order.greater(&self.bank, s, t)
    }
}

/// The definitions of Baader & Nipkow 1998, 5.4.12 and 5.4.18, word for word, for trees.
struct Textbook<'a>(&'a OrderSetting);

impl Textbook<'_> {
    fn greater(&self, s: &Tree, t: &Tree) -> bool {
        match self.0.kind {
            OrderKind::Kbo => self.kbo(s, t),
            OrderKind::Lpo => self.lpo(s, t),
        }
    }

    fn above(&self, f: usize, g: usize) -> bool {
        let place = |f| self.0.precedence.iter().position(|s| s.index() == f);
        place(f) < place(g)
    }

    fn weight(&self, t: &Tree) -> u32 {
        match t {
            Var(_) => self.0.variable_weight,
            App(f, arguments) => {
                let own = self.0.weights.iter().find(|(s, _)| s.index() == *f);
                own.expect("every symbol has a weight").1
                    + arguments.iter().map(|t| self.weight(t)).sum::<u32>()
            }
        }
    }

    fn kbo(&self, s: &Tree, t: &Tree) -> bool {
        let (in_s, in_t) = (occurrences(s), occurrences(t));
        if in_t.iter().any(|(x, n)| in_s.get(x).unwrap_or(&0) < n) {
            return false;
        }
        if self.weight(s) != self.weight(t) {
            return self.weight(s) > self.weight(t);
        }
        match (s, t) {
            (Var(_), _) => false,
            (App(..), Var(_)) => {
                let mut inner = s;
                while let App(_, arguments) = inner {
                    let [argument] = &arguments[..] else {
                        return false;
                    };
                    inner = argument;
                }
                inner == t
            }
            (App(f, _), App(g, _)) if f != g => self.above(*f, *g),
            (App(_, ss), App(_, ts)) => self.first_greater(ss, ts),
        }
    }

    fn lpo(&self, s: &Tree, t: &Tree) -> bool {
        let (App(f, ss), true) = (s, s != t) else {
            return false;
        };
        match t {
            Var(x) => occurrences(s).contains_key(x),
            App(g, ts) => {
                ss.iter()
                    .any(|argument| argument == t || self.lpo(argument, t))
                    || ts.iter().all(|argument| self.lpo(s, argument))
                        && (self.above(*f, *g) || f == g && self.first_greater(ss, ts))
            }
        }
    }

    fn first_greater(&self, ss: &[Tree], ts: &[Tree]) -> bool {
        let first = ss.iter().zip(ts).find(|(s, t)| s != t);
        first.is_some_and(|(s, t)| self.greater(s, t))
    }
}

fn occurrences(t: &Tree) -> BTreeMap<u32, u32> {
    let mut counts = BTreeMap::new();
    let mut stack = vec![t];
    while let Some(t) = stack.pop() {
        match t {
            Var(x) => *counts.entry(*x).or_default() += 1,
            App(_, arguments) => stack.extend(arguments),
        }
    }
    counts
}

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

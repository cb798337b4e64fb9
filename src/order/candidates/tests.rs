//! The candidates for well-known theories, and the search against orders made beforehand.

use super::{
    Bank, CANDIDATE_LIMIT, Candidate, Law, Order, OrderKind, OrderSetting, Symbol, candidates, lpo,
    misdirected, search,
};
use crate::term::{Sort, SymbolInfo, TermId, Variable};
use proptest::prelude::*;

/// The name and the number of arguments of a symbol.
type Shape = (char, usize);

/// A bank whose symbols are letters and signs, and laws written in prefix form.
struct World {
    bank: Bank,
    names: Vec<char>,
}

impl World {
    fn new(symbols: &[Shape]) -> World {
        let mut bank = Bank::default();
        for &(_, arity) in symbols {
            bank.declare(SymbolInfo {
                arguments: vec![Sort(0); arity].into(),
                result: Sort(0),
                weight: 1,
            });
        }
        let names = symbols.iter().map(|(name, _)| *name).collect();
        World { bank, names }
    }

    fn symbol(&self, name: char) -> Option<Symbol> {
        let place = self.names.iter().position(|&known| known == name)?;
        Some(Symbol(place as u32))
    }

    /// Reads a term in prefix form from its end; what is no symbol is a variable.
    fn term(&mut self, text: &str) -> TermId {
        let mut stack = Vec::new();
        for letter in text.chars().rev() {
            let term = match self.symbol(letter) {
                Some(symbol) => {
                    let arity = self.bank.info(symbol).arguments.len();
                    let mut arguments = stack.split_off(stack.len() - arity);
                    arguments.reverse();
                    self.bank.apply(symbol, &arguments)
                }
                None => self.bank.variable(Variable {
                    index: letter as u32 - 'p' as u32,
                    sort: Sort(0),
                }),
            };
            stack.push(term);
        }
        assert_eq!(stack.len(), 1, "{text} is one term");
        stack[0]
    }

    fn laws(&mut self, texts: &[&str]) -> Vec<Law> {
        let sides = texts
            .iter()
            .map(|text| text.split_once('=').expect("a law"));
        sides.map(|(l, r)| (self.term(l), self.term(r))).collect()
    }

    fn is_above(&self, setting: &OrderSetting, names: &str) -> bool {
        let place = |name| {
            let symbol = self.symbol(name).expect("a symbol");
            setting.precedence.iter().position(|&s| s == symbol)
        };
        let places: Vec<_> = names.chars().map(place).collect();
        places.is_sorted()
    }
}

#[test]
fn groups_get_the_orders_that_complete_them() {
    for symbols in [
        [('*', 2), ('i', 1), ('e', 0)],
        [('e', 0), ('*', 2), ('i', 1)],
    ] {
        let mut world = World::new(&symbols);
        let laws = world.laws(&["*ex=x", "*ixx=e", "**xyz=*x*yz"]);
        let found = candidates(&world.bank, &laws, &[]);
        let first = &found[0].setting;
        assert!(first.kind == OrderKind::Lpo && world.is_above(first, "i*e"));
        let second = &found[1].setting;
        assert!(second.kind == OrderKind::Kbo && world.is_above(second, "i*e"));
        let inverse = world.symbol('i').expect("declared");
        assert_eq!(second.weights, [(inverse, 0)]);
        for candidate in &found[..2] {
            assert_eq!(
                misdirected(&world.bank, &candidate.setting, &laws),
                Ok(vec![])
            );
        }
    }
}

#[test]
fn definitions_decrease_in_the_first_order() {
    let theories: [(&[Shape], &[&str]); 3] = [
        (
            &[('0', 0), ('s', 1), ('+', 2), ('*', 2)],
            &["+x0=x", "+xsy=s+xy", "*x0=0", "*xsy=+*xyx"],
        ),
        (
            // Lists: n is the empty list, c puts an element before, a appends, r reverses.
            &[('n', 0), ('c', 2), ('a', 2), ('r', 1)],
            &["any=y", "acxyz=cxayz", "rn=n", "rcxy=arycxn"],
        ),
        (
            // Loops by two divisions and a unit.
            &[('*', 2), ('\\', 2), ('/', 2), ('e', 0)],
            &[
                "\\x*xy=y", "*x\\xy=y", "*/yxx=y", "/*yxx=y", "*ex=x", "*xe=x",
            ],
        ),
    ];
    for (symbols, texts) in theories {
        let mut world = World::new(symbols);
        let laws = world.laws(texts);
        let first = &candidates(&world.bank, &laws, &[])[0];
        assert_eq!(misdirected(&world.bank, &first.setting, &laws), Ok(vec![]));
    }
}

#[test]
fn a_product_can_be_above_a_sum_that_is_factored_out() {
    let mut world = World::new(&[('*', 2), ('+', 2)]);
    let laws = world.laws(&["+*xy*xz=*x+yz"]);
    let back: Vec<_> = laws.iter().map(|&(l, r)| (r, l)).collect();
    let found = candidates(&world.bank, &laws, &[]);
    let expands =
        |candidate: &&Candidate| misdirected(&world.bank, &candidate.setting, &back) == Ok(vec![]);
    assert!(found.iter().any(|candidate| expands(&candidate)));
    let directed = candidates(&world.bank, &[], &back);
    assert!(!directed.is_empty() && directed.iter().all(|candidate| expands(&candidate)));
}

#[test]
fn rules_are_directed_or_reported() {
    let mut world = World::new(&[('f', 1), ('g', 1), ('a', 0), ('b', 0)]);
    let circle = world.laws(&["fx=gx", "gx=fx"]);
    assert_eq!(search(&world.bank, &circle), None);
    assert_eq!(candidates(&world.bank, &[], &circle), []);
    let plain = candidates(&world.bank, &[], &[])[0].setting.clone();
    let wrong = misdirected(&world.bank, &plain, &circle).expect("admissible");
    assert_eq!(wrong.len(), 1);

    // No lexicographic path order has these decrease: the second wants b above f and a, and then
    // the first fails. With b as heavy as f(a) and above f, the Knuth–Bendix order does.
    let weighed = world.laws(&["fffa=fb", "b=fa"]);
    let setting = search(&world.bank, &weighed).expect("there is one");
    assert_eq!(setting.kind, OrderKind::Kbo);
    assert_eq!(misdirected(&world.bank, &setting, &weighed), Ok(vec![]));
}

#[test]
fn a_deep_law_and_many_symbols_do_no_harm() {
    let mut world = World::new(&[('f', 1), ('a', 0)]);
    let bottom = world.term("a");
    let deep = (0..1_000_000).fold(bottom, |top, _| world.bank.apply(Symbol(0), &[top]));
    let laws = [(deep, bottom)];
    let found = candidates(&world.bank, &laws, &laws);
    assert!(!found.is_empty());

    let many: Vec<_> = (0..2000).map(|_| ('_', 0)).collect();
    let mut world = World::new(&many);
    let (a, b) = (
        world.bank.apply(Symbol(0), &[]),
        world.bank.apply(Symbol(1), &[]),
    );
    assert!(!candidates(&world.bank, &[(a, b)], &[]).is_empty());
}

const ARITIES: [Shape; 6] = [('a', 0), ('b', 0), ('f', 1), ('g', 1), ('h', 2), ('k', 2)];

/// Prefix forms of terms over [`ARITIES`] with two variables.
fn texts() -> impl Strategy<Value = String> {
    let leaf = prop::sample::select(vec!["a", "b", "x", "y"]).prop_map(String::from);
    leaf.prop_recursive(3, 8, 2, |inner| {
        (2usize..6, inner.clone(), inner).prop_map(|(symbol, s, t)| {
            let (name, arity) = ARITIES[symbol];
            match arity {
                1 => format!("{name}{s}"),
                _ => format!("{name}{s}{t}"),
            }
        })
    })
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(500))]

    #[test]
    fn the_search_finds_what_there_is(
        texts in prop::collection::vec((texts(), texts()), 1..8),
        precedence in Just((0..6).map(Symbol).collect::<Vec<_>>()).prop_shuffle(),
    ) {
        let mut world = World::new(&ARITIES);
        let hidden = lpo(precedence);
        let mut laws: Vec<_> = texts.iter().map(|(l, r)| (world.term(l), world.term(r))).collect();
        let not = misdirected(&world.bank, &hidden, &laws).expect("admissible");
        for place in not.into_iter().rev() {
            laws.remove(place);
        }
        let found = search(&world.bank, &laws);
        prop_assert!(found.is_some());
        let setting = found.expect("just seen");
        prop_assert_eq!(setting.kind, OrderKind::Lpo);
        prop_assert_eq!(misdirected(&world.bank, &setting, &laws), Ok(vec![]));
        prop_assert!(!candidates(&world.bank, &[], &laws).is_empty());
    }

    #[test]
    fn candidates_are_admissible_and_differ(
        texts in prop::collection::vec((texts(), texts()), 0..6),
    ) {
        let mut world = World::new(&ARITIES);
        let laws: Vec<_> = texts.iter().map(|(l, r)| (world.term(l), world.term(r))).collect();
        let found = candidates(&world.bank, &laws, &[]);
        prop_assert!((3..=CANDIDATE_LIMIT).contains(&found.len()));
        for (place, candidate) in found.iter().enumerate() {
            prop_assert!(Order::new(&candidate.setting, world.bank.symbols()).is_ok());
            prop_assert!(found[..place].iter().all(|c| c.setting != candidate.setting));
        }
    }
}

/// Prints how long making the list takes; run by hand with `--ignored --nocapture`.
#[test]
#[ignore = "a measurement"]
fn cost_of_the_list() {
    use proptest::strategy::ValueTree;
    let mut runner = proptest::test_runner::TestRunner::deterministic();
    let mut world = World::new(&ARITIES);
    let laws: Vec<_> = (0..200)
        .map(|_| {
            let mut side = || texts().new_tree(&mut runner).expect("a text").current();
            let (left, right) = (side(), side());
            (world.term(&left), world.term(&right))
        })
        .collect();
    for (laws, directed) in [(&laws[..20], 0), (&laws[..], 0), (&laws[..], 10)] {
        let start = std::time::Instant::now();
        let found = candidates(&world.bank, laws, &laws[..directed]);
        println!(
            "{} laws, {directed} directed: {} orders in {:?}",
            laws.len(),
            found.len(),
            start.elapsed()
        );
    }
}

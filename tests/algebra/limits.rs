//! Stopping, continuing, and sizes that are too large.

use equable::algebra::{Algebra, Search, Signature, StopReason};
use equable::algebra::{Equation, GivenUp, Known, Limits, Outcome, Pool, PoolOutcome, Problem};
use equable::term::{Bank, Sort, Symbol, SymbolInfo, TermId, Variable};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

struct Magmas {
    bank: Bank,
    product: Symbol,
}

impl Magmas {
    fn new() -> Self {
        let mut bank = Bank::default();
        let sort = Sort(0);
        let info = SymbolInfo {
            arguments: Box::new([sort, sort]),
            result: sort,
            weight: 1,
        };
        let product = bank.declare(info);
        Magmas { bank, product }
    }

    fn variable(&mut self, index: u32) -> TermId {
        self.bank.variable(Variable {
            index,
            sort: Sort(0),
        })
    }

    fn product(&mut self, a: TermId, b: TermId) -> TermId {
        self.bank.apply(self.product, &[a, b])
    }

    fn problem(&self, laws: &[(TermId, TermId)], claim: (TermId, TermId)) -> Problem {
        Problem::new(&self.bank, 1, laws.iter().copied(), claim)
    }
}

/// Commutative semigroups refute no commutativity: a search without end.
fn endless() -> Problem {
    let mut magmas = Magmas::new();
    let [x, y, z] = [0, 1, 2].map(|index| magmas.variable(index));
    let [xy, yx, yz] = [(x, y), (y, x), (y, z)].map(|(a, b)| magmas.product(a, b));
    let (left, right) = (magmas.product(xy, z), magmas.product(x, yz));
    let xxy = magmas.product(x, xy);
    magmas.problem(&[(left, right), (xxy, yx)], (xy, yx))
}

#[test]
fn a_raised_flag_and_a_deadline_stop_the_search_which_can_go_on() {
    let stop = Arc::new(AtomicBool::new(false));
    let mut limits = Limits::new(stop.clone(), None);
    let mut search = Search::new(Arc::new(endless()), 64);
    let raise = std::thread::spawn(move || {
        std::thread::sleep(Duration::from_millis(50));
        stop.store(true, Ordering::Relaxed);
    });
    let outcome = search.run(&mut limits);
    raise.join().expect("it only raises the flag");
    let reasons = matches!(
        outcome,
        Outcome::Stopped(StopReason::Flag) | Outcome::Exhausted
    );
    assert!(reasons, "{outcome:?}");
    let before = search.ruled_out().len();
    let deadline = Instant::now() + Duration::from_millis(50);
    let outcome = search.run(&mut Limits::new(Arc::default(), Some(deadline)));
    let reasons = matches!(
        outcome,
        Outcome::Stopped(StopReason::Deadline) | Outcome::Exhausted
    );
    assert!(reasons, "{outcome:?}");
    assert!(search.ruled_out().len() >= before);
}

#[test]
fn sizes_with_too_many_instances_are_given_up_and_not_called_ruled_out() {
    let mut magmas = Magmas::new();
    let variables: Vec<TermId> = (0..12).map(|index| magmas.variable(index)).collect();
    let mut left = variables[0];
    let mut right = variables[11];
    for place in 1..12 {
        left = magmas.product(left, variables[place]);
        right = magmas.product(right, variables[11 - place]);
    }
    let law = (left, right);
    let xy = magmas.product(variables[0], variables[1]);
    let problem = magmas.problem(&[law, (xy, variables[0])], (xy, variables[0]));
    let mut search = Search::new(Arc::new(problem), 12);
    assert!(matches!(
        search.run(&mut Limits::none()),
        Outcome::Exhausted
    ));
    assert!(
        search.given_up().contains(&(vec![8], GivenUp::Memory)),
        "8^12 instances"
    );
    assert!(search.ruled_out_total() < 8);
    assert!(!search.ruled_out().contains(&vec![8]));
}

#[test]
fn a_law_that_is_deep_and_one_between_variables() {
    let mut magmas = Magmas::new();
    let [x, y] = [0, 1].map(|index| magmas.variable(index));
    let mut deep = y;
    for _ in 0..100_000 {
        deep = magmas.product(x, deep);
    }
    let xy = magmas.product(x, y);
    let problem = magmas.problem(&[(deep, y)], (xy, y));
    let mut pool = Pool::new(problem.signature.clone(), problem.laws.clone());
    let outcome = pool.refute(&problem.claim, &mut Limits::none());
    let PoolOutcome::Refuted(found) = outcome else {
        panic!("{outcome:?}")
    };
    assert_eq!(found.algebra.sizes(), [2]);
    // In an algebra in which x = y holds there is one element, and everything is equal.
    let problem = magmas.problem(&[(x, y)], (xy, y));
    let mut search = Search::new(Arc::new(problem.clone()), 5);
    assert!(matches!(
        search.run(&mut Limits::none()),
        Outcome::Exhausted
    ));
    assert_eq!(search.ruled_out().len(), 5);
    assert_eq!(search.ruled_out_total(), 5);
    let mut pool = Pool::new(problem.signature.clone(), problem.laws.clone());
    assert!(matches!(
        pool.refute(&problem.claim, &mut Limits::none()),
        PoolOutcome::None
    ));
}

#[test]
fn known_algebras_answer_and_only_those_that_break_a_new_law_go() {
    let mut magmas = Magmas::new();
    let [x, y] = [0, 1].map(|index| magmas.variable(index));
    let (xy, yx) = (magmas.product(x, y), magmas.product(y, x));
    let signature = Signature::new(&magmas.bank, 1);
    let table = |values: &[u8]| {
        Algebra::new(&signature, vec![2], vec![values.to_vec()]).expect("a table of size 2")
    };
    let mut known = Known::default();
    assert_eq!(known.add(table(&[0, 0, 1, 1])), 0);
    assert_eq!(known.add(table(&[0, 1, 1, 0])), 1);
    assert_eq!(known.add(table(&[0, 0, 1, 1])), 0);
    let commutes = Equation::compile(&magmas.bank, xy, yx);
    let first = Equation::compile(&magmas.bank, xy, x);
    assert_eq!(refuted(&mut known, &commutes), Some(0), "projection");
    assert_eq!(refuted(&mut known, &first), Some(1), "addition");
    let info = SymbolInfo {
        arguments: Box::new([]),
        result: Sort(0),
        weight: 1,
    };
    let constant = magmas.bank.declare(info);
    let e = magmas.bank.apply(constant, &[]);
    let ex = magmas.product(e, x);
    let unit = Equation::compile(&magmas.bank, ex, x);
    let grown = Signature::new(&magmas.bank, 1);
    let dropped = known.update(&grown, std::slice::from_ref(&commutes), &mut Limits::none());
    assert_eq!(dropped, Ok(vec![0]));
    assert_eq!(known.algebras().len(), 1);
    assert_eq!(
        refuted(&mut known, &unit),
        None,
        "0 is a unit of addition modulo 2"
    );
    assert_eq!(refuted(&mut known, &commutes), None);
}

fn refuted(known: &mut Known, claim: &Equation) -> Option<usize> {
    let found = known.refute(claim, &mut Limits::none());
    found.expect("nothing stops it").map(|(place, _)| place)
}

//! The search by a SAT solver against the direct one and against trying all tables.

use super::random::{SIGNATURES, by_force, case, check};
use equable::algebra::{GivenUp, Limits, Outcome, Problem, SatSearch, Search, StopReason};
use equable::term::{Bank, Sort, SymbolInfo, TermId, Variable};
use proptest::prelude::*;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::{Duration, Instant};

proptest! {
    #![proptest_config(ProptestConfig { cases: 400, failure_persistence: None, ..Default::default() })]

    #[test]
    fn both_searches_agree(
        signature in 0..SIGNATURES.len(),
        laws in 0..4usize,
        numbers in prop::collection::vec(0..1000u32, 80),
    ) {
        let case = case(signature, laws, numbers);
        let problem = Problem::new(&case.bank, case.sorts, case.laws.clone(), case.claim);
        let problem = Arc::new(problem);
        let largest = case.sorts as u32 + 2;
        let mut direct = Search::new(problem.clone(), largest);
        let mut sat = SatSearch::new(problem.clone(), largest);
        let direct_outcome = direct.run(&mut Limits::none());
        let outcome = sat.run(&mut Limits::none());
        prop_assert!(sat.given_up().is_empty());
        for sizes in sat.ruled_out() {
            prop_assert_ne!(by_force(&case, sizes), Some(true), "{:?} was ruled out", sizes);
        }
        match (outcome, direct_outcome) {
            (Outcome::Found(found), Outcome::Found(other)) => {
                check(&case, &problem, &found);
                prop_assert!(found.smallest);
                prop_assert_eq!(found.algebra.total(), other.algebra.total());
            }
            (Outcome::Exhausted, Outcome::Exhausted) => {
                prop_assert_eq!(sat.ruled_out_total(), largest);
                prop_assert_eq!(direct.ruled_out_total(), largest);
            }
            (outcome, other) => prop_assert!(false, "{:?} but {:?}", outcome, other),
        }
    }
}

/// Terms with one binary operation.
struct Products {
    bank: Bank,
}

impl Products {
    fn new() -> Self {
        let mut bank = Bank::default();
        bank.declare(SymbolInfo {
            arguments: Box::new([Sort(0), Sort(0)]),
            result: Sort(0),
            weight: 1,
        });
        Products { bank }
    }

    fn variable(&mut self, index: u32) -> TermId {
        let sort = Sort(0);
        self.bank.variable(Variable { index, sort })
    }

    fn product(&mut self, left: TermId, right: TermId) -> TermId {
        self.bank.apply(equable::term::Symbol(0), &[left, right])
    }
}

/// The laws of Steiner quasigroups; the claim is that brackets can be moved.
fn steiner() -> Problem {
    let mut products = Products::new();
    let [x, y, z] = [0, 1, 2].map(|index| products.variable(index));
    let (xx, xy) = (products.product(x, x), products.product(x, y));
    let (yx, yz) = (products.product(y, x), products.product(y, z));
    let back = products.product(x, xy);
    let claim = (products.product(xy, z), products.product(x, yz));
    let laws = [(xx, x), (xy, yx), (back, y)];
    Problem::new(&products.bank, 1, laws, claim)
}

#[test]
fn the_smallest_steiner_quasigroups_have_1_and_3_elements() {
    // That there are Steiner triple systems exactly of the sizes 1 and 3 modulo 6 is due to
    // Kirkman (1847); from memory.
    let mut search = SatSearch::new(Arc::new(steiner()), 12);
    let Outcome::Found(found) = search.run(&mut Limits::none()) else {
        panic!("there is one of three elements");
    };
    assert_eq!(found.algebra.sizes(), [3]);
    assert!(found.smallest);
    assert_eq!(search.ruled_out(), [vec![1], vec![2]]);
}

/// A law of seven variables that makes the tables of subterms large, and nothing found below 60.
fn long() -> Problem {
    let mut products = Products::new();
    let variables: Vec<TermId> = (0..7).map(|index| products.variable(index)).collect();
    let mut left = variables[0];
    let mut right = variables[6];
    for place in 1..7 {
        left = products.product(left, variables[place]);
        right = products.product(right, variables[6 - place]);
    }
    let xx = products.product(variables[0], variables[0]);
    let xy = products.product(variables[0], variables[1]);
    let yx = products.product(variables[1], variables[0]);
    Problem::new(
        &products.bank,
        1,
        [(left, right), (xx, variables[0]), (xy, yx)],
        (xy, yx),
    )
}

#[test]
fn it_suits_laws_that_recover_a_variable_and_not_laws_without() {
    assert!(SatSearch::suits(&steiner()));
    assert!(!SatSearch::suits(&long()));
}

#[test]
fn sizes_that_need_too_much_memory_are_given_up_with_the_reason() {
    let mut search = SatSearch::new(Arc::new(long()), 8);
    let mut limits = Limits::none();
    limits.bytes = 4 << 20;
    assert!(matches!(search.run(&mut limits), Outcome::Exhausted));
    assert!(search.given_up().contains(&(vec![8], GivenUp::Memory)));
    assert!(search.ruled_out_total() < 8);
    assert!(search.ruled_out_total() >= 1);
    assert!(!search.ruled_out().contains(&vec![8]));
}

#[test]
fn a_flag_and_a_deadline_stop_it_and_it_goes_on() {
    let stop = Arc::new(AtomicBool::new(true));
    let mut search = SatSearch::new(Arc::new(steiner()), 12);
    let outcome = search.run(&mut Limits::new(stop.clone(), None));
    assert!(matches!(outcome, Outcome::Stopped(StopReason::Flag)));
    stop.store(false, Ordering::Relaxed);
    let outcome = search.run(&mut Limits::new(stop, Some(Instant::now())));
    assert!(matches!(outcome, Outcome::Stopped(StopReason::Deadline)));
    let outcome = search.run(&mut Limits::none());
    assert!(matches!(outcome, Outcome::Found(_)));
    // While it is writing clauses or solving.
    let mut search = SatSearch::new(Arc::new(long()), 60);
    let mut before = 0;
    for _ in 0..3 {
        let deadline = Instant::now() + Duration::from_millis(50);
        let outcome = search.run(&mut Limits::new(Arc::default(), Some(deadline)));
        assert!(matches!(outcome, Outcome::Stopped(_) | Outcome::Exhausted));
        assert!(search.ruled_out_total() >= before);
        before = search.ruled_out_total();
    }
}

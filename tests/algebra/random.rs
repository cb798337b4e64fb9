//! Random problems, against trying all tables.

use equable::algebra::{Algebra, Counterexample};
use equable::algebra::{Evaluator, Limits, Outcome, Pool, PoolOutcome, Problem, Search};
use equable::term::{Bank, Head, Sort, Symbol, SymbolInfo, TermId, Variable};
use proptest::prelude::*;
use std::sync::Arc;

/// The signatures that are tried: the sorts of the arguments and of the result.
pub(super) const SIGNATURES: [&[(&[u16], u16)]; 6] = [
    &[(&[0, 0], 0)],
    &[(&[0, 0], 0), (&[], 0)],
    &[(&[0], 0), (&[0], 0), (&[], 0), (&[], 0)],
    &[(&[0], 1), (&[1, 0], 0)],
    &[(&[0, 1], 1), (&[], 0), (&[1], 0)],
    &[(&[0, 1, 0], 0), (&[0], 1)],
];

pub(super) struct Case {
    pub(super) bank: Bank,
    pub(super) laws: Vec<(TermId, TermId)>,
    pub(super) claim: (TermId, TermId),
    pub(super) sorts: usize,
}

/// A term of the sort, made from the numbers, with variables 0 to 2 of each sort.
fn term(
    bank: &mut Bank,
    sort: Sort,
    depth: u32,
    numbers: &mut impl Iterator<Item = u32>,
) -> TermId {
    let number = numbers.next().unwrap_or(0);
    let info = bank.symbols().to_vec();
    let fitting: Vec<usize> = (0..info.len())
        .filter(|&symbol| info[symbol].result == sort)
        .collect();
    if depth == 0 || number.is_multiple_of(3) || fitting.is_empty() {
        let index = u32::from(sort.0) * 3 + number / 3 % 3;
        return bank.variable(Variable { index, sort });
    }
    let symbol = fitting[(number / 3) as usize % fitting.len()];
    let arguments: Vec<TermId> = info[symbol]
        .arguments
        .iter()
        .map(|&sort| term(bank, sort, depth - 1, numbers))
        .collect();
    bank.apply(Symbol(symbol as u32), &arguments)
}

pub(super) fn case(signature: usize, laws: usize, numbers: Vec<u32>) -> Case {
    let mut bank = Bank::default();
    let mut sorts = 1;
    for (arguments, result) in SIGNATURES[signature] {
        sorts = sorts.max(usize::from(*result) + 1);
        let arguments = arguments.iter().map(|&sort| Sort(sort)).collect();
        bank.declare(SymbolInfo {
            arguments,
            result: Sort(*result),
            weight: 1,
        });
    }
    let mut numbers = numbers.into_iter();
    let mut equation = |bank: &mut Bank| {
        let sort = Sort((numbers.next().unwrap_or(0) % sorts as u32) as u16);
        (
            term(bank, sort, 3, &mut numbers),
            term(bank, sort, 2, &mut numbers),
        )
    };
    let laws = (0..laws).map(|_| equation(&mut bank)).collect();
    let claim = equation(&mut bank);
    Case {
        bank,
        laws,
        claim,
        sorts,
    }
}

fn value(bank: &Bank, tables: &[Vec<u8>], sizes: &[u32], term: TermId, with: &[u32]) -> u8 {
    match bank.head(term) {
        Head::Variable(variable) => with[variable.index as usize] as u8,
        Head::Symbol(symbol) => {
            let sorts = &bank.info(symbol).arguments;
            let pairs = bank.arguments(term).iter().zip(sorts);
            let cell = pairs.fold(0, |cell, (&argument, sort)| {
                let side = sizes[sort.0 as usize] as usize;
                cell * side + usize::from(value(bank, tables, sizes, argument, with))
            });
            tables[symbol.index()][cell]
        }
    }
}

/// The next digits, each below its range; false after the last.
fn advance<T: Copy + Into<u32> + From<u8> + std::ops::AddAssign>(
    digits: &mut [T],
    ranges: &[u32],
) -> bool {
    for (digit, &range) in digits.iter_mut().zip(ranges) {
        *digit += T::from(1u8);
        if (*digit).into() < range {
            return true;
        }
        *digit = T::from(0u8);
    }
    false
}

fn differ_somewhere(
    case: &Case,
    tables: &[Vec<u8>],
    sizes: &[u32],
    sides: (TermId, TermId),
) -> bool {
    let mut variables = case.bank.variables(sides.0);
    variables.extend(case.bank.variables(sides.1));
    variables.sort_unstable();
    variables.dedup();
    let ranges: Vec<u32> = variables.iter().map(|v| sizes[v.sort.0 as usize]).collect();
    let mut digits = vec![0u32; variables.len()];
    loop {
        let mut with = vec![0; 6];
        for (variable, &digit) in variables.iter().zip(&digits) {
            with[variable.index as usize] = digit;
        }
        let side = |term| value(&case.bank, tables, sizes, term, &with);
        if side(sides.0) != side(sides.1) {
            return true;
        }
        if !advance(&mut digits, &ranges) {
            return false;
        }
    }
}

/// Is there a counterexample of these sizes? None if there are too many tables to try.
pub(super) fn by_force(case: &Case, sizes: &[u32]) -> Option<bool> {
    let symbols = case.bank.symbols();
    let size = |sort: &Sort| sizes[sort.0 as usize];
    let cells = |info: &SymbolInfo| info.arguments.iter().map(size).product::<u32>() as usize;
    let ranges: Vec<u32> = symbols
        .iter()
        .flat_map(|info| vec![size(&info.result); cells(info)])
        .collect();
    let count = ranges
        .iter()
        .fold(1u64, |all, &range| all.saturating_mul(range.into()));
    if count > 30_000 {
        return None;
    }
    let mut flat = vec![0u8; ranges.len()];
    loop {
        let mut rest = flat.as_slice();
        let tables: Vec<Vec<u8>> = symbols
            .iter()
            .map(|info| {
                let (table, behind) = rest.split_at(cells(info));
                rest = behind;
                table.to_vec()
            })
            .collect();
        let model = case
            .laws
            .iter()
            .all(|&law| !differ_somewhere(case, &tables, sizes, law));
        if model && differ_somewhere(case, &tables, sizes, case.claim) {
            return Some(true);
        }
        if !advance(&mut flat, &ranges) {
            return Some(false);
        }
    }
}

pub(super) fn check(case: &Case, problem: &Problem, found: &Counterexample) {
    let algebra = &found.algebra;
    let tables: Vec<Vec<u8>> = algebra
        .tables()
        .iter()
        .map(|table| table.values().to_vec())
        .collect();
    for &law in &case.laws {
        assert!(
            !differ_somewhere(case, &tables, algebra.sizes(), law),
            "a law fails"
        );
    }
    let mut with = vec![0; 6];
    for (variable, &value) in problem.claim.variables().iter().zip(&found.assignment) {
        with[variable.index as usize] = value;
    }
    let side = |term| u32::from(value(&case.bank, &tables, algebra.sizes(), term, &with));
    let values = [side(case.claim.0), side(case.claim.1)];
    assert_eq!(values, found.values);
    assert_ne!(values[0], values[1]);
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 300, failure_persistence: None, ..Default::default() })]

    #[test]
    fn search_finds_exactly_what_there_is(
        signature in 0..SIGNATURES.len(),
        laws in 0..4usize,
        numbers in prop::collection::vec(0..1000u32, 80),
    ) {
        let case = case(signature, laws, numbers);
        let problem = Problem::new(&case.bank, case.sorts, case.laws.clone(), case.claim);
        let mut limits = Limits::none();
        let mut pool = Pool::new(problem.signature.clone(), problem.laws.clone());
        let pooled = pool.refute(&problem.claim, &mut limits);
        if let PoolOutcome::Refuted(found) = &pooled {
            check(&case, &problem, found);
            let again = pool.refute(&problem.claim, &mut limits);
            prop_assert!(matches!(again, PoolOutcome::Refuted(_)));
        }
        let mut search = Search::new(Arc::new(problem.clone()), case.sorts as u32 + 2);
        let outcome = search.run(&mut limits);
        if let Outcome::Found(found) = &outcome {
            check(&case, &problem, found);
        }
        for sizes in search.ruled_out() {
            prop_assert_ne!(by_force(&case, sizes), Some(true), "{:?} was ruled out", sizes);
            if let PoolOutcome::Refuted(found) = &pooled {
                prop_assert!(found.algebra.sizes() != sizes.as_slice());
            }
        }
        match outcome {
            Outcome::Found(found) => {
                let sizes = found.algebra.sizes();
                prop_assert_ne!(by_force(&case, sizes), Some(false));
                prop_assert!(found.smallest);
                if let PoolOutcome::Refuted(pooled) = &pooled {
                    prop_assert!(found.algebra.total() <= pooled.algebra.total());
                    prop_assert!(!pooled.smallest || found.algebra.total() == pooled.algebra.total());
                }
            }
            Outcome::Exhausted => prop_assert!(!search.ruled_out().is_empty()),
            Outcome::Stopped(reason) => prop_assert!(false, "{:?}", reason),
        }
    }

    #[test]
    fn evaluation_by_blocks_agrees_with_plain_evaluation(
        signature in 0..SIGNATURES.len(),
        numbers in prop::collection::vec(0..1000u32, 60),
        sizes in prop::collection::vec(1..20u32, 2),
        seed in prop::collection::vec(any::<u8>(), 16..64),
    ) {
        let case = case(signature, 0, numbers);
        let problem = Problem::new(&case.bank, case.sorts, [], case.claim);
        let sizes = sizes[..case.sorts].to_vec();
        let mut next = 0;
        let tables: Vec<Vec<u8>> = case.bank.symbols().iter().map(|info| {
            let size = |sort: &Sort| sizes[sort.0 as usize];
            let cells = info.arguments.iter().map(size).product::<u32>();
            (0..cells).map(|_| {
                next += 1;
                // A table that repeats makes sides equal more often than noise would.
                seed[next * next % seed.len()] % size(&info.result) as u8
            }).collect()
        }).collect();
        let algebra = Algebra::new(&problem.signature, sizes.clone(), tables.clone()).expect("it fits");
        let refutation = Evaluator::default().refute(&algebra, &problem.claim);
        let differ = differ_somewhere(&case, &tables, &sizes, case.claim);
        prop_assert_eq!(refutation.is_some(), differ);
        if let Some(refutation) = refutation {
            let found = Counterexample {
                algebra,
                assignment: refutation.assignment,
                values: refutation.values,
                smallest: false,
            };
            check(&case, &problem, &found);
        }
    }
}

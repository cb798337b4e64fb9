//! Finite algebras: for the claims of the theories, against values from outside, and at random.

#[path = "algebra/limits.rs"]
mod limits;
#[path = "algebra/outside.rs"]
mod outside;
#[path = "algebra/random.rs"]
mod random;
#[path = "algebra/sat.rs"]
mod sat;

use equable::algebra::{
    Algebra, Counterexample, Limits, Outcome, Pool, PoolOutcome, Problem, Search,
};
use equable::language::{Loaded, Loader, read_theory};
use equable::term::{Bank, Head, TermId, Variable};
use equable::theory::{Expected, Theory};
use std::collections::HashMap;
use std::sync::Arc;
use std::time::Instant;

fn theories() -> Vec<Theory> {
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("theories");
    let entries = std::fs::read_dir(&folder).expect("the folder is there");
    let mut files: Vec<_> = entries
        .map(|entry| entry.expect("it can be listed").path())
        .collect();
    files.sort();
    let read = |file: &std::path::PathBuf| {
        let text = std::fs::read_to_string(file).expect("it can be read");
        let name = file.file_name().expect("it is a file").to_string_lossy();
        read_theory(&name, &text, &Folder).unwrap_or_else(|_| panic!("{name} is a theory"))
    };
    files.iter().map(read).collect()
}

/// The theories beside each other, for `use`.
struct Folder;

impl Loader for Folder {
    fn load(&self, name: &str, _from: &str) -> Result<Loaded, String> {
        let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("theories");
        let file = folder.join(format!("{name}.theory"));
        let text = std::fs::read_to_string(file).map_err(|error| error.to_string())?;
        Ok(Loaded {
            source: format!("{name}.theory"),
            text,
        })
    }
}

/// The value of a term, by plain recursion on it and sums over the table's shape.
fn value(bank: &Bank, algebra: &Algebra, term: TermId, with: &HashMap<Variable, u32>) -> u32 {
    let symbol = match bank.head(term) {
        Head::Variable(variable) => return with[&variable],
        Head::Symbol(symbol) => symbol,
    };
    let mut cell = 0;
    for (&argument, &sort) in bank
        .arguments(term)
        .iter()
        .zip(&bank.info(symbol).arguments)
    {
        cell = cell * algebra.size(sort) + value(bank, algebra, argument, with);
    }
    u32::from(algebra.table(symbol).values()[cell as usize])
}

/// Checks a counterexample against the theory without the module's own evaluation.
fn check(
    theory: &Theory,
    claim: (TermId, TermId),
    found: &Counterexample,
    claim_variables: &[Variable],
) {
    let (bank, algebra) = (&theory.bank, &found.algebra);
    for law in &theory.laws {
        let mut variables = bank.variables(law.left);
        variables.extend(bank.variables(law.right));
        variables.sort();
        variables.dedup();
        let count: u64 = variables
            .iter()
            .map(|v| u64::from(algebra.size(v.sort)))
            .product();
        for number in 0..count {
            let mut rest = number;
            let mut with = HashMap::new();
            for &variable in &variables {
                let size = u64::from(algebra.size(variable.sort));
                with.insert(variable, (rest % size) as u32);
                rest /= size;
            }
            let left = value(bank, algebra, law.left, &with);
            let right = value(bank, algebra, law.right, &with);
            assert_eq!(left, right, "{} fails", law.name);
        }
    }
    let with = claim_variables
        .iter()
        .copied()
        .zip(found.assignment.iter().copied())
        .collect();
    let values = [claim.0, claim.1].map(|side| value(bank, algebra, side, &with));
    assert_eq!(values, found.values);
    assert_ne!(values[0], values[1]);
}

/// Looks in the pool and then searches, up to this total size, and checks what is found.
fn refute(
    theory: &Theory,
    sides: (TermId, TermId),
    largest: u32,
) -> (Option<Counterexample>, Search) {
    let laws = theory.laws.iter().map(|law| (law.left, law.right));
    let problem = Problem::new(&theory.bank, theory.signature.sorts().len(), laws, sides);
    let mut limits = Limits::none();
    let mut pool = Pool::new(problem.signature.clone(), problem.laws.clone());
    let pooled = pool.refute(&problem.claim, &mut limits);
    let variables = problem.claim.variables().to_vec();
    let mut search = Search::new(Arc::new(problem), largest);
    let found = match pooled {
        PoolOutcome::Refuted(found) => Some(*found),
        _ => match search.run(&mut limits) {
            Outcome::Found(found) => Some(*found),
            _ => None,
        },
    };
    if let Some(found) = &found {
        check(theory, sides, found, &variables);
    }
    (found, search)
}

/// The claims that have infinite counterexamples only, as the theories themselves say.
const INFINITE: [&str; 4] = [
    "queue.last-is-not-first",
    "queue.order-matters",
    "stack.order-matters",
    "stack.put-back",
];

#[test]
fn every_claim_that_a_finite_algebra_refutes_is_refuted() {
    for theory in theories() {
        let name = theory.name.clone().expect("it has a name");
        let claims = theory
            .claims
            .iter()
            .filter(|claim| claim.expected == Expected::NotEqual);
        for claim in claims {
            let full = format!("{name}.{}", claim.name.as_deref().unwrap_or("?"));
            let infinite = INFINITE.contains(&full.as_str());
            let begun = Instant::now();
            let largest = if infinite { 12 } else { 40 };
            let (found, search) = refute(&theory, (claim.left, claim.right), largest);
            assert_eq!(found.is_none(), infinite, "{full}");
            let time = begun.elapsed();
            match found {
                Some(found) => {
                    let label = if found.smallest {
                        "smallest"
                    } else {
                        "perhaps not smallest"
                    };
                    println!("{full}: {:?}, {label}, {time:?}", found.algebra.sizes());
                }
                None => println!("{full}: none up to {}, {time:?}", search.ruled_out_total()),
            }
        }
    }
}

#[test]
fn claims_that_follow_are_never_refuted() {
    for theory in theories() {
        for claim in theory
            .claims
            .iter()
            .filter(|claim| claim.expected == Expected::Equal)
        {
            let laws = theory.laws.iter().map(|law| (law.left, law.right));
            let sorts = theory.signature.sorts().len();
            let problem = Problem::new(&theory.bank, sorts, laws, (claim.left, claim.right));
            let mut limits = Limits::none();
            let mut pool = Pool::new(problem.signature.clone(), problem.laws.clone());
            let pooled = pool.refute(&problem.claim, &mut limits);
            assert!(
                matches!(pooled, PoolOutcome::None),
                "{:?}: {pooled:?}",
                claim.name
            );
            let mut search = Search::new(Arc::new(problem), sorts as u32 + 3);
            let outcome = search.run(&mut limits);
            assert!(
                matches!(outcome, Outcome::Exhausted),
                "{:?}: {outcome:?}",
                claim.name
            );
        }
    }
}

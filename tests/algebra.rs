//! Finite algebras for the claims that the theories say do not follow.

use equable::algebra::{Algebra, Counterexample, Limits, Outcome, Problem, Search};
use equable::language::{Loaded, Loader, read_theory};
use equable::term::{Bank, Head, TermId, Variable};
use equable::theory::{Expected, Theory};
use std::collections::HashMap;
use std::sync::Arc;
use std::time::{Duration, Instant};

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

/// The claims that have infinite counterexamples only, as the theories themselves say.
const INFINITE: [&str; 4] = [
    "queue.last-is-not-first",
    "queue.order-matters",
    "stack.order-matters",
    "stack.put-back",
];

#[test]
fn every_claim_that_a_finite_algebra_refutes_is_refuted() {
    let seconds =
        std::env::var("SECONDS_EACH").map_or(20.0, |text| text.parse().expect("a number"));
    for theory in theories() {
        let name = theory.name.clone().expect("it has a name");
        for claim in &theory.claims {
            if claim.expected != Expected::NotEqual {
                continue;
            }
            let laws = theory.laws.iter().map(|law| (law.left, law.right));
            let sides = (claim.left, claim.right);
            let sorts = theory.signature.sorts().len();
            let problem = Arc::new(Problem::new(&theory.bank, sorts, laws, sides));
            let begun = Instant::now();
            let deadline = begun + Duration::from_secs_f64(seconds);
            let mut limits = Limits::new(Arc::default(), Some(deadline));
            let mut search = Search::new(problem.clone(), 64);
            let outcome = search.run(&mut limits);
            let full = format!("{name}.{}", claim.name.as_deref().unwrap_or("?"));
            let ruled = search.ruled_out_total();
            match outcome {
                Outcome::Found(found) => {
                    println!(
                        "{full}: {:?} smallest {} ({ruled} ruled out) in {:?}",
                        found.algebra.sizes(),
                        found.smallest,
                        begun.elapsed()
                    );
                    check(&theory, sides, &found, problem.claim.variables());
                }
                other => println!(
                    "{full}: {other:?}, {ruled} ruled out, given up {:?} in {:?}",
                    search.given_up(),
                    begun.elapsed()
                ),
            }
        }
    }
}

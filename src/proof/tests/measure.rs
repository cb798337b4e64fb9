//! Evidence in memory is charged at least what its file is.

use super::made::*;
use crate::proof::measure::{of_bytes, of_evidence};
use crate::proof::*;
use std::sync::Arc;
use std::sync::atomic::AtomicBool;

/// One of each kind, and a proof with everything that a proof can have and strange names.
fn examples() -> Vec<Evidence> {
    let mut strange = group_proof();
    let name = strange.terms.name("\u{1}\"[{,:\\ü");
    let term = strange.claim.left;
    let condition = Condition {
        left: term,
        right: term,
    };
    for number in 0..50 {
        let mut step = strange.claim.steps[0].clone();
        step.by = name;
        step.at = vec![number; number as usize];
        step.with = vec![(name, term)];
        step.given = vec![vec![step.clone()], Vec::new()];
        strange.claim.steps.push(step);
        strange.claim.when.push(condition);
    }
    strange.claim.witness = vec![(name, term)];
    strange.types = Some(Types {
        operators: vec![(name, vec![name, name])],
        variables: vec![(name, name)],
    });
    strange.definitions = strange.laws.clone();
    let claimed = claiming(
        groups(OrderKind::KnuthBendix),
        ["m(x, y)", "m(y, x)"],
        ["m(x, y)", "m(y, x)"],
    );
    vec![
        Evidence::Proof(group_proof()),
        Evidence::Proof(strange),
        Evidence::Algebra(projection()),
        Evidence::Complete(groups(OrderKind::KnuthBendix)),
        Evidence::Complete(claimed),
        Evidence::Complete(semilattice(OrderKind::LexicographicPath)),
    ]
}

#[test]
fn a_file_costs_no_more_than_was_charged_for_it() {
    for (number, evidence) in examples().into_iter().enumerate() {
        let json = format!("{}\n", to_json(&evidence));
        let (file, charged) = (of_bytes(json.as_bytes()), of_evidence(&evidence));
        assert!(file <= charged, "{number}: {file}, charged {charged}");
        assert!(
            charged <= 2 * file + 3_000,
            "{number}: {file}, charged {charged}"
        );
    }
}

#[test]
fn what_is_accepted_in_memory_is_accepted_from_the_file() {
    let as_written = |evidence: &Evidence, limit| {
        check_as_written(evidence, WorkLimit(limit), Arc::new(AtomicBool::new(false)))
    };
    for (number, evidence) in examples().into_iter().enumerate() {
        if !check(&evidence, WorkLimit::DEFAULT).is_accepted() {
            continue;
        }
        let (mut low, mut high) = (0, WorkLimit::DEFAULT.0);
        while low + 1 < high {
            let middle = u64::midpoint(low, high);
            match as_written(&evidence, middle) {
                Outcome::Accepted => high = middle,
                outcome => {
                    assert_eq!(outcome, Outcome::TooCostly);
                    low = middle;
                }
            }
        }
        let json = format!("{}\n", to_json(&evidence));
        let read = check_json(json.as_bytes(), WorkLimit(high));
        assert_eq!(read, Outcome::Accepted, "{number}: at {high}");
    }
}

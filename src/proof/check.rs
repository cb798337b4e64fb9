//! One door to the three checkers.

use super::check_algebra::check_algebra;
use super::check_chain::check_proof;
use super::check_complete::check_complete;
use super::evidence::Evidence;
use super::json::from_json;
use super::work::{Outcome, Work, WorkLimit};

/// Judges evidence. Does not judge whether its laws and its claim are those that somebody asked
/// about: compare [`Evidence::laws`] and [`Evidence::claim`] with the theory and the question.
pub fn check(evidence: &Evidence, limit: WorkLimit) -> Outcome {
    let mut work = Work::new(limit);
    let result = match evidence {
        Evidence::Proof(proof) => check_proof(proof, &mut work),
        Evidence::Algebra(algebra) => check_algebra(algebra, &mut work),
        Evidence::Complete(set) => check_complete(set, &mut work),
    };
    result.into()
}

/// Judges evidence in the form of JSON. A file is paid for by its length, because the reader
/// holds it in memory several times over.
pub fn check_json(json: &[u8], limit: WorkLimit) -> Outcome {
    const UNITS_PER_BYTE: u64 = 6;
    let length = (json.len() as u64).saturating_mul(UNITS_PER_BYTE);
    let Some(left) = limit.0.checked_sub(length) else {
        return Outcome::TooCostly;
    };
    match from_json(json) {
        Ok(evidence) => check(&evidence, WorkLimit(left)),
        Err(rejection) => rejection,
    }
}

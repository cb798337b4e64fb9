//! One door to the three checkers.

use super::check_algebra::check_algebra;
use super::check_chain::check_proof;
use super::check_complete::check_complete;
use super::evidence::Evidence;
use super::json::from_json;
use super::measure;
use super::work::{Outcome, Work, WorkLimit};
use std::sync::Arc;
use std::sync::atomic::AtomicBool;

/// What copying a term costs, in memory above all.
const UNITS_PER_TERM: u64 = 15;

/// Judges evidence. Does not judge whether its laws, sorts and claim are those that somebody asked
/// about: compare [`Evidence::laws`], [`Evidence::types`] and [`Evidence::claim`] with the theory
/// and the question.
pub fn check(evidence: &Evidence, limit: WorkLimit) -> Outcome {
    judge(evidence, &mut Work::new(limit))
}

/// Judges evidence until the flag is set; then, as when the limit is reached, the evidence is
/// neither accepted nor rejected.
pub fn check_until(evidence: &Evidence, limit: WorkLimit, stop: Arc<AtomicBool>) -> Outcome {
    judge(evidence, &mut Work::until(limit, stop))
}

/// As [`check_until`], after charging for the evidence as if it were read from its JSON form. What
/// is accepted here, [`read_json`] and [`check`] accept from the file within the same limit.
pub fn check_as_written(evidence: &Evidence, limit: WorkLimit, stop: Arc<AtomicBool>) -> Outcome {
    match limit.0.checked_sub(measure::of_evidence(evidence)) {
        Some(left) => check_until(evidence, WorkLimit(left), stop),
        None => Outcome::TooCostly,
    }
}

fn judge(evidence: &Evidence, work: &mut Work) -> Outcome {
    // The checkers copy the terms, since they make instances.
    let copy = work.spend(evidence.terms().len() as u64 * UNITS_PER_TERM);
    let result = copy.and_then(|()| match evidence {
        Evidence::Proof(proof) => check_proof(proof, work),
        Evidence::Algebra(algebra) => check_algebra(algebra, work),
        Evidence::Complete(set) => check_complete(set, work),
    });
    result.into()
}

/// Reads evidence within a limit, and says what is left of it for [`check`]. A file is paid for by
/// its length and the number of values in it before it is read, because the reader holds them all
/// in memory.
///
/// # Errors
///
/// [`Outcome::TooCostly`], or a rejection if it is not JSON of the form of any evidence.
pub fn read_json(json: &[u8], limit: WorkLimit) -> Result<(Evidence, WorkLimit), Outcome> {
    let cost = measure::of_bytes(json);
    let left = limit.0.checked_sub(cost).ok_or(Outcome::TooCostly)?;
    Ok((from_json(json)?, WorkLimit(left)))
}

/// Judges evidence in the form of JSON.
pub fn check_json(json: &[u8], limit: WorkLimit) -> Outcome {
    match read_json(json, limit) {
        Ok((evidence, left)) => check(&evidence, left),
        Err(outcome) => outcome,
    }
}

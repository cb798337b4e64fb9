//! Algebras that are kept, to be tried on every later question.

use super::equation::Equation;
use super::evaluate::{Evaluator, Refutation};
use super::limits::{Limits, StopReason};
use super::signature::Signature;
use super::tables::Algebra;

/// Algebras in which the laws of a theory hold.
///
/// The signature may grow: kept algebras then get tables of zeros for the new symbols, which a law
/// about them may of course refute.
#[derive(Default)]
pub struct Known {
    algebras: Vec<Algebra>,
    evaluator: Evaluator,
}

impl Known {
    /// The algebras, in the order in which they came.
    pub fn algebras(&self) -> &[Algebra] {
        &self.algebras
    }

    /// Keeps an algebra, and tells its place; one that is there already is not kept twice.
    pub fn add(&mut self, algebra: Algebra) -> usize {
        let place = self.algebras.iter().position(|known| *known == algebra);
        place.unwrap_or_else(|| {
            self.algebras.push(algebra);
            self.algebras.len() - 1
        })
    }

    /// Fits the algebras to a signature that has grown, and drops those in which not all of
    /// these laws, perhaps new ones, hold. The places of the dropped ones, as they were before.
    /// When it is stopped, all stay as they were.
    pub fn update(
        &mut self,
        signature: &Signature,
        laws: &[Equation],
        limits: &mut Limits,
    ) -> Result<Vec<usize>, StopReason> {
        let mut kept = Vec::new();
        let mut dropped = Vec::new();
        for (place, algebra) in self.algebras.iter().enumerate() {
            let grown = algebra.sizes().len() < signature.sorts()
                || algebra.tables().len() < signature.symbols().len();
            let fitting = if grown {
                algebra.extended(signature)
            } else {
                Some(algebra.clone())
            };
            match fitting {
                Some(algebra) if holds(&algebra, laws, &mut self.evaluator, limits)? => {
                    kept.push(algebra);
                }
                _ => dropped.push(place),
            }
        }
        self.algebras = kept;
        Ok(dropped)
    }

    /// The first algebra in which the claim fails, by its place, with an assignment that shows it.
    /// The claim must be over the signature of the last [`Known::update`], or of the algebras.
    pub fn refute(
        &mut self,
        claim: &Equation,
        limits: &mut Limits,
    ) -> Result<Option<(usize, Refutation)>, StopReason> {
        for (place, algebra) in self.algebras.iter().enumerate() {
            let found = self.evaluator.refute_within(algebra, claim, limits)?;
            if let Some(found) = found {
                return Ok(Some((place, found)));
            }
        }
        Ok(None)
    }
}

fn holds(
    algebra: &Algebra,
    laws: &[Equation],
    evaluator: &mut Evaluator,
    limits: &mut Limits,
) -> Result<bool, StopReason> {
    for law in laws {
        if evaluator.refute_within(algebra, law, limits)?.is_some() {
            return Ok(false);
        }
    }
    Ok(true)
}

//! Algebras that are kept, to be tried on every later question.

use super::equation::Equation;
use super::evaluate::{Evaluator, Refutation};
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
    pub fn update(&mut self, signature: &Signature, laws: &[Equation]) -> Vec<usize> {
        let mut dropped = Vec::new();
        let evaluator = &mut self.evaluator;
        let kept = std::mem::take(&mut self.algebras).into_iter().enumerate();
        let kept = kept.filter_map(|(place, algebra)| {
            let grown = algebra.sizes().len() < signature.sorts()
                || algebra.tables().len() < signature.symbols().len();
            let fitting = if grown {
                algebra.extended(signature)
            } else {
                Some(algebra)
            };
            let holds = |algebra: &Algebra| laws.iter().all(|law| evaluator.holds(algebra, law));
            let kept = fitting.filter(holds);
            if kept.is_none() {
                dropped.push(place);
            }
            kept
        });
        self.algebras = kept.collect();
        dropped
    }

    /// The first algebra in which the claim fails, by its place, with an assignment that shows it.
    /// The claim must be over the signature of the last [`Known::update`], or of the algebras.
    pub fn refute(&mut self, claim: &Equation) -> Option<(usize, Refutation)> {
        let evaluator = &mut self.evaluator;
        let tried = self.algebras.iter().enumerate();
        tried
            .into_iter()
            .find_map(|(place, algebra)| Some((place, evaluator.refute(algebra, claim)?)))
    }
}

//! The finite algebras of a session, to be shown and evaluated in.

use super::algebras::named_tables;
use super::naming::{Naming, naming};
use super::sheet::Sheet;
use super::{Answer, Session};
use crate::algebra::Equation;
use crate::proof::{AlgebraEvidence, Evidence, Table};
use crate::term::TermId;

/// An algebra, for a list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct AlgebraView {
    /// Its number, as in `A2`.
    pub number: u32,
    /// The name and the number of elements of each sort; the name is empty without named sorts.
    pub sizes: Vec<(String, u32)>,
    /// The table of each symbol, by its name.
    pub tables: Vec<(String, Table)>,
    /// For each table the sorts of the arguments and, last, of the values; empty if there is one
    /// sort only.
    pub sorts: Vec<Vec<String>>,
    /// Are all algebras with fewer elements ruled out, for the question that it was found for?
    pub smallest: bool,
    /// The question that it was found for.
    pub question: String,
}

/// The values of a term in an algebra.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Evaluation {
    /// The variables that are run through.
    pub variables: Vec<String>,
    /// For each choice of their values the value of the term.
    pub rows: Vec<(Vec<u32>, u32)>,
    /// How many choices were left out.
    pub missing: u64,
}

/// Why a term has no value.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum EvaluationFault {
    /// There is no algebra of this number, or it does not know a symbol of the term.
    NoAlgebra,
    /// The variable does not occur in the term.
    NoVariable(String),
    /// There is no such element; the sort of the variable has so many.
    NoElement(String, u32),
}

/// An algebra's evidence in words and tables.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct AlgebraText {
    /// As in [`AlgebraView`].
    pub sizes: Vec<(String, u32)>,
    /// As in [`AlgebraView`].
    pub tables: Vec<(String, Table)>,
    /// As in [`AlgebraView`].
    pub sorts: Vec<Vec<String>>,
    /// The values of the variables.
    pub with: Vec<(String, u32)>,
    /// The two sides, and their values.
    pub sides: [(String, u32); 2],
    /// The unknowns, for all values of which the sides differ; where there are some, the values of
    /// the sides mean nothing.
    pub unknowns: Vec<String>,
}

/// So many rows of values are shown at most.
const MOST_ROWS: usize = 200;

impl Session {
    /// The algebras that are known, each with the question that it was found for.
    pub fn algebras(&mut self) -> Vec<AlgebraView> {
        self.algebras.catch_up(&self.theory, self.lineage);
        let naming = naming(&self.theory);
        let sorts = self.theory.signature.sorts();
        let view = |(kept, algebra): (&super::algebras::Kept, &crate::algebra::Algebra)| {
            let tables = named_tables(&naming, algebra);
            let names = tables.iter().map(|(name, _)| *name);
            AlgebraView {
                sorts: table_sorts(&naming, names),
                number: kept.number,
                sizes: sorts
                    .iter()
                    .cloned()
                    .zip(algebra.sizes().iter().copied())
                    .collect(),
                tables: tables
                    .into_iter()
                    .map(|(name, table)| (name.to_owned(), table))
                    .collect(),
                smallest: kept.smallest,
                question: kept.question.clone(),
            }
        };
        self.algebras.all().map(view).collect()
    }

    /// The values of a term in the algebra of this number, for the given values of some variables
    /// and all values of the others.
    pub fn evaluate(
        &mut self,
        term: TermId,
        number: u32,
        given: &[(String, u32)],
    ) -> Result<Evaluation, EvaluationFault> {
        self.algebras.catch_up(&self.theory, self.lineage);
        let found = self.algebras.all().find(|(kept, _)| kept.number == number);
        let (_, algebra) = found.ok_or(EvaluationFault::NoAlgebra)?;
        let equation = Equation::compile(&self.theory.bank, term, term);
        let name = |index: u32| {
            self.theory.signature.variables()[index as usize]
                .name
                .as_str()
        };
        let variables = equation.variables();
        let mut assignment = vec![0; variables.len()];
        let mut free: Vec<usize> = (0..variables.len()).collect();
        for (wanted, value) in given {
            let place = variables.iter().position(|v| name(v.index) == wanted);
            let place = place.ok_or_else(|| EvaluationFault::NoVariable(wanted.clone()))?;
            let size = algebra.size(variables[place].sort);
            if *value >= size {
                return Err(EvaluationFault::NoElement(wanted.clone(), size));
            }
            assignment[place] = *value;
            free.retain(|other| *other != place);
        }
        let sizes: Vec<u32> = free
            .iter()
            .map(|v| algebra.size(variables[*v].sort))
            .collect();
        let all = sizes
            .iter()
            .fold(1u64, |all, size| all.saturating_mul(u64::from(*size)));
        let mut evaluation = Evaluation {
            variables: free
                .iter()
                .map(|v| name(variables[*v].index).to_owned())
                .collect(),
            rows: Vec::new(),
            missing: all.saturating_sub(MOST_ROWS as u64),
        };
        while (evaluation.rows.len() as u64) < all.min(MOST_ROWS as u64) {
            let row = free.iter().map(|v| assignment[*v]).collect();
            evaluation
                .rows
                .push((row, algebra.evaluate(&equation, &assignment)[0]));
            for (place, size) in free.iter().zip(&sizes).rev() {
                assignment[*place] += 1;
                if assignment[*place] < *size {
                    break;
                }
                assignment[*place] = 0;
            }
        }
        Ok(evaluation)
    }

    /// The algebra that settled an answer, as text and tables.
    pub fn algebra_text(&self, answer: &Answer) -> Option<AlgebraText> {
        let Some(Evidence::Algebra(found)) = &answer.evidence else {
            return None;
        };
        let AlgebraEvidence { terms, claim, .. } = found;
        let naming = naming(&self.theory);
        let mut sheet = Sheet::new(&self.theory, &naming, terms);
        let values = claim.values.unwrap_or_default();
        Some(AlgebraText {
            sizes: found
                .sorts
                .iter()
                .map(|(s, n)| (terms.text(*s).to_owned(), *n))
                .collect(),
            sorts: table_sorts(
                &naming,
                found.tables.iter().map(|(name, _)| terms.text(*name)),
            ),
            tables: (found.tables.iter())
                .map(|(name, table)| (terms.text(*name).to_owned(), table.clone()))
                .collect(),
            with: claim
                .with
                .iter()
                .map(|(v, n)| (terms.text(*v).to_owned(), *n))
                .collect(),
            unknowns: (claim.unknowns.iter())
                .map(|name| terms.text(*name).to_owned())
                .collect(),
            sides: [
                (sheet.text(claim.left), values[0]),
                (sheet.text(claim.right), values[1]),
            ],
        })
    }
}

/// The sorts of the arguments and values of the symbols of these names, if there are several sorts.
fn table_sorts<'n>(naming: &Naming, names: impl Iterator<Item = &'n str>) -> Vec<Vec<String>> {
    if naming.sorts.len() < 2 {
        return Vec::new();
    }
    let sorts = |name: &str| {
        let place = naming.symbols.iter().position(|known| known == name);
        let types = place.map_or(&[][..], |place| &naming.types[place]);
        let names = types
            .iter()
            .map(|sort| naming.sorts[usize::from(sort.0)].clone());
        names.collect()
    };
    names.map(sorts).collect()
}

//! Is evidence about this theory and this question?
//!
//! The checker judges evidence by itself; that its laws are the theory's and its claim is what was
//! asked is compared here, with the theory alone, so that no fault of the engine or of what lies
//! between can lead to an answer about something else.

use super::naming::Naming;
use super::naming::naming;
use crate::proof::{Equation, Evidence, Node, TermIndex, Terms, Types};
use crate::term::{Head, TermId};
use crate::theory::Theory;
use rustc_hash::FxHashSet;

/// Compares the laws, the sorts and the claim; where they differ, says how.
pub(super) fn is_about(
    theory: &Theory,
    evidence: &Evidence,
    question: Option<(TermId, TermId)>,
) -> Result<(), String> {
    let naming = naming(theory);
    let subject = Subject {
        theory,
        naming: &naming,
        terms: evidence.terms(),
    };
    let laws = evidence.laws();
    laws.iter().try_for_each(|law| subject.law(law))?;
    if !matches!(evidence, Evidence::Proof(_)) && laws.len() != theory.laws.len() {
        return Err("it does not have every law of the theory".to_owned());
    }
    subject.types(evidence.types())?;
    match (question, evidence.claim()) {
        (None, None) => Ok(()),
        (Some((left, right)), Some((s, t))) if subject.same(left, s) && subject.same(right, t) => {
            Ok(())
        }
        _ => Err("its claim is not the question".to_owned()),
    }
}

struct Subject<'a> {
    theory: &'a Theory,
    naming: &'a Naming,
    terms: &'a Terms,
}

impl Subject<'_> {
    fn law(&self, law: &Equation) -> Result<(), String> {
        let name = self.terms.text(law.name);
        let known = self
            .theory
            .law(name)
            .ok_or_else(|| format!("{name} is no law"))?;
        let same = self.same(known.left, law.left) && self.same(known.right, law.right);
        if same && law.when.is_empty() {
            Ok(())
        } else {
            Err(format!("{name} is not the law of that name"))
        }
    }

    fn types(&self, types: Option<&Types>) -> Result<(), String> {
        let signature = &self.theory.signature;
        let Some(types) = types else {
            let untyped = !signature.has_sorts();
            return if untyped {
                Ok(())
            } else {
                Err("it leaves the sorts out".to_owned())
            };
        };
        for (name, sorts) in &types.operators {
            let name = self.terms.text(*name);
            let place = self.naming.symbols.iter().position(|known| known == name);
            let wanted = place.map(|place| &self.naming.types[place]);
            let stated = sorts.iter().map(|sort| self.terms.text(*sort));
            let same = wanted.is_some_and(|wanted| {
                wanted
                    .iter()
                    .map(|sort| signature.sort_name(*sort))
                    .eq(stated)
            });
            if !same {
                return Err(format!("{name} has other sorts in the theory"));
            }
        }
        Ok(())
    }

    /// Is the plain term the theory's term, with the names of the theory?
    fn same(&self, term: TermId, plain: TermIndex) -> bool {
        let bank = &self.theory.bank;
        let mut seen = FxHashSet::default();
        let mut stack = vec![(term, plain)];
        while let Some((term, plain)) = stack.pop() {
            if !seen.insert((term, plain)) {
                continue;
            }
            let same = match (bank.head(term), self.terms.node(plain)) {
                (Head::Variable(variable), Node::Variable(name)) => {
                    let known = &self.naming.variables[variable.index as usize].0;
                    known == self.terms.text(name)
                }
                (Head::Symbol(symbol), Node::Apply(name, below)) => {
                    let arguments = bank.arguments(term);
                    stack.extend(arguments.iter().copied().zip(below.iter().copied()));
                    arguments.len() == below.len()
                        && self.naming.symbols[symbol.index()] == self.terms.text(name)
                }
                _ => false,
            };
            if !same {
                return false;
            }
        }
        true
    }
}

//! Is evidence about this theory and this question?
//!
//! The checker judges evidence by itself; that its laws are the theory's and its claim is what was
//! asked is compared here, with the theory alone, so that no fault of the engine or of what lies
//! between can lead to an answer about something else.

use super::naming::Naming;
use super::naming::naming;
use crate::language::Find;
use crate::proof::{Equation, Evidence, Name, Node, TermIndex, Terms, Types};
use crate::term::{Head, TermId};
use crate::theory::Theory;
use rustc_hash::{FxHashMap, FxHashSet};

/// Are the laws and sorts of evidence those of the theory? Where not, says how they differ.
///
/// # Errors
///
/// A sentence about the first difference.
pub fn is_of_theory(theory: &Theory, evidence: &Evidence) -> Result<(), String> {
    let naming = naming(theory);
    Subject::new(theory, &naming, evidence).belongs(evidence)
}

/// Compares the laws, the sorts and the claim; where they differ, says how.
pub(super) fn is_about(
    theory: &Theory,
    evidence: &Evidence,
    question: Option<(TermId, TermId)>,
) -> Result<(), String> {
    let naming = naming(theory);
    let subject = Subject::new(theory, &naming, evidence);
    subject.belongs(evidence)?;
    if let Evidence::Proof(proof) = evidence
        && !proof.claim.when.is_empty()
    {
        return Err("its claim has conditions, which the question has not".to_owned());
    }
    match (question, evidence.claim()) {
        (None, None) => Ok(()),
        (Some((left, right)), Some((s, t))) if subject.same(left, s) && subject.same(right, t) => {
            Ok(())
        }
        _ => Err("its claim is not the question".to_owned()),
    }
}

/// Compares the laws, the sorts, the unknowns and the claim with a question with unknowns; where
/// they differ, says how.
pub(super) fn is_about_find(
    theory: &Theory,
    evidence: &Evidence,
    find: &Find,
) -> Result<(), String> {
    let naming = naming(theory);
    let subject = Subject::new(theory, &naming, evidence);
    subject.belongs(evidence)?;
    let mut values = FxHashMap::default();
    let named: Vec<Name> = match evidence {
        Evidence::Proof(proof) => {
            if !proof.claim.when.is_empty() {
                return Err("its claim has conditions, which the question has not".to_owned());
            }
            values = proof.claim.witness.iter().copied().collect();
            proof.claim.witness.iter().map(|(name, _)| *name).collect()
        }
        Evidence::Algebra(algebra) => algebra.claim.unknowns.clone(),
        Evidence::Complete(_) => Vec::new(),
    };
    let unknown = |index: &u32| naming.variables[*index as usize].0.as_str();
    let wanted: FxHashSet<&str> = find.unknowns.iter().map(unknown).collect();
    let stated: FxHashSet<&str> = named.iter().map(|name| subject.terms.text(*name)).collect();
    if wanted != stated || named.len() != wanted.len() {
        return Err("its unknowns are not those of the question".to_owned());
    }
    let values = (values.iter()).map(|(name, value)| (subject.terms.text(*name), *value));
    let values: FxHashMap<&str, TermIndex> = values.collect();
    match evidence.claim() {
        Some((s, t))
            if subject.same_with(find.left, s, &values)
                && subject.same_with(find.right, t, &values) =>
        {
            Ok(())
        }
        _ => Err("its claim is not the question with the values put in".to_owned()),
    }
}

struct Subject<'a> {
    theory: &'a Theory,
    naming: &'a Naming,
    terms: &'a Terms,
}

impl<'a> Subject<'a> {
    fn new(theory: &'a Theory, naming: &'a Naming, evidence: &'a Evidence) -> Self {
        Subject {
            theory,
            naming,
            terms: evidence.terms(),
        }
    }

    fn belongs(&self, evidence: &Evidence) -> Result<(), String> {
        let laws = evidence.laws();
        laws.iter().try_for_each(|law| self.law(law))?;
        // A proof needs the laws that it uses; the others say something about all laws.
        if !matches!(evidence, Evidence::Proof(_)) {
            let named: FxHashSet<_> = laws.iter().map(|law| self.terms.text(law.name)).collect();
            let is_missing = |name: &&str| !named.contains(name);
            let known = self.theory.laws.iter().map(|law| law.name.as_str());
            let missing: Vec<&str> = known.filter(is_missing).collect();
            if let Some(first) = missing.first() {
                let more = match missing.len() - 1 {
                    0 => String::new(),
                    more => format!(" and {more} more"),
                };
                return Err(format!("it leaves out the law {first}{more} of the theory"));
            }
        }
        let defined = self.defined(evidence.definitions())?;
        self.types(evidence.types(), &defined)
    }

    /// The symbols that the evidence defines. One of the theory is none of them: the checker only
    /// sees that the laws that are used do not mention it.
    fn defined(&self, definitions: &[Equation]) -> Result<FxHashSet<Name>, String> {
        let mut defined = FxHashSet::default();
        for definition in definitions {
            if let Node::Apply(name, _) = self.terms.node(definition.left) {
                let text = self.terms.text(name);
                let bare = text.rsplit_once('/').map_or(text, |(bare, _)| bare);
                let signature = &self.theory.signature;
                let mut known = signature.symbols().iter().map(|symbol| &symbol.name);
                if known.any(|known| known == text || known == bare) {
                    return Err(format!("it defines {text}, which the theory has"));
                }
                defined.insert(name);
            }
        }
        Ok(defined)
    }

    fn law(&self, law: &Equation) -> Result<(), String> {
        let name = self.terms.text(law.name);
        let known = self
            .theory
            .law(name)
            .ok_or_else(|| format!("the theory has no law {name}"))?;
        let same = self.same(known.left, law.left) && self.same(known.right, law.right);
        if same && law.when.is_empty() {
            Ok(())
        } else {
            Err(format!("{name} is not the law of that name"))
        }
    }

    fn types(&self, types: Option<&Types>, defined: &FxHashSet<Name>) -> Result<(), String> {
        let signature = &self.theory.signature;
        let Some(types) = types else {
            let untyped = !signature.has_sorts();
            return if untyped {
                Ok(())
            } else {
                Err("it leaves the sorts out".to_owned())
            };
        };
        let sort_is_known = |sort: &Name| {
            let sort = self.terms.text(*sort);
            let is_unnamed = !signature.has_sorts() && sort.is_empty();
            is_unnamed || signature.sort_named(sort).is_some()
        };
        for (variable, sort) in &types.variables {
            let name = self.terms.text(*variable);
            let mut variables = self.naming.variables.iter();
            let right = match variables.find(|(known, _)| known == name) {
                Some((_, wanted)) => signature.sort_name(*wanted) == self.terms.text(*sort),
                None => sort_is_known(sort),
            };
            if !right {
                return Err(format!(
                    "the variable {name} has another sort in the theory"
                ));
            }
        }
        for (name, sorts) in &types.operators {
            if defined.contains(name) && sorts.iter().all(sort_is_known) {
                continue;
            }
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
        self.same_with(term, plain, &FxHashMap::default())
    }

    /// The same, with these terms in place of variables.
    fn same_with(
        &self,
        term: TermId,
        plain: TermIndex,
        values: &FxHashMap<&str, TermIndex>,
    ) -> bool {
        let bank = &self.theory.bank;
        let mut seen = FxHashSet::default();
        let mut stack = vec![(term, plain)];
        while let Some((term, plain)) = stack.pop() {
            if !seen.insert((term, plain)) {
                continue;
            }
            let value = bank.as_variable(term).and_then(|variable| {
                let name = &self.naming.variables[variable.index as usize].0;
                values.get(name.as_str())
            });
            let same = match (bank.head(term), self.terms.node(plain)) {
                // Equal terms of evidence have equal indices.
                _ if value.is_some() => value == Some(&plain),
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

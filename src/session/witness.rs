//! The values of unknowns, and the proof with them put in, from a proof of true = false.
//!
//! The proof of the extended theory of [`Extension`] is a chain from true to false. Written without
//! lemmas about the symbols that the theory has not, and without detours, it goes from true to
//! some eq(r, r), on by steps inside the two arguments, and from the instance eq(sσ, tσ) of the
//! question to false. So σ are values, and the steps inside the arguments are a chain from sσ by
//! way of r to tσ.

use super::extension::Extension;
use super::naming::{Naming, naming};
use super::shorten::{splice, without_detours};
use crate::proof::{Claim, Equation, Lemma, Name, Node, Proof, Step, TermIndex, Terms, Types, Way};
use crate::term::Sort;
use crate::theory::Theory;
use rustc_hash::{FxHashMap, FxHashSet};

/// A chain of more steps than this is not written down.
const MOST_STEPS: usize = 50_000;

/// Nor are more terms than this made for it.
const MOST_TERMS: usize = 4_000_000;

/// The proof of an instance of the question in the theory itself, from the proof of the goal;
/// nothing if it would be too long.
pub(super) fn instance(
    theory: &Theory,
    goal: &Extension,
    unknowns: &[u32],
    mut proof: Proof,
) -> Option<Proof> {
    unfold(&mut proof, goal)?;
    let [first, inside @ .., last] = &proof.claim.steps[..] else {
        return None;
    };
    let asked = |step: &Step| proof.terms.text(step.by) == goal.laws[1];
    if !asked(last) || inside.iter().any(|step| step.at.is_empty()) {
        return None;
    }
    let [left, right] = [0, 1].map(|side| argument_chain(&proof.terms, first.to, inside, side));
    let (start, mut steps) = reversed(left.0, left.1);
    steps.extend(right.1);
    let steps = without_detours(start, steps);
    let end = steps.last().map_or(start, |step| step.to);
    Some(Rewriter::new(theory, goal, unknowns, &proof).proof((start, end), &steps, &last.with))
}

/// Replaces the steps by lemmas that mention what the theory has not by the chains of these.
fn unfold(proof: &mut Proof, goal: &Extension) -> Option<()> {
    let inner = foreign_terms(&proof.terms, goal);
    let is_inner = |term: &TermIndex| inner[term.number() as usize];
    let mut foreign: FxHashSet<Name> = FxHashSet::default();
    for lemma in &proof.lemmas {
        let Equation { left, right, .. } = &lemma.equation;
        let step = |step: &Step| {
            foreign.contains(&step.by)
                || is_inner(&step.to)
                || step.with.iter().any(|(_, value)| is_inner(value))
        };
        if is_inner(left) || is_inner(right) || lemma.steps.iter().any(step) {
            foreign.insert(lemma.equation.name);
        }
    }
    // A lemma cites earlier ones only.
    let mut kept: Vec<Lemma> = Vec::new();
    let mut steps = std::mem::take(&mut proof.claim.steps);
    for lemma in std::mem::take(&mut proof.lemmas).into_iter().rev() {
        if !foreign.contains(&lemma.equation.name) {
            kept.push(lemma);
            continue;
        }
        let mut here = proof.claim.left;
        let mut longer = Vec::with_capacity(steps.len());
        for step in steps {
            let to = step.to;
            if step.by == lemma.equation.name {
                splice(&mut proof.terms, here, &step, &lemma, &mut longer);
            } else {
                longer.push(step);
            }
            here = to;
            if longer.len() > MOST_STEPS || proof.terms.len() > MOST_TERMS {
                return None;
            }
        }
        steps = without_detours(proof.claim.left, longer);
    }
    kept.reverse();
    proof.lemmas = kept;
    proof.claim.steps = steps;
    Some(())
}

/// Which terms mention a symbol that the goal has added, by the numbers of the terms.
fn foreign_terms(terms: &Terms, goal: &Extension) -> Vec<bool> {
    let added = goal.added();
    let mut foreign: Vec<bool> = Vec::with_capacity(terms.len());
    for term in terms.all() {
        let is_foreign = match terms.node(term) {
            Node::Variable(_) => false,
            Node::Apply(name, arguments) => {
                added.contains_key(terms.text(name))
                    || arguments.iter().any(|a| foreign[a.number() as usize])
            }
        };
        foreign.push(is_foreign);
    }
    foreign
}

/// The steps inside one argument of the terms of a chain, with the argument that they begin at.
fn argument_chain(
    terms: &Terms,
    from: TermIndex,
    steps: &[Step],
    side: u32,
) -> (TermIndex, Vec<Step>) {
    let argument = |whole: TermIndex| terms.arguments(whole)[side as usize];
    let inside = steps.iter().filter(|step| step.at.first() == Some(&side));
    let inside = inside.map(|step| Step {
        at: step.at[1..].to_vec(),
        to: argument(step.to),
        ..step.clone()
    });
    (argument(from), inside.collect())
}

/// A chain read from its end: where it begins then, and its steps.
fn reversed(from: TermIndex, steps: Vec<Step>) -> (TermIndex, Vec<Step>) {
    let mut here = from;
    let mut back = Vec::with_capacity(steps.len());
    for step in steps {
        let way = match step.way {
            Way::Forward => Way::Backward,
            Way::Backward => Way::Forward,
        };
        let to = std::mem::replace(&mut here, step.to);
        back.push(Step { way, to, ..step });
    }
    back.reverse();
    (here, back)
}

/// Writes what was found in terms of the theory alone.
struct Rewriter<'a> {
    theory: &'a Theory,
    goal: &'a Extension,
    unknowns: &'a [u32],
    found: &'a Proof,
    naming: Naming,
    terms: Terms,
    /// The terms of lemmas, and those of the claim, as they are written.
    of_lemmas: FxHashMap<TermIndex, TermIndex>,
    of_claim: FxHashMap<TermIndex, TermIndex>,
    /// By sort, what stands for a variable that may have any value.
    any: FxHashMap<Sort, TermIndex>,
    /// The sorts of the variables of lemmas.
    sorts: FxHashMap<String, Sort>,
}

impl<'a> Rewriter<'a> {
    fn new(theory: &'a Theory, goal: &'a Extension, unknowns: &'a [u32], found: &'a Proof) -> Self {
        let signature = &goal.theory.signature;
        let variables = found.types.iter().flat_map(|types| &types.variables);
        let sorts = variables.filter_map(|(variable, sort)| {
            let sort = signature.sort_named(found.terms.text(*sort))?;
            Some((found.terms.text(*variable).to_owned(), sort))
        });
        Rewriter {
            sorts: sorts.collect(),
            naming: naming(theory),
            theory,
            goal,
            unknowns,
            found,
            terms: Terms::default(),
            of_lemmas: FxHashMap::default(),
            of_claim: FxHashMap::default(),
            any: FxHashMap::default(),
        }
    }

    fn proof(
        mut self,
        (left, right): (TermIndex, TermIndex),
        steps: &[Step],
        values: &[(Name, TermIndex)],
    ) -> Proof {
        let own = |law: &&Equation| {
            !self
                .goal
                .laws
                .iter()
                .any(|l| l == self.found.terms.text(law.name))
        };
        let laws: Vec<&Equation> = self.found.laws.iter().filter(own).collect();
        let laws = laws.into_iter().map(|law| self.equation(law)).collect();
        let found = self.found;
        let lemmas = found.lemmas.iter().map(|lemma| Lemma {
            equation: self.equation(&lemma.equation),
            steps: lemma
                .steps
                .iter()
                .map(|step| self.step(step, false))
                .collect(),
        });
        let lemmas = lemmas.collect();
        let witness = self.unknowns.iter().filter_map(|unknown| {
            let name = &self.theory.signature.variables()[*unknown as usize].name;
            let value = values
                .iter()
                .find(|(known, _)| found.terms.text(*known) == name)?;
            let value = self.term(value.1, true);
            Some((self.terms.name(name), value))
        });
        let witness = witness.collect();
        let claim = Claim {
            left: self.term(left, true),
            right: self.term(right, true),
            when: Vec::new(),
            steps: steps.iter().map(|step| self.step(step, true)).collect(),
            witness,
        };
        let mut proof = Proof {
            types: self.types(),
            terms: self.terms,
            laws,
            definitions: Vec::new(),
            lemmas,
            claim,
        };
        proof.drop_unused_lemmas();
        proof
    }

    fn equation(&mut self, equation: &Equation) -> Equation {
        Equation {
            name: self.name(equation.name),
            left: self.term(equation.left, false),
            right: self.term(equation.right, false),
            when: Vec::new(),
        }
    }

    fn step(&mut self, step: &Step, of_claim: bool) -> Step {
        let with = step.with.iter();
        let with = with.map(|(name, value)| (self.name(*name), self.term(*value, of_claim)));
        Step {
            with: with.collect(),
            by: self.name(step.by),
            way: step.way,
            at: step.at.clone(),
            to: self.term(step.to, of_claim),
            given: Vec::new(),
        }
    }

    fn name(&mut self, name: Name) -> Name {
        self.terms.name(self.found.terms.text(name))
    }

    /// A term as it is written: in the claim, constants of the goal become the variables that they
    /// stand for, and variables of the proof, which may have any value, get one.
    fn term(&mut self, term: TermIndex, of_claim: bool) -> TermIndex {
        let mut stack = vec![term];
        let found = &self.found.terms;
        while let Some(&top) = stack.last() {
            let known = if of_claim {
                &self.of_claim
            } else {
                &self.of_lemmas
            };
            if known.contains_key(&top) {
                stack.pop();
                continue;
            }
            let made = match found.node(top) {
                Node::Variable(name) if of_claim => self.any(found.text(name)),
                Node::Variable(name) => self.terms.variable(found.text(name)),
                Node::Apply(name, below) => {
                    let before = stack.len();
                    stack.extend(below.iter().filter(|a| !known.contains_key(a)));
                    if stack.len() > before {
                        continue;
                    }
                    let arguments: Vec<TermIndex> = below.iter().map(|a| known[a]).collect();
                    let name = found.text(name);
                    match self.goal.added().get(name) {
                        Some(Some(variable)) => {
                            let index = variable.index as usize;
                            let variable = &self.theory.signature.variables()[index].name;
                            self.terms.variable(variable)
                        }
                        _ => self.terms.apply(name, &arguments),
                    }
                }
            };
            let known = if of_claim {
                &mut self.of_claim
            } else {
                &mut self.of_lemmas
            };
            known.insert(top, made);
            stack.pop();
        }
        if of_claim {
            self.of_claim[&term]
        } else {
            self.of_lemmas[&term]
        }
    }

    /// What stands for a variable of this name that may have any value: a constant of its sort, or
    /// a variable of the question, or another one.
    fn any(&mut self, variable: &str) -> TermIndex {
        let sort = self.sorts.get(variable).copied().unwrap_or(Sort(0));
        if let Some(known) = self.any.get(&sort) {
            return *known;
        }
        let symbols = self.theory.signature.symbols().iter();
        let constant = symbols
            .zip(&self.naming.symbols)
            .find(|(symbol, _)| symbol.arguments.is_empty() && symbol.result == sort);
        let fixed = self.goal.fixed.iter().map(|(fixed, _)| fixed);
        let fixed = fixed.filter(|fixed| fixed.sort == sort);
        let fixed = fixed.map(|fixed| fixed.index as usize).next();
        let mut declared = self.theory.signature.variables().iter().enumerate();
        let declared = declared.find(|(index, variable)| {
            variable.sort == sort && !variable.implicit && !self.unknowns.contains(&(*index as u32))
        });
        let variable = fixed.or(declared.map(|(index, _)| index));
        let made = match (constant, variable) {
            (Some((_, name)), _) => self.terms.apply(name, &[]),
            (None, Some(variable)) => {
                let name = &self.theory.signature.variables()[variable].name;
                self.terms.variable(name)
            }
            (None, None) => {
                let taken = |name: &str| self.sorts.contains_key(name);
                let name = self.theory.signature.fresh_name(&mut 1, taken);
                self.sorts.insert(name.clone(), sort);
                self.terms.variable(&name)
            }
        };
        self.any.insert(sort, made);
        made
    }

    /// The sorts of the symbols of the theory and of the variables that occur, if it names sorts.
    fn types(&mut self) -> Option<Types> {
        if !self.naming.typed {
            return None;
        }
        let signature = &self.theory.signature;
        let terms = &mut self.terms;
        let operators = self.naming.symbols.iter().zip(&self.naming.types);
        let operators = operators.map(|(name, sorts)| {
            let sorts = sorts
                .iter()
                .map(|sort| terms.name(signature.sort_name(*sort)));
            let sorts = sorts.collect();
            (terms.name(name), sorts)
        });
        let operators = operators.collect();
        let used: Vec<Name> = terms
            .all()
            .filter_map(|term| match terms.node(term) {
                Node::Variable(name) => Some(name),
                Node::Apply(..) => None,
            })
            .collect();
        let sort_of = |name: &str| {
            let mut declared = self.naming.variables.iter();
            let declared = declared
                .find(|(known, _)| known == name)
                .map(|(_, sort)| *sort);
            declared.or_else(|| self.sorts.get(name).copied())
        };
        let variables = used.into_iter().map(|name| {
            let sort = sort_of(terms.text(name)).unwrap_or(Sort(0));
            (name, terms.name(signature.sort_name(sort)))
        });
        Some(Types {
            variables: variables.collect(),
            operators,
        })
    }
}

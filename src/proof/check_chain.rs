//! The checker for chains of equalities.
//!
//! A chain is correct if every step puts an instance of one side of a known equation in the place
//! of the same instance of the other side. This is equational logic (Birkhoff 1935): what such
//! chains prove holds in every algebra of the laws. Since equal terms have equal indices, a step
//! costs its path and its equation, however large the terms are.

use rustc_hash::FxHashMap;

use super::evidence::{Condition, Equation, Lemma, Proof, Step, Types, Way};
use super::signature::Signature;
use super::terms::{Name, Node, Substitution, TermIndex, Terms};
use super::work::{Stop, Work, rejected};

/// Checks a proof.
pub(super) fn check_proof(proof: &Proof, work: &mut Work) -> Result<(), Stop> {
    let mut chains = Chains::new(proof.terms.clone(), proof.types.as_ref(), work)?;
    let claim = &proof.claim;
    let mut stated = vec![claim.left, claim.right];
    stated.extend(claim.when.iter().flat_map(|c| [c.left, c.right]));
    let mut with_witness = stated.clone();
    with_witness.extend(claim.witness.iter().map(|&(_, term)| term));
    chains.learn_laws(&proof.laws, work)?;
    chains.learn_definitions(&proof.definitions, &proof.laws, &with_witness, work)?;
    chains.learn_lemmas(&proof.lemmas, work)?;

    let Chains {
        terms, signature, ..
    } = &chains;
    signature.check_sides(terms, claim.left, claim.right, "claim")?;
    signature.check_conditions(terms, &claim.when, "claim")?;
    let remaining = terms.variables(&with_witness, work)?;
    for (unknown, witness) in &claim.witness {
        work.spend(remaining.len() as u64)?;
        let place = || format!("claim.witness.{}", terms.text(*unknown));
        if remaining.contains(unknown) {
            return Err(rejected(place(), "the unknown still occurs in the claim"));
        }
        if signature
            .variable_sort(*unknown)
            .is_some_and(|sort| sort != signature.sort(terms, *witness))
        {
            return Err(rejected(place(), "the witness is of another sort"));
        }
    }
    let chain = Obligation {
        left: claim.left,
        right: claim.right,
        steps: &claim.steps,
        place: "claim".into(),
    };
    chains.check_chain(chain, &claim.when, work)
}

/// An equation that steps may use.
#[derive(Clone, Debug)]
struct Known {
    left: TermIndex,
    right: TermIndex,
    when: Vec<Condition>,
    /// All variables, those of the conditions too.
    variables: Vec<Name>,
}

/// A chain that is still to be checked, from `left` to `right`.
struct Obligation<'a> {
    left: TermIndex,
    right: TermIndex,
    steps: &'a [Step],
    place: String,
}

/// The equations that are known so far.
pub(super) struct Chains {
    /// The terms of the evidence, and instances that came up.
    pub terms: Terms,
    /// The sorts of all terms.
    pub signature: Signature,
    known: FxHashMap<Name, Known>,
}

impl Chains {
    /// Nothing is known yet. All terms are checked to be well-sorted.
    pub(super) fn new(
        mut terms: Terms,
        types: Option<&Types>,
        work: &mut Work,
    ) -> Result<Self, Stop> {
        let signature = Signature::read(&mut terms, types, work)?;
        Ok(Chains {
            terms,
            signature,
            known: FxHashMap::default(),
        })
    }

    /// Whether an equation of this name and with these sides, without conditions, is known.
    pub(super) fn proves(&self, name: Name, left: TermIndex, right: TermIndex) -> bool {
        self.known.get(&name).is_some_and(|known| {
            known.left == left && known.right == right && known.when.is_empty()
        })
    }

    /// Takes the laws for granted.
    pub(super) fn learn_laws(&mut self, laws: &[Equation], work: &mut Work) -> Result<(), Stop> {
        for (number, law) in laws.iter().enumerate() {
            self.learn(law, &format!("laws[{number}]"), work)?;
        }
        Ok(())
    }

    /// Takes definitions for granted after checking that they are conservative: each defines an
    /// operator that is not in the laws, not in `stated`, and not in anything before it, by a term
    /// in its own arguments, which are different variables.
    pub(super) fn learn_definitions(
        &mut self,
        definitions: &[Equation],
        laws: &[Equation],
        stated: &[TermIndex],
        work: &mut Work,
    ) -> Result<(), Stop> {
        if definitions.is_empty() {
            return Ok(());
        }
        let mut used = stated.to_vec();
        for law in laws {
            used.extend([law.left, law.right]);
            used.extend(law.when.iter().flat_map(|c| [c.left, c.right]));
        }
        let mut taken: rustc_hash::FxHashSet<Name> = rustc_hash::FxHashSet::default();
        self.note_operators(&used, &mut taken, work)?;
        for (number, definition) in definitions.iter().enumerate() {
            let place = format!("definitions[{number}]");
            self.note_operators(&[definition.right], &mut taken, work)?;
            self.check_definition(definition, &place, work)?;
            if let Node::Apply(operator, _) = self.terms.node(definition.left)
                && !taken.insert(operator)
            {
                let reason = format!("{} is not new", self.terms.text(operator));
                return Err(rejected(place, reason));
            }
            self.learn(definition, &place, work)?;
        }
        Ok(())
    }

    /// Adds the operators of `roots` to `taken`.
    fn note_operators(
        &self,
        roots: &[TermIndex],
        taken: &mut rustc_hash::FxHashSet<Name>,
        work: &mut Work,
    ) -> Result<(), Stop> {
        for term in self.terms.subterms(roots, work)? {
            if let Node::Apply(operator, _) = self.terms.node(term) {
                taken.insert(operator);
            }
        }
        Ok(())
    }

    /// Checks the shape `f(x, y) = t` with different variables, and no other one in `t`.
    fn check_definition(
        &self,
        definition: &Equation,
        place: &str,
        work: &mut Work,
    ) -> Result<(), Stop> {
        if !definition.when.is_empty() {
            return Err(rejected(place, "a definition has no conditions"));
        }
        let Node::Apply(_, arguments) = self.terms.node(definition.left) else {
            return Err(rejected(place, "the left side is a variable"));
        };
        let mut parameters = rustc_hash::FxHashSet::default();
        for &argument in arguments {
            match self.terms.node(argument) {
                Node::Variable(name) if parameters.insert(name) => {}
                _ => return Err(rejected(place, "the arguments are not different variables")),
            }
        }
        for variable in self.terms.variables(&[definition.right], work)? {
            if !parameters.contains(&variable) {
                let reason = format!("{} is only on the right", self.terms.text(variable));
                return Err(rejected(place, reason));
            }
        }
        Ok(())
    }

    /// Checks the lemmas in turn; each becomes known to those after it.
    pub(super) fn learn_lemmas(&mut self, lemmas: &[Lemma], work: &mut Work) -> Result<(), Stop> {
        for (number, lemma) in lemmas.iter().enumerate() {
            let place = format!("lemmas[{number}]");
            let equation = &lemma.equation;
            let chain = Obligation {
                left: equation.left,
                right: equation.right,
                steps: &lemma.steps,
                place: place.clone(),
            };
            self.check_chain(chain, &equation.when, work)?;
            self.learn(equation, &place, work)?;
        }
        Ok(())
    }

    fn learn(&mut self, equation: &Equation, place: &str, work: &mut Work) -> Result<(), Stop> {
        self.signature
            .check_equation(&self.terms, equation, place)?;
        let text = self.terms.text(equation.name);
        if condition_number(text).is_some() {
            let reason = format!("{text} is the name of a condition");
            return Err(rejected(format!("{place}.name"), reason));
        }
        let mut parts = vec![equation.left, equation.right];
        parts.extend(equation.when.iter().flat_map(|c| [c.left, c.right]));
        let known = Known {
            left: equation.left,
            right: equation.right,
            when: equation.when.clone(),
            variables: self.terms.variables(&parts, work)?,
        };
        if self.known.insert(equation.name, known).is_some() {
            let reason = format!("{} names two equations", self.terms.text(equation.name));
            return Err(rejected(format!("{place}.name"), reason));
        }
        Ok(())
    }

    /// Checks a chain and the chains given for conditions inside it. They do not depend on each
    /// other, so they wait in a list, and no nesting is too deep.
    fn check_chain(
        &mut self,
        chain: Obligation<'_>,
        when: &[Condition],
        work: &mut Work,
    ) -> Result<(), Stop> {
        let mut waiting = vec![chain];
        while let Some(chain) = waiting.pop() {
            let mut term = chain.left;
            for (number, step) in chain.steps.iter().enumerate() {
                let place = || format!("{}.steps[{number}]", chain.place);
                self.check_step(term, step, when, &place, &mut waiting, work)?;
                term = step.to;
            }
            if term != chain.right {
                let reason = format!(
                    "the chain ends at {}, not at {}",
                    self.terms.show(term),
                    self.terms.show(chain.right)
                );
                return Err(rejected(format!("{}.steps", chain.place), reason));
            }
        }
        Ok(())
    }

    /// Checks that `step` leads from `from` to where it says.
    fn check_step<'a>(
        &mut self,
        from: TermIndex,
        step: &'a Step,
        when: &[Condition],
        place: &dyn Fn() -> String,
        waiting: &mut Vec<Obligation<'a>>,
        work: &mut Work,
    ) -> Result<(), Stop> {
        let (before, after) = self.changed_part(from, step, place, work)?;
        let (source, target) = self.sides(step, when, place, waiting, work)?;
        let fault = |side, found, expected| {
            let reason = format!(
                "the term {side} the step is {} where the equation has {}",
                self.terms.show(found),
                self.terms.show(expected)
            );
            Err(rejected(place(), reason))
        };
        if before != source {
            return fault("before", before, source);
        }
        if after != target {
            return fault("after", after, target);
        }
        Ok(())
    }

    /// Walks down `from` and `to` together and returns their subterms at the step's place, after
    /// checking that there is no other difference between them.
    fn changed_part(
        &self,
        from: TermIndex,
        step: &Step,
        place: &dyn Fn() -> String,
        work: &mut Work,
    ) -> Result<(TermIndex, TermIndex), Stop> {
        let (mut before, mut after) = (from, step.to);
        for (depth, &number) in step.at.iter().enumerate() {
            let here = || format!("{}.at[{depth}]", place());
            let old = self.terms.arguments(before);
            work.spend(1 + old.len() as u64)?;
            let chosen = number as usize;
            if chosen >= old.len() {
                let reason = format!("{} has no argument {number}", self.terms.show(before));
                return Err(rejected(here(), reason));
            }
            let (Node::Apply(old_name, _), Node::Apply(new_name, new)) =
                (self.terms.node(before), self.terms.node(after))
            else {
                return Err(rejected(
                    here(),
                    "the term after the step ends above its place",
                ));
            };
            let same = old_name == new_name
                && old.len() == new.len()
                && old[..chosen] == new[..chosen]
                && old[chosen + 1..] == new[chosen + 1..];
            if !same {
                return Err(rejected(
                    here(),
                    "the step changes something beside its place",
                ));
            }
            (before, after) = (old[chosen], new[chosen]);
        }
        Ok((before, after))
    }

    /// The two sides of the step's equation under its substitution, in its direction.
    fn sides<'a>(
        &mut self,
        step: &'a Step,
        when: &[Condition],
        place: &dyn Fn() -> String,
        waiting: &mut Vec<Obligation<'a>>,
        work: &mut Work,
    ) -> Result<(TermIndex, TermIndex), Stop> {
        work.spend(1 + step.with.len() as u64)?;
        let directed = |left, right| match step.way {
            Way::Forward => (left, right),
            Way::Backward => (right, left),
        };
        if let Some(number) = condition_number(self.terms.text(step.by)) {
            let condition = number.checked_sub(1).and_then(|number| when.get(number));
            let Some(condition) = condition else {
                return Err(rejected(
                    format!("{}.by", place()),
                    "there is no such condition",
                ));
            };
            if !step.with.is_empty() || !step.given.is_empty() {
                return Err(rejected(
                    place(),
                    "the variables of a condition are constants",
                ));
            }
            return Ok(directed(condition.left, condition.right));
        }
        let Chains {
            terms,
            signature,
            known,
        } = self;
        let Some(known) = known.get(&step.by) else {
            let reason = format!("{} is not known here", terms.text(step.by));
            return Err(rejected(format!("{}.by", place()), reason));
        };
        work.spend((step.with.len() * known.variables.len()) as u64)?;
        let with = substitution(terms, signature, known, step, place)?;
        let left = terms.instantiate(known.left, &with, work)?;
        let right = terms.instantiate(known.right, &with, work)?;
        if step.given.len() != known.when.len() {
            let reason = format!(
                "{} chains for {} conditions",
                step.given.len(),
                known.when.len()
            );
            return Err(rejected(format!("{}.given", place()), reason));
        }
        for (number, (condition, steps)) in known.when.iter().zip(&step.given).enumerate() {
            waiting.push(Obligation {
                left: terms.instantiate(condition.left, &with, work)?,
                right: terms.instantiate(condition.right, &with, work)?,
                steps,
                place: format!("{}.given[{number}]", place()),
            });
        }
        Ok(directed(left, right))
    }
}

/// The step's substitution, which must name each variable of the equation once and no other.
fn substitution(
    terms: &Terms,
    signature: &Signature,
    known: &Known,
    step: &Step,
    place: &dyn Fn() -> String,
) -> Result<Substitution, Stop> {
    let mut with = Substitution::default();
    for &(variable, term) in &step.with {
        let here = || format!("{}.with.{}", place(), terms.text(variable));
        if !known.variables.contains(&variable) {
            return Err(rejected(here(), "the equation has no such variable"));
        }
        if signature.variable_sort(variable) != Some(signature.sort(terms, term)) {
            let reason = format!("{} is of another sort", terms.show(term));
            return Err(rejected(here(), reason));
        }
        if with.insert(variable, term).is_some() {
            return Err(rejected(here(), "the variable is named twice"));
        }
    }
    match known.variables.iter().find(|name| !with.contains_key(name)) {
        None => Ok(with),
        Some(&missing) => {
            let reason = format!("the variable {} is missing", terms.text(missing));
            Err(rejected(format!("{}.with", place()), reason))
        }
    }
}

/// `n` for the name `when n`.
fn condition_number(name: &str) -> Option<usize> {
    name.strip_prefix("when ")?.parse().ok()
}

//! The three kinds of evidence as plain data.
//!
//! The field names are those of the JSON form. Names and terms belong to the `terms` of the same
//! object.

use rustc_hash::FxHashSet;

use super::terms::{Name, TermIndex, Terms};

/// An answer's evidence.
#[derive(Clone, Debug)]
pub enum Evidence {
    /// A chain of equalities: the two sides are equal.
    Proof(Proof),
    /// A finite algebra of the laws in which the two sides differ.
    Algebra(AlgebraEvidence),
    /// A complete rule set, perhaps with two sides that have different normal forms.
    Complete(CompleteSet),
}

impl Evidence {
    /// The terms that the evidence is written in.
    pub fn terms(&self) -> &Terms {
        match self {
            Evidence::Proof(proof) => &proof.terms,
            Evidence::Algebra(algebra) => &algebra.terms,
            Evidence::Complete(set) => &set.terms,
        }
    }

    /// The laws that the evidence takes for granted. Whether they are the laws of a theory is
    /// for whoever has the theory to compare.
    pub fn laws(&self) -> &[Equation] {
        match self {
            Evidence::Proof(proof) => &proof.laws,
            Evidence::Algebra(algebra) => &algebra.laws,
            Evidence::Complete(set) => &set.laws,
        }
    }

    /// The equations by which the evidence introduces symbols. Whether a theory has them already
    /// is for whoever has the theory to compare.
    pub fn definitions(&self) -> &[Equation] {
        match self {
            Evidence::Proof(proof) => &proof.definitions,
            Evidence::Algebra(_) => &[],
            Evidence::Complete(set) => &set.definitions,
        }
    }

    /// The sorts that the evidence states. Evidence without sorts says nothing about a theory with
    /// sorts, since its equations then hold between all terms.
    pub fn types(&self) -> Option<&Types> {
        match self {
            Evidence::Proof(proof) => proof.types.as_ref(),
            Evidence::Algebra(algebra) => algebra.types.as_ref(),
            Evidence::Complete(set) => set.types.as_ref(),
        }
    }

    /// The sides of the claim that the evidence settles.
    pub fn claim(&self) -> Option<(TermIndex, TermIndex)> {
        match self {
            Evidence::Proof(proof) => Some((proof.claim.left, proof.claim.right)),
            Evidence::Algebra(algebra) => Some((algebra.claim.left, algebra.claim.right)),
            Evidence::Complete(set) => set.claim.as_ref().map(|claim| (claim.left, claim.right)),
        }
    }
}

/// A condition of a conditional equation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Condition {
    /// One side.
    pub left: TermIndex,
    /// The other side.
    pub right: TermIndex,
}

/// A named equation, universally quantified over its variables.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Equation {
    /// What steps call it.
    pub name: Name,
    /// One side.
    pub left: TermIndex,
    /// The other side.
    pub right: TermIndex,
    /// The equation holds where these do; empty for an unconditional one.
    pub when: Vec<Condition>,
}

/// The direction in which a step uses an equation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Way {
    /// From left to right.
    Forward,
    /// From right to left.
    Backward,
}

/// One equality of a chain.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Step {
    /// The name of the equation used.
    pub by: Name,
    /// Its direction.
    pub way: Way,
    /// The path to the changed subterm: arguments counted from 0.
    pub at: Vec<u32>,
    /// What stands for each variable of the equation.
    pub with: Vec<(Name, TermIndex)>,
    /// The whole term after the step.
    pub to: TermIndex,
    /// One chain for each condition of the equation.
    pub given: Vec<Vec<Step>>,
}

/// An equation with its proof.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Lemma {
    /// What is proved; in its own chain the variables are constants.
    pub equation: Equation,
    /// The chain from its left to its right side.
    pub steps: Vec<Step>,
}

/// What a proof is about; its variables are constants.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Claim {
    /// Where the chain starts.
    pub left: TermIndex,
    /// Where the chain ends.
    pub right: TermIndex,
    /// Equations that may be used as `when 1`, `when 2`, ….
    pub when: Vec<Condition>,
    /// The chain.
    pub steps: Vec<Step>,
    /// What was put for the unknowns; they no longer occur in the sides.
    pub witness: Vec<(Name, TermIndex)>,
}

/// The sorts of a theory that names some.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Types {
    /// For each operator the sorts of its arguments and, last, of its result.
    pub operators: Vec<(Name, Vec<Name>)>,
    /// The sort of every variable.
    pub variables: Vec<(Name, Name)>,
}

/// A proof by a chain of equalities, with lemmas.
#[derive(Clone, Debug)]
pub struct Proof {
    /// The terms of everything below.
    pub terms: Terms,
    /// Sorts, if the theory names some.
    pub types: Option<Types>,
    /// The laws used.
    pub laws: Vec<Equation>,
    /// Equations `f(x, y) = t` with a new `f`.
    pub definitions: Vec<Equation>,
    /// Each may use laws, definitions and earlier lemmas.
    pub lemmas: Vec<Lemma>,
    /// What is proved.
    pub claim: Claim,
}

impl Proof {
    /// Drops the lemmas on which the claim does not rest, directly or by other lemmas.
    pub fn drop_unused_lemmas(&mut self) {
        let mut used = FxHashSet::default();
        note_used(&self.claim.steps, &mut used);
        drop_unused(&mut self.lemmas, used);
    }
}

impl CompleteSet {
    /// Drops the lemmas on which no rule rests, directly or by other lemmas.
    pub fn drop_unused_lemmas(&mut self) {
        let used = self.rules.iter().map(|rule| rule.name).collect();
        drop_unused(&mut self.lemmas, used);
    }
}

/// Adds the names of the equations by which `steps`, and the chains given inside them, go.
fn note_used(steps: &[Step], used: &mut FxHashSet<Name>) {
    let mut waiting = vec![steps];
    while let Some(steps) = waiting.pop() {
        for step in steps {
            used.insert(step.by);
            waiting.extend(step.given.iter().map(Vec::as_slice));
        }
    }
}

/// A lemma uses earlier ones only, so one pass from the last to the first is enough.
fn drop_unused(lemmas: &mut Vec<Lemma>, mut used: FxHashSet<Name>) {
    let mut kept: Vec<Lemma> = Vec::new();
    while let Some(lemma) = lemmas.pop() {
        if used.contains(&lemma.equation.name) {
            note_used(&lemma.steps, &mut used);
            kept.push(lemma);
        }
    }
    kept.reverse();
    *lemmas = kept;
}

/// The values of an operator, the last argument changing fastest; a constant has one value.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Table {
    /// The number of values of each argument.
    pub shape: Vec<u32>,
    /// As many values as the product of `shape`.
    pub values: Vec<u32>,
}

/// Two sides that differ in a finite algebra.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct AlgebraClaim {
    /// One side.
    pub left: TermIndex,
    /// The other side.
    pub right: TermIndex,
    /// Conditions that hold although the sides differ.
    pub when: Vec<Condition>,
    /// The value of each variable that is not an unknown.
    pub with: Vec<(Name, u32)>,
    /// Variables for whose every value the sides differ.
    pub unknowns: Vec<Name>,
    /// The values of the sides; absent where there are unknowns.
    pub values: Option<[u32; 2]>,
}

/// A finite algebra in which every law holds and the sides of a claim differ.
#[derive(Clone, Debug)]
pub struct AlgebraEvidence {
    /// The terms of laws and claim.
    pub terms: Terms,
    /// Sorts of operators and variables, if the theory names some.
    pub types: Option<Types>,
    /// Every law of the theory.
    pub laws: Vec<Equation>,
    /// The number of elements of each sort; the sort of a theory without sorts is called "".
    pub sorts: Vec<(Name, u32)>,
    /// The operators' values.
    pub tables: Vec<(Name, Table)>,
    /// What the algebra refutes.
    pub claim: AlgebraClaim,
}

/// Which family of orders.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum OrderKind {
    /// The Knuth–Bendix order.
    KnuthBendix,
    /// The lexicographic path order.
    LexicographicPath,
}

/// A reduction order with its parameters.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct StatedOrder {
    /// Which family.
    pub kind: OrderKind,
    /// Every operator, greatest first.
    pub precedence: Vec<Name>,
    /// The weight of every operator; empty for the lexicographic path order.
    pub weights: Vec<(Name, u64)>,
    /// The weight of a variable; of no meaning for the lexicographic path order.
    pub variable: u64,
}

/// A rule of a complete set.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Rule {
    /// The name of the equation that proves it.
    pub name: Name,
    /// The left side.
    pub left: TermIndex,
    /// The right side.
    pub right: TermIndex,
    /// Whether it is used from left to right only; otherwise both ways on decreasing instances.
    pub oriented: bool,
}

/// Two sides with different normal forms.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct CompleteClaim {
    /// One side; the variables count as constants.
    pub left: TermIndex,
    /// The other side.
    pub right: TermIndex,
    /// The normal forms of both.
    pub normal: [TermIndex; 2],
}

/// A rule set that is complete, on ground terms at least.
#[derive(Clone, Debug)]
pub struct CompleteSet {
    /// The terms of everything below.
    pub terms: Terms,
    /// Sorts, if the theory names some.
    pub types: Option<Types>,
    /// Every law of the theory.
    pub laws: Vec<Equation>,
    /// Equations `f(x, y) = t` with a new `f`.
    pub definitions: Vec<Equation>,
    /// A proof of every rule, named like it.
    pub lemmas: Vec<Lemma>,
    /// The order in which the rules decrease.
    pub order: StatedOrder,
    /// The rules.
    pub rules: Vec<Rule>,
    /// Two sides that are not equal.
    pub claim: Option<CompleteClaim>,
}

//! Rules: equations that are used to rewrite.

use crate::term::{Bank, Head, Substitution, Symbol, TermId, Variable};

/// A rule, by its number; numbers are never reused.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct RuleId(pub u32);

impl RuleId {
    /// The number as an index.
    pub fn index(self) -> usize {
        self.0 as usize
    }
}

/// A rule and the way in which it is used.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Use {
    /// The rule.
    pub rule: RuleId,
    /// From right to left?
    pub backward: bool,
}

/// What has become of a rule.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum RuleState {
    /// It rewrites.
    Active,
    /// It was simplified away. It stays true, and what it once rewrote stays rewritten.
    Retired,
    /// Its right side was simplified; the named rule, with the same left side, stands for it.
    Replaced(RuleId),
}

/// An equation, its variables numbered in the order of their first occurrence.
///
/// The sides of a rule never change; a simplified right side makes a new rule.
#[derive(Clone, Debug)]
pub struct Rule {
    /// The left side; the greater one if the rule is oriented.
    pub left: TermId,
    /// The right side.
    pub right: TermId,
    /// Is the left side greater for all values of the variables? Otherwise the rule is used in
    /// both directions, on those instances that decrease.
    pub oriented: bool,
    /// Is it in use?
    pub state: RuleState,
    programs: [Program; 2],
}

impl Rule {
    pub(super) fn new(bank: &Bank, left: TermId, right: TermId, oriented: bool) -> Self {
        let backward = if oriented {
            Program::default()
        } else {
            Program::of(bank, right, left)
        };
        Rule {
            left,
            right,
            oriented,
            state: RuleState::Active,
            programs: [Program::of(bank, left, right), backward],
        }
    }

    /// The side that is looked for when the rule is used this way, and the side that replaces it.
    pub fn sides(&self, backward: bool) -> (TermId, TermId) {
        if backward {
            (self.right, self.left)
        } else {
            (self.left, self.right)
        }
    }

    /// Has the replacing side variables that the other one lacks?
    pub fn has_extra(&self, backward: bool) -> bool {
        !self.programs[usize::from(backward)].extra.is_empty()
    }

    /// Has one of the sides variables that the other one lacks?
    pub fn is_open(&self) -> bool {
        self.has_extra(false) || self.has_extra(true)
    }

    pub(super) fn program(&self, backward: bool) -> &Program {
        &self.programs[usize::from(backward)]
    }
}

/// An operation on a stack of terms.
#[derive(Clone, Copy, Debug)]
pub(super) enum Operation {
    /// Pushes the value of a variable.
    Variable(u32),
    /// Pushes a ground term.
    Ground(TermId),
    /// Applies a symbol to the terms on top.
    Apply(Symbol, u32),
    /// What was pushed last is a whole argument of the side; it is not just a variable. With its
    /// own arguments all variables it needs no look at those to be brought to normal form.
    Argument(Option<Symbol>),
}

/// The replacing side as a list of operations in postorder, so that building an instance asks the
/// bank nothing but to intern. Empty for a side that is large: that one is built by walking.
#[derive(Clone, Debug, Default)]
pub(super) struct Program {
    operations: Box<[Operation]>,
    /// The variables that the side that is looked for lacks.
    pub(super) extra: Box<[Variable]>,
    /// How often each variable occurs, unless the counts are wide.
    occurrences: Option<Box<[(u32, u32)]>>,
}

impl Program {
    const LARGEST: u32 = 256;

    fn of(bank: &Bank, from: TermId, to: TermId) -> Program {
        let mut operations = Vec::new();
        if bank.size(to) <= Self::LARGEST {
            match bank.head(to) {
                Head::Symbol(symbol) if !bank.is_ground(to) => {
                    let arguments = bank.arguments(to);
                    for &argument in arguments {
                        append(bank, argument, &mut operations);
                        if bank.as_variable(argument).is_none() {
                            let variable = |t: &TermId| bank.as_variable(*t).is_some();
                            let flat = bank.arguments(argument).iter().all(variable)
                                && !bank.is_ground(argument);
                            let head = bank.as_symbol(argument).filter(|_| flat);
                            operations.push(Operation::Argument(head));
                        }
                    }
                    operations.push(Operation::Apply(symbol, arguments.len() as u32));
                }
                _ => append(bank, to, &mut operations),
            }
        }
        let mut extra = Vec::new();
        if !bank.mentions_all(from, to) {
            let present = bank.variables(from);
            extra = bank.variables(to);
            extra.retain(|variable| !present.contains(variable));
        }
        let counts = bank.counts(to);
        let variables = bank.variables(to);
        let occurrence = |v: &Variable| (v.index, counts.of(v.index));
        let occurrences = (!counts.is_wide()).then(|| variables.iter().map(occurrence).collect());
        Program {
            operations: operations.into(),
            extra: extra.into(),
            occurrences,
        }
    }

    /// The weight of the instance of `side`, which this is the program of, without building it;
    /// nothing if that is not known. All its variables must have values.
    #[inline]
    pub(super) fn weight(
        &self,
        bank: &Bank,
        side: TermId,
        substitution: &Substitution,
    ) -> Option<u64> {
        let mut weight = bank.weight(side);
        let own = u64::from(bank.variable_weight());
        for &(variable, times) in self.occurrences.as_ref()? {
            let value = bank.weight(substitution.get(variable));
            // Every term weighs at least as much as a variable.
            let more = value.saturating_sub(own).saturating_mul(u64::from(times));
            weight = weight.saturating_add(more);
        }
        Some(weight)
    }

    /// In postorder; none for a side that is large.
    #[inline]
    pub(super) fn operations(&self) -> &[Operation] {
        &self.operations
    }

    /// The instance of `side`, which this is the program of. All its variables must have values.
    pub(super) fn run(
        &self,
        bank: &mut Bank,
        side: TermId,
        substitution: &Substitution,
        built: &mut Vec<TermId>,
    ) -> TermId {
        if self.operations.is_empty() {
            return crate::term::instantiate(bank, side, substitution);
        }
        built.clear();
        for operation in &self.operations {
            match *operation {
                Operation::Variable(index) => built.push(substitution.get(index)),
                Operation::Ground(term) => built.push(term),
                Operation::Argument(_) => {}
                Operation::Apply(symbol, arity) => {
                    let start = built.len() - arity as usize;
                    let made = bank.apply(symbol, &built[start..]);
                    built.truncate(start);
                    built.push(made);
                }
            }
        }
        built[0]
    }
}

/// The operations that build a term.
fn append(bank: &Bank, term: TermId, operations: &mut Vec<Operation>) {
    // Preorder with the arguments from right to left, read backwards, is postorder.
    let start = operations.len();
    let mut stack = vec![term];
    while let Some(term) = stack.pop() {
        if bank.is_ground(term) {
            operations.push(Operation::Ground(term));
            continue;
        }
        match bank.head(term) {
            Head::Variable(variable) => operations.push(Operation::Variable(variable.index)),
            Head::Symbol(symbol) => {
                let arguments = bank.arguments(term);
                operations.push(Operation::Apply(symbol, arguments.len() as u32));
                stack.extend(arguments);
            }
        }
    }
    operations[start..].reverse();
}

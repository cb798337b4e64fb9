//! Rules: equations that are used to rewrite.

use crate::term::{Bank, Head, Substitution, Symbol, TermId};

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
        self.programs[usize::from(backward)].extra
    }

    /// Has one of the sides variables that the other one lacks?
    pub fn is_open(&self) -> bool {
        self.has_extra(false) || self.has_extra(true)
    }

    pub(super) fn program(&self, backward: bool) -> &Program {
        &self.programs[usize::from(backward)]
    }
}

#[derive(Clone, Copy, Debug)]
pub(super) enum Operation {
    Variable(u32),
    Ground(TermId),
    Apply(Symbol, u32),
}

/// The replacing side as a list of operations in postorder, so that building an instance asks the
/// bank nothing but to intern. Empty for a side that is large: that one is built by walking.
#[derive(Clone, Debug, Default)]
pub(super) struct Program {
    operations: Box<[Operation]>,
    extra: bool,
}

impl Program {
    const LARGEST: u32 = 256;

    fn of(bank: &Bank, from: TermId, to: TermId) -> Program {
        let extra = !bank.mentions_all(from, to);
        let mut operations = Vec::new();
        if bank.size(to) <= Self::LARGEST {
            // Preorder with the arguments from right to left, read backwards, is postorder.
            let mut stack = vec![to];
            while let Some(term) = stack.pop() {
                if bank.is_ground(term) {
                    operations.push(Operation::Ground(term));
                    continue;
                }
                match bank.head(term) {
                    Head::Variable(variable) => {
                        operations.push(Operation::Variable(variable.index));
                    }
                    Head::Symbol(symbol) => {
                        let arguments = bank.arguments(term);
                        operations.push(Operation::Apply(symbol, arguments.len() as u32));
                        stack.extend(arguments);
                    }
                }
            }
            operations.reverse();
        }
        Program {
            operations: operations.into(),
            extra,
        }
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

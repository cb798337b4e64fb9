//! Equations as programs on registers.

use crate::term::{Bank, Head, Symbol, TermId, Variable};
use rustc_hash::FxHashMap;

/// A symbol applied to registers.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Step {
    pub symbol: Symbol,
    /// Where the argument registers begin in the list of all of them.
    first: u32,
    arity: u32,
}

/// An equation as a program: a register for every variable, then one for every other distinct
/// subterm, arguments before what they stand in.
///
/// It owns all that it needs, so that it can be sent to another thread.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Equation {
    variables: Vec<Variable>,
    steps: Vec<Step>,
    arguments: Vec<u32>,
    left: u32,
    right: u32,
}

impl Equation {
    /// Compiles the equation between two terms. Costs time linear in the number of their
    /// distinct subterms.
    pub fn compile(bank: &Bank, left: TermId, right: TermId) -> Self {
        let order = distinct_subterms(bank, left, right);
        let mut equation = Equation {
            variables: Vec::new(),
            steps: Vec::new(),
            arguments: Vec::new(),
            left: 0,
            right: 0,
        };
        let mut register: FxHashMap<TermId, u32> = FxHashMap::default();
        for &term in &order {
            if let Some(variable) = bank.as_variable(term) {
                register.insert(term, equation.variables.len() as u32);
                equation.variables.push(variable);
            }
        }
        for &term in &order {
            if let Head::Symbol(symbol) = bank.head(term) {
                let arguments = bank.arguments(term);
                register.insert(term, equation.registers() as u32);
                equation.steps.push(Step {
                    symbol,
                    first: equation.arguments.len() as u32,
                    arity: arguments.len() as u32,
                });
                let registers = arguments.iter().map(|argument| register[argument]);
                equation.arguments.extend(registers);
            }
        }
        equation.left = register[&left];
        equation.right = register[&right];
        equation
    }

    /// A variable is equal to itself.
    pub(super) fn trivial() -> Self {
        Equation {
            variables: vec![Variable {
                index: 0,
                sort: crate::term::Sort(0),
            }],
            steps: Vec::new(),
            arguments: Vec::new(),
            left: 0,
            right: 0,
        }
    }

    /// The variables, in the order of their first occurrence: the order of every assignment.
    pub fn variables(&self) -> &[Variable] {
        &self.variables
    }

    /// The symbols that occur, possibly more than once.
    pub fn symbols(&self) -> impl Iterator<Item = Symbol> {
        self.steps.iter().map(|step| step.symbol)
    }

    pub(super) fn steps(&self) -> &[Step] {
        &self.steps
    }

    pub(super) fn arguments(&self, step: Step) -> &[u32] {
        &self.arguments[step.first as usize..(step.first + step.arity) as usize]
    }

    /// How many registers the program has.
    pub(super) fn registers(&self) -> usize {
        self.variables.len() + self.steps.len()
    }

    pub(super) fn left(&self) -> usize {
        self.left as usize
    }

    pub(super) fn right(&self) -> usize {
        self.right as usize
    }
}

/// Every distinct subterm once, arguments first, those of the left side before the others, and
/// within a side in the order of first occurrence.
fn distinct_subterms(bank: &Bank, left: TermId, right: TermId) -> Vec<TermId> {
    let mut seen = rustc_hash::FxHashSet::default();
    let mut order = Vec::new();
    let mut stack = vec![(right, false), (left, false)];
    while let Some((term, ready)) = stack.pop() {
        if ready {
            order.push(term);
        } else if seen.insert(term) {
            stack.push((term, true));
            let arguments = bank.arguments(term).iter().rev();
            stack.extend(arguments.map(|&argument| (argument, false)));
        }
    }
    order
}

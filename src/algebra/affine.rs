//! Algebras whose operations are affine maps over a finite ring: f(x, y) = ax + by + c.
//!
//! Such an operation is given by its coefficients, and so is every term, as an affine map of its
//! variables. A law holds if and only if its sides have the same coefficients (put 1 for one
//! variable and 0 for the others to see it), so no table is needed to test one.

use super::equation::Equation;
use super::limits::{Limits, StopReason};
use super::ring::{Ring, rings};
use super::signature::Signature;
use super::tables::Algebra;
use std::ops::ControlFlow;

/// An affine map for every symbol of a signature, all sorts being the same ring.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Affine {
    ring: usize,
    /// For each symbol the coefficients of the arguments and then the constant.
    maps: Vec<Vec<u8>>,
}

/// Buffers for evaluating.
#[derive(Default)]
pub(super) struct Forms {
    forms: Vec<u8>,
}

impl Affine {
    /// Values of the variables for which the sides differ, if there are any.
    pub(super) fn refute(&self, equation: &Equation, forms: &mut Forms) -> Option<Vec<u32>> {
        let ring = &rings()[self.ring];
        let [left, right] = forms.sides(ring, &self.maps, equation);
        let variables = equation.variables().len();
        let mut assignment = vec![0; variables];
        if left[variables] == right[variables] {
            let place = (0..variables).find(|&place| left[place] != right[place])?;
            assignment[place] = u32::from(ring.one);
        }
        Some(assignment)
    }

    /// The tables.
    pub(super) fn algebra(&self, signature: &Signature) -> Option<Algebra> {
        let ring = &rings()[self.ring];
        let ranges = |arity| vec![ring.size as u32; arity];
        let mut tables = Vec::with_capacity(self.maps.len());
        for map in &self.maps {
            let arity = map.len() - 1;
            let mut arguments = vec![0u32; arity];
            let mut values = Vec::new();
            loop {
                let pairs = map.iter().zip(&arguments);
                let value = pairs.fold(map[arity], |sum, (&factor, &argument)| {
                    ring.add(sum, ring.multiply(factor, argument as u8))
                });
                values.push(value);
                if values.len() > 1 << 24 {
                    return None;
                }
                if !super::evaluate::advance(&mut arguments, &ranges(arity)) {
                    break;
                }
            }
            tables.push(values);
        }
        Algebra::new(signature, ranges(signature.sorts()), tables).ok()
    }
}

impl Forms {
    /// The coefficients of both sides and their constants.
    fn sides(&mut self, ring: &Ring, maps: &[Vec<u8>], equation: &Equation) -> [&[u8]; 2] {
        let variables = equation.variables().len();
        let width = variables + 1;
        self.forms.clear();
        self.forms.resize(equation.registers() * width, 0);
        for variable in 0..variables {
            self.forms[variable * width + variable] = ring.one;
        }
        for (number, &step) in equation.steps().iter().enumerate() {
            let (before, rest) = self.forms.split_at_mut((variables + number) * width);
            let out = &mut rest[..width];
            let map = &maps[step.symbol.index()];
            out[variables] = map[map.len() - 1];
            for (&factor, &from) in map.iter().zip(equation.arguments(step)) {
                if factor == 0 {
                    continue;
                }
                let form = &before[from as usize * width..][..width];
                for (out, &coefficient) in out.iter_mut().zip(form) {
                    *out = ring.add(*out, ring.multiply(factor, coefficient));
                }
            }
        }
        [equation.left(), equation.right()].map(|side| &self.forms[side * width..][..width])
    }
}

/// In which order symbols get their maps, and which laws can be tested after each.
pub(super) struct Plan {
    symbols: Vec<usize>,
    /// By place in `symbols`, the numbers of the laws whose last symbol that is.
    testable: Vec<Vec<usize>>,
    /// Laws between variables.
    bare: bool,
}

impl Plan {
    /// The next symbol is always one that makes a law testable with the fewest others, if any.
    pub(super) fn new(signature: &Signature, laws: &[Equation]) -> Self {
        let mut missing: Vec<Vec<usize>> = laws
            .iter()
            .map(|law| {
                let mut symbols: Vec<usize> = law.symbols().map(|symbol| symbol.index()).collect();
                symbols.sort_unstable();
                symbols.dedup();
                symbols
            })
            .collect();
        let mut plan = Plan {
            symbols: Vec::new(),
            testable: Vec::new(),
            bare: laws
                .iter()
                .any(|law| law.steps().is_empty() && law.left() != law.right()),
        };
        let mut done: Vec<bool> = missing.iter().map(Vec::is_empty).collect();
        let mut chosen = vec![false; signature.symbols().len()];
        while plan.symbols.len() < chosen.len() {
            let next = missing.iter().filter(|symbols| !symbols.is_empty());
            let next = next
                .min_by_key(|symbols| symbols.len())
                .map(|symbols| symbols[0]);
            let symbol = next.or_else(|| chosen.iter().position(|&chosen| !chosen));
            let Some(symbol) = symbol else { break };
            chosen[symbol] = true;
            plan.symbols.push(symbol);
            let mut testable = Vec::new();
            for (law, symbols) in missing.iter_mut().enumerate() {
                symbols.retain(|&other| other != symbol);
                if symbols.is_empty() && !done[law] {
                    done[law] = true;
                    testable.push(law);
                }
            }
            plan.testable.push(testable);
        }
        plan
    }
}

/// What is enumerated over one ring.
pub(super) struct Family<'a> {
    pub ring: usize,
    pub signature: &'a Signature,
    pub laws: &'a [Equation],
    /// Symbols that occur in no law and not in the claim get the constant 0 only.
    pub used: &'a [bool],
    pub plan: &'a Plan,
    /// How many elementary steps may be spent.
    pub most: u64,
}

/// Rings of at most this size are used with all constants, larger ones with 0 only.
const LARGEST_WITH_CONSTANT: usize = 5;

impl Family<'_> {
    /// Calls `visit` with all combinations of maps in which the laws hold, until it breaks.
    pub(super) fn each(
        &self,
        forms: &mut Forms,
        limits: &mut Limits,
        mut visit: impl FnMut(Affine, &mut Forms) -> ControlFlow<()>,
    ) -> Result<ControlFlow<()>, StopReason> {
        let ring = &rings()[self.ring];
        if self.plan.bare {
            return Ok(ControlFlow::Continue(()));
        }
        let shapes = self.signature.symbols();
        let zero = shapes
            .iter()
            .map(|shape| vec![0; shape.arguments.len() + 1]);
        let mut maps: Vec<Vec<u8>> = zero.collect();
        let mut spent = 0;
        let mut depth = 0;
        // Whether the map at the present depth is the first one, to be tested before advancing.
        let mut fresh = true;
        loop {
            let Some(&symbol) = self.plan.symbols.get(depth) else {
                let model = Affine {
                    ring: self.ring,
                    maps: maps.clone(),
                };
                if visit(model, forms).is_break() {
                    return Ok(ControlFlow::Break(()));
                }
                // Making and testing an algebra counts as well.
                let costs = 100 * maps.len() as u64;
                limits.spend(costs)?;
                spent += costs;
                if depth == 0 {
                    return Ok(ControlFlow::Continue(()));
                }
                depth -= 1;
                fresh = false;
                continue;
            };
            if !fresh && !self.advance(ring, symbol, &mut maps[symbol]) {
                maps[symbol].fill(0);
                if depth == 0 {
                    return Ok(ControlFlow::Continue(()));
                }
                depth -= 1;
                continue;
            }
            let laws = || self.plan.testable[depth].iter().map(|&law| &self.laws[law]);
            let cost = |law: &Equation| (law.registers() * (law.variables().len() + 1)) as u64;
            let mut costs = 1;
            let holds = laws().all(|law| {
                costs += cost(law);
                let [left, right] = forms.sides(ring, &maps, law);
                left == right
            });
            limits.spend(costs)?;
            spent += costs;
            if spent > self.most {
                return Ok(ControlFlow::Continue(()));
            }
            fresh = holds;
            depth += usize::from(holds);
        }
    }

    /// The next map of a symbol; false after the last.
    fn advance(&self, ring: &Ring, symbol: usize, map: &mut [u8]) -> bool {
        if !self.used[symbol] {
            return false;
        }
        let arity = map.len() - 1;
        let constants = arity == 0 || ring.size <= LARGEST_WITH_CONSTANT;
        let first = if constants { arity } else { arity - 1 };
        for place in (0..=first).rev() {
            map[place] += 1;
            if usize::from(map[place]) < ring.size {
                return true;
            }
            map[place] = 0;
        }
        false
    }
}

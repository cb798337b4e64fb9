//! Equations as programs over cells.
//!
//! The variables of a law are given values one after the other, in *stages*, and a look-up belongs
//! to the first stage in which all variables below it have values. An instance of a law need not
//! have values for all variables: as long as look-ups of its first stages wait for a cell, it
//! stands for all instances that begin as it does. So a law costs what the search knows of it, and
//! not a power of the size from the beginning.

use super::super::equation::Equation;
use super::super::signature::Signature;
use super::grid::Block;

/// A look-up, on registers.
#[derive(Clone, Copy)]
pub(super) enum Look {
    One {
        base: u32,
        stride: u32,
        from: u32,
    },
    Two {
        base: u32,
        stride: u32,
        from: u32,
        other: u32,
    },
    /// Base, and a range of [`Program::places`].
    Many {
        base: u32,
        first: u32,
        last: u32,
    },
}

/// A variable of a law, in the order of the stages.
pub(super) struct Place {
    /// How many values it takes.
    pub range: u32,
    /// Where its value is in a packed instance.
    pub shift: u32,
    pub mask: u32,
}

/// When an equation is looked at: those that cost little before those that cost much.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) struct Tier(pub u8);

impl Tier {
    pub(super) const COUNT: usize = 3;

    /// By the number of variables that take several values.
    fn of(variables: usize) -> Self {
        match variables {
            0..=2 => Tier(0),
            3 => Tier(1),
            _ => Tier(2),
        }
    }

    #[inline]
    pub(super) fn index(self) -> usize {
        usize::from(self.0)
    }
}

/// An equation with the places of its cells.
///
/// The first registers hold the variables in the order of the stages, those that take one value
/// only after the others, and then come the look-ups, those of earlier stages first.
pub(super) struct Program {
    /// The variables that take several values.
    pub variables: Box<[Place]>,
    /// The register of the first look-up.
    pub offset: usize,
    pub looks: Vec<Look>,
    /// How many look-ups are done when so many variables have values.
    pub ends: Box<[usize]>,
    /// Pairs of a register and a stride.
    pub places: Vec<(u32, u32)>,
    /// Does another look-up use the register?
    pub inner: Vec<bool>,
    pub left: usize,
    pub right: usize,
    /// Must the sides differ, not be equal?
    pub differ: bool,
    pub tier: Tier,
}

impl Program {
    /// The program of a law, unless its instances cannot be numbered.
    pub(super) fn law(law: &Equation, blocks: &[Block], sizes: &[u32]) -> Option<Self> {
        let range = |&variable: &usize| sizes[law.variables()[variable].sort.0 as usize];
        let order = stages(law, |variable| range(&variable) > 1);
        let staged = order.iter().filter(|variable| range(variable) > 1).count();
        let mut shift = 0;
        let mut variables = Vec::with_capacity(staged);
        for range in order[..staged].iter().map(range) {
            let bits = u32::BITS - (range - 1).leading_zeros();
            variables.push(Place {
                range,
                shift,
                mask: (1 << bits) - 1,
            });
            shift += bits;
        }
        if shift > u32::BITS {
            return None;
        }
        let mut stage = vec![0; law.registers()];
        let mut register = vec![0; law.registers()];
        for (place, &variable) in order.iter().enumerate() {
            register[variable] = place as u32;
            stage[variable] = if place < staged { place + 1 } else { 0 };
        }
        let count = law.variables().len();
        for (number, step) in law.steps().iter().enumerate() {
            let arguments = law.arguments(*step).iter();
            let latest = arguments.map(|&from| stage[from as usize]).max();
            stage[count + number] = latest.unwrap_or(0);
        }
        let mut steps: Vec<usize> = (0..law.steps().len()).collect();
        steps.sort_by_key(|&number| stage[count + number]);
        for (place, &number) in steps.iter().enumerate() {
            register[count + number] = (count + place) as u32;
        }
        let done = |so_far: usize| steps.partition_point(|&number| stage[count + number] <= so_far);
        let mut program = Program {
            ends: (0..=staged).map(done).collect(),
            tier: Tier::of(staged),
            variables: variables.into_boxed_slice(),
            offset: count,
            looks: Vec::with_capacity(steps.len()),
            places: Vec::new(),
            inner: vec![false; law.registers()],
            left: register[law.left()] as usize,
            right: register[law.right()] as usize,
            differ: false,
        };
        for &number in &steps {
            program.add_look(law, number, &register, blocks);
        }
        Some(program)
    }

    /// The program of the claim. Its variables are constants: their registers are look-ups
    /// without arguments.
    pub(super) fn claim(claim: &Equation, blocks: &[Block], signature: &Signature) -> Self {
        let register: Vec<u32> = (0..claim.registers() as u32).collect();
        let mut program = Program {
            variables: Box::new([]),
            offset: 0,
            looks: Vec::with_capacity(claim.registers()),
            ends: Box::new([claim.registers()]),
            places: Vec::new(),
            inner: vec![false; claim.registers()],
            left: claim.left(),
            right: claim.right(),
            differ: true,
            tier: Tier::of(0),
        };
        for number in 0..claim.variables().len() {
            program.looks.push(Look::Many {
                base: blocks[signature.symbols().len() + number].base,
                first: 0,
                last: 0,
            });
        }
        for number in 0..claim.steps().len() {
            program.add_look(claim, number, &register, blocks);
        }
        program
    }

    /// How many instances there are in which all variables have values.
    pub(super) fn instances(&self) -> usize {
        let ranges = self.variables.iter().map(|place| place.range as usize);
        ranges.fold(1, usize::saturating_mul)
    }

    fn add_look(&mut self, equation: &Equation, number: usize, register: &[u32], blocks: &[Block]) {
        let step = equation.steps()[number];
        let block = &blocks[step.symbol.index()];
        let arguments = equation.arguments(step).iter();
        let first = self.places.len();
        let from = arguments.map(|&from| register[from as usize]);
        self.places.extend(from.zip(block.strides.iter().copied()));
        for &(from, _) in &self.places[first..] {
            self.inner[from as usize] = true;
        }
        let base = block.base;
        let look = match self.places[first..] {
            [(from, stride)] => Look::One { base, stride, from },
            [(from, stride), (other, 1)] => Look::Two {
                base,
                stride,
                from,
                other,
            },
            _ => Look::Many {
                base,
                first: first as u32,
                last: self.places.len() as u32,
            },
        };
        if !matches!(look, Look::Many { .. }) {
            self.places.truncate(first);
        }
        self.looks.push(look);
    }
}

/// Equations with more look-ups keep their variables in the order in which they occur.
const LONGEST_ORDERED: usize = 1000;

/// The variables in the order in which they get their values, those without choice last: the last
/// one is that on which the fewest look-ups depend, and so on with the look-ups that are left.
fn stages(law: &Equation, has_choice: impl Fn(usize) -> bool) -> Vec<usize> {
    let count = law.variables().len();
    let (mut open, single): (Vec<usize>, Vec<usize>) =
        (0..count).partition(|&variable| has_choice(variable));
    if open.len() > u32::BITS as usize || law.steps().len() > LONGEST_ORDERED {
        open.extend(single);
        return open;
    }
    // The variables below each register, as bits.
    let mut below = vec![0u32; law.registers()];
    for (place, &variable) in open.iter().enumerate() {
        below[variable] = 1 << place;
    }
    for (number, &step) in law.steps().iter().enumerate() {
        let arguments = law.arguments(step).iter();
        below[count + number] = arguments.fold(0, |all, &from| all | below[from as usize]);
    }
    let looks = &below[count..];
    let mut left: Vec<usize> = (0..open.len()).collect();
    let mut backward = Vec::with_capacity(open.len() + single.len());
    let mut taken = 0;
    while !left.is_empty() {
        let depending = |place: usize| {
            let depends = |&&below: &&u32| below & taken == 0 && below >> place & 1 == 1;
            looks.iter().filter(depends).count()
        };
        let best = (0..left.len()).rev().min_by_key(|&at| depending(left[at]));
        let place = left.remove(best.unwrap_or(0));
        taken |= 1 << place;
        backward.push(open[place]);
    }
    backward.reverse();
    backward.extend(single);
    backward
}

#[cfg(test)]
mod tests {
    use super::super::super::Problem;
    use super::super::grid::Grid;
    use crate::term::{Bank, Sort, SymbolInfo, Variable};

    /// ((u x) y) (x y) = x (y (u x)) with u of a sort with one element: u has no stage, x comes
    /// first because more depends on it, and the look-up for u x is done in the first stage.
    #[test]
    fn look_ups_are_done_as_soon_as_their_variables_have_values() {
        let mut bank = Bank::default();
        let [many, one] = [Sort(0), Sort(1)];
        let mut declare = |first| {
            bank.declare(SymbolInfo {
                arguments: Box::new([first, many]),
                result: many,
                weight: 1,
            })
        };
        let (product, action) = (declare(many), declare(one));
        let mut variable = |index, sort| bank.variable(Variable { index, sort });
        let (u, y, x) = (variable(0, one), variable(1, many), variable(2, many));
        let ux = bank.apply(action, &[u, x]);
        let [uxy, xy, yux] = [(ux, y), (x, y), (y, ux)].map(|(a, b)| bank.apply(product, &[a, b]));
        let left = bank.apply(product, &[uxy, xy]);
        let right = bank.apply(product, &[x, yux]);
        let problem = Problem::new(&bank, 2, [(left, right)], (x, y));
        let grid = Grid::new(&problem, &[5, 1], 1 << 20).expect("it is small");
        let program = &grid.programs[0];
        assert_eq!(program.variables.len(), 2);
        assert_eq!(program.offset, 3);
        assert_eq!(*program.ends, [0, 1, 6]);
        assert_eq!(program.instances(), 25);
        let below = |register: usize| program.looks[register - program.offset];
        let root = [below(program.left), below(program.right)];
        for look in root {
            assert!(matches!(look, super::Look::Two { stride: 5, .. }));
        }
    }
}

//! Evaluating an equation under all assignments.
//!
//! The last variables, as many as keep a block of assignments small, are run through by arrays:
//! a register that depends on one of them is an array with a value for every assignment of the
//! block, and a look-up is one loop over such arrays. The first variables turn like an odometer,
//! and registers that depend on them only are single values. A table of at most 16 × 16 entries is
//! used in a form in which every byte is a valid index, so that the loop has no check in it.

use super::equation::{Equation, Step};
use super::limits::{Limits, StopReason};
use super::tables::{Algebra, Table};
use crate::term::Variable;

/// An assignment under which the sides of an equation differ.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Refutation {
    /// The values of the variables, in the order of [`Equation::variables`].
    pub assignment: Vec<u32>,
    /// The values of the two sides.
    pub values: [u32; 2],
}

/// Evaluates equations, with buffers that are kept from one to the next.
#[derive(Default)]
pub struct Evaluator {
    /// The values of the registers that are single.
    single: Vec<u8>,
    /// The arrays of the others, one after the other.
    arrays: Vec<u8>,
    /// Does the register have an array?
    many: Vec<bool>,
    /// The registers under the assignments that are tried first.
    lanes: Vec<[u8; LANES]>,
    looked_up: u64,
}

/// The most assignments in a block, and the most bytes of all arrays.
const LONGEST_BLOCK: usize = 2048;
const MOST_BYTES: usize = 1 << 18;

/// Longer equations are not tried under scattered assignments, so that limits are heeded.
const LONGEST_PROBE: usize = 1000;

impl Evaluator {
    /// Does the equation hold under every assignment?
    pub fn holds(&mut self, algebra: &Algebra, equation: &Equation) -> bool {
        self.refute(algebra, equation).is_none()
    }

    /// How many table look-ups there have been, for measuring.
    pub fn looked_up(&self) -> u64 {
        self.looked_up
    }

    /// An assignment under which the sides differ, if there is one. Costs a look-up for every
    /// assignment and every distinct subterm at most.
    pub fn refute(&mut self, algebra: &Algebra, equation: &Equation) -> Option<Refutation> {
        let found = self.refute_within(algebra, equation, &mut Limits::none());
        found.expect("nothing stops it")
    }

    /// Like [`Evaluator::refute`], within limits: for equations with so many variables that
    /// running through all assignments takes long.
    pub fn refute_within(
        &mut self,
        algebra: &Algebra,
        equation: &Equation,
        limits: &mut Limits,
    ) -> Result<Option<Refutation>, StopReason> {
        if equation.left() == equation.right() {
            return Ok(None);
        }
        if let Some(lane) = self.probe(algebra, equation) {
            let size = |variable: &Variable| algebra.size(variable.sort);
            let sizes = equation.variables().iter().map(size).enumerate();
            let assignment: Vec<u32> = sizes
                .map(|(place, range)| spread(place, lane, range))
                .collect();
            let values = algebra.evaluate(equation, &assignment);
            return Ok(Some(Refutation { assignment, values }));
        }
        let ranges = ranges(algebra, equation);
        let outer = self.prepare(equation, &ranges);
        let length: usize = ranges[outer..]
            .iter()
            .map(|&range| range as usize)
            .product();
        self.lay_out_variables(&ranges, outer, length);
        let mut assignment = vec![0; outer];
        loop {
            limits.spend((length * equation.registers()) as u64)?;
            for (register, &value) in assignment.iter().enumerate() {
                self.single[register] = value as u8;
            }
            for (number, &step) in equation.steps().iter().enumerate() {
                let at = ranges.len() + number;
                self.look_up(algebra.table(step.symbol), equation, step, at, length);
            }
            if let Some(place) = self.difference(equation, length) {
                let mut full = assignment;
                full.extend(digits(place, &ranges[outer..]));
                let values = algebra.evaluate(equation, &full);
                return Ok(Some(Refutation {
                    assignment: full,
                    values,
                }));
            }
            if !advance(&mut assignment, &ranges) {
                return Ok(None);
            }
        }
    }

    /// Tries a few scattered assignments side by side: most algebras refute most equations under
    /// most assignments. Gives the first lane in which the sides differ.
    fn probe(&mut self, algebra: &Algebra, equation: &Equation) -> Option<usize> {
        if equation.registers() > LONGEST_PROBE {
            return None;
        }
        self.lanes.clear();
        for (place, variable) in equation.variables().iter().enumerate() {
            let range = algebra.size(variable.sort);
            let value = |lane| spread(place, lane, range) as u8;
            self.lanes.push(std::array::from_fn(value));
        }
        for &step in equation.steps() {
            let table = algebra.table(step.symbol);
            let value = match (equation.arguments(step), table.quick()) {
                (&[a], Some(quick)) => {
                    let a = &self.lanes[a as usize];
                    std::array::from_fn(|lane| quick[usize::from(a[lane])])
                }
                (&[a, b], Some(quick)) => {
                    let (a, b) = (&self.lanes[a as usize], &self.lanes[b as usize]);
                    std::array::from_fn(|lane| quick[usize::from(a[lane] << 4 | b[lane])])
                }
                (arguments, _) => std::array::from_fn(|lane| {
                    let registers = arguments
                        .iter()
                        .map(|&from| self.lanes[from as usize][lane]);
                    table.values()[cell(table, registers)]
                }),
            };
            self.lanes.push(value);
        }
        self.looked_up += (LANES * equation.steps().len()) as u64;
        let (left, right) = (self.lanes[equation.left()], self.lanes[equation.right()]);
        (left != right).then(|| (0..LANES).find(|&lane| left[lane] != right[lane]))?
    }

    /// Sizes the buffers, and tells how many variables are outside the blocks.
    fn prepare(&mut self, equation: &Equation, ranges: &[u32]) -> usize {
        let registers = equation.registers();
        let most = LONGEST_BLOCK.min(MOST_BYTES / registers).max(1);
        let mut outer = ranges.len();
        let mut length = 1;
        while outer > 0 && length * ranges[outer - 1] as usize <= most {
            outer -= 1;
            length *= ranges[outer] as usize;
        }
        self.single.clear();
        self.single.resize(registers, 0);
        self.many.clear();
        self.many.resize(registers, false);
        self.many[outer..ranges.len()].fill(true);
        for (number, &step) in equation.steps().iter().enumerate() {
            let mut arguments = equation.arguments(step).iter();
            let many = arguments.any(|&from| self.many[from as usize]);
            self.many[ranges.len() + number] = many;
        }
        if self.arrays.len() < registers * length {
            self.arrays.resize(registers * length, 0);
        }
        outer
    }

    fn lay_out_variables(&mut self, ranges: &[u32], outer: usize, length: usize) {
        let mut repeat = length;
        for (variable, &range) in ranges.iter().enumerate().skip(outer) {
            repeat /= range as usize;
            let array = &mut self.arrays[variable * length..(variable + 1) * length];
            for (place, chunk) in array.chunks_mut(repeat).enumerate() {
                chunk.fill((place % range as usize) as u8);
            }
        }
    }

    /// Fills the register `at`.
    fn look_up(
        &mut self,
        table: &Table,
        equation: &Equation,
        step: Step,
        at: usize,
        length: usize,
    ) {
        let arguments = equation.arguments(step);
        if !self.many[at] {
            self.looked_up += 1;
            let registers = arguments.iter().map(|&from| self.single[from as usize]);
            self.single[at] = table.values()[cell(table, registers)];
            return;
        }
        self.looked_up += length as u64;
        let (before, rest) = self.arrays.split_at_mut(at * length);
        let out = &mut rest[..length];
        let array = |from: u32| &before[from as usize * length..(from as usize + 1) * length];
        let single = |from: u32| self.single[from as usize];
        let many = |from: u32| self.many[from as usize];
        match *arguments {
            [a] => one(table, array(a), out),
            [a, b] => match (many(a), many(b)) {
                (true, true) => two(table, array(a), array(b), out),
                (false, _) => row(table, single(a), array(b), out),
                (true, false) => column(table, array(a), single(b), out),
            },
            _ => {
                for (place, out) in out.iter_mut().enumerate() {
                    let registers = arguments.iter().map(|&from| {
                        if many(from) {
                            array(from)[place]
                        } else {
                            single(from)
                        }
                    });
                    *out = table.values()[cell(table, registers)];
                }
            }
        }
    }

    /// The first place of the block where the sides differ.
    fn difference(&self, equation: &Equation, length: usize) -> Option<usize> {
        let side = |register: usize| &self.arrays[register * length..(register + 1) * length];
        let (left, right) = (equation.left(), equation.right());
        match (self.many[left], self.many[right]) {
            (true, true) => {
                let (left, right) = (side(left), side(right));
                // Comparing whole arrays is quicker than looking for the place.
                if left == right {
                    return None;
                }
                left.iter()
                    .zip(right)
                    .position(|(left, right)| left != right)
            }
            (true, false) => side(left)
                .iter()
                .position(|&left| left != self.single[right]),
            (false, true) => side(right)
                .iter()
                .position(|&right| right != self.single[left]),
            (false, false) => (self.single[left] != self.single[right]).then_some(0),
        }
    }
}

fn ranges(algebra: &Algebra, equation: &Equation) -> Vec<u32> {
    let size = |variable: &Variable| algebra.size(variable.sort);
    equation.variables().iter().map(size).collect()
}

/// How many assignments are tried before all others, side by side.
const LANES: usize = 8;

/// Scattered values: different ones for neighbouring variables, and for a variable in the lanes.
#[inline]
fn spread(place: usize, lane: usize, range: u32) -> u32 {
    (place * (lane + 1) + lane) as u32 % range
}

/// The next assignment, the last variable turning fastest; false after the last one.
pub(super) fn advance(assignment: &mut [u32], ranges: &[u32]) -> bool {
    for place in (0..assignment.len()).rev() {
        assignment[place] += 1;
        if assignment[place] < ranges[place] {
            return true;
        }
        assignment[place] = 0;
    }
    false
}

/// The digits of a number whose places have these ranges.
fn digits(mut number: usize, ranges: &[u32]) -> Vec<u32> {
    let mut digits = vec![0; ranges.len()];
    for (digit, &range) in digits.iter_mut().zip(ranges).rev() {
        *digit = (number % range as usize) as u32;
        number /= range as usize;
    }
    digits
}

#[inline]
fn cell(table: &Table, registers: impl Iterator<Item = u8>) -> usize {
    let pairs = table.shape().iter().zip(registers);
    pairs.fold(0, |cell, (&side, value)| {
        cell * side as usize + usize::from(value)
    })
}

fn one(table: &Table, from: &[u8], out: &mut [u8]) {
    if let Some(quick) = table.quick() {
        for (out, &from) in out.iter_mut().zip(from) {
            *out = quick[usize::from(from)];
        }
    }
}

fn two(table: &Table, first: &[u8], second: &[u8], out: &mut [u8]) {
    let pairs = out.iter_mut().zip(first.iter().zip(second));
    if let Some(quick) = table.quick() {
        for (out, (&a, &b)) in pairs {
            *out = quick[usize::from(a << 4 | b)];
        }
        return;
    }
    let (values, side) = (table.values(), table.shape()[1] as usize);
    for (out, (&a, &b)) in pairs {
        *out = values[usize::from(a) * side + usize::from(b)];
    }
}

fn row(table: &Table, first: u8, second: &[u8], out: &mut [u8]) {
    let side = table.shape()[1] as usize;
    let row = &table.values()[usize::from(first) * side..][..side];
    for (out, &b) in out.iter_mut().zip(second) {
        *out = row[usize::from(b)];
    }
}

fn column(table: &Table, first: &[u8], second: u8, out: &mut [u8]) {
    if let Some(quick) = table.quick() {
        for (out, &a) in out.iter_mut().zip(first) {
            *out = quick[usize::from(a << 4 | second)];
        }
        return;
    }
    let (values, side) = (table.values(), table.shape()[1] as usize);
    for (out, &a) in out.iter_mut().zip(first) {
        *out = values[usize::from(a) * side + usize::from(second)];
    }
}

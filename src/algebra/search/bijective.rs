//! Rows of a table whose cells must have different values.
//!
//! A law x = f(y, s) says that f(y, ·) reaches every x, so in a finite algebra, where as many
//! elements go in as come out, it is one-to-one. A law x = t in which x stands in t only within
//! f(y, x) says that f(y, ·) loses nothing. Both hold for any place of any symbol, as long as the
//! other arguments are different variables.

use super::super::equation::Equation;
use super::super::signature::Problem;
use super::grid::{Block, Cell};
use super::state::{Conflict, State};
use crate::term::Symbol;

/// All rows of one table along one argument.
pub(in crate::algebra) struct Row {
    pub base: u32,
    pub cells: u32,
    pub stride: u32,
    pub length: u32,
}

impl Row {
    /// Strikes a cell's value from the other cells of its row.
    #[inline]
    pub(super) fn exclude(&self, cell: Cell, value: u8, state: &mut State) -> Result<(), Conflict> {
        let offset = cell.0.wrapping_sub(self.base);
        if offset >= self.cells {
            return Ok(());
        }
        let own = offset / self.stride % self.length;
        let first = cell.0 - own * self.stride;
        for place in (0..self.length).filter(|&place| place != own) {
            state.restrict(Cell(first + place * self.stride), !(1 << value))?;
        }
        Ok(())
    }
}

/// The rows that the laws demand.
pub(super) fn rows(problem: &Problem, sizes: &[u32], blocks: &[Block]) -> Vec<Row> {
    let mut found: Vec<(Symbol, usize)> = Vec::new();
    for law in &problem.laws {
        for (side, other) in [(law.left(), law.right()), (law.right(), law.left())] {
            if side < law.variables().len() {
                onto(law, side, other, sizes, blocks, &mut found);
                one_to_one(law, side, &mut found);
            }
        }
    }
    found.sort_unstable();
    found.dedup();
    let row = |(symbol, place): (Symbol, usize)| {
        let block = &blocks[symbol.index()];
        Row {
            base: block.base,
            cells: block.cells,
            stride: block.strides[place],
            length: sizes[block.arguments[place].0 as usize],
        }
    };
    found.into_iter().map(row).collect()
}

fn onto(
    law: &Equation,
    side: usize,
    other: usize,
    sizes: &[u32],
    blocks: &[Block],
    found: &mut Vec<(Symbol, usize)>,
) {
    let Some(step) = other.checked_sub(law.variables().len()) else {
        return;
    };
    let step = law.steps()[step];
    let block = &blocks[step.symbol.index()];
    let arguments = law.arguments(step);
    for (place, sort) in block.arguments.iter().enumerate() {
        let same = sizes[sort.0 as usize] == sizes[block.result.0 as usize];
        if same && others_are_free(law, arguments, place, side) {
            found.push((step.symbol, place));
        }
    }
}

fn one_to_one(law: &Equation, side: usize, found: &mut Vec<(Symbol, usize)>) {
    let uses = |register: &&u32| **register as usize == side;
    let count = |&step| law.arguments(step).iter().filter(uses).count();
    let mut using = law.steps().iter().filter(|step| count(step) > 0);
    let (Some(&step), None) = (using.next(), using.next()) else {
        return;
    };
    let arguments = law.arguments(step);
    let place = arguments.iter().position(|register| uses(&register));
    if let Some(place) = place
        && others_are_free(law, arguments, place, side)
    {
        found.push((step.symbol, place));
    }
}

/// Are all arguments but that at `place` different variables, none of them `side`?
fn others_are_free(law: &Equation, arguments: &[u32], place: usize, side: usize) -> bool {
    let others = || {
        arguments
            .iter()
            .enumerate()
            .filter(|&(other, _)| other != place)
    };
    others().all(|(at, &register)| {
        let register = register as usize;
        let again = |&(other, &same): &(usize, &u32)| other < at && same as usize == register;
        register < law.variables().len() && register != side && !others().any(|o| again(&o))
    })
}

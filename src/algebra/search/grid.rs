//! The layout of all cells for one vector of sizes.

use super::super::equation::Equation;
use super::super::signature::{Problem, Signature};
use super::bijective::{Row, rows};
use super::sizes::LARGEST_SIZE;
use crate::term::Sort;

/// An index into the cells of all tables.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub(super) struct Cell(pub u32);

impl Cell {
    pub(super) const NONE: Cell = Cell(u32::MAX);

    #[inline]
    pub(super) fn index(self) -> usize {
        self.0 as usize
    }
}

/// One table among the cells.
pub(in crate::algebra) struct Block {
    pub base: u32,
    /// How far apart cells are whose arguments at this place differ by one.
    pub strides: Box<[u32]>,
    pub arguments: Box<[Sort]>,
    pub result: Sort,
    pub cells: u32,
    pub used: bool,
}

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

/// An equation with the places of its cells. The first registers hold the variables.
pub(super) struct Program {
    /// How many values each variable takes.
    pub ranges: Box<[u32]>,
    /// How many bits its values take in a packed instance.
    pub bits: Box<[u32]>,
    pub looks: Vec<Look>,
    /// Pairs of a register and a stride.
    pub places: Vec<(u32, u32)>,
    /// Does another look-up use the register?
    pub inner: Vec<bool>,
    pub left: usize,
    pub right: usize,
    /// Must the sides differ, not be equal?
    pub differ: bool,
    pub instances: u32,
}

impl Program {
    /// The instance of this number, with some bits for each variable, so that its values, which
    /// are read far more often than anything else, are read without division.
    pub(super) fn pack(&self, number: u32) -> u32 {
        let (mut rest, mut shift, mut packed) = (number, 0, 0);
        for (&range, &bits) in self.ranges.iter().zip(&self.bits) {
            // A variable with a single value has no bits, and may come after all of them are used.
            packed |= (rest % range).checked_shl(shift).unwrap_or(0);
            rest /= range;
            shift += bits;
        }
        packed
    }
}

/// Everything about one vector of sizes that does not change during the search.
pub(in crate::algebra) struct Grid<'a> {
    pub problem: &'a Problem,
    pub sizes: Vec<u32>,
    /// One block for each symbol, then one of a single cell for each variable of the claim.
    pub blocks: Vec<Block>,
    pub(super) programs: Vec<Program>,
    /// Rows whose cells must have different values, and for every cell those it lies in.
    pub rows: Vec<Row>,
    pub registers: usize,
    cells: usize,
}

/// What a cell, and what a watch costs in bytes, roughly.
const CELL_BYTES: usize = 64;
const INSTANCE_BYTES: usize = 48;

/// More cells are never decided in a reasonable time; their tables would only take memory.
const MOST_CELLS: u32 = 1 << 21;

impl<'a> Grid<'a> {
    /// The layout, unless it needs more bytes than these.
    pub(in crate::algebra) fn new(
        problem: &'a Problem,
        sizes: &[u32],
        bytes: usize,
    ) -> Option<Self> {
        debug_assert!(sizes.iter().all(|size| (1..=LARGEST_SIZE).contains(size)));
        let mut blocks = Vec::new();
        let mut base: u32 = 0;
        let used = problem.used();
        for (shape, used) in problem.signature.symbols().iter().zip(used) {
            let block = block(shape.arguments.clone(), shape.result, sizes, base, used)?;
            base = base.checked_add(block.cells)?;
            blocks.push(block);
        }
        for variable in problem.claim.variables() {
            blocks.push(block(Box::new([]), variable.sort, sizes, base, true)?);
            base = base.checked_add(1)?;
        }
        let mut programs = Vec::new();
        for law in &problem.laws {
            programs.push(law_program(law, &blocks, sizes)?);
        }
        programs.push(claim_program(&problem.claim, &blocks, &problem.signature));
        let instances: usize = programs
            .iter()
            .map(|program| program.instances as usize)
            .sum();
        if base > MOST_CELLS {
            return None;
        }
        let cost = (base as usize).checked_mul(CELL_BYTES)?;
        if cost.checked_add(instances.checked_mul(INSTANCE_BYTES)?)? > bytes {
            return None;
        }
        let registers = programs.iter().map(|program| program.inner.len()).max();
        Some(Grid {
            problem,
            sizes: sizes.to_vec(),
            rows: rows(problem, sizes, &blocks),
            registers: registers.unwrap_or(0),
            blocks,
            programs,
            cells: base as usize,
        })
    }

    pub(in crate::algebra) fn cells(&self) -> usize {
        self.cells
    }
}

fn block(
    arguments: Box<[Sort]>,
    result: Sort,
    sizes: &[u32],
    base: u32,
    used: bool,
) -> Option<Block> {
    let mut strides = vec![0; arguments.len()];
    let mut cells: u32 = 1;
    for (stride, sort) in strides.iter_mut().zip(&arguments).rev() {
        *stride = cells;
        cells = cells.checked_mul(sizes[sort.0 as usize])?;
    }
    Some(Block {
        base,
        strides: strides.into_boxed_slice(),
        arguments,
        result,
        cells,
        used,
    })
}

fn law_program(law: &Equation, blocks: &[Block], sizes: &[u32]) -> Option<Program> {
    let ranges: Box<[u32]> = law
        .variables()
        .iter()
        .map(|variable| sizes[variable.sort.0 as usize])
        .collect();
    let instances = ranges
        .iter()
        .try_fold(1u32, |product, &range| product.checked_mul(range))?;
    let bits: Box<[u32]> = ranges
        .iter()
        .map(|range| u32::BITS - (range - 1).leading_zeros())
        .collect();
    if bits.iter().sum::<u32>() > u32::BITS {
        return None;
    }
    let mut program = Program {
        ranges,
        bits,
        looks: Vec::with_capacity(law.steps().len()),
        places: Vec::new(),
        inner: vec![false; law.registers()],
        left: law.left(),
        right: law.right(),
        differ: false,
        instances,
    };
    add_looks(&mut program, law, blocks);
    Some(program)
}

/// The variables of the claim are constants: their registers are look-ups without arguments.
fn claim_program(claim: &Equation, blocks: &[Block], signature: &Signature) -> Program {
    let mut program = Program {
        ranges: Box::new([]),
        bits: Box::new([]),
        looks: Vec::with_capacity(claim.registers()),
        places: Vec::new(),
        inner: vec![false; claim.registers()],
        left: claim.left(),
        right: claim.right(),
        differ: true,
        instances: 1,
    };
    for number in 0..claim.variables().len() {
        program.looks.push(Look::Many {
            base: blocks[signature.symbols().len() + number].base,
            first: 0,
            last: 0,
        });
    }
    add_looks(&mut program, claim, blocks);
    program
}

fn add_looks(program: &mut Program, equation: &Equation, blocks: &[Block]) {
    for &step in equation.steps() {
        let block = &blocks[step.symbol.index()];
        let arguments = equation.arguments(step);
        for &from in arguments {
            program.inner[from as usize] = true;
        }
        let look = match (arguments, &*block.strides) {
            (&[from], &[stride]) => Look::One {
                base: block.base,
                stride,
                from,
            },
            (&[from, other], &[stride, 1]) => Look::Two {
                base: block.base,
                stride,
                from,
                other,
            },
            _ => {
                let first = program.places.len() as u32;
                let places = arguments.iter().copied().zip(block.strides.iter().copied());
                program.places.extend(places);
                Look::Many {
                    base: block.base,
                    first,
                    last: program.places.len() as u32,
                }
            }
        };
        program.looks.push(look);
    }
}

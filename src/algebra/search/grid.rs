//! The layout of all cells for one vector of sizes.

use super::super::signature::Problem;
use super::bijective::{Row, rows};
use super::program::Program;
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

/// What a cell costs, and what an instance that is watched, in bytes, roughly. In the end, when
/// nearly everything is known, every instance may be watched by itself.
const CELL_BYTES: usize = 64;
const INSTANCE_BYTES: usize = 24;

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
            programs.push(Program::law(law, &blocks, sizes)?);
        }
        programs.push(Program::claim(&problem.claim, &blocks, &problem.signature));
        if base > MOST_CELLS {
            return None;
        }
        let counts = programs.iter().map(Program::instances);
        let instances = counts.fold(0, usize::saturating_add);
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

//! Which propositional variables there are, and what the clauses will cost.
//!
//! A literal's number is the first one of its cell plus the value. A subterm whose arguments are
//! all variables is a cell, and needs nothing else. Every other subterm has a helper table: a cell
//! for each assignment to the variables that occur in it. One side of a law needs none: its cells
//! have the values of the other side. The variables of the claim are constants.

use super::super::equation::{Equation, Step};
use super::super::search::grid::Grid;

/// Where the value of a register is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Register {
    /// It is the value of a variable of the law.
    Variable,
    /// It is a constant with literals from here on.
    Constant(u32),
    /// It is a cell of the table of its symbol.
    Cell,
    /// It has a helper table with literals from here on.
    Helper(u32),
    /// It is a side of a law, the values of which are those of the other side.
    Goal,
}

/// What one equation needs.
pub(super) struct Program<'a> {
    pub equation: &'a Equation,
    pub registers: Vec<Register>,
    /// The number of elements of each register's sort.
    pub sizes: Vec<u32>,
    /// The variables that occur in what the register stands for, as bits.
    pub own: Vec<u64>,
    /// The side without a helper table, of a law that is not between variables.
    pub goal: Option<usize>,
}

impl Program<'_> {
    pub(super) fn step(&self, register: usize) -> Step {
        self.equation.steps()[register - self.equation.variables().len()]
    }

    /// The side that is not the goal.
    pub(super) fn other_side(&self, goal: usize) -> usize {
        if goal == self.equation.left() {
            self.equation.right()
        } else {
            self.equation.left()
        }
    }
}

/// What one vector of sizes needs.
pub(super) struct Plan<'a> {
    pub laws: Vec<Program<'a>>,
    pub claim: Program<'a>,
    /// The first literal of each block of the grid.
    pub first: Vec<u32>,
    /// How many literals cells and helper tables have.
    pub literals: u32,
    /// A bound on the memory that the clauses need.
    pub bytes: usize,
}

/// What a literal costs by itself, a clause, and each literal in it, in bytes, roughly.
const LITERAL_BYTES: u64 = 150;
const CLAUSE_BYTES: u64 = 64;
const IN_CLAUSE_BYTES: u64 = 6;

/// What is counted while a plan is made; none once there is too much.
struct Count {
    literals: u32,
    bytes: u64,
}

impl Count {
    fn cells(&mut self, cells: u64, size: u32) -> Option<u32> {
        let first = self.literals;
        let literals = cells.checked_mul(size.into())?;
        self.literals = first.checked_add(u32::try_from(literals).ok()?)?;
        self.bytes = self.bytes.checked_add(literals * LITERAL_BYTES)?;
        let pairs = u64::from(size) * u64::from(size - 1) / 2;
        self.clauses(cells.checked_mul(pairs)?, 2)?;
        self.clauses(cells, size.into())?;
        Some(first)
    }

    fn clauses(&mut self, clauses: u64, length: u64) -> Option<()> {
        let each = CLAUSE_BYTES + IN_CLAUSE_BYTES * length;
        self.bytes = self.bytes.checked_add(clauses.checked_mul(each)?)?;
        Some(())
    }
}

impl<'a> Plan<'a> {
    /// The plan, unless it needs more bytes than these.
    pub(super) fn new(grid: &'a Grid<'_>, bytes: usize) -> Option<Self> {
        let mut count = Count {
            literals: 0,
            bytes: 0,
        };
        let mut first = Vec::with_capacity(grid.blocks.len());
        for block in &grid.blocks {
            let cells = if block.used { block.cells } else { 0 };
            let size = grid.sizes[block.result.0 as usize];
            first.push(count.cells(cells.into(), size)?);
            // The chain of the least number rule.
            count.clauses(u64::from(cells) * u64::from(size) * 2, 3)?;
            count.bytes += u64::from(cells) * u64::from(size) * LITERAL_BYTES;
        }
        for row in &grid.rows {
            let (cells, length) = (u64::from(row.cells), u64::from(row.length));
            count.clauses(cells.checked_mul(length * length)?, 2)?;
        }
        let mut laws = Vec::with_capacity(grid.problem.laws.len());
        for law in &grid.problem.laws {
            if law.left() != law.right() {
                laws.push(program(law, grid, None, &mut count, bytes)?);
            }
        }
        let constants = &first[grid.problem.signature.symbols().len()..];
        let claim = program(
            &grid.problem.claim,
            grid,
            Some(constants),
            &mut count,
            bytes,
        )?;
        let needed = usize::try_from(count.bytes).ok()?;
        (needed <= bytes).then_some(Plan {
            laws,
            claim,
            first,
            literals: count.literals,
            bytes: needed,
        })
    }
}

/// The program of a law, or of the claim if the literals of its variables are given.
fn program<'a>(
    equation: &'a Equation,
    grid: &Grid<'_>,
    constants: Option<&[u32]>,
    count: &mut Count,
    bytes: usize,
) -> Option<Program<'a>> {
    let variables = equation.variables();
    if constants.is_none() && variables.len() > u64::BITS as usize {
        return None;
    }
    let mut program = Program {
        equation,
        registers: Vec::with_capacity(equation.registers()),
        sizes: Vec::with_capacity(equation.registers()),
        own: Vec::with_capacity(equation.registers()),
        goal: None,
    };
    for (number, variable) in variables.iter().enumerate() {
        program.sizes.push(grid.sizes[variable.sort.0 as usize]);
        match constants {
            Some(constants) => {
                program
                    .registers
                    .push(Register::Constant(constants[number]));
                program.own.push(0);
            }
            None => {
                program.registers.push(Register::Variable);
                program.own.push(1 << number);
            }
        }
    }
    for step in equation.steps() {
        let arguments = equation.arguments(*step).iter();
        let mut own = 0;
        let mut cell = true;
        for &from in arguments {
            own |= program.own[from as usize];
            cell &= program.registers[from as usize] == Register::Variable;
        }
        let result = grid.blocks[step.symbol.index()].result;
        program.sizes.push(grid.sizes[result.0 as usize]);
        program.own.push(own);
        program.registers.push(if cell {
            Register::Cell
        } else {
            Register::Helper(0)
        });
    }
    if constants.is_none() {
        choose_goal(&mut program);
    }
    for register in variables.len()..equation.registers() {
        lay_out(&mut program, register, count)?;
        if count.bytes > bytes as u64 {
            return None;
        }
    }
    Some(program)
}

/// The later side is no subterm of the other, so it can go without a table; of two that both
/// could, the one that needs a table.
fn choose_goal(program: &mut Program<'_>) {
    let (left, right) = (program.equation.left(), program.equation.right());
    let (early, late) = (left.min(right), left.max(right));
    let variables = program.equation.variables().len();
    if late < variables {
        return;
    }
    let is_cell = |register: usize| program.registers[register] == Register::Cell;
    let goal = if early >= variables && is_cell(late) && !is_cell(early) {
        early
    } else {
        late
    };
    program.registers[goal] = Register::Goal;
    program.goal = Some(goal);
}

/// Counts, and gives literals to, a register that is neither a variable nor a cell.
fn lay_out(program: &mut Program<'_>, register: usize, count: &mut Count) -> Option<()> {
    let size = program.sizes[register];
    let assignments = |own: u64| {
        let variables = 0..program.equation.variables().len().min(u64::BITS as usize);
        let owned = variables.filter(|&variable| own >> variable & 1 == 1);
        let mut sizes = owned.map(|variable| u64::from(program.sizes[variable]));
        sizes.try_fold(1u64, |all, size| all.checked_mul(size))
    };
    let cells = match program.registers[register] {
        Register::Helper(_) => {
            let cells = assignments(program.own[register])?;
            program.registers[register] = Register::Helper(count.cells(cells, size)?);
            cells
        }
        Register::Goal => {
            let other = program.other_side(register);
            assignments(program.own[register] | program.own[other])?
        }
        _ => return Some(()),
    };
    let mut open: Vec<u32> = program.equation.arguments(program.step(register)).to_vec();
    open.sort_unstable();
    open.dedup();
    open.retain(|&from| program.registers[from as usize] != Register::Variable);
    let mut clauses = cells.checked_mul(u64::from(size) * 2)?;
    for &from in &open {
        clauses = clauses.checked_mul(program.sizes[from as usize].into())?;
    }
    count.clauses(clauses, open.len() as u64 + 2)
}

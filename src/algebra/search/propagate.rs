//! What an instance of a law says about the cells.

use super::super::limits::{Limits, StopReason};
use super::grid::{Cell, Grid, Look, Program};
use super::state::{Conflict, OPEN, State};

/// What became of a register.
#[derive(Clone, Copy)]
struct Side {
    /// The value, or [`OPEN`].
    value: u8,
    /// The cell that holds it, unless it is a variable or an argument is not known.
    cell: Cell,
}

impl Side {
    /// The values that it can have.
    #[inline]
    fn mask(self, state: &State) -> u64 {
        if self.value != OPEN {
            1 << self.value
        } else if self.cell != Cell::NONE {
            state.domain[self.cell.index()]
        } else {
            u64::MAX
        }
    }
}

/// What is known when a single cell below the sides is open.
#[derive(Clone, Copy)]
struct Known {
    /// The register that holds the open cell; those before it are known.
    first: usize,
    /// The cells of the sides, where they come before.
    cells: [Cell; 2],
}

/// Looks at every instance for the first time. The inner error is a conflict.
pub(super) fn examine_all(
    grid: &Grid<'_>,
    state: &mut State,
    registers: &mut [u8],
    limits: &mut Limits,
) -> Result<Result<(), Conflict>, StopReason> {
    for (number, program) in grid.programs.iter().enumerate() {
        for instance in 0..program.instances {
            limits.spend(1 + program.looks.len() as u64)?;
            let packed = program.pack(instance);
            let done = examine(program, number as u32, packed, state, registers);
            if done.is_err() {
                return Ok(Err(Conflict));
            }
        }
    }
    propagate(grid, state, registers, limits)
}

/// Looks at what waits for the cells in the queue, until there is none left.
pub(super) fn propagate(
    grid: &Grid<'_>,
    state: &mut State,
    registers: &mut [u8],
    limits: &mut Limits,
) -> Result<Result<(), Conflict>, StopReason> {
    while let Some(cell) = state.queue.pop() {
        let value = state.value[cell.index()];
        for row in &grid.rows {
            if row.exclude(cell, value, state).is_err() {
                return Ok(Err(Conflict));
            }
        }
        let mut place = state.first_watch(cell);
        while let Some(current) = place {
            let (watch, next) = state.after(current);
            place = next;
            let program = &grid.programs[watch.program as usize];
            limits.spend(1 + program.looks.len() as u64)?;
            let done = examine(program, watch.program, watch.instance, state, registers);
            if done.is_err() {
                state.fail(cell);
                return Ok(Err(Conflict));
            }
        }
    }
    Ok(Ok(()))
}

/// Evaluates one instance as far as the cells are known, and cuts domains by what it finds.
///
/// While two different cells below the sides are open, nothing can be said, and one is watched.
/// When a single one is open, each of its values is tried, and those with which the sides could
/// not come out right are struck. When all below the sides is known, the sides' cells get equal
/// domains (or, where the sides must differ, a known value of one is struck from the other).
fn examine(
    program: &Program,
    number: u32,
    instance: u32,
    state: &mut State,
    registers: &mut [u8],
) -> Result<(), Conflict> {
    let mut rest = instance;
    for (register, &bits) in registers.iter_mut().zip(&program.bits) {
        *register = (rest & ((1 << bits) - 1)) as u8;
        rest >>= bits;
    }
    let mut blocked = Cell::NONE;
    let mut first = 0;
    let mut cells = [Cell::NONE; 2];
    for (at, &look) in (program.ranges.len()..).zip(&program.looks) {
        let cell = find(program, look, registers);
        let value = if cell == Cell::NONE {
            OPEN
        } else {
            state.value[cell.index()]
        };
        registers[at] = value;
        if value == OPEN && program.inner[at] && cell != Cell::NONE && cell != blocked {
            if blocked != Cell::NONE {
                state.watch(blocked, number, instance);
                return Ok(());
            }
            blocked = cell;
            first = at;
        }
        if at == program.left {
            cells[0] = cell;
        }
        if at == program.right {
            cells[1] = cell;
        }
    }
    if blocked != Cell::NONE {
        state.watch(blocked, number, instance);
        let known = Known { first, cells };
        return look_ahead(program, blocked, known, state, registers);
    }
    let left = Side {
        value: registers[program.left],
        cell: cells[0],
    };
    let right = Side {
        value: registers[program.right],
        cell: cells[1],
    };
    if program.differ {
        keep_apart(left, right, number, instance, state)
    } else {
        bring_together(left, right, number, instance, state)
    }
}

/// The cell of a look-up, if the arguments are known.
#[inline]
fn find(program: &Program, look: Look, registers: &[u8]) -> Cell {
    match look {
        Look::One { base, stride, from } => match registers[from as usize] {
            OPEN => Cell::NONE,
            value => Cell(base + u32::from(value) * stride),
        },
        Look::Two {
            base,
            stride,
            from,
            other,
        } => match (registers[from as usize], registers[other as usize]) {
            (OPEN, _) | (_, OPEN) => Cell::NONE,
            (a, b) => Cell(base + u32::from(a) * stride + u32::from(b)),
        },
        Look::Many { base, first, last } => {
            let mut cell = base;
            for &(from, stride) in &program.places[first as usize..last as usize] {
                match registers[from as usize] {
                    OPEN => return Cell::NONE,
                    value => cell += u32::from(value) * stride,
                }
            }
            Cell(cell)
        }
    }
}

/// Equations with more subterms are not worth trying them with every value, and the search must
/// soon notice when it is to stop.
const LONGEST_LOOK_AHEAD: usize = 1000;

/// Strikes the values of the only open cell below the sides with which they cannot come out.
fn look_ahead(
    program: &Program,
    blocked: Cell,
    known: Known,
    state: &mut State,
    registers: &mut [u8],
) -> Result<(), Conflict> {
    if program.looks.len() > LONGEST_LOOK_AHEAD {
        return Ok(());
    }
    let mut remaining = state.domain[blocked.index()];
    let mut keep = remaining;
    while remaining != 0 {
        let value = remaining.trailing_zeros() as u8;
        remaining &= remaining - 1;
        if !is_possible(program, blocked, value, known, state, registers) {
            keep &= !(1 << value);
        }
    }
    state.restrict(blocked, keep)
}

/// Can the sides come out right when the only open cell below them has this value?
#[inline]
fn is_possible(
    program: &Program,
    blocked: Cell,
    value: u8,
    known: Known,
    state: &State,
    registers: &mut [u8],
) -> bool {
    let mut cells = known.cells;
    let looks = &program.looks[known.first - program.ranges.len()..];
    for (at, &look) in (known.first..).zip(looks) {
        let cell = find(program, look, registers);
        let found = if cell == blocked {
            value
        } else {
            state.value[cell.index()]
        };
        // Below a side, another open cell leaves everything possible.
        if found == OPEN && program.inner[at] {
            return true;
        }
        registers[at] = found;
        if at == program.left {
            cells[0] = cell;
        }
        if at == program.right {
            cells[1] = cell;
        }
    }
    let side = |register: usize, cell| Side {
        value: registers[register],
        cell,
    };
    let left = side(program.left, cells[0]).mask(state);
    let right = side(program.right, cells[1]).mask(state);
    if program.differ {
        left != right || !left.is_power_of_two()
    } else {
        left & right != 0
    }
}

fn bring_together(
    left: Side,
    right: Side,
    number: u32,
    instance: u32,
    state: &mut State,
) -> Result<(), Conflict> {
    if left.value != OPEN && right.value != OPEN {
        return if left.value == right.value {
            Ok(())
        } else {
            Err(Conflict)
        };
    }
    if left.cell == right.cell {
        return Ok(());
    }
    let common = left.mask(state) & right.mask(state);
    for side in [left, right] {
        if side.value == OPEN {
            state.restrict(side.cell, common)?;
        }
    }
    // As long as both are open, the value of one decides the other.
    if common.count_ones() > 1 {
        state.watch(left.cell, number, instance);
        state.watch(right.cell, number, instance);
    }
    Ok(())
}

fn keep_apart(
    left: Side,
    right: Side,
    number: u32,
    instance: u32,
    state: &mut State,
) -> Result<(), Conflict> {
    match (left.value, right.value) {
        (OPEN, OPEN) if left.cell == right.cell => Err(state.fail(left.cell)),
        (OPEN, OPEN) => {
            state.watch(left.cell, number, instance);
            state.watch(right.cell, number, instance);
            Ok(())
        }
        (OPEN, value) => state.restrict(left.cell, !(1 << value)),
        (value, OPEN) => state.restrict(right.cell, !(1 << value)),
        (left, right) if left == right => Err(Conflict),
        _ => Ok(()),
    }
}

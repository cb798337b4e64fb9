//! What an instance of a law says about the cells.

use super::super::limits::{Limits, StopReason};
use super::grid::{Cell, Grid};
use super::program::{Look, Program, Tier};
use super::state::{Conflict, Due, Instance, OPEN, State};

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

/// Why propagation ended early.
pub(super) enum Halt {
    /// The state is contradictory.
    Conflict,
    /// The limits ended it.
    Stopped(StopReason),
}

impl From<Conflict> for Halt {
    fn from(_: Conflict) -> Self {
        Halt::Conflict
    }
}

impl From<StopReason> for Halt {
    fn from(reason: StopReason) -> Self {
        Halt::Stopped(reason)
    }
}

/// The only open cell that has been met below the sides of an instance so far.
#[derive(Clone, Copy)]
struct Blocked {
    cell: Cell,
    /// The register that holds it; those before it are known.
    first: usize,
}

const NOT_BLOCKED: Blocked = Blocked {
    cell: Cell::NONE,
    first: 0,
};

/// What is needed to look at instances: the limits and some memory.
pub(super) struct Examiner {
    registers: Vec<u8>,
    /// For each stage the value of its variable.
    values: Vec<u32>,
    /// For each stage what was met before it.
    blocked: Vec<Blocked>,
}

impl Examiner {
    pub(super) fn new(grid: &Grid<'_>) -> Self {
        let stages = grid.programs.iter().map(|program| program.variables.len());
        let stages = stages.max().unwrap_or(0) + 1;
        Examiner {
            registers: vec![0; grid.registers],
            values: vec![0; stages],
            blocked: vec![NOT_BLOCKED; stages],
        }
    }

    /// Looks at every instance for the first time.
    pub(super) fn examine_all(
        &mut self,
        grid: &Grid<'_>,
        state: &mut State,
        limits: &mut Limits,
    ) -> Result<(), Halt> {
        for (number, program) in grid.programs.iter().enumerate() {
            let all = Instance {
                program: number as u32,
                stage: 0,
                packed: 0,
            };
            self.examine(program, all, state, limits)?;
        }
        self.propagate(grid, state, limits)
    }

    /// Looks at what waits for the cells in the queue, until there is none left.
    pub(super) fn propagate(
        &mut self,
        grid: &Grid<'_>,
        state: &mut State,
        limits: &mut Limits,
    ) -> Result<(), Halt> {
        loop {
            match state.next_due() {
                Due::Cell(cell) => {
                    let value = state.value[cell.index()];
                    for row in &grid.rows {
                        row.exclude(cell, value, state)?;
                    }
                }
                Due::Instance(instance, cell) => {
                    let program = &grid.programs[instance.program as usize];
                    let done = self.examine(program, instance, state, limits);
                    if let Err(Halt::Conflict) = done {
                        state.fail(cell);
                    }
                    done?;
                }
                Due::Nothing => return Ok(()),
            }
        }
    }

    /// Evaluates an instance as far as the cells are known, stage by stage, and cuts domains by
    /// what it finds.
    ///
    /// While two different cells below the sides are open, nothing can be said, and one is
    /// watched. When a single one is open and all variables have values, each of its
    /// values is tried, and those with which the sides could not come out right are struck. When
    /// all below the sides is known, the sides' cells get equal domains (or, where the sides must
    /// differ, a known value of one is struck from the other).
    fn examine(
        &mut self,
        program: &Program,
        instance: Instance,
        state: &mut State,
        limits: &mut Limits,
    ) -> Result<(), Halt> {
        let begin = usize::from(instance.stage);
        for (register, place) in self.registers.iter_mut().zip(&program.variables[..begin]) {
            *register = (instance.packed >> place.shift & place.mask) as u8;
        }
        // Variables with a single value have it in every instance.
        self.registers[program.variables.len()..program.offset].fill(0);
        let mut packed = instance.packed;
        let mut stage = begin;
        let mut from = 0;
        let mut blocked = NOT_BLOCKED;
        loop {
            let end = program.ends[stage];
            limits.spend(1 + (end - from) as u64)?;
            if state.bytes() > limits.bytes {
                return Err(Halt::Stopped(StopReason::Memory));
            }
            let here = Instance {
                stage: stage as u8,
                packed,
                ..instance
            };
            let goes_on = self.evaluate(program, here, from..end, &mut blocked, state);
            let goes_on =
                goes_on && (blocked.cell == Cell::NONE || program.variables.len() == stage);
            if goes_on && stage < program.variables.len() {
                self.blocked[stage] = blocked;
                self.values[stage] = 0;
                self.registers[stage] = 0;
                from = end;
                stage += 1;
                continue;
            }
            if goes_on {
                self.conclude(program, here, blocked, state)?;
            }
            // The next instance.
            loop {
                if stage == begin {
                    return Ok(());
                }
                stage -= 1;
                let place = &program.variables[stage];
                self.values[stage] += 1;
                if self.values[stage] < place.range {
                    break;
                }
                packed &= !(place.mask << place.shift);
            }
            let place = &program.variables[stage];
            packed = packed & !(place.mask << place.shift) | self.values[stage] << place.shift;
            self.registers[stage] = self.values[stage] as u8;
            blocked = self.blocked[stage];
            from = program.ends[stage];
            stage += 1;
        }
    }

    /// Does some look-ups. False if two cells below the sides are open.
    fn evaluate(
        &mut self,
        program: &Program,
        instance: Instance,
        looks: std::ops::Range<usize>,
        blocked: &mut Blocked,
        state: &mut State,
    ) -> bool {
        for place in looks {
            let at = program.offset + place;
            let cell = find(program, program.looks[place], &self.registers);
            if cell == Cell::NONE {
                self.registers[at] = OPEN;
                continue;
            }
            let value = state.value[cell.index()];
            self.registers[at] = value;
            if value == OPEN && program.inner[at] && cell != blocked.cell {
                if blocked.cell != Cell::NONE {
                    return false;
                }
                state.watch(cell, instance, program.tier);
                *blocked = Blocked { cell, first: at };
            }
        }
        true
    }

    /// Says what an instance says in which all variables have values and at most one cell below
    /// the sides is open.
    fn conclude(
        &mut self,
        program: &Program,
        instance: Instance,
        blocked: Blocked,
        state: &mut State,
    ) -> Result<(), Conflict> {
        if blocked.cell != Cell::NONE {
            return look_ahead(program, blocked, state, &mut self.registers);
        }
        let side = |register: usize| Side {
            value: self.registers[register],
            cell: match register.checked_sub(program.offset) {
                Some(look) => find(program, program.looks[look], &self.registers),
                None => Cell::NONE,
            },
        };
        let (left, right) = (side(program.left), side(program.right));
        if program.differ {
            keep_apart(left, right, instance, program.tier, state)
        } else {
            bring_together(left, right, instance, program.tier, state)
        }
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
    blocked: Blocked,
    state: &mut State,
    registers: &mut [u8],
) -> Result<(), Conflict> {
    if program.looks.len() > LONGEST_LOOK_AHEAD {
        return Ok(());
    }
    let mut remaining = state.domain[blocked.cell.index()];
    let mut keep = remaining;
    while remaining != 0 {
        let value = remaining.trailing_zeros() as u8;
        remaining &= remaining - 1;
        if !is_possible(program, blocked, value, state, registers) {
            keep &= !(1 << value);
        }
    }
    state.restrict(blocked.cell, keep)
}

/// Can the sides come out right when the only open cell below them has this value?
#[inline]
fn is_possible(
    program: &Program,
    blocked: Blocked,
    value: u8,
    state: &State,
    registers: &mut [u8],
) -> bool {
    let looks = &program.looks[blocked.first - program.offset..];
    for (at, &look) in (blocked.first..).zip(looks) {
        let cell = find(program, look, registers);
        let found = if cell == blocked.cell {
            value
        } else {
            state.value[cell.index()]
        };
        // Below a side, another open cell leaves everything possible.
        if found == OPEN && program.inner[at] {
            return true;
        }
        registers[at] = found;
    }
    let side = |register: usize| {
        let cell = match register.checked_sub(program.offset) {
            Some(look) if registers[register] == OPEN => {
                find(program, program.looks[look], registers)
            }
            _ => Cell::NONE,
        };
        Side {
            value: registers[register],
            cell,
        }
        .mask(state)
    };
    let (left, right) = (side(program.left), side(program.right));
    if program.differ {
        left != right || !left.is_power_of_two()
    } else {
        left & right != 0
    }
}

fn bring_together(
    left: Side,
    right: Side,
    instance: Instance,
    tier: Tier,
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
        state.watch(left.cell, instance, tier);
        state.watch(right.cell, instance, tier);
    }
    Ok(())
}

fn keep_apart(
    left: Side,
    right: Side,
    instance: Instance,
    tier: Tier,
    state: &mut State,
) -> Result<(), Conflict> {
    match (left.value, right.value) {
        (OPEN, OPEN) if left.cell == right.cell => Err(state.fail(left.cell)),
        (OPEN, OPEN) => {
            state.watch(left.cell, instance, tier);
            state.watch(right.cell, instance, tier);
            Ok(())
        }
        (OPEN, value) => state.restrict(left.cell, !(1 << value)),
        (value, OPEN) => state.restrict(right.cell, !(1 << value)),
        (left, right) if left == right => Err(Conflict),
        _ => Ok(()),
    }
}

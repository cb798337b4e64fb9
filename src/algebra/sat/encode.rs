//! Writing the clauses.

use super::super::evaluate::advance;
use super::super::limits::{Limits, StopReason};
use super::super::search::bijective::Row;
use super::super::search::grid::Grid;
use super::least::least_numbers;
use super::plan::{Plan, Program, Register};
use super::solve::Clauses;

/// All clauses for one vector of sizes.
pub(super) fn encode(
    grid: &Grid<'_>,
    plan: &Plan<'_>,
    limits: &mut Limits,
) -> Result<Clauses, StopReason> {
    let mut clauses = Clauses::new(plan.literals, plan.bytes);
    for (block, &first) in grid.blocks.iter().zip(&plan.first) {
        if block.used {
            let size = grid.sizes[block.result.0 as usize];
            one_value_each(&mut clauses, first, block.cells, size, limits)?;
        }
    }
    for row in &grid.rows {
        one_to_one(&mut clauses, grid, plan, row, limits)?;
    }
    least_numbers(&mut clauses, grid, plan, limits)?;
    for program in plan.laws.iter().chain([&plan.claim]) {
        Writer::new(grid, plan, program).write(&mut clauses, limits)?;
    }
    Ok(clauses)
}

/// Each cell has a value, and no two.
fn one_value_each(
    clauses: &mut Clauses,
    first: u32,
    cells: u32,
    size: u32,
    limits: &mut Limits,
) -> Result<(), StopReason> {
    for cell in 0..cells {
        let first = first + cell * size;
        clauses.begin();
        for value in 0..size {
            clauses.holds(first + value);
        }
        clauses.end(limits)?;
        for high in 1..size {
            for low in 0..high {
                clauses.begin().fails(first + high).fails(first + low);
                clauses.end(limits)?;
            }
        }
    }
    Ok(())
}

/// The cells of each row have different values, and if there are as many, all values.
fn one_to_one(
    clauses: &mut Clauses,
    grid: &Grid<'_>,
    plan: &Plan<'_>,
    row: &Row,
    limits: &mut Limits,
) -> Result<(), StopReason> {
    let place = grid.blocks.iter().zip(&plan.first);
    let mut place = place.filter(|(block, _)| block.base == row.base && block.used);
    let Some((block, &first)) = place.next() else {
        return Ok(());
    };
    let size = grid.sizes[block.result.0 as usize];
    for offset in (0..row.cells).filter(|offset| (offset / row.stride).is_multiple_of(row.length)) {
        let literal = |place: u32, value: u32| first + (offset + place * row.stride) * size + value;
        for value in 0..size {
            for high in 1..row.length {
                for low in 0..high {
                    let pair = clauses.begin().fails(literal(high, value));
                    pair.fails(literal(low, value));
                    clauses.end(limits)?;
                }
            }
            if size == row.length {
                clauses.begin();
                for place in 0..row.length {
                    clauses.holds(literal(place, value));
                }
                clauses.end(limits)?;
            }
        }
    }
    Ok(())
}

/// The value of a register under an assignment.
#[derive(Clone, Copy)]
enum Value {
    Fixed(u32),
    /// The literals of its values begin here.
    Open(u32),
}

/// Writes the clauses of one equation.
struct Writer<'a> {
    grid: &'a Grid<'a>,
    plan: &'a Plan<'a>,
    program: &'a Program<'a>,
    /// The values of the variables.
    assignment: Vec<u32>,
}

impl<'a> Writer<'a> {
    fn new(grid: &'a Grid<'a>, plan: &'a Plan<'a>, program: &'a Program<'a>) -> Self {
        Writer {
            grid,
            plan,
            program,
            assignment: vec![0; program.equation.variables().len()],
        }
    }

    fn write(&mut self, clauses: &mut Clauses, limits: &mut Limits) -> Result<(), StopReason> {
        let program = self.program;
        let (left, right) = (program.equation.left(), program.equation.right());
        for register in self.assignment.len()..program.registers.len() {
            if let Register::Helper(first) = program.registers[register] {
                let cells = self.helper_cells(register);
                one_value_each(clauses, first, cells, program.sizes[register], limits)?;
                self.each_assignment(program.own[register], |writer| {
                    writer.define(register, writer.value(register), clauses, limits)
                })?;
            }
        }
        if let Some(goal) = program.goal {
            let other = program.other_side(goal);
            let own = program.own[goal] | program.own[other];
            return self.each_assignment(own, |writer| {
                writer.define(goal, writer.value(other), clauses, limits)
            });
        }
        if matches!(program.registers[left], Register::Variable) {
            // A law between different variables holds where there is one element.
            if program.sizes[left] > 1 {
                clauses.begin();
                clauses.end(limits)?;
            }
            return Ok(());
        }
        self.differ(left, right, clauses, limits)
    }

    /// The sides of the claim have no value in common.
    fn differ(
        &self,
        left: usize,
        right: usize,
        clauses: &mut Clauses,
        limits: &mut Limits,
    ) -> Result<(), StopReason> {
        let (Value::Open(left_first), Value::Open(right_first)) =
            (self.value(left), self.value(right))
        else {
            debug_assert!(false, "no variable of the claim has a fixed value");
            return Ok(());
        };
        for value in 0..self.program.sizes[left] {
            let clause = clauses.begin();
            clause.fails(left_first + value).fails(right_first + value);
            clauses.end(limits)?;
        }
        Ok(())
    }

    /// The variables that are bits of `own`.
    fn variables(&self, own: u64) -> impl Iterator<Item = usize> + use<> {
        let count = self.assignment.len().min(u64::BITS as usize);
        (0..count).filter(move |&variable| own >> variable & 1 == 1)
    }

    fn helper_cells(&self, register: usize) -> u32 {
        let variables = self.variables(self.program.own[register]);
        variables.map(|v| self.program.sizes[v]).product()
    }

    fn each_assignment(
        &mut self,
        own: u64,
        mut visit: impl FnMut(&Self) -> Result<(), StopReason>,
    ) -> Result<(), StopReason> {
        let variables: Vec<usize> = self.variables(own).collect();
        let ranges: Vec<u32> = variables.iter().map(|&v| self.program.sizes[v]).collect();
        let mut values = vec![0; variables.len()];
        loop {
            for (&variable, &value) in variables.iter().zip(&values) {
                self.assignment[variable] = value;
            }
            visit(self)?;
            if !advance(&mut values, &ranges) {
                return Ok(());
            }
        }
    }

    /// The value of a register other than the goal under the current assignment.
    fn value(&self, register: usize) -> Value {
        match self.program.registers[register] {
            Register::Variable => Value::Fixed(self.assignment[register]),
            Register::Constant(first) => Value::Open(first),
            Register::Helper(first) => {
                let variables = self.variables(self.program.own[register]);
                let index = variables.fold(0, |index, variable| {
                    index * self.program.sizes[variable] + self.assignment[variable]
                });
                Value::Open(first + index * self.program.sizes[register])
            }
            Register::Cell | Register::Goal => {
                let step = self.program.step(register);
                let strides = self.grid.blocks[step.symbol.index()].strides.iter();
                let arguments = self.program.equation.arguments(step).iter();
                let offsets = arguments
                    .zip(strides)
                    .map(|(&from, stride)| self.assignment[from as usize] * stride);
                let first = self.plan.first[step.symbol.index()];
                let cell: u32 = offsets.sum();
                Value::Open(first + cell * self.program.sizes[register])
            }
        }
    }

    /// The register's symbol, applied to the values of its arguments, gives the target.
    fn define(
        &self,
        register: usize,
        target: Value,
        clauses: &mut Clauses,
        limits: &mut Limits,
    ) -> Result<(), StopReason> {
        let step = self.program.step(register);
        let strides = self.grid.blocks[step.symbol.index()].strides.iter();
        let size = self.program.sizes[register];
        let mut fixed = 0;
        // Registers that are open: where their literals begin, and how far they move the cell.
        let mut open: Vec<(u32, u32)> = Vec::new();
        let mut ranges = Vec::new();
        for (&from, &stride) in self.program.equation.arguments(step).iter().zip(strides) {
            match self.value(from as usize) {
                Value::Fixed(value) => fixed += value * stride,
                Value::Open(first) => match open.iter_mut().find(|(other, _)| *other == first) {
                    Some((_, strides)) => *strides += stride,
                    None => {
                        open.push((first, stride));
                        ranges.push(self.program.sizes[from as usize]);
                    }
                },
            }
        }
        let mut values = vec![0; open.len()];
        loop {
            let moved = open.iter().zip(&values);
            let moved: u32 = moved.map(|((_, stride), value)| stride * value).sum();
            let cell = self.plan.first[step.symbol.index()] + (fixed + moved) * size;
            let premises = || {
                let pairs = open.iter().zip(&values);
                pairs.map(|((first, _), value)| first + value)
            };
            match target {
                Value::Fixed(value) => {
                    clauses.begin().all_fail(premises()).holds(cell + value);
                    clauses.end(limits)?;
                }
                Value::Open(first) => {
                    for value in 0..size {
                        let (inner, outer) = (cell + value, first + value);
                        let clause = clauses.begin().all_fail(premises());
                        clause.fails(inner).holds(outer);
                        clauses.end(limits)?;
                        let clause = clauses.begin().all_fail(premises());
                        clause.holds(inner).fails(outer);
                        clauses.end(limits)?;
                    }
                }
            }
            if !advance(&mut values, &ranges) {
                return Ok(());
            }
        }
    }
}

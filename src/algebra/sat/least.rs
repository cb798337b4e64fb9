//! The least number rule: of elements that are alike, the first is used first.
//!
//! Elements can be numbered as they are met: the constants first, then, for each element in turn,
//! the cells none of whose arguments has a larger number. So every counterexample can be numbered
//! in such a way that a constant has a value at most one larger than all earlier ones, and a cell
//! whose largest argument is m one at most m + 1 or one larger than the values of earlier ones.
//! The rule is said by "the value v has been met", for each place in that order.

use super::super::limits::{Limits, StopReason};
use super::super::search::grid::{Block, Grid};
use super::plan::Plan;
use super::solve::Clauses;

/// Adds the clauses of the rule, for each sort.
pub(super) fn least_numbers(
    clauses: &mut Clauses,
    grid: &Grid<'_>,
    plan: &Plan<'_>,
    limits: &mut Limits,
) -> Result<(), StopReason> {
    for (sort, &size) in grid.sizes.iter().enumerate() {
        // By the number of elements that have been met for certain, and the first literal.
        let mut cells: Vec<(u32, u32)> = Vec::new();
        for (block, &first) in grid.blocks.iter().zip(&plan.first) {
            if block.used && block.result.0 as usize == sort {
                limits.spend(block.cells.into())?;
                let all = 0..block.cells;
                let with_first = all.map(|cell| (met(block, grid, cell), first + cell * size));
                // Where all but one element have been met for certain, the rule says nothing.
                cells.extend(with_first.filter(|&(met, _)| met + 1 < size));
            }
        }
        cells.sort_by_key(|&(met, _)| met);
        chain(clauses, &cells, size, limits)?;
    }
    Ok(())
}

/// One more than the largest argument of a cell; 0 for constants.
fn met(block: &Block, grid: &Grid<'_>, cell: u32) -> u32 {
    let places = block.strides.iter().zip(&block.arguments);
    let values = places.map(|(stride, sort)| cell / stride % grid.sizes[sort.0 as usize] + 1);
    values.max().unwrap_or(0)
}

/// `cells` are the number of elements that have been met for certain, and the first literal.
fn chain(
    clauses: &mut Clauses,
    cells: &[(u32, u32)],
    size: u32,
    limits: &mut Limits,
) -> Result<(), StopReason> {
    // For each value the literal that implies that some earlier cell has it.
    let mut seen: Vec<Option<u32>> = vec![None; size as usize];
    for &(met, first) in cells {
        for value in met + 1..size {
            clauses.begin().fails(first + value);
            if let Some(before) = seen[value as usize - 1] {
                clauses.holds(before);
            }
            clauses.end(limits)?;
        }
        for value in met..size - 1 {
            let here = first + value;
            let place = &mut seen[value as usize];
            *place = Some(match *place {
                None => here,
                Some(before) => {
                    let now = clauses.fresh();
                    clauses.begin().fails(now).holds(before).holds(here);
                    clauses.end(limits)?;
                    now
                }
            });
        }
    }
    Ok(())
}

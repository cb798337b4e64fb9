//! Domains, the trail, and the watches.

use super::grid::{Cell, Grid};

/// No value yet.
pub(super) const OPEN: u8 = u8::MAX;

/// An instance of a program that waits for a cell to get its value.
#[derive(Clone, Copy)]
pub(super) struct Watch {
    pub program: u32,
    pub instance: u32,
    cell: Cell,
    next: u32,
}

const END: u32 = u32::MAX;

/// The state of the search that backtracking restores.
///
/// Invariants: `value[c]` is the only bit of `domain[c]`, or [`OPEN`] if there are several; no
/// domain is empty, except for a moment when a conflict has just been found. The watches of a cell
/// are a list through one stack for all cells. A watch is never taken off its list when the
/// instance goes on to watch another cell: it is needed again after backtracking. So the lists
/// only grow at their heads, in the order of the stack, and undoing is popping the stack. An entry
/// of a cell's list is of meaning when that cell gets its value, and not afterwards.
pub(super) struct State {
    pub domain: Vec<u64>,
    pub value: Vec<u8>,
    /// Cells with the domains that they had before.
    trail: Vec<(Cell, u64)>,
    heads: Vec<u32>,
    watches: Vec<Watch>,
    /// How many watches each cell has.
    pub watchers: Vec<u32>,
    /// Cells that got their value and whose watches have not been looked at.
    pub queue: Vec<Cell>,
    /// How often each cell's domain became empty.
    pub failures: Vec<u32>,
}

/// A point to return to.
#[derive(Clone, Copy)]
pub(super) struct Point {
    trail: usize,
    watches: usize,
}

/// A domain became empty, or two known sides came out wrong.
#[derive(Clone, Copy, Debug)]
pub(super) struct Conflict;

impl State {
    pub(super) fn new(grid: &Grid<'_>, failures: Vec<u32>) -> Self {
        let cells = grid.cells();
        let mut domain = Vec::with_capacity(cells);
        for block in &grid.blocks {
            let all = u64::MAX >> (64 - grid.sizes[block.result.0 as usize]);
            domain.extend((0..block.cells).map(|_| if block.used { all } else { 1 }));
        }
        let value = domain.iter().map(|&domain| only(domain)).collect();
        State {
            domain,
            value,
            trail: Vec::new(),
            heads: vec![END; cells],
            watches: Vec::new(),
            watchers: vec![0; cells],
            queue: Vec::new(),
            failures,
        }
    }

    pub(super) fn point(&self) -> Point {
        Point {
            trail: self.trail.len(),
            watches: self.watches.len(),
        }
    }

    pub(super) fn undo(&mut self, point: Point) {
        self.queue.clear();
        for &(cell, domain) in self.trail[point.trail..].iter().rev() {
            self.domain[cell.index()] = domain;
            self.value[cell.index()] = only(domain);
        }
        self.trail.truncate(point.trail);
        for watch in self.watches[point.watches..].iter().rev() {
            self.heads[watch.cell.index()] = watch.next;
            self.watchers[watch.cell.index()] -= 1;
        }
        self.watches.truncate(point.watches);
    }

    /// Leaves only values in `mask` to the cell.
    #[inline]
    pub(super) fn restrict(&mut self, cell: Cell, mask: u64) -> Result<(), Conflict> {
        let old = self.domain[cell.index()];
        let new = old & mask;
        if new == old {
            return Ok(());
        }
        if new == 0 {
            return Err(self.fail(cell));
        }
        self.trail.push((cell, old));
        self.domain[cell.index()] = new;
        let value = only(new);
        if value != OPEN {
            self.value[cell.index()] = value;
            self.queue.push(cell);
        }
        Ok(())
    }

    /// Notes a failure at this cell.
    #[inline]
    pub(super) fn fail(&mut self, cell: Cell) -> Conflict {
        let failures = &mut self.failures[cell.index()];
        *failures = failures.saturating_add(1);
        Conflict
    }

    /// Lets an instance wait for a cell that has no value.
    #[inline]
    pub(super) fn watch(&mut self, cell: Cell, program: u32, instance: u32) {
        let head = &mut self.heads[cell.index()];
        let next = std::mem::replace(head, self.watches.len() as u32);
        self.watches.push(Watch {
            program,
            instance,
            cell,
            next,
        });
        self.watchers[cell.index()] += 1;
    }

    /// The first watch of a cell, to be followed by [`State::after`].
    pub(super) fn first_watch(&self, cell: Cell) -> Option<u32> {
        Some(self.heads[cell.index()]).filter(|&place| place != END)
    }

    /// A watch, and the place of the next one of the same cell.
    #[inline]
    pub(super) fn after(&self, place: u32) -> (Watch, Option<u32>) {
        let watch = self.watches[place as usize];
        (watch, Some(watch.next).filter(|&place| place != END))
    }

    /// How many bytes the watches and the trail take.
    pub(super) fn bytes(&self) -> usize {
        self.watches.capacity() * size_of::<Watch>() + self.trail.capacity() * 16
    }
}

/// The only element of a domain, or [`OPEN`].
#[inline]
fn only(domain: u64) -> u8 {
    if domain & (domain - 1) == 0 {
        domain.trailing_zeros() as u8
    } else {
        OPEN
    }
}

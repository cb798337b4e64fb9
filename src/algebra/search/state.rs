//! Domains, the trail, and the watches.

use super::grid::{Cell, Grid};
use super::program::Tier;

/// No value yet.
pub(super) const OPEN: u8 = u8::MAX;

/// All instances of a program in which the variables of the first stages have these values.
#[derive(Clone, Copy)]
pub(super) struct Instance {
    pub program: u32,
    /// How many variables have values.
    pub stage: u8,
    /// Their values; the bits of the others are 0.
    pub packed: u32,
}

/// An instance that waits for a cell to get its value.
#[derive(Clone, Copy)]
struct Watch {
    instance: Instance,
    tier: Tier,
    cell: Cell,
    next: u32,
}

const END: u32 = u32::MAX;

/// What propagation has to look at.
pub(super) enum Due {
    /// A cell that got its value.
    Cell(Cell),
    /// An instance that waited for this cell.
    Instance(Instance, Cell),
    Nothing,
}

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
    /// For each cell and tier the last watch.
    heads: Vec<[u32; Tier::COUNT]>,
    watches: Vec<Watch>,
    /// How many watches each cell has.
    pub watchers: Vec<u32>,
    /// Cells that got their value and whose watches have not all been looked at.
    queue: Vec<Cell>,
    /// How many cells of the queue have been looked at in each tier.
    due: [usize; Tier::COUNT],
    /// The next watch of the last of these.
    at: [u32; Tier::COUNT],
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
            heads: vec![[END; Tier::COUNT]; cells],
            watches: Vec::new(),
            watchers: vec![0; cells],
            queue: Vec::new(),
            due: [0; Tier::COUNT],
            at: [END; Tier::COUNT],
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
        self.forget_queue();
        for &(cell, domain) in self.trail[point.trail..].iter().rev() {
            self.domain[cell.index()] = domain;
            self.value[cell.index()] = only(domain);
        }
        self.trail.truncate(point.trail);
        for watch in self.watches[point.watches..].iter().rev() {
            self.heads[watch.cell.index()][watch.tier.index()] = watch.next;
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
    pub(super) fn watch(&mut self, cell: Cell, instance: Instance, tier: Tier) {
        let head = &mut self.heads[cell.index()][tier.index()];
        let next = std::mem::replace(head, self.watches.len() as u32);
        self.watches.push(Watch {
            instance,
            cell,
            tier,
            next,
        });
        self.watchers[cell.index()] += 1;
    }

    /// What is to be looked at next. What costs little comes first, even where a cell has watches
    /// left that cost more: most contradictions are found before those are needed.
    #[inline]
    pub(super) fn next_due(&mut self) -> Due {
        for tier in 0..Tier::COUNT {
            loop {
                let place = self.at[tier];
                if place != END {
                    let watch = self.watches[place as usize];
                    self.at[tier] = watch.next;
                    return Due::Instance(watch.instance, watch.cell);
                }
                let Some(&cell) = self.queue.get(self.due[tier]) else {
                    break;
                };
                self.due[tier] += 1;
                self.at[tier] = self.heads[cell.index()][tier];
                if tier == 0 {
                    return Due::Cell(cell);
                }
            }
        }
        self.forget_queue();
        Due::Nothing
    }

    fn forget_queue(&mut self) {
        self.queue.clear();
        self.due = [0; Tier::COUNT];
        self.at = [END; Tier::COUNT];
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

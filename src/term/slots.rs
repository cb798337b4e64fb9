//! The hash table of the bank: which id has this head with these arguments?

use super::TermId;
use rustc_hash::FxHasher;
use std::hash::Hasher;

/// Slots in lines of eight, which share a cache line; a slot has the hash in the upper half and
/// the id in the lower, so that passing over another term touches nothing else.
///
/// A term is first looked for in the line that the sum of its ids points to, then along a path of
/// lines that its hash gives. Terms that are built one after the other have sums close to each
/// other, so that the first line is mostly in the cache; the path serves where many terms share a
/// sum. Ids are removed in the reverse of the order in which they came, so that each removal leaves
/// the slots as they were before that id came.
#[derive(Clone)]
pub(super) struct Slots {
    lines: Vec<[u64; WIDTH]>,
    used: usize,
}

const WIDTH: usize = 8;
/// No term has this id.
const FREE: u64 = u64::MAX;

/// Where a term belongs.
#[derive(Clone, Copy)]
pub(super) struct Key {
    hash: u32,
    near: u32,
}

impl Key {
    #[inline]
    pub(super) fn new(head: u32, arguments: &[TermId]) -> Key {
        let mut hasher = FxHasher::default();
        hasher.write_u32(head);
        let mut sum = head;
        for argument in arguments {
            hasher.write_u32(argument.0);
            sum = sum.wrapping_add(argument.0);
        }
        let full = hasher.finish();
        Key {
            hash: (full ^ (full >> 32)) as u32,
            near: sum >> 1,
        }
    }
}

/// What a search ends with.
pub(super) enum Place {
    /// The term is there.
    Known(TermId),
    /// It is not, and belongs into this slot of this line.
    Free(usize, usize),
}

impl Default for Slots {
    fn default() -> Self {
        Slots {
            lines: vec![[FREE; WIDTH]; 32],
            used: 0,
        }
    }
}

impl Slots {
    /// Searches for a term; `is_it` is asked about terms with the same hash.
    #[inline]
    pub(super) fn search(&self, key: Key, is_it: impl Fn(TermId) -> bool) -> Place {
        let mut line = key.near as usize & (self.lines.len() - 1);
        let mut path = Path::new(key);
        loop {
            for (place, &slot) in self.lines[line].iter().enumerate() {
                if slot == FREE {
                    return Place::Free(line, place);
                }
                if (slot >> 32) as u32 == key.hash && is_it(TermId(slot as u32)) {
                    return Place::Known(TermId(slot as u32));
                }
            }
            line = path.next(self.lines.len());
        }
    }

    /// Puts a term where a search has said.
    #[inline]
    pub(super) fn insert(&mut self, key: Key, line: usize, place: usize, id: TermId) {
        self.lines[line][place] = u64::from(key.hash) << 32 | u64::from(id.0);
        self.used += 1;
    }

    /// Takes out the term that was put in last.
    pub(super) fn remove(&mut self, key: Key, id: TermId) {
        let wanted = u64::from(key.hash) << 32 | u64::from(id.0);
        let mut line = key.near as usize & (self.lines.len() - 1);
        let mut path = Path::new(key);
        loop {
            if let Some(place) = self.lines[line].iter().position(|slot| *slot == wanted) {
                self.lines[line][place] = FREE;
                self.used -= 1;
                return;
            }
            line = path.next(self.lines.len());
        }
    }

    /// Is it time for twice the room?
    #[inline]
    pub(super) fn is_full(&self) -> bool {
        self.used * 2 > self.lines.len() * WIDTH
    }

    /// More room, filled anew with all ids in their order, which removing relies on. Small tables
    /// grow faster, since most of the cost of a new one is filling it several times.
    pub(super) fn grow(&mut self, keys: impl Iterator<Item = Key>) {
        let lines = self.lines.len() * if self.lines.len() < 1 << 16 { 4 } else { 2 };
        *self = Slots {
            lines: vec![[FREE; WIDTH]; lines],
            used: 0,
        };
        for (id, key) in keys.enumerate() {
            if let Place::Free(line, place) = self.search(key, |_| false) {
                self.insert(key, line, place, TermId(id as u32));
            }
        }
    }
}

/// The lines after the first one. The stride is odd, so that all lines are met.
struct Path {
    next: usize,
    stride: usize,
}

impl Path {
    #[inline]
    fn new(key: Key) -> Path {
        Path {
            next: key.hash as usize,
            stride: (key.hash >> 16 | 1) as usize,
        }
    }

    #[inline]
    fn next(&mut self, lines: usize) -> usize {
        let line = self.next & (lines - 1);
        self.next = self.next.wrapping_add(self.stride);
        line
    }
}

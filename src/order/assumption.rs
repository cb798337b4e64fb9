//! What a comparison assumes about the variables: nothing, or that they are ordered.

use crate::term::VariableCounts;
use std::cell::Cell;

/// What is assumed about the order of the ground terms that stand for the variables.
///
/// The comparisons are generic over this, so that the usual case, where nothing is assumed, pays
/// nothing for the other.
pub(super) trait Assumption {
    /// Does `x` stand for a greater term than `y`? They differ.
    fn above(&self, x: u32, y: u32) -> bool;

    /// Do the variables counted in `a` together weigh at least as much as those in `b`, less the
    /// difference in number, whatever stands for them? Neither is wide.
    fn covers(&self, a: VariableCounts, b: VariableCounts) -> bool;

    /// Is every variable counted in `b` at most some variable counted in `a`? Neither is wide.
    fn reaches(&self, a: VariableCounts, b: VariableCounts) -> bool;

    /// The variables with a place in the order, greatest first. The caller relies on all of it.
    fn descending(&self) -> &[u32];
}

/// Nothing is assumed.
pub(super) struct Nothing;

impl Assumption for Nothing {
    #[inline]
    fn above(&self, _: u32, _: u32) -> bool {
        false
    }

    #[inline]
    fn covers(&self, a: VariableCounts, b: VariableCounts) -> bool {
        a.cover(b)
    }

    #[inline]
    fn reaches(&self, a: VariableCounts, b: VariableCounts) -> bool {
        a.mention(b)
    }

    #[inline]
    fn descending(&self) -> &[u32] {
        &[]
    }
}

/// A strict total order of some variables, assumed of the ground terms that stand for them.
///
/// Invariant: no variable has two places. Of a variable without a place nothing is assumed.
/// Variables that stand for equal terms have to be made one beforehand.
///
/// It takes note of what comparisons made use of: see [`VariableOrder::used`].
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct VariableOrder {
    descending: Vec<u32>,
    /// The place in `descending`, by variable; `u32::MAX` for none.
    places: Vec<u32>,
    /// Eight bits for each of the first eight places: which lower places a comparison relied on to
    /// be lower.
    used: Cell<u64>,
}

const NOWHERE: u32 = u32::MAX;

/// So many places take part in [`VariableOrder::used`].
const NOTED: usize = 8;

impl VariableOrder {
    /// The order in which these variables, by number, come greatest first. A repeated variable
    /// keeps its first place.
    pub fn new(greatest_first: &[u32]) -> Self {
        let mut order = Self::default();
        order.set(greatest_first);
        order
    }

    /// Replaces the order, keeping the memory.
    pub fn set(&mut self, greatest_first: &[u32]) {
        self.descending.clear();
        self.places.clear();
        self.used.set(0);
        for &variable in greatest_first {
            let slot = variable as usize;
            if slot >= self.places.len() {
                self.places.resize(slot + 1, NOWHERE);
            }
            if self.places[slot] == NOWHERE {
                self.places[slot] = self.descending.len() as u32;
                self.descending.push(variable);
            }
        }
    }

    /// The variables, by number, greatest first.
    pub fn greatest_first(&self) -> &[u32] {
        &self.descending
    }

    /// What comparisons relied on so far: that the variable at the first place is above the one at
    /// the second. Under every order that agrees with that, all comparisons that said *greater*
    /// say so again. Not for more than eight variables.
    pub fn used(&self) -> impl Iterator<Item = (usize, usize)> {
        debug_assert!(self.descending.len() <= NOTED);
        let used = self.used.get();
        let places = self.descending.len();
        (0..NOTED * NOTED)
            .filter(move |bit| used >> bit & 1 == 1)
            .map(|bit| (bit / NOTED, bit % NOTED))
            .filter(move |(above, below)| above < below && *below < places)
    }

    fn note(&self, above: usize, below: usize) {
        if above < NOTED && below < NOTED {
            let bit = 1 << (above * NOTED + below);
            self.used.set(self.used.get() | bit);
        }
    }

    fn place(&self, variable: u32) -> u32 {
        self.places
            .get(variable as usize)
            .copied()
            .unwrap_or(NOWHERE)
    }

    fn unplaced(&self) -> impl Iterator<Item = u32> {
        (0..16).filter(|&variable| self.place(variable) == NOWHERE)
    }
}

impl Assumption for VariableOrder {
    fn above(&self, x: u32, y: u32) -> bool {
        let (x, y) = (self.place(x), self.place(y));
        let above = y != NOWHERE && x < y;
        if above {
            self.note(x as usize, y as usize);
        }
        above
    }

    /// With x₁ > x₂ > … > xₙ the weights are w(xₙ) = w₀ + δₙ, w(xᵢ) = w(xᵢ₊₁) + δᵢ for arbitrary
    /// δ ≥ 0, so δᵢ counts d₁ + … + dᵢ times, where d is the difference of the occurrences: every
    /// such sum must not be negative (Martin & Nipkow 1990).
    fn covers(&self, a: VariableCounts, b: VariableCounts) -> bool {
        if a.cover(b) {
            return true;
        }
        let difference = |variable| a.of(variable) as i32 - b.of(variable) as i32;
        let mut sum = 0;
        let covers = self.descending.iter().all(|&variable| {
            sum += difference(variable);
            sum >= 0
        }) && self.unplaced().all(|variable| difference(variable) >= 0);
        if covers {
            let differ = |place: &usize| difference(self.descending[*place]) != 0;
            let places: Vec<usize> = (0..self.descending.len()).filter(differ).collect();
            for (rank, &above) in places.iter().enumerate() {
                places[rank + 1..].iter().for_each(|&p| self.note(above, p));
            }
        }
        covers
    }

    fn reaches(&self, a: VariableCounts, b: VariableCounts) -> bool {
        if a.mention(b) {
            return true;
        }
        let greatest = |counts: VariableCounts| {
            let place = self.descending.iter().position(|&v| counts.of(v) > 0);
            place.unwrap_or(self.descending.len())
        };
        let top = greatest(a);
        let reaches = top <= greatest(b) && self.unplaced().all(|v| a.of(v) > 0 || b.of(v) == 0);
        if reaches {
            for (place, &variable) in self.descending.iter().enumerate().skip(top + 1) {
                if b.of(variable) > 0 {
                    self.note(top, place);
                }
            }
        }
        reaches
    }

    fn descending(&self) -> &[u32] {
        self.used.set(u64::MAX);
        &self.descending
    }
}

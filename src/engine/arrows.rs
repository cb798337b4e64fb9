//! Which techniques simplify or delete what, as a table.
//!
//! Rules and pairs come to the loop as new, wait as pairs, and become active as rules. Each arrow
//! says what is simplified by what and when; each technique has its source.

use std::time::{Duration, Instant};

/// What is simplified by what: a row of the table.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Arrow {
    /// New pairs by the active rules, when the pairs are formed.
    Formed,
    /// New pairs by the active rules, when the pairs are chosen.
    Chosen,
    /// New pairs by each other: those that one new rule gives rise to.
    Siblings,
    /// New pairs by the pairs that wait. Waiting pairs are kept as recipes, not as terms, so that
    /// no technique is cheap enough here.
    Queued,
    /// The active rules by a new one.
    Active,
    /// The waiting pairs by the active rules.
    Waiting,
}

impl Arrow {
    /// All arrows, in the order of their bits.
    pub const ALL: [Arrow; 6] = [
        Arrow::Formed,
        Arrow::Chosen,
        Arrow::Siblings,
        Arrow::Queued,
        Arrow::Active,
        Arrow::Waiting,
    ];
}

/// How something is simplified or deleted: a column of the table.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Technique {
    /// Rewriting to normal form; a pair with one normal form is deleted (Knuth & Bendix 1970; with
    /// ordered equations Bachmair, Dershowitz & Plaisted 1989). Of the waiting pairs, the best ones
    /// are simplified and weighed again from time to time.
    Rewriting,
    /// An instance of an equation that is kept, the same around it, is deleted (subsumption, as in
    /// Bachmair, Dershowitz & Plaisted 1989). Among siblings: an equal pair is kept once.
    Instance,
    /// A pair whose sides are equal modulo associativity and commutativity is deleted, where
    /// rewriting decides that equality on ground terms (Martin & Nipkow 1990; Avenhaus,
    /// Hillenbrand & Löchner 2003).
    Ac,
    /// A pair is deleted whose sides are connected by steps through terms below the peak
    /// (Bachmair & Dershowitz 1988, "Critical pair criteria for completion").
    Connected,
    /// A pair is deleted that joins for every order of its variables (Martin & Nipkow 1990,
    /// "Ordered rewriting and confluence").
    Ground,
    /// A pair is deleted in whose peak the inner rule's instance is reducible at a proper subterm
    /// (Kapur, Musser & Narendran 1988, "Only prime superpositions need be considered in the
    /// Knuth-Bendix completion procedure").
    Prime,
    /// A waiting pair is deleted when a rule that it comes from is retired.
    Orphans,
}

impl Technique {
    /// All techniques, in the order of their bits.
    pub const ALL: [Technique; 7] = [
        Technique::Rewriting,
        Technique::Instance,
        Technique::Ac,
        Technique::Connected,
        Technique::Ground,
        Technique::Prime,
        Technique::Orphans,
    ];

    const fn bit(self) -> u8 {
        1 << self as u8
    }

    /// Of so many uses one is timed. What costs many normal forms is always timed, what costs a
    /// few often: reading the clock costs less than a hundredth of either.
    const fn timed_every(self) -> u64 {
        match self {
            Technique::Connected | Technique::Ground => 1,
            Technique::Rewriting | Technique::Prime => 16,
            _ => 64,
        }
    }
}

/// May a technique run on an arrow?
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cell {
    /// It always does: the loop rests on it.
    Always,
    /// As one likes.
    Optional,
    /// Never: it would be wrong there, or has nothing to look at.
    Impossible,
}

const PAIR: u8 = Technique::Instance.bit()
    | Technique::Ac.bit()
    | Technique::Connected.bit()
    | Technique::Ground.bit()
    | Technique::Prime.bit();
const REWRITING: u8 = Technique::Rewriting.bit();

/// What may be set, by arrow.
const OPTIONAL: [u8; 6] = [
    PAIR,
    PAIR,
    Technique::Instance.bit(),
    0,
    REWRITING | Technique::Instance.bit(),
    REWRITING | Technique::Orphans.bit(),
];

/// What is always on, by arrow. Pairs are weighed, and rules made, in normal form only; and sides
/// that are equal modulo associativity and commutativity may be deleted only then, since the pair
/// could lead to the exchange law.
const ALWAYS: [u8; 6] = [REWRITING, REWRITING, 0, 0, 0, 0];

/// The table: for each arrow the set of techniques that run on it.
///
/// Invariants: what is always on is on, what is impossible is off. Whatever is set, every rule
/// follows from the laws, and a rule set is called complete only when each pair of its rules joins
/// by itself; fewer techniques mean more pairs.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Arrows {
    sets: [u8; 6],
}

impl Arrows {
    /// Nothing but rewriting, and what keeps the rules few.
    pub const PLAIN: Arrows = Arrows {
        sets: [
            REWRITING,
            REWRITING,
            0,
            0,
            REWRITING | Technique::Instance.bit(),
            Technique::Orphans.bit(),
        ],
    };

    /// What each new engine has unless it is told otherwise.
    pub const USUAL: Arrows = Arrows::PLAIN
        .with(Arrow::Formed, Technique::Instance)
        .with(Arrow::Formed, Technique::Ac)
        .with(Arrow::Chosen, Technique::Instance)
        .with(Arrow::Chosen, Technique::Ac)
        .with(Arrow::Chosen, Technique::Ground);

    /// All that deletes pairs when they are chosen, and equal pairs kept once.
    pub const STRONG: Arrows = Arrows::USUAL
        .with(Arrow::Chosen, Technique::Connected)
        .with(Arrow::Chosen, Technique::Prime)
        .with(Arrow::Siblings, Technique::Instance);

    /// Every technique on every arrow.
    pub const EVERYTHING: Arrows = Arrows {
        sets: {
            let mut sets = ALWAYS;
            let mut arrow = 0;
            while arrow < sets.len() {
                sets[arrow] |= OPTIONAL[arrow];
                arrow += 1;
            }
            sets
        },
    };

    /// The named tables, the one that deletes least first.
    pub const PRESETS: [(&str, Arrows); 4] = [
        ("plain", Arrows::PLAIN),
        ("usual", Arrows::USUAL),
        ("strong", Arrows::STRONG),
        ("everything", Arrows::EVERYTHING),
    ];

    /// May the technique run on the arrow?
    pub const fn cell(arrow: Arrow, technique: Technique) -> Cell {
        let bit = technique.bit();
        if ALWAYS[arrow as usize] & bit != 0 {
            Cell::Always
        } else if OPTIONAL[arrow as usize] & bit != 0 {
            Cell::Optional
        } else {
            Cell::Impossible
        }
    }

    /// Does the technique run on the arrow?
    #[inline]
    pub const fn has(&self, arrow: Arrow, technique: Technique) -> bool {
        self.sets[arrow as usize] & technique.bit() != 0
    }

    /// The table with a cell switched on; the same table if it is impossible there.
    #[must_use]
    pub const fn with(mut self, arrow: Arrow, technique: Technique) -> Arrows {
        self.sets[arrow as usize] |= technique.bit() & OPTIONAL[arrow as usize];
        self
    }

    /// The table with a cell switched off; the same table if it is always on.
    #[must_use]
    pub const fn without(mut self, arrow: Arrow, technique: Technique) -> Arrows {
        self.sets[arrow as usize] &= !(technique.bit() & OPTIONAL[arrow as usize]);
        self
    }

    /// The table without the criteria that may delete a pair which does not join by itself, because
    /// other pairs of the same rules stand for it.
    #[must_use]
    pub const fn each_pair_by_itself(mut self) -> Arrows {
        let leaning = Technique::Connected.bit() | Technique::Prime.bit();
        self.sets[Arrow::Formed as usize] &= !leaning;
        self.sets[Arrow::Chosen as usize] &= !leaning;
        self
    }
}

impl Default for Arrows {
    fn default() -> Self {
        Arrows::USUAL
    }
}

/// What a cell of the table was asked, and what came of it.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Tally {
    /// How often it was tried.
    pub asked: u64,
    /// How many pairs or rules it deleted or, of rules, simplified.
    pub deleted: u64,
    timed: u64,
    nanoseconds: u64,
}

impl Tally {
    /// The time that it took, estimated from the uses that were timed.
    pub fn cost(&self) -> Duration {
        let total = u128::from(self.nanoseconds) * u128::from(self.asked);
        let nanoseconds = total.checked_div(u128::from(self.timed)).unwrap_or(0);
        Duration::from_nanos(u64::try_from(nanoseconds).unwrap_or(u64::MAX))
    }

    /// What two engines did together.
    #[must_use]
    pub fn and(self, other: Tally) -> Tally {
        Tally {
            asked: self.asked + other.asked,
            deleted: self.deleted + other.deleted,
            timed: self.timed + other.timed,
            nanoseconds: self.nanoseconds.saturating_add(other.nanoseconds),
        }
    }
}

/// A tally for each cell.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Tallies {
    cells: [[Tally; Technique::ALL.len()]; Arrow::ALL.len()],
}

impl Tallies {
    /// The tally of a cell.
    pub fn of(&self, arrow: Arrow, technique: Technique) -> Tally {
        self.cells[arrow as usize][technique as usize]
    }

    /// Adds what another engine did.
    pub fn add(&mut self, other: &Tallies) {
        let cells = self.cells.iter_mut().flatten();
        for (mine, theirs) in cells.zip(other.cells.iter().flatten()) {
            *mine = mine.and(*theirs);
        }
    }

    fn cell(&mut self, arrow: Arrow, technique: Technique) -> &mut Tally {
        &mut self.cells[arrow as usize][technique as usize]
    }

    /// Before a use. The clock is read for some uses only, which costs less than a nanosecond for
    /// the others.
    #[inline]
    pub(super) fn begin(&mut self, arrow: Arrow, technique: Technique) -> Option<Instant> {
        let tally = self.cell(arrow, technique);
        tally.asked += 1;
        let is_timed = tally.asked.is_multiple_of(technique.timed_every());
        is_timed.then(Instant::now)
    }

    /// After a use.
    #[inline]
    pub(super) fn end(
        &mut self,
        arrow: Arrow,
        technique: Technique,
        begun: Option<Instant>,
        deleted: bool,
    ) {
        let tally = self.cell(arrow, technique);
        tally.deleted += u64::from(deleted);
        if let Some(begun) = begun {
            tally.timed += 1;
            tally.nanoseconds += u64::try_from(begun.elapsed().as_nanos()).unwrap_or(u64::MAX);
        }
    }

    /// After something that is done to many at once, and always timed.
    pub(super) fn count(
        &mut self,
        arrow: Arrow,
        technique: Technique,
        [asked, deleted]: [usize; 2],
        took: Duration,
    ) {
        let tally = self.cell(arrow, technique);
        tally.asked += asked as u64;
        tally.timed += asked as u64;
        tally.deleted += deleted as u64;
        tally.nanoseconds += u64::try_from(took.as_nanos()).unwrap_or(u64::MAX);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn no_table_has_an_impossible_cell_or_lacks_one_that_is_always_on() {
        let mut tables: Vec<Arrows> = Arrows::PRESETS.iter().map(|(_, table)| *table).collect();
        for start in tables.clone() {
            for arrow in Arrow::ALL {
                for technique in Technique::ALL {
                    tables.push(start.with(arrow, technique));
                    tables.push(start.without(arrow, technique));
                }
            }
        }
        for table in tables {
            for arrow in Arrow::ALL {
                for technique in Technique::ALL {
                    match Arrows::cell(arrow, technique) {
                        Cell::Always => assert!(table.has(arrow, technique)),
                        Cell::Impossible => assert!(!table.has(arrow, technique)),
                        Cell::Optional => {
                            assert!(table.with(arrow, technique).has(arrow, technique));
                            assert!(!table.without(arrow, technique).has(arrow, technique));
                        }
                    }
                }
            }
        }
    }

    #[test]
    fn the_cost_is_estimated_from_what_was_timed() {
        let mut tallies = Tallies::default();
        let (arrow, technique) = (Arrow::Chosen, Technique::Instance);
        for asked in 0..128 {
            let begun = tallies.begin(arrow, technique);
            assert_eq!(begun.is_some(), asked % 64 == 63);
            tallies.end(arrow, technique, begun, asked % 2 == 0);
        }
        let tally = tallies.of(arrow, technique);
        assert_eq!((tally.asked, tally.deleted, tally.timed), (128, 64, 2));
        let known = Tally {
            nanoseconds: 20,
            ..tally
        };
        assert_eq!(known.cost(), Duration::from_nanos(1280));
    }
}

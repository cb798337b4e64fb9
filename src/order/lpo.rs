//! The lexicographic path order (Kamin & Lévy 1980; Baader & Nipkow 1998, section 5.4.2).
//!
//! The tests are those of Löchner (2006, "Things to know when implementing LPO"): after the first
//! pair of different arguments is known, half of the cases of the definition cannot hold. With a
//! memo the cost is at most one visit per pair of distinct subterms.

use super::assumption::Assumption;
use crate::term::{Bank, Head, TermId};
use rustc_hash::FxHashMap;

/// The work that a comparison may do whatever the size of the terms, in pairs of subterms.
const WORK_LIMIT: usize = 1 << 20;

/// Comparisons that stay below this many pairs are too short for a memo to pay.
const MEMO_FROM: usize = 256;

/// What a pair `s`, `t` waits for.
#[derive(Clone, Copy, Debug)]
enum Stage {
    /// Some argument of `s` is `t` or greater than it.
    Some,
    /// `s` is greater than every argument of `t`.
    Every,
    /// The first argument of `s` that differs is greater than that of `t`.
    Lexicographic,
}

#[derive(Clone, Copy, Debug)]
struct Frame {
    s: TermId,
    t: TermId,
    stage: Stage,
    /// The argument to look at next.
    next: u32,
}

/// Memory that comparisons reuse; holds nothing between them.
#[derive(Clone, Debug, Default)]
pub(super) struct Scratch {
    frames: Vec<Frame>,
    memo: FxHashMap<(TermId, TermId), bool>,
}

impl Scratch {
    fn clear(&mut self) {
        self.frames.clear();
        // Clearing a map costs its capacity, which one long comparison would charge to all later.
        if self.memo.capacity() > 1 << 12 {
            self.memo = FxHashMap::default();
        } else if !self.memo.is_empty() {
            self.memo.clear();
        }
    }
}

/// Is `s` greater than `t`? Nothing if that takes too much work.
pub(super) fn greater<A: Assumption>(
    bank: &Bank,
    ranks: &[u64],
    (s, t): (TermId, TermId),
    assumed: &A,
    scratch: &mut Scratch,
) -> Option<bool> {
    scratch.clear();
    // Sizes, unlike ids, do not depend on what else is in the bank.
    let size = |term| bank.size(term).min(1 << 20) as usize;
    let mut comparison = LexicographicPath {
        bank,
        ranks,
        assumed,
        scratch,
        pairs: 0,
        limit: WORK_LIMIT + 2 * (size(s) + size(t)),
    };
    comparison.run(s, t)
}

struct LexicographicPath<'a, A> {
    bank: &'a Bank,
    ranks: &'a [u64],
    assumed: &'a A,
    scratch: &'a mut Scratch,
    pairs: usize,
    limit: usize,
}

impl<A: Assumption> LexicographicPath<'_, A> {
    fn run(&mut self, s: TermId, t: TermId) -> Option<bool> {
        let mut answer = self.begin(s, t);
        while let Some(top) = self.scratch.frames.len().checked_sub(1) {
            if self.pairs > self.limit {
                return None;
            }
            answer = match self.settle(top, answer) {
                Some(settled) => {
                    let frame = self.scratch.frames[top];
                    self.scratch.frames.pop();
                    if self.pairs > MEMO_FROM {
                        self.scratch.memo.insert((frame.s, frame.t), settled);
                    }
                    Some(settled)
                }
                None => self.ask(top),
            };
        }
        answer
    }

    /// The answer for the frame, if the answer to its last question, or the lack of further
    /// questions, decides it.
    fn settle(&mut self, top: usize, answer: Option<bool>) -> Option<bool> {
        let frame = &mut self.scratch.frames[top];
        match (frame.stage, answer) {
            (Stage::Some, Some(true)) => return Some(true),
            (Stage::Every, Some(false)) => return Some(false),
            // Now s is above the arguments of t up to here, by the subterm property.
            (Stage::Lexicographic, Some(true)) => frame.stage = Stage::Every,
            // Had any argument of s up to here reached t, this one would be greater.
            (Stage::Lexicographic, Some(false)) => frame.stage = Stage::Some,
            _ => {}
        }
        let next = frame.next as usize;
        match frame.stage {
            Stage::Some if next == self.bank.arguments(frame.s).len() => Some(false),
            Stage::Every if next == self.bank.arguments(frame.t).len() => Some(true),
            _ => None,
        }
    }

    /// Asks the next question of the frame.
    fn ask(&mut self, top: usize) -> Option<bool> {
        let frame = &mut self.scratch.frames[top];
        let next = frame.next as usize;
        frame.next += 1;
        let Frame { s, t, stage, .. } = *frame;
        match stage {
            Stage::Some => {
                let argument = self.bank.arguments(s)[next];
                if argument == t {
                    Some(true)
                } else {
                    self.begin(argument, t)
                }
            }
            Stage::Every => self.begin(s, self.bank.arguments(t)[next]),
            Stage::Lexicographic => {
                self.begin(self.bank.arguments(s)[next], self.bank.arguments(t)[next])
            }
        }
    }

    /// Answers at once, or frames the question.
    #[inline]
    fn begin(&mut self, s: TermId, t: TermId) -> Option<bool> {
        if s == t {
            return Some(false);
        }
        self.pairs += 1;
        let (a, b) = (self.bank.counts(s), self.bank.counts(t));
        let wide = a.is_wide() || b.is_wide();
        let (f, g) = match (self.bank.head(s), self.bank.head(t)) {
            (Head::Variable(x), Head::Variable(y)) => {
                return Some(self.assumed.above(x.index, y.index));
            }
            (Head::Variable(_), _) => return Some(false),
            (_, Head::Variable(_)) if !wide => return Some(self.assumed.reaches(a, b)),
            (_, Head::Variable(_)) => {
                if self.bank.is_ground(s) {
                    return Some(false);
                }
                return self.frame(s, t, Stage::Some, 0);
            }
            (Head::Symbol(f), Head::Symbol(g)) => (f, g),
        };
        if !wide && !b.is_ground() && !self.assumed.reaches(a, b) {
            return Some(false);
        }
        if f == g {
            let mut pairs = self.bank.arguments(s).iter().zip(self.bank.arguments(t));
            let first = pairs.position(|(x, y)| x != y)?;
            self.frame(s, t, Stage::Lexicographic, first as u32)
        } else if self.ranks[f.index()] > self.ranks[g.index()] {
            self.frame(s, t, Stage::Every, 0)
        } else {
            self.frame(s, t, Stage::Some, 0)
        }
    }

    fn frame(&mut self, s: TermId, t: TermId, stage: Stage, next: u32) -> Option<bool> {
        if self.pairs > MEMO_FROM
            && let Some(&known) = self.scratch.memo.get(&(s, t))
        {
            return Some(known);
        }
        self.scratch.frames.push(Frame { s, t, stage, next });
        None
    }
}

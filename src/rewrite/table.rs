//! The table: every rewrite that was ever done, by term.

use super::{RuleId, Use};
use crate::term::{Mark, TermId};
use rustc_hash::FxHashMap;

/// Why a term was rewritten to the next one.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Reason {
    /// An instance of a rule, at the root.
    Rule(Use),
    /// The arguments were rewritten.
    Arguments,
    /// The canonical form modulo associativity and commutativity of the symbol at the root.
    Canonical,
}

impl Reason {
    const ARGUMENTS: u32 = u32::MAX - 1;
    const CANONICAL: u32 = u32::MAX - 2;

    fn pack(self) -> u32 {
        match self {
            Reason::Rule(by) => by.rule.0 << 1 | u32::from(by.backward),
            Reason::Arguments => Self::ARGUMENTS,
            Reason::Canonical => Self::CANONICAL,
        }
    }

    fn unpack(packed: u32) -> Self {
        match packed {
            Self::ARGUMENTS => Reason::Arguments,
            Self::CANONICAL => Reason::Canonical,
            _ => Reason::Rule(Use {
                rule: RuleId(packed >> 1),
                backward: packed & 1 != 0,
            }),
        }
    }
}

#[derive(Clone, Copy)]
struct Entry {
    next: TermId,
    /// The packed reason; without a step, [`SORTED`] or 0.
    reason: u32,
    normal: TermId,
    /// Up to which generation of the rules `normal` is known to be a normal form; 0 for never.
    generation: u32,
}

const SORTED: u32 = u32::MAX - 3;
const BLANK: Entry = Entry {
    next: TermId::NONE,
    reason: 0,
    normal: TermId::NONE,
    generation: 0,
};

/// For each term the step that it took, and its normal form as far as that is known.
///
/// Steps are true equations and go down in the reduction order; they are never invalidated by new
/// rules, and stay when the rule that made them is retired. Invariant: a chain of steps that
/// begins at a term which outlives a rollback leads over such terms only, because steps of older
/// terms that are made after a mark are taken back with it.
#[derive(Clone, Default)]
pub struct Table {
    entries: Vec<Entry>,
    marked: Option<Mark>,
    asking: bool,
    trail: Vec<(TermId, Entry)>,
    /// Steps that were cleared, for the explanation of terms that were rewritten over them.
    cleared: FxHashMap<TermId, Vec<(TermId, u32)>>,
}

impl Table {
    /// The step of a term.
    #[inline]
    pub fn step(&self, term: TermId) -> Option<(TermId, Reason)> {
        let entry = self.entries.get(term.index())?;
        entry
            .next
            .is_some()
            .then(|| (entry.next, Reason::unpack(entry.reason)))
    }

    /// The term that the term was rewritten to.
    #[inline]
    pub fn next(&self, term: TermId) -> Option<TermId> {
        let entry = self.entries.get(term.index())?;
        entry.next.is_some().then_some(entry.next)
    }

    /// The normal form, if it is known for this generation.
    #[inline]
    pub fn normal(&self, term: TermId, generation: u32) -> Option<TermId> {
        let entry = self.entries.get(term.index())?;
        (entry.generation == generation).then_some(entry.normal)
    }

    /// Is the term known to be nested to the right with its arguments ascending?
    #[inline]
    pub(super) fn is_sorted(&self, term: TermId) -> bool {
        self.entries
            .get(term.index())
            .is_some_and(|e| e.next.is_some() || e.reason == SORTED)
    }

    /// Remembers that the term, which has no step, is canonical.
    #[inline]
    pub(super) fn set_sorted(&mut self, term: TermId) {
        let entry = self.entry(term);
        if !entry.next.is_some() {
            entry.reason = SORTED;
        }
    }

    /// Steps of a term that were cleared since.
    pub fn cleared(&self, term: TermId) -> impl Iterator<Item = (TermId, Reason)> + '_ {
        let steps = self.cleared.get(&term).into_iter().flatten();
        steps.map(|(next, reason)| (*next, Reason::unpack(*reason)))
    }

    /// Remembers a step of a term that has none.
    #[inline]
    pub fn set_step(&mut self, term: TermId, next: TermId, reason: Reason) {
        self.note(term);
        let entry = self.entry(term);
        debug_assert!(!entry.next.is_some() && next != term);
        entry.next = next;
        entry.reason = reason.pack();
    }

    /// Remembers the normal form of a term.
    #[inline]
    pub fn set_normal(&mut self, term: TermId, normal: TermId, generation: u32) {
        if normal != term {
            self.note(term);
        }
        let entry = self.entry(term);
        entry.normal = normal;
        entry.generation = generation;
    }

    /// Takes the step of a retired rule's own left side away. It would make the equation, when it
    /// is simplified again, trivial by itself.
    pub fn clear_step(&mut self, term: TermId) {
        if let Some(entry) = self.entries.get_mut(term.index())
            && entry.next.is_some()
        {
            self.cleared
                .entry(term)
                .or_default()
                .push((entry.next, entry.reason));
            *entry = BLANK;
        }
    }

    /// From now on, what is remembered will be taken back by [`Table::rollback`].
    pub fn mark(&mut self, mark: Mark) {
        debug_assert!(self.marked.is_none() && !self.asking);
        self.marked = Some(mark);
    }

    /// Forgets all steps that were made since the mark.
    pub fn rollback(&mut self) {
        let mark = self.marked.take().expect("a rollback follows a mark");
        while let Some((term, before)) = self.trail.pop() {
            self.entries[term.index()] = before;
        }
        self.entries.truncate(mark.terms());
    }

    /// From now on, what is remembered will be taken back by [`Table::end_asking`].
    pub(super) fn begin_asking(&mut self) {
        debug_assert!(self.marked.is_none() && !self.asking);
        self.asking = true;
    }

    /// Forgets all steps that were made since asking began.
    pub(super) fn end_asking(&mut self) {
        self.asking = false;
        while let Some((term, before)) = self.trail.pop() {
            self.entries[term.index()] = before;
        }
    }

    #[inline]
    fn note(&mut self, term: TermId) {
        let keep = |mark: Mark| mark.has(term);
        if self.asking || self.marked.is_some_and(keep) {
            let before = self.entries.get(term.index()).copied().unwrap_or(BLANK);
            self.trail.push((term, before));
        }
    }

    #[inline]
    fn entry(&mut self, term: TermId) -> &mut Entry {
        let index = term.index();
        if index >= self.entries.len() {
            self.entries.resize(index + 1, BLANK);
        }
        &mut self.entries[index]
    }
}

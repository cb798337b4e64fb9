//! Normal forms: from the table where they are known, else by rewriting from the inside out.

use super::{Reason, RuleId, System, Use};
use crate::term::{Substitution, TermId};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::time::Instant;

/// Why work was stopped before its end.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stopped {
    /// Somebody asked for it.
    Interrupted,
    /// The time is used up.
    Time,
    /// The memory is used up.
    Memory,
}

/// What bounds a piece of work. Asking costs next to nothing: the clock and the flag are read once
/// in a few hundred calls.
#[derive(Clone, Debug)]
pub struct Limits {
    /// Set from outside to stop.
    pub stop: Arc<AtomicBool>,
    /// When the time is used up.
    pub deadline: Option<Instant>,
    /// How many terms the bank may hold.
    pub terms: usize,
    countdown: u32,
}

impl Limits {
    /// Bounds of 2²⁸ terms, with no deadline.
    pub fn new(stop: Arc<AtomicBool>) -> Self {
        Limits {
            stop,
            deadline: None,
            terms: 1 << 28,
            countdown: 0,
        }
    }

    /// No bounds but those of memory.
    pub fn none() -> Self {
        Self::new(Arc::new(AtomicBool::new(false)))
    }

    /// The same with a deadline, unless there is an earlier one.
    #[must_use]
    pub fn until(mut self, deadline: Instant) -> Self {
        self.deadline = Some(self.deadline.map_or(deadline, |d| d.min(deadline)));
        self
    }

    /// Counts one small piece of work, on a bank with this many terms.
    #[inline]
    pub fn poll(&mut self, terms: usize) -> Result<(), Stopped> {
        if self.countdown > 0 {
            self.countdown -= 1;
            return Ok(());
        }
        self.countdown = 255;
        self.check(terms)
    }

    /// Looks at all bounds now.
    pub fn check(&self, terms: usize) -> Result<(), Stopped> {
        if self.stop.load(Ordering::Relaxed) {
            return Err(Stopped::Interrupted);
        }
        if self
            .deadline
            .is_some_and(|deadline| Instant::now() >= deadline)
        {
            return Err(Stopped::Time);
        }
        if terms > self.terms {
            Err(Stopped::Memory)
        } else {
            Ok(())
        }
    }
}

/// A piece of work that waits for the values of others.
#[derive(Clone, Copy)]
pub(super) struct Frame {
    pub(super) term: TermId,
    /// The next argument to bring to normal form, or [`SETTLE`] or [`SPINE`].
    pub(super) state: u32,
}

/// The value on top is the normal form of the frame's term.
pub(super) const SETTLE: u32 = u32::MAX;
/// The frame's term is a sum (or product, …) whose flattened arguments are brought to normal form.
pub(super) const SPINE: u32 = u32::MAX - 1;

impl System {
    /// The normal form of a term by the active rules.
    ///
    /// Costs one look-up per distinct subterm that is known, and otherwise a search in the index
    /// per term that comes up. What was found stays in the table when the work is stopped.
    pub fn normal_form(&mut self, term: TermId, limits: &mut Limits) -> Result<TermId, Stopped> {
        if let Some(normal) = self.table.normal(term, self.generation) {
            return Ok(normal);
        }
        self.frames.clear();
        self.values.clear();
        self.spines.clear();
        self.visit(term);
        while let Some(frame) = self.frames.last_mut() {
            let Frame { term, state } = *frame;
            match state {
                SETTLE => {
                    self.frames.pop();
                    let value = self.values[self.values.len() - 1];
                    self.table.set_normal(term, value, self.generation);
                }
                SPINE => {
                    limits.poll(self.bank.len())?;
                    self.continue_spine(term);
                }
                _ => {
                    if let Some(&argument) = self.bank.arguments(term).get(state as usize) {
                        frame.state += 1;
                        self.visit(argument);
                    } else {
                        self.frames.pop();
                        limits.poll(self.bank.len())?;
                        self.combine(term, state as usize);
                    }
                }
            }
        }
        Ok(self.values[0])
    }

    /// Pushes the normal form of a term as a value, now or by way of frames.
    #[inline]
    pub(super) fn visit(&mut self, mut term: TermId) {
        loop {
            if let Some(normal) = self.table.normal(term, self.generation) {
                return self.values.push(normal);
            }
            if let Some(next) = self.table.next(term) {
                self.frames.push(Frame {
                    term,
                    state: SETTLE,
                });
                term = next;
                continue;
            }
            let Some(symbol) = self.bank.as_symbol(term) else {
                return self.values.push(term);
            };
            if self.ac[symbol.index()].is_some()
                && self.bank.is_ground(term)
                && !self.table.is_sorted(term)
            {
                return self.start_spine(symbol, term);
            }
            return self.frames.push(Frame { term, state: 0 });
        }
    }

    /// The arguments of a term are in normal form, as the last values.
    #[inline]
    fn combine(&mut self, term: TermId, arity: usize) {
        let start = self.values.len() - arity;
        let symbol = self.bank.as_symbol(term).expect("a variable has no frame");
        let mut built = term;
        if self.values[start..] != *self.bank.arguments(term) {
            built = self.bank.apply(symbol, &self.values[start..]);
            self.table.set_step(term, built, Reason::Arguments);
            self.frames.push(Frame {
                term,
                state: SETTLE,
            });
        }
        self.values.truncate(start);
        if self.table.normal(built, self.generation).is_some() || self.table.next(built).is_some() {
            return self.visit(built);
        }
        if self.ac[symbol.index()].is_some()
            && self.bank.is_ground(built)
            && !self.sort_by_looking(symbol, built)
        {
            return self.start_spine(symbol, built);
        }
        match self.root_step(built, None) {
            Some((next, by)) => {
                self.table.set_step(built, next, Reason::Rule(by));
                self.frames.push(Frame {
                    term: built,
                    state: SETTLE,
                });
                self.visit(next);
            }
            None => {
                self.table.set_normal(built, built, self.generation);
                self.values.push(built);
            }
        }
    }

    /// One rewrite at the root by an active rule other than `except`.
    #[inline]
    pub(super) fn root_step(
        &mut self,
        term: TermId,
        except: Option<RuleId>,
    ) -> Option<(TermId, Use)> {
        self.matcher.start(term);
        while let Some(by) = self.matcher.next(&self.index, &self.bank) {
            if except == Some(by.rule) {
                continue;
            }
            if self.rules[by.rule.index()].oriented {
                let next = self
                    .replacement(by)
                    .expect("an oriented rule has no open variables");
                return Some((next, by));
            }
            let mark = self.bank.mark();
            if let Some(next) = self.replacement(by) {
                if self.order.greater(&self.bank, term, next) {
                    return Some((next, by));
                }
                self.bank.rollback(mark);
            }
        }
        None
    }

    /// Does the test hold for any active rule whose looked-for side matches the term, with the
    /// substitution that makes it match?
    pub fn any_match(
        &mut self,
        term: TermId,
        mut test: impl FnMut(&System, Use, &Substitution) -> bool,
    ) -> bool {
        let mut matcher = std::mem::take(&mut self.matcher);
        matcher.start(term);
        let mut found = false;
        while let Some(by) = matcher.next(&self.index, &self.bank) {
            if test(self, by, &matcher.substitution) {
                found = true;
                break;
            }
        }
        self.matcher = matcher;
        found
    }
}

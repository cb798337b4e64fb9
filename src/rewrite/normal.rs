//! Normal forms: from the table where they are known, else by rewriting from the inside out.

use super::rule::Operation;
use super::{Reason, System, Use};
use crate::term::{Substitution, Symbol, TermId};
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
    /// Set when somebody else has done what the work is for; then the time counts as used up.
    pub elsewhere: Option<Arc<AtomicBool>>,
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
            elsewhere: None,
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
        if (self.elsewhere.as_ref()).is_some_and(|flag| flag.load(Ordering::Relaxed)) {
            return Err(Stopped::Time);
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

/// A replacing side that is being built.
#[derive(Clone, Copy)]
pub(super) struct Build {
    by: Use,
    /// The operation to go on with.
    next: usize,
    /// Where the values of the rule's variables begin among the saved ones.
    first: usize,
}

/// The value on top is the normal form of the frame's term.
pub(super) const SETTLE: u32 = u32::MAX;
/// The frame's term is being rewritten by a rule whose replacing side is being built, with its
/// arguments in normal form, so that a whole that would be rewritten anyway is not built.
pub(super) const BUILD: u32 = u32::MAX - 2;
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
        self.leaves.clear();
        self.builds.clear();
        self.saved.clear();
        self.visit(term);
        while let Some(frame) = self.frames.last_mut() {
            let Frame { term, state } = *frame;
            match state {
                SETTLE => {
                    self.frames.pop();
                    let value = self.values[self.values.len() - 1];
                    self.table.set_normal(term, value, self.generation);
                }
                BUILD => {
                    limits.poll(self.bank.len())?;
                    self.continue_build(term);
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
        self.finish(symbol, built);
    }

    /// Pushes the normal form of a term whose arguments are in normal form.
    #[inline]
    fn finish(&mut self, symbol: Symbol, built: TermId) {
        if self.table.normal(built, self.generation).is_some() || self.table.next(built).is_some() {
            return self.visit(built);
        }
        if self.ac[symbol.index()].is_some()
            && self.bank.is_ground(built)
            && !self.sort_by_looking(symbol, built)
        {
            return self.start_spine(symbol, built);
        }
        self.matcher.start(built);
        while let Some(by) = self.matcher.next(&self.index, &self.bank) {
            if self.rules[by.rule.index()].oriented {
                return self.start_build(built, by);
            }
            let mark = self.bank.mark();
            if let Some(next) = self.replacement(built, by) {
                if self.order.greater(&self.bank, built, next) {
                    return self.rewritten(built, next, by);
                }
                self.bank.rollback(mark);
            }
        }
        self.table.set_normal(built, built, self.generation);
        self.values.push(built);
    }

    /// The term has become another one; goes on with that.
    fn rewritten(&mut self, term: TermId, next: TermId, by: Use) {
        self.table.set_step(term, next, Reason::Rule(by));
        self.frames.push(Frame {
            term,
            state: SETTLE,
        });
        self.visit(next);
    }

    /// Begins to build what an oriented rule makes of a term that it has just matched.
    fn start_build(&mut self, term: TermId, by: Use) {
        let rule = &self.rules[by.rule.index()];
        let program = rule.program(by.backward);
        if program.operations().is_empty() {
            let next = self.replacement(term, by);
            let next = next.expect("an oriented rule has no open variables");
            return self.rewritten(term, next, by);
        }
        let first = self.saved.len();
        self.saved
            .extend_from_slice(self.matcher.substitution.values());
        self.builds.push(Build { by, next: 0, first });
        self.frames.push(Frame { term, state: BUILD });
    }

    /// Builds on until an argument has to be rewritten first, or the whole is there.
    ///
    /// Each argument is built to the letter and then brought to normal form, so that the table
    /// leads from it to what stands in the whole.
    fn continue_build(&mut self, term: TermId) {
        let place = self.builds.len() - 1;
        let waiting = self.frames.len();
        loop {
            let Build { by, next, first } = self.builds[place];
            let program = self.rules[by.rule.index()].program(by.backward);
            let operation = program.operations()[next];
            let is_last = next + 1 == program.operations().len();
            self.builds[place].next += 1;
            match operation {
                Operation::Variable(index) => self.values.push(self.saved[first + index as usize]),
                Operation::Ground(ground) => self.values.push(ground),
                Operation::Apply(symbol, arity) => {
                    let start = self.values.len() - arity as usize;
                    let built = self.bank.apply(symbol, &self.values[start..]);
                    self.values.truncate(start);
                    self.values.push(built);
                }
                Operation::Argument(flat) => {
                    let built = self.values.pop().expect("an argument was built");
                    match flat {
                        Some(symbol) => self.finish(symbol, built),
                        None => self.visit(built),
                    }
                }
            }
            if is_last {
                let built = self.values.pop().expect("the whole was built");
                self.builds.pop();
                self.saved.truncate(first);
                self.frames.pop();
                return self.rewritten(term, built, by);
            }
            if self.frames.len() > waiting {
                return;
            }
        }
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

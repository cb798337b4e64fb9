//! The engine and its loop.

use super::occurrences::Occurrences;
use super::overlap::Forming;
use super::parts::Parts;
use super::record::{LawId, Record};
use super::strategy::{Strategy, Weigher};
use super::waiting::Waiting;
use crate::order::Order;
use crate::rewrite::{Limits, RuleId, RuleState, Stopped, System, Use};
use crate::term::{Symbol, SymbolInfo, TermId, Unifier};
use rustc_hash::FxHashMap;
use std::collections::VecDeque;

/// What the loop has done so far.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Counts {
    /// Overlaps that unified.
    pub formed: u64,
    /// Pairs that were chosen.
    pub chosen: u64,
    /// Chosen pairs that were redundant.
    pub redundant: u64,
    /// Pairs that joined modulo associativity and commutativity.
    pub ac: u64,
    /// Chosen pairs that joined for every order of their variables.
    pub ground_joined: u64,
    /// Chosen pairs that were connected below their peak.
    pub connected: u64,
    /// Waiting pairs that went with a retired rule.
    pub orphans: u64,
    /// Rules that were retired.
    pub retired: u64,
    /// Rules whose right side was simplified.
    pub simplified: u64,
    /// Pairs, or overlaps of rules, that were given up because they are too large. While there
    /// are any, the rules are never called complete.
    pub dropped: u64,
}

/// Two ground terms, in which constants of [`System::question_constant`] stand for variables.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Question {
    /// One side.
    pub left: TermId,
    /// The other side.
    pub right: TermId,
    /// The constants.
    pub constants: Vec<TermId>,
}

/// How a run ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Outcome {
    /// No pair is left: the rules are complete on ground terms.
    Complete,
    /// No pair is left, but some were given up.
    Exhausted,
    /// The two sides of the question met.
    Met,
    /// A bound was reached. The run can go on where it stopped.
    Stopped(Stopped),
}

/// A set of laws with the rules that were derived from them.
///
/// Invariants: each rule of the system has a record; each active rule's overlaps with the active
/// rules before it are formed, being formed, or listed in `unformed`. All methods that can be
/// stopped leave the engine so that it can go on.
pub struct Engine {
    /// The rules, their bank and the table.
    pub system: System,
    pub(super) laws: Vec<(TermId, TermId)>,
    pub(super) records: Vec<Record>,
    pub(super) waiting: Waiting,
    pub(super) occurrences: Occurrences,
    pub(super) parts: Parts,
    pub(super) weigher: Weigher,
    /// The priority of the pair that was last chosen for it.
    pub(super) horizon: u32,
    pub(super) unifier: Unifier,
    pub(super) forming: Option<Forming>,
    pub(super) unformed: VecDeque<RuleId>,
    /// Rules whose right side may be reducible.
    pub(super) stale: Vec<RuleId>,
    /// How many active rules are not oriented.
    pub(super) unoriented: usize,
    pub(super) ac_parts: FxHashMap<Symbol, [Option<Use>; 2]>,
    pub(super) ac_symbols: Vec<Symbol>,
    pub(super) counts: Counts,
    /// The equality of a question with unknowns.
    pub(super) equality: Option<Symbol>,
}

impl Engine {
    /// An engine without laws.
    pub fn new(order: Order, symbols: &[SymbolInfo]) -> Self {
        Engine {
            system: System::new(order, symbols),
            laws: Vec::new(),
            records: Vec::new(),
            waiting: Waiting::default(),
            occurrences: Occurrences::default(),
            parts: Parts::default(),
            weigher: Weigher::default(),
            horizon: 0,
            unifier: Unifier::default(),
            forming: None,
            unformed: VecDeque::new(),
            stale: Vec::new(),
            unoriented: 0,
            ac_parts: FxHashMap::default(),
            ac_symbols: Vec::new(),
            counts: Counts::default(),
            equality: None,
        }
    }

    /// Uses another strategy from now on. Pairs that wait keep the priority that they have.
    pub fn set_strategy(&mut self, strategy: Strategy) {
        self.weigher = Weigher::new(strategy);
    }

    /// From now on this symbol of two arguments is an equality: pairs eq(s, t) = c wait as s = t
    /// would, and are chosen at once where s and t unify.
    pub fn set_equality(&mut self, equality: Symbol) {
        self.equality = Some(equality);
    }

    /// Adds a law between two terms of the system's bank; it is looked at in the next run.
    pub fn add_law(&mut self, left: TermId, right: TermId) -> LawId {
        let id = LawId(self.laws.len() as u32);
        self.laws.push((left, right));
        self.waiting.push_law(id);
        id
    }

    /// Saturates until the rules are complete, the question is met, or a bound is reached.
    ///
    /// `progress` is called after each chosen pair.
    pub fn run(
        &mut self,
        limits: &mut Limits,
        question: Option<&Question>,
        mut progress: impl FnMut(&Engine),
    ) -> Outcome {
        let mut seen = 0;
        if let Some(question) = question {
            let sides = [question.left, question.right];
            self.weigher.mention(&self.system.bank, sides);
        }
        loop {
            // Interning a question needs no mark: its terms stay.
            let met = match question {
                Some(question) if seen != self.system.generation() => self.meets(question, limits),
                _ => Ok(false),
            };
            seen = self.system.generation();
            match met.and_then(|met| {
                if met {
                    Ok(Some(Outcome::Met))
                } else {
                    self.step(limits)
                }
            }) {
                Ok(None) => progress(self),
                Ok(Some(outcome)) => return outcome,
                Err(stopped) => return Outcome::Stopped(stopped),
            }
        }
    }

    /// Have the two sides the same normal form?
    pub fn meets(&mut self, question: &Question, limits: &mut Limits) -> Result<bool, Stopped> {
        self.system.begin_asking(&question.constants);
        let left = self.system.normal_form(question.left, limits);
        let right = left.and_then(|s| Ok((s, self.system.normal_form(question.right, limits)?)));
        self.system.end_asking();
        right.map(|(s, t)| s == t)
    }

    /// Finishes what is begun, then takes one pair.
    fn step(&mut self, limits: &mut Limits) -> Result<Option<Outcome>, Stopped> {
        limits.check(self.system.bank.len())?;
        self.simplify_stale(limits)?;
        self.continue_forming(limits)?;
        while let Some(rule) = self.unformed.pop_front() {
            if let Some(rule) = self.system.current(rule) {
                self.start_forming(rule);
                self.continue_forming(limits)?;
            }
        }
        let every = self.weigher.strategy.oldest_every;
        let by_age = every > 0 && self.counts.chosen % every == every - 1;
        let taken = if by_age {
            self.waiting.pop_oldest()
        } else {
            self.waiting.pop_best()
        };
        let Some(taken) = taken.or_else(|| self.waiting.pop_best()) else {
            let complete = self.counts.dropped == 0;
            return Ok(Some(if complete {
                Outcome::Complete
            } else {
                Outcome::Exhausted
            }));
        };
        self.counts.chosen += 1;
        if !by_age {
            self.horizon = self.horizon.max(taken.priority());
        }
        match self.waiting.choice(&self.system, taken) {
            None => self.counts.orphans += 1,
            Some(choice) => {
                if let Err(stopped) = self.process(&choice, limits) {
                    self.counts.chosen -= 1;
                    self.waiting.put_back(taken);
                    return Err(stopped);
                }
            }
        }
        Ok(None)
    }

    /// Makes rules of the laws that are waiting, and simplifies, without forming overlaps.
    pub fn digest(&mut self, limits: &mut Limits) {
        while let Some(taken) = self.waiting.pop_law() {
            let choice = self.waiting.choice(&self.system, taken);
            let done = choice.map_or(Ok(()), |choice| self.process(&choice, limits));
            if done.and_then(|()| self.simplify_stale(limits)).is_err() {
                return self.waiting.put_back(taken);
            }
        }
    }

    /// What has been done so far.
    pub fn counts(&self) -> Counts {
        self.counts
    }

    /// How many pairs wait.
    pub fn waiting(&self) -> usize {
        self.waiting.len()
    }

    /// Is nothing left to do, and was nothing given up?
    pub fn is_complete(&self) -> bool {
        self.waiting.len() == 0
            && self.forming.is_none()
            && self.unformed.is_empty()
            && self.stale.is_empty()
            && self.counts.dropped == 0
    }

    /// The laws, as they were given.
    pub fn laws(&self) -> &[(TermId, TermId)] {
        &self.laws
    }

    /// Where a rule comes from.
    pub fn record(&self, rule: RuleId) -> &Record {
        &self.records[rule.index()]
    }

    /// The active rules, oldest first.
    pub fn active_rules(&self) -> impl Iterator<Item = RuleId> + '_ {
        let rules = self.system.rules().iter().enumerate();
        rules
            .filter(|(_, r)| r.state == RuleState::Active)
            .map(|(id, _)| RuleId(id as u32))
    }

    pub(super) fn has_unoriented(&self) -> bool {
        self.unoriented > 0
    }
}

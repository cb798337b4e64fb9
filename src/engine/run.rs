//! The engine and its loop.

use super::arrows::{Arrow, Arrows, Tallies, Technique};
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
use std::time::{Duration, Instant};

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
    /// Pairs that were not prime.
    pub composite: u64,
    /// Waiting pairs that went with a retired rule.
    pub orphans: u64,
    /// Rules that were retired.
    pub retired: u64,
    /// Rules whose right side was simplified.
    pub simplified: u64,
    /// Pairs, or overlaps of rules, that were given up because they are too large. While there
    /// are any, the rules are never called complete.
    pub dropped: u64,
    /// Waiting pairs that were given up because there were too many, the worst ones; the rules are
    /// never called complete after that either.
    pub trimmed: u64,
}

impl Counts {
    /// Was anything given up?
    pub fn is_whole(&self) -> bool {
        self.dropped == 0 && self.trimmed == 0
    }
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
    /// The table of the strategy, without what may not be used now.
    pub(super) arrows: Arrows,
    pub(super) tallies: Tallies,
    /// How many pairs were deleted since the last look because other pairs stand for them.
    pub(super) leaning: u64,
    /// Rules all of whose overlaps are to be formed once more.
    pub(super) again: VecDeque<RuleId>,
    /// When so many pairs are chosen, the best waiting ones are weighed again.
    pub(super) refresh_at: u64,
    worked: Duration,
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
            arrows: Arrows::default(),
            tallies: Tallies::default(),
            leaning: 0,
            again: VecDeque::new(),
            refresh_at: 0,
            worked: Duration::ZERO,
        }
    }

    /// Uses another strategy from now on. Pairs that wait keep the priority that they have.
    pub fn set_strategy(&mut self, strategy: Strategy) {
        let arrows = strategy.arrows;
        self.weigher = Weigher::new(strategy);
        self.set_arrows(arrows);
    }

    /// From now on this symbol of two arguments is an equality: pairs eq(s, t) = c wait as s = t
    /// would, and are chosen at once where s and t unify.
    pub fn set_equality(&mut self, equality: Symbol) {
        self.equality = Some(equality);
    }

    /// Uses another table of techniques from now on.
    pub fn set_arrows(&mut self, arrows: Arrows) {
        self.weigher.strategy.arrows = arrows;
        self.arrows = arrows;
        self.waiting.keeps_orphans = !arrows.has(Arrow::Waiting, Technique::Orphans);
    }

    /// The table of techniques.
    pub fn arrows(&self) -> Arrows {
        self.weigher.strategy.arrows
    }

    /// What each cell of the table has done.
    pub fn tallies(&self) -> &Tallies {
        &self.tallies
    }

    /// How long the engine has run.
    pub fn worked(&self) -> Duration {
        self.worked
    }

    /// No more than so many pairs may wait; of more, the worst are given up.
    pub fn set_most_waiting(&mut self, most: usize) {
        self.waiting.most = most;
    }

    /// Adds a law between two terms of the system's bank; it is looked at in the next run.
    pub fn add_law(&mut self, left: TermId, right: TermId) -> LawId {
        let id = LawId(self.laws.len() as u32);
        self.laws.push((left, right));
        self.waiting.push_law(id);
        self.arrows = self.weigher.strategy.arrows;
        id
    }

    /// Saturates until the rules are complete, the question is met, or a bound is reached.
    ///
    /// `progress` is called after each chosen pair.
    pub fn run(
        &mut self,
        limits: &mut Limits,
        question: Option<&Question>,
        progress: impl FnMut(&Engine),
    ) -> Outcome {
        let begun = Instant::now();
        let outcome = self.saturate(limits, question, progress);
        self.worked += begun.elapsed();
        outcome
    }

    fn saturate(
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
        while let Some(rule) = self.again.pop_front() {
            if let Some(rule) = self.system.current(rule) {
                self.start_forming_again(rule);
                self.continue_forming(limits)?;
            }
        }
        self.refresh_waiting(limits)?;
        let every = self.weigher.strategy.oldest_every;
        let by_age = every > 0 && self.counts.chosen % every == every - 1;
        let taken = if by_age {
            self.waiting.pop_oldest()
        } else {
            self.waiting.pop_best()
        };
        let Some(taken) = taken.or_else(|| self.waiting.pop_best()) else {
            if self.leaning > 0 {
                self.look_again();
                return Ok(None);
            }
            return Ok(Some(if self.counts.is_whole() {
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
            None => self.count_orphans(1),
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

    /// No pair is left, but some were deleted because others stand for them. Then the rules are
    /// complete, but not each pair need join by itself, by which a complete set is verified. So all
    /// overlaps are formed once more and judged without those criteria; equations that make the
    /// pairs join become rules.
    fn look_again(&mut self) {
        self.leaning = 0;
        self.arrows = self.weigher.strategy.arrows.each_pair_by_itself();
        self.again = self.active_rules().collect();
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
            && self.again.is_empty()
            && self.leaning == 0
            && self.counts.is_whole()
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

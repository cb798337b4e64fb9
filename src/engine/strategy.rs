//! How the loop chooses among the waiting pairs, and which criteria delete.

use super::arrows::Arrows;
use crate::term::{Bank, Head, Symbol, TermId, Weights};
use rustc_hash::FxHashMap;
use std::sync::Arc;

/// How pairs are weighed and which criteria are used.
///
/// No setting makes an answer wrong.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Strategy {
    /// The weight of a pair is `larger` times its larger side plus `smaller` times the other.
    pub larger: u32,
    /// See [`Strategy::larger`].
    pub smaller: u32,
    /// What an occurrence of a variable weighs; a symbol weighs 1.
    pub variable: u32,
    /// What a symbol weighs that the question does not mention.
    pub foreign: u32,
    /// A pair that weighs more than this many times what was chosen last is not simplified when it
    /// is formed, only when it is chosen; 0: all are.
    pub eager: u32,
    /// Every this many choices the oldest pair is taken instead of the best one.
    pub oldest_every: u64,
    /// Does a pair with eq(s, t), where eq is the equality of a question with unknowns, weigh what
    /// s = t would weigh, and come first if s and t unify?
    pub inside: bool,
    /// Which techniques simplify and delete what.
    pub arrows: Arrows,
}

impl Default for Strategy {
    /// The larger side counts four times (measured against the sum of both, which solved fewer of
    /// the harder problems); every tenth choice is the oldest pair.
    fn default() -> Self {
        Strategy {
            larger: 4,
            smaller: 1,
            variable: 1,
            foreign: 1,
            eager: 4,
            oldest_every: 10,
            inside: true,
            arrows: Arrows::USUAL,
        }
    }
}

impl Strategy {
    /// Does a term weigh as much as its size?
    fn is_plain(&self) -> bool {
        (self.variable, self.foreign) == (1, 1)
    }
}

/// No more nodes than this are weighed one by one; a larger term counts with its size.
const MOST_WEIGHED: u32 = 4096;

/// A strategy with what it needs to know of the question.
#[derive(Clone, Debug, Default)]
pub(super) struct Weigher {
    pub(super) strategy: Strategy,
    /// By symbol: does the question mention it? Empty if there is no question.
    mentioned: Vec<bool>,
    /// What lasting terms weigh, unless that is their size.
    lasting: FxHashMap<TermId, u32>,
    /// The variables of lasting terms with many, with their occurrences.
    occurrences: FxHashMap<TermId, Arc<[(u32, u32)]>>,
    stack: Vec<TermId>,
}

impl Weigher {
    pub(super) fn new(strategy: Strategy) -> Self {
        Weigher {
            strategy,
            ..Weigher::default()
        }
    }

    /// The symbols of a question's sides.
    pub(super) fn mention(&mut self, bank: &Bank, sides: [TermId; 2]) {
        if self.strategy.foreign == 1 {
            return;
        }
        self.lasting.clear();
        self.mentioned.clear();
        self.mentioned.resize(bank.symbols().len(), false);
        let mut seen = rustc_hash::FxHashSet::default();
        let mut stack = sides.to_vec();
        while let Some(term) = stack.pop() {
            if let Some(symbol) = bank.as_symbol(term).filter(|_| seen.insert(term)) {
                self.mentioned[symbol.index()] = true;
                stack.extend(bank.arguments(term));
            }
        }
    }

    /// The priority of a pair: smaller is better.
    pub(super) fn priority(&mut self, bank: &Bank, left: TermId, right: TermId) -> u32 {
        let (a, b) = (self.weight(bank, left), self.weight(bank, right));
        self.of_weights(a, b)
    }

    /// The priority of a pair whose sides weigh so much.
    pub(super) fn of_weights(&self, a: u32, b: u32) -> u32 {
        let larger = a.max(b).saturating_mul(self.strategy.larger);
        larger.saturating_add(a.min(b).saturating_mul(self.strategy.smaller))
    }

    fn weight_of_lasting(&mut self, bank: &Bank, term: TermId) -> u32 {
        if self.strategy.is_plain() {
            return bank.size(term);
        }
        if let Some(&known) = self.lasting.get(&term) {
            return known;
        }
        let weight = self.weight(bank, term);
        self.lasting.insert(term, weight);
        weight
    }

    fn weight(&mut self, bank: &Bank, term: TermId) -> u32 {
        let Strategy {
            variable, foreign, ..
        } = self.strategy;
        let size = bank.size(term);
        if self.strategy.is_plain() || size > MOST_WEIGHED {
            return size;
        }
        let mut weight = 0;
        self.stack.clear();
        self.stack.push(term);
        while let Some(term) = self.stack.pop() {
            weight += match bank.head(term) {
                Head::Variable(_) => variable,
                Head::Symbol(symbol) if self.is_foreign(symbol) => foreign,
                Head::Symbol(_) => 1,
            };
            self.stack.extend(bank.arguments(term));
        }
        weight
    }

    fn is_foreign(&self, symbol: Symbol) -> bool {
        !self.mentioned.is_empty() && !self.mentioned.get(symbol.index()).is_some_and(|m| *m)
    }
}

/// The weights of lasting terms.
pub(super) struct Lasting<'a> {
    pub(super) weigher: &'a mut Weigher,
    pub(super) bank: &'a Bank,
}

impl Weights for Lasting<'_> {
    fn weight(&mut self, term: TermId) -> u32 {
        self.weigher.weight_of_lasting(self.bank, term)
    }

    fn occurrences(&mut self, term: TermId) -> Arc<[(u32, u32)]> {
        let walk = || {
            let counts = self.bank.count_by_walking(term);
            let times = |n: u64| u32::try_from(n).unwrap_or(u32::MAX);
            counts.iter().map(|(v, n)| (v.index, times(*n))).collect()
        };
        let known = &mut self.weigher.occurrences;
        known.entry(term).or_insert_with(walk).clone()
    }
}

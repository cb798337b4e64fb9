//! Rewriting the terms of a question, in which constants stand for the variables.
//!
//! A rule may leave variables open: f(x) = g(y) rewrites f(a) to g of anything. It is used with the
//! least ground term of the sort. That of a question can be one of its constants, and then the
//! steps must neither reach the terms of other questions nor those of rules.

use super::System;
use crate::term::{Mark, Sort, Symbol, SymbolInfo, TermId};

impl System {
    /// The constant that stands for the variable of a question with this rank among its variables.
    ///
    /// It is below every symbol of the theory; a lower rank is below a higher one.
    pub fn question_constant(&mut self, rank: u32, sort: Sort) -> TermId {
        let place = self
            .question
            .iter()
            .position(|known| *known == (rank, sort));
        let place = place.unwrap_or_else(|| {
            let weight = self.order.variable_weight();
            let info = SymbolInfo {
                arguments: Box::new([]),
                result: sort,
                weight,
            };
            let symbol = self.bank.declare(info);
            self.order
                .add_least(symbol, u64::from(rank) << 16 | u64::from(sort.0));
            self.ac.push(None);
            self.question.push((rank, sort));
            self.question.len() - 1
        });
        let symbol = Symbol((self.theory_symbols + place) as u32);
        self.bank.apply(symbol, &[])
    }

    /// The rank and sort of a question constant; nothing for the theory's symbols.
    pub fn question_rank(&self, symbol: Symbol) -> Option<(u32, Sort)> {
        let place = symbol.index().checked_sub(self.theory_symbols)?;
        self.question.get(place).copied()
    }

    /// From now on the terms that are rewritten are those of a question with these constants.
    ///
    /// Where no rule leaves variables open, that makes no difference. Otherwise the steps are
    /// taken back by [`System::end_asking`], so what is to be known of them is asked for before.
    pub fn begin_asking(&mut self, constants: &[TermId]) {
        if self.open_rules == 0 {
            return;
        }
        self.asked_least = self.least_terms(constants);
        self.asking = true;
        self.table.begin_asking();
        self.update_generation();
    }

    /// The terms that are rewritten are those of the theory again.
    pub fn end_asking(&mut self) {
        if self.asking {
            self.asking = false;
            self.table.end_asking();
            self.update_generation();
        }
    }

    /// Terms that were in normal form may no longer be.
    pub(super) fn changed(&mut self) {
        self.state += 1;
        self.update_generation();
    }

    /// Normal forms of a question are not those of the theory. They are of this question only,
    /// and are taken back with it.
    fn update_generation(&mut self) {
        self.generation = (self.state << 1) | u32::from(self.asking);
    }

    /// The term that an open variable of this sort becomes outside questions.
    pub fn theory_least(&self, sort: Sort) -> Option<TermId> {
        of_sort(&self.theory_least, sort)
    }

    /// By sort, the least ground term over the theory's symbols and these constants.
    ///
    /// The least term with a given head has the least arguments, since the order is monotone; so
    /// the heads are tried in turn until no sort's least term changes.
    pub(super) fn least_terms(&mut self, constants: &[TermId]) -> Vec<TermId> {
        let mut least = Vec::new();
        for &constant in constants {
            self.offer(&mut least, constant);
        }
        let mut changed = true;
        while changed {
            changed = false;
            for symbol in 0..self.theory_symbols {
                let symbol = Symbol(symbol as u32);
                let sorts = &self.bank.info(symbol).arguments;
                let arguments: Option<Vec<TermId>> =
                    sorts.iter().map(|sort| of_sort(&least, *sort)).collect();
                if let Some(arguments) = arguments {
                    let term = self.bank.apply(symbol, &arguments);
                    changed |= self.offer(&mut least, term);
                }
            }
        }
        least
    }

    fn offer(&self, least: &mut Vec<TermId>, term: TermId) -> bool {
        let sort = usize::from(self.bank.sort(term).0);
        if least.len() <= sort {
            least.resize(sort + 1, TermId::NONE);
        }
        let known = least[sort];
        let better = !known.is_some() || self.order.greater(&self.bank, known, term);
        if better {
            least[sort] = term;
        }
        better
    }

    /// Takes a mark: until [`System::rollback`], terms and steps are for the moment only.
    pub fn mark(&mut self) -> Mark {
        let mark = self.bank.mark();
        self.table.mark(mark);
        mark
    }

    /// Forgets the terms and steps since the mark.
    pub fn rollback(&mut self, mark: Mark) {
        self.table.rollback();
        self.bank.rollback(mark);
    }
}

pub(super) fn of_sort(least: &[TermId], sort: Sort) -> Option<TermId> {
    let term = least.get(usize::from(sort.0)).copied();
    term.filter(|term| term.is_some())
}

//! Canonical forms modulo associativity and commutativity.
//!
//! The canonical form of f(…) for an associative and commutative f is nested to the right with the
//! arguments ascending in the reduction order; among the ground terms that are equal to it modulo
//! the two laws it is the least. It is built from the flattened spine at once; building it suffix
//! by suffix would be quadratic.

use super::normal::{Frame, SETTLE, SPINE};
use super::{Reason, RuleId, System, Use};
use crate::order::{Comparison, Order};
use crate::term::{Bank, Symbol, TermId};
use rustc_hash::FxHashMap;

/// The rules that say that a symbol is associative and commutative.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct AcLaws {
    /// f(f(x, y), z) → f(x, f(y, z)) when used this way.
    pub associative: Use,
    /// f(x, y) = f(y, x).
    pub commutative: RuleId,
}

/// A sum whose flattened arguments are being brought to normal form.
#[derive(Clone, Copy)]
pub(super) struct Spine {
    /// Where its arguments begin among the leaves.
    first: usize,
    next: usize,
}

impl System {
    pub(super) fn start_spine(&mut self, symbol: Symbol, term: TermId) {
        let first = self.leaves.len();
        flatten(&self.bank, symbol, term, &mut self.leaves);
        self.spines.push(Spine { first, next: first });
        self.frames.push(Frame { term, state: SPINE });
    }

    pub(super) fn continue_spine(&mut self, term: TermId) {
        let spine = self.spines.last_mut().expect("a spine frame has a spine");
        if let Some(&leaf) = self.leaves.get(spine.next) {
            spine.next += 1;
            return self.visit(leaf);
        }
        let Spine { first, .. } = self.spines.pop().expect("it was there");
        self.frames.pop();
        let symbol = self.bank.as_symbol(term).expect("a spine has a symbol");
        let start = self.values.len() - (self.leaves.len() - first);
        let mut from = term;
        if self.values[start..] != self.leaves[first..] {
            from = self.reshape(symbol, term, start);
            self.table.set_step(term, from, Reason::Arguments);
            self.frames.push(Frame {
                term,
                state: SETTLE,
            });
        }
        self.leaves.truncate(first);
        let mut parts = Vec::with_capacity(self.values.len() - start);
        for value in self.values.drain(start..) {
            flatten(&self.bank, symbol, value, &mut parts);
        }
        let known = |s: &Self| {
            s.table
                .normal(from, s.generation)
                .or_else(|| s.table.next(from))
        };
        if known(self).is_some() {
            return self.visit(from);
        }
        sort(&self.bank, &self.order, &mut parts);
        let canonical = self.nest(symbol, &parts);
        if canonical != from {
            self.table.set_step(from, canonical, Reason::Canonical);
            self.frames.push(Frame {
                term: from,
                state: SETTLE,
            });
        }
        self.visit(canonical);
    }

    /// Is this sum of two terms in normal form canonical? Looks at no more than the front.
    pub(super) fn sort_by_looking(&mut self, symbol: Symbol, term: TermId) -> bool {
        if self.table.is_sorted(term) {
            return true;
        }
        let (left, right) = self.pair(term);
        let is_sum = |t| self.bank.as_symbol(t) == Some(symbol);
        let (second, rest_sorted) = if is_sum(right) {
            (self.pair(right).0, self.table.is_sorted(right))
        } else {
            (right, true)
        };
        let sorted = rest_sorted && !is_sum(left) && !self.order.greater(&self.bank, left, second);
        if sorted {
            self.table.set_sorted(term);
        }
        sorted
    }

    fn pair(&self, term: TermId) -> (TermId, TermId) {
        let arguments = self.bank.arguments(term);
        (arguments[0], arguments[1])
    }

    /// The term with the flattened arguments replaced by the values from `start`, same shape.
    fn reshape(&mut self, symbol: Symbol, term: TermId, start: usize) -> TermId {
        let mut next = start;
        let mut stack = vec![(term, false)];
        let mut built = Vec::new();
        while let Some((term, combine)) = stack.pop() {
            if combine {
                let at = built.len() - 2;
                let made = self.bank.apply(symbol, &built[at..]);
                built.truncate(at);
                built.push(made);
            } else if self.bank.as_symbol(term) == Some(symbol) {
                let (left, right) = self.pair(term);
                stack.extend([(term, true), (right, false), (left, false)]);
            } else {
                built.push(self.values[next]);
                next += 1;
            }
        }
        built[0]
    }

    fn nest(&mut self, symbol: Symbol, parts: &[TermId]) -> TermId {
        let (&last, before) = parts.split_last().expect("a sum has parts");
        before.iter().rev().fold(last, |rest, &part| {
            let made = self.bank.apply(symbol, &[part, rest]);
            self.table.set_sorted(made);
            made
        })
    }

    /// The canonical form of a ground term modulo the known associative and commutative symbols,
    /// without rewriting: the same for two terms just if they are equal modulo these laws.
    pub fn canonical_form(&mut self, term: TermId) -> TermId {
        let System {
            bank, order, ac, ..
        } = self;
        rebuild(
            bank,
            |s| ac[s.index()].is_some(),
            |bank, parts| sort(bank, order, parts),
            term,
        )
    }
}

/// Are two terms, which may have variables, equal modulo associativity and commutativity of the
/// symbols of which `is_ac` holds? Leaves terms behind in the bank.
pub fn ac_equal(bank: &mut Bank, is_ac: impl Fn(Symbol) -> bool, s: TermId, t: TermId) -> bool {
    if s == t {
        return true;
    }
    if bank.size(s) != bank.size(t) || bank.counts(s) != bank.counts(t) {
        return false;
    }
    let by_id = |_: &Bank, parts: &mut [TermId]| parts.sort_unstable();
    rebuild(bank, &is_ac, by_id, s) == rebuild(bank, &is_ac, by_id, t)
}

/// The term with every sum nested to the right and its arguments sorted.
fn rebuild(
    bank: &mut Bank,
    is_ac: impl Fn(Symbol) -> bool,
    sort: impl Fn(&Bank, &mut [TermId]),
    term: TermId,
) -> TermId {
    let mut known: FxHashMap<TermId, TermId> = FxHashMap::default();
    let mut stack = vec![term];
    let mut parts = Vec::new();
    while let Some(&top) = stack.last() {
        let Some(symbol) = bank.as_symbol(top) else {
            known.insert(top, top);
            stack.pop();
            continue;
        };
        if known.contains_key(&top) {
            stack.pop();
            continue;
        }
        parts.clear();
        if is_ac(symbol) {
            flatten(bank, symbol, top, &mut parts);
        } else {
            parts.extend_from_slice(bank.arguments(top));
        }
        let before = stack.len();
        stack.extend(
            parts
                .iter()
                .filter(|part| !bank.arguments(**part).is_empty() && !known.contains_key(part)),
        );
        if stack.len() > before {
            continue;
        }
        for part in &mut parts {
            if !bank.arguments(*part).is_empty() {
                *part = known[part];
            }
        }
        let made = if is_ac(symbol) {
            sort(bank, &mut parts);
            let (&last, front) = parts.split_last().expect("a sum has parts");
            front
                .iter()
                .rev()
                .fold(last, |rest, &part| bank.apply(symbol, &[part, rest]))
        } else {
            bank.apply(symbol, &parts)
        };
        known.insert(top, made);
        stack.pop();
    }
    known[&term]
}

/// Appends the arguments of a sum, from left to right, sums of the same symbol taken apart.
fn flatten(bank: &Bank, symbol: Symbol, term: TermId, parts: &mut Vec<TermId>) {
    let mut stack = vec![term];
    while let Some(term) = stack.pop() {
        if bank.as_symbol(term) == Some(symbol) {
            let arguments = bank.arguments(term);
            stack.extend([arguments[1], arguments[0]]);
        } else {
            parts.push(term);
        }
    }
}

/// Sorts ground terms, least first.
fn sort(bank: &Bank, order: &Order, parts: &mut [TermId]) {
    let mut keyed: Vec<(u64, TermId)> = Vec::with_capacity(parts.len());
    let mut weight = None;
    for &part in parts.iter() {
        let symbol = bank
            .as_symbol(part)
            .filter(|_| bank.arguments(part).is_empty());
        let Some((heavy, rank)) = symbol.map(|symbol| order.constant_key(symbol)) else {
            break;
        };
        if *weight.get_or_insert(heavy) != heavy {
            break;
        }
        keyed.push((rank, part));
    }
    if keyed.len() == parts.len() {
        // Constants of one weight compare by their ranks, which are different numbers.
        keyed.sort_unstable_by_key(|(rank, _)| *rank);
        parts
            .iter_mut()
            .zip(keyed)
            .for_each(|(part, (_, sorted))| *part = sorted);
    } else {
        merge_sort(parts, |s, t| {
            order.compare(bank, s, t) == Comparison::Greater
        });
    }
}

/// A stable merge sort. The comparison may give up on enormous terms, and the library's sorts may
/// panic when it is then no total order; this one only leaves the order unspecified.
fn merge_sort(parts: &mut [TermId], greater: impl Fn(TermId, TermId) -> bool) {
    let mut spare = parts.to_vec();
    let mut width = 1;
    while width < parts.len() {
        for (from, to) in parts.chunks(2 * width).zip(spare.chunks_mut(2 * width)) {
            let (mut a, mut b) = from.split_at(width.min(from.len()));
            for slot in to {
                let take_b = match (a.first(), b.first()) {
                    (Some(&x), Some(&y)) => greater(x, y),
                    (None, _) => true,
                    (_, None) => false,
                };
                let side = if take_b { &mut b } else { &mut a };
                *slot = side[0];
                *side = &side[1..];
            }
        }
        parts.copy_from_slice(&spare);
        width *= 2;
    }
}

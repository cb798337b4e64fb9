//! The steps, by associativity and commutativity, from a sum to its canonical form.

use super::{System, Use};
use crate::term::{Symbol, TermId};

/// A step by one of the two laws, and its place.
pub type AcStep = (Use, Vec<u32>);

impl System {
    /// Steps from `from` to `to`, sums of the same ground arguments by a symbol that is known to
    /// be associative and commutative; `to` is nested to the right.
    ///
    /// First everything is nested to the right, then the arguments are brought to their places
    /// from the front, by exchanging neighbours. At most about n² exchanges of three steps for n
    /// arguments.
    pub fn canonical_steps(&mut self, from: TermId, to: TermId) -> Vec<AcStep> {
        let symbol = self.bank.as_symbol(from).expect("a sum has a symbol");
        let laws = self.ac_laws(symbol).expect("the symbol is known to be AC");
        let mut steps = Vec::new();
        let mut parts = self.nest_to_the_right(symbol, from, laws.associative, &mut steps);
        let wanted = self.parts(symbol, to);
        debug_assert_eq!(parts.len(), wanted.len());
        for (place, &part) in wanted.iter().enumerate() {
            let found = parts[place..]
                .iter()
                .position(|p| *p == part)
                .expect("same arguments");
            for there in (place..place + found).rev() {
                self.exchange(laws, there, there + 2 == parts.len(), &mut steps);
                parts.swap(there, there + 1);
            }
        }
        steps
    }

    /// Steps by associativity until no left argument is a sum; the arguments in their order.
    fn nest_to_the_right(
        &self,
        symbol: Symbol,
        term: TermId,
        associative: Use,
        steps: &mut Vec<AcStep>,
    ) -> Vec<TermId> {
        // The arguments still to come at the place that is reached, first on top. The step at a
        // place turns the two on top, of which the first is a sum, into three.
        let mut waiting = vec![term];
        let mut done = Vec::new();
        while let Some(top) = waiting.pop() {
            if self.bank.as_symbol(top) != Some(symbol) {
                done.push(top);
                continue;
            }
            if !waiting.is_empty() {
                steps.push((associative, vec![1; done.len()]));
            }
            let arguments = self.bank.arguments(top);
            waiting.extend([arguments[1], arguments[0]]);
        }
        done
    }

    /// Exchanges the arguments at a place of the spine and the next one.
    fn exchange(&self, laws: super::AcLaws, place: usize, last: bool, steps: &mut Vec<AcStep>) {
        let commutative = Use {
            rule: laws.commutative,
            backward: false,
        };
        let at = vec![1; place];
        if last {
            return steps.push((commutative, at));
        }
        let apart = Use {
            backward: !laws.associative.backward,
            ..laws.associative
        };
        let front = [&at[..], &[0]].concat();
        steps.push((apart, at.clone()));
        steps.push((commutative, front));
        steps.push((laws.associative, at));
    }

    fn parts(&self, symbol: Symbol, term: TermId) -> Vec<TermId> {
        let mut parts = Vec::new();
        let mut stack = vec![term];
        while let Some(term) = stack.pop() {
            if self.bank.as_symbol(term) == Some(symbol) {
                let arguments = self.bank.arguments(term);
                stack.extend([arguments[1], arguments[0]]);
            } else {
                parts.push(term);
            }
        }
        parts
    }
}

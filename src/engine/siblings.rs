//! Equal pairs among those that one new rule gives rise to.

use crate::term::{Bank, Head, TermId, Variable};
use rustc_hash::{FxHashMap, FxHasher};
use std::hash::Hasher;

/// Larger pairs are not compared.
const LARGEST: u32 = 1_000;

/// The pairs that were kept since their terms were last forgotten.
#[derive(Clone, Debug, Default)]
pub(super) struct Siblings {
    kept: FxHashMap<u64, ([TermId; 2], u32)>,
    stack: Vec<TermId>,
    variables: Vec<Variable>,
}

impl Siblings {
    /// The terms of the pairs are gone.
    pub(super) fn forget(&mut self) {
        self.kept.clear();
    }

    /// The number that was given with a pair which is the same but for the names of variables, and
    /// perhaps swapped. If there is none, this one is kept with its own number.
    ///
    /// Costs a walk through the pair, and another one if there is such a pair.
    pub(super) fn find_or_keep(
        &mut self,
        bank: &Bank,
        left: TermId,
        right: TermId,
        number: u32,
    ) -> Option<u32> {
        let (a, b) = (bank.size(left), bank.size(right));
        if a.max(b) > LARGEST {
            return None;
        }
        let mut pair = if a < b { [right, left] } else { [left, right] };
        let mut look = self.look(bank, pair);
        if a == b {
            let swapped = self.look(bank, [right, left]);
            if swapped < look {
                (pair, look) = ([right, left], swapped);
            }
        }
        match self.kept.get(&look) {
            Some((other, kept)) if are_variants(bank, *other, pair) => Some(*kept),
            Some(_) => None,
            None => {
                self.kept.insert(look, (pair, number));
                None
            }
        }
    }

    /// A hash that does not depend on the names of the variables.
    fn look(&mut self, bank: &Bank, [first, second]: [TermId; 2]) -> u64 {
        let mut hasher = FxHasher::default();
        self.variables.clear();
        self.stack.clear();
        self.stack.extend([second, first]);
        while let Some(term) = self.stack.pop() {
            match bank.head(term) {
                Head::Symbol(symbol) => {
                    hasher.write_u32(symbol.0);
                    self.stack.extend(bank.arguments(term).iter().rev());
                }
                Head::Variable(variable) => {
                    let known = self.variables.iter().position(|v| *v == variable);
                    let rank = known.unwrap_or_else(|| {
                        self.variables.push(variable);
                        self.variables.len() - 1
                    });
                    hasher.write_u32(!(rank as u32));
                }
            }
        }
        hasher.finish()
    }
}

/// Are the pairs the same but for the names of variables?
fn are_variants(bank: &Bank, one: [TermId; 2], other: [TermId; 2]) -> bool {
    let mut renamed: Vec<(Variable, Variable)> = Vec::new();
    let mut stack: Vec<(TermId, TermId)> = one.into_iter().zip(other).collect();
    while let Some((a, b)) = stack.pop() {
        match (bank.head(a), bank.head(b)) {
            (Head::Symbol(f), Head::Symbol(g)) if f == g => {
                let arguments = bank.arguments(a).iter().zip(bank.arguments(b));
                stack.extend(arguments.map(|(x, y)| (*x, *y)));
            }
            (Head::Variable(x), Head::Variable(y)) if x.sort == y.sort => {
                match renamed.iter().find(|(u, v)| *u == x || *v == y) {
                    Some(pair) if *pair == (x, y) => {}
                    Some(_) => return false,
                    None => renamed.push((x, y)),
                }
            }
            _ => return false,
        }
    }
    true
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::term::{Sort, SymbolInfo};

    #[test]
    fn pairs_are_the_same_up_to_names_and_sides() {
        let mut bank = Bank::new(1);
        let f = bank.declare(SymbolInfo {
            arguments: vec![Sort(0); 2].into(),
            result: Sort(0),
            weight: 1,
        });
        let mut pair = |s: [u32; 2], t: [u32; 2]| {
            [s, t].map(|numbers| {
                let arguments = numbers.map(|index| {
                    bank.variable(Variable {
                        index,
                        sort: Sort(0),
                    })
                });
                bank.apply(f, &arguments)
            })
        };
        let pairs = [
            pair([0, 1], [1, 0]),
            pair([4, 2], [2, 4]),
            pair([0, 0], [0, 1]),
            pair([3, 4], [3, 3]),
            pair([0, 1], [1, 1]),
            pair([0, 1], [2, 3]),
        ];
        let mut siblings = Siblings::default();
        let mut found = |number: usize| {
            let [left, right] = pairs[number];
            siblings.find_or_keep(&bank, left, right, number as u32)
        };
        assert_eq!(found(0), None);
        assert_eq!(found(1), Some(0));
        assert_eq!(found(2), None);
        assert_eq!(found(3), Some(2));
        assert_eq!(found(4), None);
        assert_eq!(found(5), None);
    }
}

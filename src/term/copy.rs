//! Taking terms to another bank, and giving variables their customary numbers.

use super::substitution::map_variables;
use super::{Bank, Head, Symbol, TermId, Variable};
use rustc_hash::FxHashMap;

/// Copies terms from one bank to another, distinct subterms once each, over any number of calls.
#[derive(Clone, Debug, Default)]
pub struct Copier {
    known: FxHashMap<TermId, TermId>,
}

impl Copier {
    /// The copy of `term`. `symbol` and `variable` say what the heads become; the answers for
    /// subterms are remembered, so they must not change between calls.
    pub fn copy(
        &mut self,
        from: &Bank,
        to: &mut Bank,
        term: TermId,
        mut symbol: impl FnMut(Symbol) -> Symbol,
        mut variable: impl FnMut(&mut Bank, Variable) -> TermId,
    ) -> TermId {
        let mut frames = vec![term];
        let mut arguments = Vec::new();
        while let Some(&top) = frames.last() {
            if self.known.contains_key(&top) {
                frames.pop();
                continue;
            }
            let before = frames.len();
            frames.extend(
                from.arguments(top)
                    .iter()
                    .filter(|a| !self.known.contains_key(a)),
            );
            if frames.len() > before {
                continue;
            }
            let made = match from.head(top) {
                Head::Variable(v) => variable(to, v),
                Head::Symbol(s) => {
                    arguments.clear();
                    arguments.extend(from.arguments(top).iter().map(|a| self.known[a]));
                    to.apply(symbol(s), &arguments)
                }
            };
            self.known.insert(top, made);
            frames.pop();
        }
        self.known[&term]
    }
}

/// The terms with their variables numbered 0, 1, 2, … in the order of first occurrence over all of
/// them, and the old variables in that order.
pub fn renumber<const N: usize>(
    bank: &mut Bank,
    terms: [TermId; N],
) -> ([TermId; N], Vec<Variable>) {
    let mut order: Vec<Variable> = Vec::new();
    let renamed = terms.map(|term| {
        map_variables(bank, term, |bank, variable, _| {
            let index = order
                .iter()
                .position(|v| *v == variable)
                .unwrap_or_else(|| {
                    order.push(variable);
                    order.len() - 1
                });
            bank.variable(Variable {
                index: index as u32,
                sort: variable.sort,
            })
        })
    });
    (renamed, order)
}

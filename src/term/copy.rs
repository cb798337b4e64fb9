//! Taking terms to another bank, and giving variables their customary numbers.

use super::substitution::map_variables;
use super::{Bank, Head, Symbol, TermId, Variable};
use rustc_hash::FxHashMap;

/// What a term becomes, made from what its arguments become, distinct subterms once each.
///
/// `known` has what subterms became, over any number of calls for which `make` is the same.
pub fn fold<R: Copy>(
    bank: &Bank,
    term: TermId,
    known: &mut FxHashMap<TermId, R>,
    mut make: impl FnMut(Head, &[R]) -> R,
) -> R {
    let mut stack = vec![term];
    let mut arguments = Vec::new();
    while let Some(&top) = stack.last() {
        if known.contains_key(&top) {
            stack.pop();
            continue;
        }
        let before = stack.len();
        let open = bank
            .arguments(top)
            .iter()
            .filter(|a| !known.contains_key(a));
        stack.extend(open);
        if stack.len() > before {
            continue;
        }
        arguments.clear();
        arguments.extend(bank.arguments(top).iter().map(|a| known[a]));
        let made = make(bank.head(top), &arguments);
        known.insert(top, made);
        stack.pop();
    }
    known[&term]
}

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
        fold(from, term, &mut self.known, |head, arguments| match head {
            Head::Variable(v) => variable(to, v),
            Head::Symbol(s) => to.apply(symbol(s), arguments),
        })
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

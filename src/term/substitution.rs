//! Substitutions, and putting them in.

use super::{Bank, TermId, Variable};
use rustc_hash::FxHashMap;

/// Terms for variables, by the variables' numbers. Reused from call to call.
#[derive(Clone, Debug, Default)]
pub struct Substitution {
    slots: Vec<TermId>,
}

impl Substitution {
    /// Forgets everything and makes room for variables numbered below `variables`.
    pub fn reset(&mut self, variables: usize) {
        self.slots.clear();
        self.slots.resize(variables, TermId::NONE);
    }

    /// The term for a variable, or [`TermId::NONE`].
    #[inline]
    pub fn get(&self, index: u32) -> TermId {
        self.slots
            .get(index as usize)
            .copied()
            .unwrap_or(TermId::NONE)
    }

    /// The terms by variable number, [`TermId::NONE`] where there is none.
    #[inline]
    pub fn values(&self) -> &[TermId] {
        &self.slots
    }

    /// Sets, or with [`TermId::NONE`] clears, the term for a variable.
    #[inline]
    pub fn set(&mut self, index: u32, term: TermId) {
        if index as usize >= self.slots.len() {
            self.slots.resize(index as usize + 1, TermId::NONE);
        }
        self.slots[index as usize] = term;
    }
}

/// A term with the substitution put in; variables without a value stay.
///
/// Ground subterms are not visited. Costs one visit per occurrence, but one per distinct subterm
/// when the term is large, so that shared terms do not blow up.
pub fn instantiate(bank: &mut Bank, term: TermId, substitution: &Substitution) -> TermId {
    map_variables(bank, term, |_, variable, term| {
        let value = substitution.get(variable.index);
        if value.is_some() { value } else { term }
    })
}

/// A term with every variable replaced by what `value` says of it.
pub(crate) fn map_variables(
    bank: &mut Bank,
    term: TermId,
    mut value: impl FnMut(&mut Bank, Variable, TermId) -> TermId,
) -> TermId {
    if bank.is_ground(term) {
        return term;
    }
    if let Some(variable) = bank.as_variable(term) {
        return value(bank, variable, term);
    }
    let mut memo = (bank.size(term) > 64).then(FxHashMap::<TermId, TermId>::default);
    let mut frames: Vec<(TermId, u32)> = vec![(term, 0)];
    let mut built: Vec<TermId> = Vec::new();
    while let Some((top, next)) = frames.last_mut() {
        let (top, place) = (*top, *next as usize);
        let arguments = bank.arguments(top);
        if place < arguments.len() {
            *next += 1;
            let argument = arguments[place];
            if bank.is_ground(argument) {
                built.push(argument);
            } else if let Some(variable) = bank.as_variable(argument) {
                built.push(value(bank, variable, argument));
            } else if let Some(&known) = memo.as_ref().and_then(|memo| memo.get(&argument)) {
                built.push(known);
            } else {
                frames.push((argument, 0));
            }
            continue;
        }
        let symbol = bank.as_symbol(top).expect("variables are never framed");
        let start = built.len() - place;
        let made = bank.apply(symbol, &built[start..]);
        built.truncate(start);
        built.push(made);
        if let Some(memo) = &mut memo {
            memo.insert(top, made);
        }
        frames.pop();
    }
    built.pop().expect("the root leaves one term")
}

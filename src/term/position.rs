//! Places in terms.

use super::{Bank, TermId};

/// The subterm at a place, given by argument numbers from 0; the root is `[]`.
pub fn subterm_at(bank: &Bank, term: TermId, place: &[u32]) -> Option<TermId> {
    let mut here = term;
    for &step in place {
        here = *bank.arguments(here).get(step as usize)?;
    }
    Some(here)
}

/// The term with another subterm at a place, which must exist.
pub fn replace_at(bank: &mut Bank, term: TermId, place: &[u32], by: TermId) -> TermId {
    let mut spine = Vec::with_capacity(place.len());
    let mut here = term;
    for &step in place {
        spine.push(here);
        here = bank.arguments(here)[step as usize];
    }
    let mut made = by;
    let mut arguments = Vec::new();
    for (&above, &step) in spine.iter().zip(place).rev() {
        arguments.clear();
        arguments.extend_from_slice(bank.arguments(above));
        arguments[step as usize] = made;
        let symbol = bank.as_symbol(above).expect("a variable has no arguments");
        made = bank.apply(symbol, &arguments);
    }
    made
}

/// Every occurrence in a term, in preorder, with its place. Not for terms that share much.
pub fn preorder(bank: &Bank, term: TermId) -> Vec<(Vec<u32>, TermId)> {
    let mut found = Vec::new();
    let mut stack = vec![(Vec::new(), term)];
    while let Some((place, term)) = stack.pop() {
        for (step, &argument) in bank.arguments(term).iter().enumerate().rev() {
            let mut below: Vec<u32> = place.clone();
            below.push(step as u32);
            stack.push((below, argument));
        }
        found.push((place, term));
    }
    found
}

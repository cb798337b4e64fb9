//! Syntactic matching of one pattern.

use super::{Bank, Head, Substitution, TermId};

/// Extends `substitution` so that the pattern becomes the subject; on failure the substitution is
/// left in an unspecified state.
///
/// Costs at most one visit per occurrence in the pattern. The sorts must agree at the root.
pub fn match_term(
    bank: &Bank,
    pattern: TermId,
    subject: TermId,
    substitution: &mut Substitution,
) -> bool {
    if bank.sort(pattern) != bank.sort(subject) {
        return false;
    }
    let mut stack = vec![(pattern, subject)];
    while let Some((pattern, subject)) = stack.pop() {
        if bank.is_ground(pattern) {
            if pattern != subject {
                return false;
            }
            continue;
        }
        match bank.head(pattern) {
            Head::Variable(variable) => {
                let known = substitution.get(variable.index);
                if !known.is_some() {
                    substitution.set(variable.index, subject);
                } else if known != subject {
                    return false;
                }
            }
            head => {
                if bank.head(subject) != head {
                    return false;
                }
                let pairs = bank.arguments(pattern).iter().zip(bank.arguments(subject));
                stack.extend(pairs.map(|(p, s)| (*p, *s)));
            }
        }
    }
    true
}

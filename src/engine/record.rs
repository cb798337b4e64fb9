//! Where rules come from.

use crate::rewrite::{RuleId, Use};

/// A law, by the number that the caller of the engine gave it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct LawId(pub u32);

/// The equation that a derivation begins with.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Origin {
    /// A law.
    Law(LawId),
    /// A critical pair: a term that both rules rewrite, `outer` at the root and `inner` at a place
    /// in the side of `outer` that is looked for. The left side of the pair is what `inner` makes
    /// of the term, the right side what `outer` makes of it.
    Overlap {
        /// The rule at the root.
        outer: Use,
        /// The place of the other rule.
        at: Vec<u32>,
        /// The other rule.
        inner: Use,
    },
    /// A rule that was simplified further.
    Rule(RuleId),
}

/// A rewrite in a derivation: the rule, and the place of what it rewrites.
///
/// A rule may be used against its orientation here, since only equality matters.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct RecordStep {
    /// The rule.
    pub by: Use,
    /// The place.
    pub at: Vec<u32>,
}

/// How a rule was derived, complete enough to rebuild its proof without search.
///
/// The origin's two sides are rewritten by the steps; then, if `swapped`, they change places; then
/// the variables are numbered in the order of first occurrence.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Record {
    /// What it begins with.
    pub origin: Origin,
    /// What happened to the left side.
    pub left: Vec<RecordStep>,
    /// What happened to the right side.
    pub right: Vec<RecordStep>,
    /// Did the sides change places?
    pub swapped: bool,
}

impl Record {
    /// Every rule that the derivation uses, with repetitions.
    pub fn rules(&self) -> impl Iterator<Item = RuleId> + '_ {
        let origin = match &self.origin {
            Origin::Law(_) => [None, None],
            Origin::Overlap { outer, inner, .. } => [Some(outer.rule), Some(inner.rule)],
            Origin::Rule(rule) => [Some(*rule), None],
        };
        let steps = self.left.iter().chain(&self.right).map(|step| step.by.rule);
        origin.into_iter().flatten().chain(steps)
    }
}

//! Which steps lead from a term to what it was rewritten to.

use super::{Reason, System, Use};
use crate::term::TermId;
use rustc_hash::FxHashSet;

/// What justifies a step.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum StepBy {
    /// An instance of a rule.
    Rule(Use),
    /// Associativity and commutativity of the symbol at the root.
    Canonical,
}

/// One rewrite inside a term.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Step {
    /// What justifies it.
    pub by: StepBy,
    /// The place of the subterm that is rewritten.
    pub at: Vec<u32>,
    /// The subterm before.
    pub before: TermId,
    /// The subterm afterwards.
    pub after: TermId,
}

/// A link of the chain of one term: the next term, and why.
pub type Link = (TermId, Reason);

impl System {
    /// The links from one term to another that it was rewritten to, without going into what
    /// happened to the arguments; nothing if the table does not lead there.
    pub fn links(&self, from: TermId, to: TermId) -> Option<Vec<Link>> {
        let mut links = Vec::new();
        let mut here = from;
        while here != to {
            let Some(step) = self.table.step(here) else {
                return self.links_by_search(from, to);
            };
            links.push(step);
            here = step.0;
        }
        Some(links)
    }

    /// The same where steps have been cleared on the way: depth first over all that is known.
    fn links_by_search(&self, from: TermId, to: TermId) -> Option<Vec<Link>> {
        let mut seen = FxHashSet::default();
        let mut path: Vec<Link> = Vec::new();
        let options = |term: TermId| -> Vec<Link> {
            self.table
                .cleared(term)
                .chain(self.table.step(term))
                .collect()
        };
        let mut choices = vec![options(from)];
        while let Some(open) = choices.last_mut() {
            match open.pop() {
                Some(link) if link.0 == to => {
                    path.push(link);
                    return Some(path);
                }
                Some(link) if seen.insert(link.0) => {
                    path.push(link);
                    choices.push(options(link.0));
                }
                Some(_) => {}
                None => {
                    choices.pop();
                    path.pop();
                }
            }
        }
        None
    }

    /// All steps, from left to right, from one term to another that it was rewritten to.
    ///
    /// Nothing if the table does not lead there, or if there are more than `most` steps. Costs the
    /// steps times their depth: meant for terms of moderate size.
    pub fn explain(&self, from: TermId, to: TermId, most: usize) -> Option<Vec<Step>> {
        let mut steps = Vec::new();
        let mut stack = vec![(from, to, Vec::new())];
        while let Some((from, to, at)) = stack.pop() {
            if from == to {
                continue;
            }
            if steps.len() + stack.len() > most {
                return None;
            }
            match self.links(from, to) {
                Some(links) => {
                    let mut ends = Vec::with_capacity(links.len());
                    let mut here = from;
                    for (next, reason) in links {
                        ends.push((here, next, reason));
                        here = next;
                    }
                    // A chain of one link is taken; a longer one is split into its links.
                    if let [(before, after, reason)] = ends[..] {
                        match reason {
                            Reason::Arguments => self.split(before, after, at, &mut stack)?,
                            Reason::Rule(by) => {
                                steps.push(Step {
                                    by: StepBy::Rule(by),
                                    at,
                                    before,
                                    after,
                                });
                            }
                            Reason::Canonical => {
                                steps.push(Step {
                                    by: StepBy::Canonical,
                                    at,
                                    before,
                                    after,
                                });
                            }
                        }
                    } else {
                        let parts = ends.iter().rev();
                        stack.extend(parts.map(|(s, t, _)| (*s, *t, at.clone())));
                    }
                }
                None => self.split(from, to, at, &mut stack)?,
            }
        }
        Some(steps)
    }

    fn split(
        &self,
        from: TermId,
        to: TermId,
        at: Vec<u32>,
        stack: &mut Vec<(TermId, TermId, Vec<u32>)>,
    ) -> Option<()> {
        if self.bank.head(from) != self.bank.head(to) {
            return None;
        }
        let pairs = self
            .bank
            .arguments(from)
            .iter()
            .zip(self.bank.arguments(to));
        for (place, (&s, &t)) in pairs.enumerate().rev() {
            if s != t {
                let mut below = at.clone();
                below.push(place as u32);
                stack.push((s, t, below));
            }
        }
        Some(())
    }
}

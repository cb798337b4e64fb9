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

    /// What a rule makes of a term, to the letter: the table may have the subterms of that in
    /// normal form already.
    pub fn exact(&mut self, term: TermId, by: Use) -> TermId {
        self.matcher.rebind(
            &self.bank,
            self.rules[by.rule.index()].sides(by.backward).0,
            term,
        );
        self.replacement(term, by)
            .expect("what was rewritten can be rewritten again")
    }

    /// How many rule steps lead from one term to another that it was rewritten to, each distinct
    /// subterm's steps counted once; nothing if the table does not lead there.
    pub fn count_steps(&mut self, from: TermId, to: TermId) -> Option<usize> {
        let mut seen = FxHashSet::default();
        let mut count = 0;
        let mut stack = vec![(from, to)];
        while let Some((from, to)) = stack.pop() {
            if from == to || !seen.insert((from, to)) {
                continue;
            }
            let links = self
                .links(from, to)
                .unwrap_or_else(|| vec![(to, Reason::Arguments)]);
            let mut here = from;
            for (next, reason) in links {
                if let Reason::Rule(by) = reason {
                    count += 1;
                    stack.push((self.exact(here, by), next));
                } else if reason == Reason::Canonical {
                    count += 1;
                } else if self.bank.head(here) == self.bank.head(next) {
                    let arguments = self.bank.arguments(here).iter().copied();
                    stack.extend(arguments.zip(self.bank.arguments(next).iter().copied()));
                } else {
                    return None;
                }
                here = next;
            }
        }
        Some(count)
    }

    /// All steps, from left to right, from one term to another that it was rewritten to.
    ///
    /// Nothing if the table does not lead there, or if the steps and their places together would
    /// take more than `most` numbers. Costs the steps times their depth.
    pub fn explain(&mut self, from: TermId, to: TermId, most: usize) -> Option<Vec<Step>> {
        let mut steps = Vec::new();
        let mut places = Places::default();
        let mut taken = 0;
        let mut stack = vec![(from, to, Places::ROOT)];
        while let Some((from, to, at)) = stack.pop() {
            if from == to {
                continue;
            }
            if taken + stack.len() > most {
                return None;
            }
            let links = self.links(from, to);
            match links.as_deref() {
                // What happened to the arguments of two terms with the same head.
                None | Some([(_, Reason::Arguments)]) => {
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
                            stack.push((s, t, places.below(at, place as u32)));
                        }
                    }
                }
                Some([(after, reason)]) => {
                    let by = match *reason {
                        Reason::Rule(by) => StepBy::Rule(by),
                        _ => StepBy::Canonical,
                    };
                    let made = match *reason {
                        Reason::Rule(by) => self.exact(from, by),
                        _ => *after,
                    };
                    stack.push((made, *after, at));
                    let at = places.path(at);
                    taken += 1 + at.len();
                    steps.push(Step {
                        by,
                        at,
                        before: from,
                        after: made,
                    });
                }
                Some(links) => {
                    let starts = std::iter::once(from).chain(links.iter().map(|link| link.0));
                    let mut parts: Vec<_> =
                        starts.zip(links).map(|(s, (t, _))| (s, *t, at)).collect();
                    parts.reverse();
                    stack.extend(parts);
                }
            }
        }
        Some(steps)
    }
}

/// Places as linked lists, so that going down costs the same at every depth.
#[derive(Default)]
struct Places {
    cells: Vec<(u32, u32)>,
}

impl Places {
    const ROOT: u32 = u32::MAX;

    fn below(&mut self, at: u32, step: u32) -> u32 {
        self.cells.push((at, step));
        self.cells.len() as u32 - 1
    }

    fn path(&self, mut at: u32) -> Vec<u32> {
        let mut path = Vec::new();
        while at != Self::ROOT {
            let (above, step) = self.cells[at as usize];
            path.push(step);
            at = above;
        }
        path.reverse();
        path
    }
}

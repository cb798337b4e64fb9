//! Chains of equalities from the engine's records and table.
//!
//! The engine keeps which rule was used where; here that becomes terms, one after the other, each
//! step with the equation that it cites. Nothing is searched for.

use crate::engine::{Engine, LawId, Origin, RecordStep, ReplayError};
use crate::rewrite::{Reason, RuleId, StepBy, Use};
use crate::term::{Substitution, TermId, instantiate, match_term, replace_at, subterm_at};
use rustc_hash::FxHashMap;

/// The equation that a step cites.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(super) enum Cited {
    /// A law of the theory.
    Law(LawId),
    /// A rule, as a lemma.
    Rule(RuleId),
    /// That a ground term equals its normal form, as a lemma.
    Ground(TermId, TermId),
    /// An equation with variables numbered from 0, as a lemma.
    Pattern(TermId, TermId),
}

/// One step: the subterm `before` at a place becomes `after`, and the whole becomes `to`.
#[derive(Clone, Debug)]
pub(super) struct Link {
    pub(super) by: Cited,
    /// From the left to the right side of the cited equation?
    pub(super) forward: bool,
    pub(super) at: Vec<u32>,
    pub(super) before: TermId,
    pub(super) after: TermId,
    pub(super) to: TermId,
}

/// A chain from a term through the steps.
#[derive(Clone, Debug)]
pub(super) struct Chain {
    pub(super) from: TermId,
    pub(super) links: Vec<Link>,
}

impl Chain {
    pub(super) fn new(from: TermId) -> Self {
        Chain {
            from,
            links: Vec::new(),
        }
    }

    pub(super) fn end(&self) -> TermId {
        self.links.last().map_or(self.from, |link| link.to)
    }

    /// The chain read from its end to its start.
    pub(super) fn reversed(self) -> Chain {
        let from = self.end();
        let mut wholes: Vec<TermId> = self.links.iter().map(|link| link.to).collect();
        wholes.insert(0, self.from);
        let links = self
            .links
            .into_iter()
            .enumerate()
            .rev()
            .map(|(place, link)| Link {
                forward: !link.forward,
                before: link.after,
                after: link.before,
                to: wholes[place],
                ..link
            });
        Chain {
            from,
            links: links.collect(),
        }
    }

    /// Goes on with a chain that begins where this one ends.
    pub(super) fn then(mut self, next: Chain) -> Chain {
        debug_assert_eq!(self.end(), next.from);
        self.links.extend(next.links);
        self
    }

    /// Leaves out what lies between two visits to the same term.
    pub(super) fn without_detours(self) -> Chain {
        let mut kept: Vec<Link> = Vec::new();
        let mut place_of = FxHashMap::from_iter([(self.from, 0)]);
        for link in self.links {
            if let Some(&place) = place_of.get(&link.to) {
                for gone in kept.drain(place..) {
                    place_of.remove(&gone.to);
                }
                place_of.insert(link.to, place);
            } else {
                kept.push(link.clone());
                place_of.insert(link.to, kept.len());
            }
        }
        Chain {
            from: self.from,
            links: kept,
        }
    }

    /// Goes on with the steps of another chain, inside the argument at a place.
    pub(super) fn append_below(&mut self, engine: &mut Engine, at: &[u32], below: Chain) {
        for link in below.links {
            let place = [at, &link.at].concat();
            self.push(engine, link.by, link.forward, place, link.after);
        }
    }

    pub(super) fn push(
        &mut self,
        engine: &mut Engine,
        by: Cited,
        forward: bool,
        at: Vec<u32>,
        after: TermId,
    ) {
        let whole = self.end();
        let bank = &mut engine.system.bank;
        let before = subterm_at(bank, whole, &at).expect("a recorded place exists");
        let to = replace_at(bank, whole, &at, after);
        self.links.push(Link {
            by,
            forward,
            at,
            before,
            after,
            to,
        });
    }
}

/// The equation that stands for a rule: the law, if the rule is nothing but a law, and whether the
/// two have their sides the other way round.
pub(super) fn cited(engine: &Engine, rule: RuleId) -> (Cited, bool) {
    let record = engine.record(rule);
    match record.origin {
        Origin::Law(law) if record.left.is_empty() && record.right.is_empty() => {
            (Cited::Law(law), record.swapped)
        }
        _ => (Cited::Rule(rule), false),
    }
}

/// The chain from the left to the right side of a rule, by its record.
///
/// The terms of the chain have variables of their own numbering; the ends are the rule's sides
/// after renaming. New terms stay in the bank: the caller rolls back.
pub(super) fn of_rule(engine: &mut Engine, rule: RuleId) -> Result<Chain, ReplayError> {
    let record = engine.record(rule).clone();
    let (left, right) = engine.origin(&record.origin)?;
    let middle = match &record.origin {
        Origin::Law(law) => {
            let mut chain = Chain::new(left);
            chain.push(engine, Cited::Law(*law), true, Vec::new(), right);
            chain
        }
        Origin::Rule(from) => {
            let mut chain = Chain::new(left);
            let (by, flipped) = cited(engine, *from);
            chain.push(engine, by, !flipped, Vec::new(), right);
            chain
        }
        Origin::Overlap { outer, at, inner } => {
            let peak = engine.peak(*outer, at, *inner)?;
            let mut up = Chain::new(peak.top);
            let made = subterm_at(&engine.system.bank, peak.left, at)
                .ok_or_else(|| ReplayError::NoSuchPlace(at.clone()))?;
            push_use(&mut up, engine, *inner, at.clone(), made);
            let mut down = Chain::new(peak.top);
            push_use(&mut down, engine, *outer, Vec::new(), peak.right);
            up.reversed().then(down)
        }
    };
    let before = follow(engine, left, &record.left)?.reversed();
    let after = follow(engine, right, &record.right)?;
    let chain = before.then(middle).then(after).without_detours();
    Ok(if record.swapped {
        chain.reversed()
    } else {
        chain
    })
}

pub(super) fn push_use(
    chain: &mut Chain,
    engine: &mut Engine,
    by: Use,
    at: Vec<u32>,
    after: TermId,
) {
    let (cite, flipped) = cited(engine, by.rule);
    chain.push(engine, cite, by.backward == flipped, at, after);
}

fn follow(engine: &mut Engine, from: TermId, steps: &[RecordStep]) -> Result<Chain, ReplayError> {
    let mut chain = Chain::new(from);
    for step in steps {
        let to = engine.apply_step(chain.end(), step)?;
        let after = subterm_at(&engine.system.bank, to, &step.at)
            .ok_or_else(|| ReplayError::NoSuchPlace(step.at.clone()))?;
        push_use(&mut chain, engine, step.by, step.at.clone(), after);
    }
    Ok(chain)
}

/// The chain from a ground term to what the table has rewritten it to, in single steps.
///
/// Nothing if that takes too many numbers to write down; then see [`of_ground_lemma`].
pub(super) fn of_table(
    engine: &mut Engine,
    from: TermId,
    to: TermId,
    most: usize,
) -> Option<Chain> {
    let steps = engine.system.explain(from, to, most)?;
    let mut chain = Chain::new(from);
    let mut taken = 0;
    for step in steps {
        match step.by {
            StepBy::Rule(by) => push_use(&mut chain, engine, by, step.at, step.after),
            StepBy::Canonical => {
                for (by, below) in engine.system.canonical_steps(step.before, step.after) {
                    let at = [&step.at[..], &below[..]].concat();
                    taken += at.len() + 1;
                    if taken > most {
                        return None;
                    }
                    let here = subterm_at(&engine.system.bank, chain.end(), &at)?;
                    let after = rewritten(engine, here, by)?;
                    push_use(&mut chain, engine, by, at, after);
                }
            }
        }
    }
    Some(chain.without_detours())
}

pub(super) fn rewritten(engine: &mut Engine, term: TermId, by: Use) -> Option<TermId> {
    let (from, to) = engine.system.rule(by.rule).sides(by.backward);
    let mut substitution = Substitution::default();
    match_term(&engine.system.bank, from, term, &mut substitution)
        .then(|| instantiate(&mut engine.system.bank, to, &substitution))
}

/// How many numbers the chain of one argument may take before it becomes a lemma.
const INLINE: usize = 4;

/// The chain of one ground term by its own steps, in which what happened to an argument is one
/// step by a lemma; and these lemmas.
pub(super) fn of_ground_lemma(
    engine: &mut Engine,
    from: TermId,
    to: TermId,
    most: usize,
) -> Option<(Chain, Vec<(TermId, TermId)>)> {
    let mut chain = Chain::new(from);
    let mut needed = Vec::new();
    let mut stack = vec![(from, to)];
    while let Some((here, next)) = stack.pop() {
        if here == next {
            continue;
        }
        let links = engine.system.links(here, next);
        match links.as_deref() {
            None | Some([(_, Reason::Arguments)]) => {
                push_arguments(&mut chain, engine, next, &mut needed)?;
            }
            // What a rule makes may have its subterms in normal form already: that they come to
            // it is not the rule's doing, and is written down like all that happens to arguments.
            Some([(_, Reason::Rule(by))]) => {
                let made = engine.system.exact(here, *by);
                push_use(&mut chain, engine, *by, Vec::new(), made);
                stack.push((made, next));
            }
            Some([(_, Reason::Canonical)]) => {
                chain = chain.then(of_table(engine, here, next, most)?);
            }
            Some(links) => {
                let starts = std::iter::once(here).chain(links.iter().map(|link| link.0));
                let parts = starts.zip(links).map(|(s, (t, _))| (s, *t));
                stack.extend(parts.collect::<Vec<_>>().into_iter().rev());
            }
        }
    }
    Some((chain, needed))
}

/// Goes on to a term with the same head, argument by argument.
fn push_arguments(
    chain: &mut Chain,
    engine: &mut Engine,
    next: TermId,
    needed: &mut Vec<(TermId, TermId)>,
) -> Option<()> {
    let here = chain.end();
    if engine.system.bank.head(here) != engine.system.bank.head(next) {
        return None;
    }
    for place in 0..engine.system.bank.arguments(here).len() {
        let s = engine.system.bank.arguments(here)[place];
        let t = engine.system.bank.arguments(next)[place];
        if s == t {
            continue;
        }
        let at = vec![place as u32];
        match of_table(engine, s, t, INLINE) {
            Some(below) => chain.append_below(engine, &at, below),
            None => {
                needed.push((s, t));
                chain.push(engine, Cited::Ground(s, t), true, at, t);
            }
        }
    }
    Some(())
}

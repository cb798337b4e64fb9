//! Shorter proofs: lemmas that are used once, or that are a single step, become part of what uses
//! them; what goes in a circle and lemmas that nobody uses go.

use crate::proof::{Lemma, Name, Node, Proof, Step, TermIndex, Terms, Way};
use rustc_hash::FxHashMap;

/// A lemma with a longer chain than this stays a lemma, even if it is used once.
const LONGEST_INLINED: usize = 8;
/// A chain does not grow beyond this many steps.
const LONGEST_CHAIN: usize = 40;
/// In terms larger than this nothing is inlined: the lemma says more.
const LARGEST: u64 = 120;
/// Proofs with more steps than this are left as they are.
const MOST_STEPS: usize = 20_000;
const PASSES: usize = 6;

/// How many steps a proof has, those of its lemmas included.
pub(super) fn steps(proof: &Proof) -> usize {
    let lemmas = proof.lemmas.iter().map(|lemma| lemma.steps.len());
    lemmas.sum::<usize>() + proof.claim.steps.len()
}

/// The proof, shortened. What it proves, and from which laws at most, stays.
pub(super) fn shorten(mut proof: Proof) -> Proof {
    if steps(&proof) > MOST_STEPS {
        return proof;
    }
    for _ in 0..PASSES {
        let before = (steps(&proof), proof.lemmas.len());
        pass(&mut proof);
        proof.drop_unused_lemmas();
        if (steps(&proof), proof.lemmas.len()) == before {
            break;
        }
    }
    let uses = uses(&proof);
    proof.laws.retain(|law| uses.contains_key(&law.name));
    proof
}

fn pass(proof: &mut Proof) {
    let uses = uses(proof);
    let Proof {
        terms,
        lemmas,
        claim,
        ..
    } = proof;
    let mut inlined: FxHashMap<Name, Lemma> = FxHashMap::default();
    for lemma in lemmas {
        let left = lemma.equation.left;
        lemma.steps = rebuilt(terms, left, std::mem::take(&mut lemma.steps), &inlined);
        let once = uses.get(&lemma.equation.name) == Some(&1);
        let short = lemma.steps.len() <= if once { LONGEST_INLINED } else { 1 };
        if short && lemma.equation.when.is_empty() {
            inlined.insert(lemma.equation.name, lemma.clone());
        }
    }
    claim.steps = rebuilt(
        terms,
        claim.left,
        std::mem::take(&mut claim.steps),
        &inlined,
    );
    if let [only] = &claim.steps[..]
        && let Some(lemma) = proof.lemmas.iter().find(|l| l.equation.name == only.by)
    {
        // A claim that is a lemma is better proved than cited.
        let whole = FxHashMap::from_iter([(lemma.equation.name, lemma.clone())]);
        let steps = std::mem::take(&mut claim.steps);
        claim.steps = rebuilt(&mut proof.terms, claim.left, steps, &whole);
    }
}

fn uses(proof: &Proof) -> FxHashMap<Name, usize> {
    let mut uses = FxHashMap::default();
    let chains = proof.lemmas.iter().map(|lemma| &lemma.steps);
    for step in chains.chain([&proof.claim.steps]).flatten() {
        *uses.entry(step.by).or_default() += 1;
    }
    uses
}

/// The chain with the steps by these lemmas replaced by the lemmas' own chains.
fn rebuilt(
    terms: &mut Terms,
    left: TermIndex,
    steps: Vec<Step>,
    inlined: &FxHashMap<Name, Lemma>,
) -> Vec<Step> {
    let mut here = left;
    let mut chain: Vec<Step> = Vec::with_capacity(steps.len());
    let mut room = LONGEST_CHAIN.saturating_sub(steps.len());
    for step in steps {
        let to = step.to;
        match inlined.get(&step.by) {
            Some(lemma)
                if terms.size(here).max(terms.size(to)) <= LARGEST
                    && lemma.steps.len() <= room + 1 =>
            {
                room = (room + 1).saturating_sub(lemma.steps.len());
                splice(terms, here, &step, lemma, &mut chain);
            }
            _ => chain.push(step),
        }
        here = to;
    }
    without_detours(left, chain)
}

/// Appends the chain of a lemma, as the step uses it, to another chain that has come to `whole`.
pub(super) fn splice(
    terms: &mut Terms,
    whole: TermIndex,
    step: &Step,
    lemma: &Lemma,
    chain: &mut Vec<Step>,
) {
    let with: FxHashMap<Name, TermIndex> = step.with.iter().copied().collect();
    let mut known = FxHashMap::default();
    let starts = std::iter::once(lemma.equation.left).chain(lemma.steps.iter().map(|s| s.to));
    let mut links: Vec<(TermIndex, &Step)> = starts.zip(&lemma.steps).collect();
    if step.way == Way::Backward {
        links.reverse();
    }
    for (from, inner) in links {
        let (way, to) = match (step.way, inner.way) {
            (Way::Forward, way) => (way, inner.to),
            (Way::Backward, Way::Forward) => (Way::Backward, from),
            (Way::Backward, Way::Backward) => (Way::Forward, from),
        };
        let to = instance(terms, to, &with, &mut known);
        let values = inner
            .with
            .iter()
            .map(|(name, value)| (*name, instance(terms, *value, &with, &mut known)));
        let with = values.collect();
        chain.push(Step {
            by: inner.by,
            way,
            at: [&step.at[..], &inner.at[..]].concat(),
            with,
            to: replaced(terms, whole, &step.at, to),
            given: Vec::new(),
        });
    }
}

/// A term with its variables replaced, distinct subterms once each.
fn instance(
    terms: &mut Terms,
    term: TermIndex,
    with: &FxHashMap<Name, TermIndex>,
    known: &mut FxHashMap<TermIndex, TermIndex>,
) -> TermIndex {
    let mut stack = vec![term];
    while let Some(&top) = stack.last() {
        if known.contains_key(&top) {
            stack.pop();
            continue;
        }
        let made = match terms.node(top) {
            Node::Variable(name) => with.get(&name).copied().unwrap_or(top),
            Node::Apply(name, below) => {
                let before = stack.len();
                stack.extend(below.iter().filter(|a| !known.contains_key(a)));
                if stack.len() > before {
                    continue;
                }
                let arguments: Vec<TermIndex> = below.iter().map(|a| known[a]).collect();
                terms.apply_named(name, &arguments)
            }
        };
        known.insert(top, made);
        stack.pop();
    }
    known[&term]
}

/// The term with another subterm at a place that it has.
fn replaced(terms: &mut Terms, whole: TermIndex, at: &[u32], by: TermIndex) -> TermIndex {
    let mut spine = Vec::with_capacity(at.len());
    let mut here = whole;
    for &step in at {
        spine.push(here);
        here = terms.arguments(here)[step as usize];
    }
    spine
        .iter()
        .zip(at)
        .rev()
        .fold(by, |made, (&above, &step)| match terms.node(above) {
            Node::Apply(name, below) => {
                let mut arguments = below.to_vec();
                arguments[step as usize] = made;
                terms.apply_named(name, &arguments)
            }
            Node::Variable(_) => made,
        })
}

/// Leaves out what lies between two visits to the same term.
pub(super) fn without_detours(left: TermIndex, chain: Vec<Step>) -> Vec<Step> {
    let mut kept: Vec<Step> = Vec::with_capacity(chain.len());
    let mut place_of = FxHashMap::from_iter([(left, 0)]);
    for step in chain {
        match place_of.get(&step.to) {
            Some(&place) => {
                for gone in kept.drain(place..) {
                    place_of.remove(&gone.to);
                }
                place_of.insert(step.to, place);
            }
            None => {
                kept.push(step);
                place_of.insert(kept[kept.len() - 1].to, kept.len());
            }
        }
    }
    kept
}

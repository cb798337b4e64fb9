//! Long rewritings of ground terms in few steps, by lemmas that are used again and again.
//!
//! Rewriting from the inside out, with one lemma per distinct subterm, takes as many lemmas as
//! there were steps. Here the outer layers of a term are rewritten by themselves, the subterms
//! below them left alone; the steps are then generalised as far as they allow, and what comes out
//! is a *pattern*: a lemma whose variables stand for everything that the steps did not look at.
//! Where the same layers occur with other subterms, the pattern is used again in one step.
//!
//! Generalising a chain of steps to the most general terms that allow it is explanation-based
//! generalisation (Mitchell, Keller & Kedar-Cabelli 1986), here by unification with the sides of
//! the rules. Only oriented rules without open variables take part: what they do to a term they do
//! to its instances, so patterns go down in the order as well and rewriting by them ends.

use super::derivation::{Chain, Cited, push_use, rewritten};
use crate::engine::Engine;
use crate::rewrite::{Limits, StepBy, Use};
use crate::term::{Bank, Scoped, Side, Substitution, TermId, Unifier, Variable, match_term};
use crate::term::{instantiate, replace_at, subterm_at};
use rustc_hash::FxHashMap;

/// The layers of a term have at most so many places.
const MOST_PLACES: usize = 2_048;
/// The steps of one pattern take at most so many numbers.
const MOST_NUMBERS: usize = 1 << 18;
/// More patterns than this are no help.
const MOST_PATTERNS: usize = 100;
/// No more facts about ground terms than this are written.
const MOST_FACTS: usize = 50_000;
/// Rewriting the layers may take so many new terms.
const MOST_TERMS: usize = 1 << 24;
/// Patterns say less to a reader than the steps that they stand for, so they have to save this many
/// times their number.
const LEAST_GAIN: usize = 4;
/// The subterms left alone become question constants from this rank on, above those of questions.
const FIRST_RANK: u32 = 1 << 24;

/// A lemma with its chain, to be written before what uses it.
pub(super) struct Part {
    /// What the chain proves, as steps cite it.
    pub(super) proves: Cited,
    pub(super) chain: Chain,
}

/// A rewriting by patterns.
pub(super) struct Outline {
    /// The lemmas, each after those that it uses.
    pub(super) parts: Vec<Part>,
    /// The chain of the term itself.
    pub(super) chain: Chain,
}

/// How many layers are rewritten at a time when it is about so many steps in all: a pattern of
/// `n` layers has up to `n²` steps with terms of `n` symbols, and the fewer uses the larger it is.
fn layers(steps: usize) -> usize {
    ((steps as f64).powf(0.25) * 1.2).clamp(4.0, 64.0) as usize
}

/// The chain from a ground term to its normal form, which took so many steps, by patterns.
///
/// Nothing if patterns do not get there, or are no help. New terms stay in the bank.
pub(super) fn outline(
    engine: &mut Engine,
    from: TermId,
    to: TermId,
    steps: usize,
) -> Option<Outline> {
    let mut limits = Limits::none();
    limits.terms = engine.system.bank.len() + MOST_TERMS;
    let mut work = Patterns {
        engine,
        limits,
        layers: layers(steps),
        known: Vec::new(),
        facts: FxHashMap::default(),
        parts: Vec::new(),
    };
    let chain = work.run(from, to)?;
    let parts = work.parts;
    let links = parts.iter().map(|part| part.chain.links.len());
    let pays = (links.sum::<usize>() + chain.links.len()) * LEAST_GAIN <= steps;
    pays.then_some(Outline { parts, chain })
}

struct Patterns<'e> {
    engine: &'e mut Engine,
    limits: Limits,
    /// How many layers are rewritten at a time.
    layers: usize,
    /// The sides of the patterns, those with the largest left sides first.
    known: Vec<(TermId, TermId)>,
    /// Ground terms whose chain to the normal form is written.
    facts: FxHashMap<TermId, TermId>,
    parts: Vec<Part>,
}

/// A term that is being rewritten.
struct Frame {
    chain: Chain,
    goal: TermId,
    layers: usize,
}

/// The outer layers of a term.
struct Layers {
    /// Every place with the subterm there, outermost first; the last layer has whole subterms.
    places: Vec<(Vec<u32>, TermId)>,
    /// How many of these are above the last layer.
    inner: usize,
}

impl Patterns<'_> {
    fn run(&mut self, from: TermId, goal: TermId) -> Option<Chain> {
        let mut stack = vec![self.frame(from, goal)];
        loop {
            let mut frame = stack.pop()?;
            let here = frame.chain.end();
            if here == frame.goal {
                if stack.is_empty() {
                    return Some(frame.chain);
                }
                self.keep_fact(frame.chain)?;
                continue;
            }
            if self.use_pattern(&mut frame) {
                stack.push(frame);
                continue;
            }
            let layers = self.cut(here, frame.layers)?;
            if self.new_pattern(here, &layers)? {
                stack.push(frame);
                continue;
            }
            let open = self.use_facts(&mut frame, &layers)?;
            let moved = frame.chain.end() != here || !open.is_empty();
            if !moved {
                // Nothing to do in these layers, nor below them: it takes more layers at once.
                if layers.inner == layers.places.len() {
                    return None;
                }
                frame.layers *= 2;
            }
            stack.push(frame);
            for (term, normal) in open {
                let frame = self.frame(term, normal);
                stack.push(frame);
            }
        }
    }

    fn frame(&self, from: TermId, goal: TermId) -> Frame {
        Frame {
            chain: Chain::new(from),
            goal,
            layers: self.layers,
        }
    }

    fn keep_fact(&mut self, chain: Chain) -> Option<()> {
        let (from, to) = (chain.from, chain.end());
        if self.facts.insert(from, to).is_none() {
            let proves = Cited::Ground(from, to);
            self.parts.push(Part { proves, chain });
        }
        (self.facts.len() <= MOST_FACTS).then_some(())
    }

    /// Goes on by a pattern at the root, if there is one.
    fn use_pattern(&mut self, frame: &mut Frame) -> bool {
        let here = frame.chain.end();
        let found = self.known.iter().find_map(|&(left, right)| {
            let mut values = Substitution::default();
            match_term(&self.engine.system.bank, left, here, &mut values)
                .then_some((left, right, values))
        });
        let Some((left, right, values)) = found else {
            return false;
        };
        let after = instantiate(&mut self.engine.system.bank, right, &values);
        let by = Cited::Pattern(left, right);
        frame.chain.push(self.engine, by, true, Vec::new(), after);
        frame.layers = self.layers;
        true
    }

    /// The outer layers; nothing if they have too many places.
    fn cut(&self, term: TermId, layers: usize) -> Option<Layers> {
        let bank = &self.engine.system.bank;
        let mut places = vec![(Vec::new(), term)];
        let mut start = 0;
        for _ in 0..layers {
            let end = places.len();
            for number in start..end {
                let (place, term) = places[number].clone();
                for (step, &argument) in bank.arguments(term).iter().enumerate() {
                    places.push(([&place[..], &[step as u32]].concat(), argument));
                }
                if places.len() > MOST_PLACES {
                    return None;
                }
            }
            start = end;
        }
        // Constants in the last layer are no less there than in the others.
        let (mut inner, last): (Vec<_>, Vec<_>) = {
            let last = places.split_off(start);
            let is_whole = |place: &(Vec<u32>, TermId)| bank.arguments(place.1).is_empty();
            let (constants, last): (Vec<_>, Vec<_>) = last.into_iter().partition(is_whole);
            places.extend(constants);
            (places, last)
        };
        let count = inner.len();
        inner.extend(last);
        Some(Layers {
            places: inner,
            inner: count,
        })
    }

    /// Makes a pattern from what happens to these layers by themselves. False if nothing does.
    fn new_pattern(&mut self, here: TermId, layers: &Layers) -> Option<bool> {
        let below = &layers.places[layers.inner..];
        let mut numbers: FxHashMap<TermId, u32> = FxHashMap::default();
        let mut alone = here;
        for (place, term) in below {
            let next = numbers.len() as u32;
            let number = *numbers.entry(*term).or_insert(next);
            let system = &mut self.engine.system;
            let sort = system.bank.sort(*term);
            let constant = system.question_constant(FIRST_RANK + number, sort);
            alone = replace_at(&mut system.bank, alone, place, constant);
        }
        let system = &mut self.engine.system;
        let normal = system.normal_form(alone, &mut self.limits).ok()?;
        if normal == alone {
            return Some(false);
        }
        let steps = system.explain(alone, normal, MOST_NUMBERS)?;
        let steps: Option<Vec<(Use, Vec<u32>)>> = steps
            .into_iter()
            .map(|step| match step.by {
                StepBy::Rule(by) if self.is_uniform(by) => Some((by, step.at)),
                _ => None,
            })
            .collect();
        self.keep_pattern(alone, &steps?)?;
        Some(true)
    }

    /// Does the rule decrease every instance, and leave nothing open?
    fn is_uniform(&self, by: Use) -> bool {
        let rule = self.engine.system.rule(by.rule);
        rule.oriented && !by.backward && !rule.is_open()
    }

    fn keep_pattern(&mut self, term: TermId, steps: &[(Use, Vec<u32>)]) -> Option<()> {
        let left = self.generalised(term, steps)?;
        let mut chain = Chain::new(left);
        for (by, at) in steps {
            let here = subterm_at(&self.engine.system.bank, chain.end(), at)?;
            let after = rewritten(self.engine, here, *by)?;
            push_use(&mut chain, self.engine, *by, at.clone(), after);
        }
        let chain = chain.without_detours();
        let sides = (left, chain.end());
        let bank = &self.engine.system.bank;
        let smaller = |known: &(TermId, TermId)| bank.size(known.0) < bank.size(left);
        let place = self.known.iter().position(smaller);
        self.known.insert(place.unwrap_or(self.known.len()), sides);
        let proves = Cited::Pattern(sides.0, sides.1);
        self.parts.push(Part { proves, chain });
        (self.known.len() <= MOST_PATTERNS).then_some(())
    }

    /// The most general term that allows the same steps: at first every constant of the term is a
    /// variable of its own, and each step makes them as special as the rule needs.
    fn generalised(&mut self, term: TermId, steps: &[(Use, Vec<u32>)]) -> Option<TermId> {
        let system = &mut self.engine.system;
        let mut left = with_variables(&mut system.bank, term);
        let mut here = left;
        let mut unifier = Unifier::default();
        for (by, at) in steps {
            let (from, to) = system.rule(by.rule).sides(by.backward);
            let bank = &mut system.bank;
            let of = |term, side| Scoped { term, side };
            let changed = subterm_at(bank, here, at)?;
            unifier.reset();
            if !unifier.unify(bank, of(changed, Side::Left), of(from, Side::Right)) {
                return None;
            }
            left = unifier.build(bank, of(left, Side::Left));
            let whole = unifier.build(bank, of(here, Side::Left));
            let after = unifier.build(bank, of(to, Side::Right));
            here = replace_at(bank, whole, at, after);
        }
        Some(left)
    }

    /// Replaces the subterms of the last layer by their normal forms; gives those whose chains
    /// have to be found before.
    fn use_facts(&mut self, frame: &mut Frame, layers: &Layers) -> Option<Vec<(TermId, TermId)>> {
        let mut open = Vec::new();
        let mut steps = Vec::new();
        for (place, term) in &layers.places[layers.inner..] {
            let system = &mut self.engine.system;
            let normal = system.normal_form(*term, &mut self.limits).ok()?;
            if normal == *term {
                continue;
            }
            steps.push((place, *term, normal));
            if self.facts.get(term) != Some(&normal) && !open.contains(&(*term, normal)) {
                open.push((*term, normal));
            }
        }
        if open.is_empty() {
            for (place, term, normal) in steps {
                let by = Cited::Ground(term, normal);
                frame
                    .chain
                    .push(self.engine, by, true, place.clone(), normal);
                frame.layers = self.layers;
            }
        }
        Some(open)
    }
}

/// The term with a variable of its own for every occurrence of a constant. Its occurrences are
/// few: they have been counted.
fn with_variables(bank: &mut Bank, term: TermId) -> TermId {
    let mut count = 0;
    let mut built: Vec<TermId> = Vec::new();
    let mut stack = vec![(term, false)];
    while let Some((top, is_built)) = stack.pop() {
        let arity = bank.arguments(top).len();
        match bank.as_symbol(top) {
            Some(symbol) if is_built => {
                let start = built.len() - arity;
                let made = bank.apply(symbol, &built[start..]);
                built.truncate(start);
                built.push(made);
            }
            Some(_) if arity > 0 => {
                stack.push((top, true));
                stack.extend(bank.arguments(top).iter().rev().map(|a| (*a, false)));
            }
            _ => {
                let sort = bank.sort(top);
                built.push(bank.variable(Variable { index: count, sort }));
                count += 1;
            }
        }
    }
    built[0]
}

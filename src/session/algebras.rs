//! The finite algebras of a session: those that are known, and the search for more.

use super::naming::{Naming, naming, plain_term};
use crate::algebra::{
    Algebra, Counterexample, Equation, Known, Limits, Outcome, Pool, PoolOutcome, Problem,
    SatSearch, Search, Signature,
};
use crate::proof::{self, AlgebraClaim, AlgebraEvidence, Terms};
use crate::term::{Symbol, TermId, Variable};
use crate::theory::Theory;
use std::sync::Arc;
use std::sync::atomic::Ordering;
use std::time::{Duration, Instant};

/// An algebra that the session keeps.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Kept {
    /// Its number, which no other gets: `A2`.
    pub(super) number: u32,
    /// Are all smaller ones known not to do for the question that it was found for?
    pub(super) smallest: bool,
    /// The question that it was found for.
    pub(super) question: String,
}

/// All algebras, and what the searches need from one question to the next.
#[derive(Default)]
pub(super) struct Algebras {
    known: Known,
    kept: Vec<Kept>,
    next_number: u32,
    /// The laws that the known algebras obey, and the ids that their terms have.
    laws: Vec<(TermId, TermId)>,
    symbols: usize,
    lineage: u32,
    pool: Option<Pool>,
    /// The search for the last question, to be gone on with.
    last: Option<((TermId, TermId), Search, Option<SatSearch>)>,
}

/// A search that is to be run, on any thread.
pub(super) struct Hunt {
    pool: Option<Pool>,
    search: Search,
    /// The other search, if the problem suits it.
    sat: Option<SatSearch>,
    claim: Equation,
    question: (TermId, TermId),
    /// Has the pool been asked already?
    pool_done: bool,
}

/// What came of a search.
pub(super) struct Caught {
    hunt: Hunt,
    pub(super) found: Option<Box<Counterexample>>,
    /// Is every size that was asked for done?
    pub(super) exhausted: bool,
    /// All algebras with at most so many elements are ruled out.
    pub(super) ruled_out: u32,
    /// Sizes that need too much memory.
    pub(super) given_up: bool,
}

/// Searches without a bound of their own end at this many elements.
pub(super) const LARGEST: u32 = 60;

impl Algebras {
    /// Drops the algebras that a law, perhaps a new one, refutes.
    pub(super) fn catch_up(&mut self, theory: &Theory, lineage: u32) {
        let laws: Vec<_> = theory
            .laws
            .iter()
            .map(|law| (law.left, law.right))
            .collect();
        let symbols = theory.bank.symbols().len();
        if (self.lineage, self.symbols) == (lineage, symbols) && self.laws == laws {
            return;
        }
        let (signature, equations) = compiled(theory);
        let mut limits = Limits::none();
        if let Ok(dropped) = self.known.update(&signature, &equations, &mut limits) {
            let mut place = 0;
            self.kept.retain(|_| {
                place += 1;
                !dropped.contains(&(place - 1))
            });
        }
        self.pool = Some(Pool::new(signature, equations));
        self.last = None;
        (self.lineage, self.symbols, self.laws) = (lineage, symbols, laws);
    }

    /// The algebras with what is known of them.
    pub(super) fn all(&self) -> impl Iterator<Item = (&Kept, &Algebra)> {
        self.kept.iter().zip(self.known.algebras())
    }

    /// A known algebra in which the sides differ.
    pub(super) fn refute(
        &mut self,
        theory: &Theory,
        (left, right): (TermId, TermId),
        limits: &mut Limits,
    ) -> Option<(Kept, Counterexample)> {
        let claim = Equation::compile(&theory.bank, left, right);
        let (place, found) = self.known.refute(&claim, limits).ok()??;
        let kept = self.kept[place].clone();
        let algebra = self.known.algebras()[place].clone();
        let (assignment, values) = (found.assignment, found.values);
        Some((
            kept,
            Counterexample {
                algebra,
                assignment,
                values,
                smallest: false,
            },
        ))
    }

    /// A search for an algebra in which the sides differ: the one for the same question, where it
    /// was stopped, or a new one.
    pub(super) fn hunt(
        &mut self,
        theory: &Theory,
        question: (TermId, TermId),
        largest: u32,
    ) -> Hunt {
        let known = self
            .last
            .take()
            .filter(|(last, ..)| *last == question && largest == LARGEST);
        let pool_done = known.is_some();
        let claim = Equation::compile(&theory.bank, question.0, question.1);
        let known = known.map(|(_, search, sat)| (search, sat));
        let (search, sat) = known.unwrap_or_else(|| {
            let laws = theory.laws.iter().map(|law| (law.left, law.right));
            let sorts = theory.signature.sorts().len();
            let problem = Arc::new(Problem::new(&theory.bank, sorts, laws, question));
            let suits = SatSearch::suits(&problem);
            let sat = suits.then(|| SatSearch::new(problem.clone(), largest));
            (Search::new(problem, largest), sat)
        });
        Hunt {
            pool: self.pool.take(),
            search,
            sat,
            claim,
            question,
            pool_done,
        }
    }

    /// Takes back what a search was given.
    pub(super) fn return_from(&mut self, caught: Caught) {
        let mut hunt = caught.hunt;
        self.pool = hunt.pool;
        // A question that is never asked again must not hold on to the memory of the solvers.
        hunt.sat.iter_mut().for_each(SatSearch::release);
        self.last = Some((hunt.question, hunt.search, hunt.sat));
    }

    /// Keeps an algebra and numbers it, unless it is known.
    pub(super) fn keep(&mut self, found: &Counterexample, question: &str) -> Kept {
        let place = self.known.add(found.algebra.clone());
        if place == self.kept.len() {
            self.next_number += 1;
            self.kept.push(Kept {
                number: self.next_number,
                smallest: found.smallest,
                question: question.to_owned(),
            });
        }
        self.kept[place].clone()
    }
}

impl Hunt {
    /// A search in a theory that no algebra is known of.
    pub(super) fn new(theory: &Theory, question: (TermId, TermId)) -> Hunt {
        Algebras::default().hunt(theory, question, LARGEST)
    }

    /// Asks the pool, then searches, sizes upward. Where the problem suits the SAT solver, the
    /// two searches take turns of growing length, the direct one first.
    pub(super) fn run(mut self, largest: u32, limits: &mut Limits) -> Caught {
        if !self.pool_done
            && let Some(pool) = &mut self.pool
            && let PoolOutcome::Refuted(found) = pool.refute(&self.claim, limits)
            && found.algebra.total() <= largest
        {
            return self.caught(Some(found), false);
        }
        self.pool_done = true;
        let Hunt { search, sat, .. } = &mut self;
        let direct = |slice: Option<Duration>| {
            let mut part = slice.map_or_else(|| limits.clone(), |slice| shorter(limits, slice));
            Turn::of(search.run(&mut part), true)
        };
        let by_sat = sat.as_mut().map(|sat| {
            |slice| {
                let mut part = shorter(limits, slice);
                part.bytes /= 2;
                let outcome = sat.run(&mut part);
                Turn::of(outcome, sat.given_up().is_empty())
            }
        });
        match take_turns(direct, by_sat, || is_over(limits)) {
            Turn::Found(found) => self.caught(Some(found), false),
            Turn::Exhausted => self.caught(None, true),
            Turn::GivenUp | Turn::Stopped => self.caught(None, false),
        }
    }

    fn caught(self, mut found: Option<Box<Counterexample>>, exhausted: bool) -> Caught {
        let by_sat = self.sat.as_ref().map_or(0, SatSearch::ruled_out_total);
        let ruled_out = self.search.ruled_out_total().max(by_sat);
        if let Some(found) = &mut found {
            found.smallest |= found.algebra.total() <= ruled_out + 1;
        }
        // What needs too much memory here may have been settled by the other search.
        let given_up = |sizes: &[u32]| sizes.iter().sum::<u32>() > ruled_out;
        let given_up = self.search.given_up().iter().any(|(s, _)| given_up(s));
        Caught {
            hunt: self,
            found,
            exhausted,
            ruled_out,
            given_up,
        }
    }
}

/// How one turn of a search ended.
#[derive(Clone, Debug, PartialEq, Eq)]
enum Turn<T> {
    Found(T),
    /// There is no such algebra of the sizes that were asked for.
    Exhausted,
    /// What is left needs too much memory.
    GivenUp,
    /// The turn, or the time as a whole, is over.
    Stopped,
}

impl Turn<Box<Counterexample>> {
    fn of(outcome: Outcome, is_thorough: bool) -> Self {
        match outcome {
            Outcome::Found(found) => Turn::Found(found),
            Outcome::Exhausted if is_thorough => Turn::Exhausted,
            Outcome::Exhausted => Turn::GivenUp,
            Outcome::Stopped(_) => Turn::Stopped,
        }
    }
}

/// Lets two searches take turns, each twice as long as the one before, until one of them has
/// settled the matter or all is over. A search without another one has a turn without end, and so
/// has the first when the other has given up.
fn take_turns<T>(
    mut first: impl FnMut(Option<Duration>) -> Turn<T>,
    mut second: Option<impl FnMut(Duration) -> Turn<T>>,
    is_over: impl Fn() -> bool,
) -> Turn<T> {
    let mut slice = FIRST_SLICE;
    loop {
        match first(second.is_some().then_some(slice)) {
            Turn::Stopped if !is_over() => {}
            settled => return settled,
        }
        match second.as_mut().map(|second| second(slice)) {
            Some(Turn::GivenUp) => second = None,
            None | Some(Turn::Stopped) => {}
            Some(settled) => return settled,
        }
        slice = slice.saturating_mul(2);
    }
}

/// How long the direct search has for itself at first. It settles most of what it settles at all
/// within a few milliseconds, and with much less memory than a solver.
const FIRST_SLICE: Duration = Duration::from_millis(300);

/// The limits, with a deadline that is not further away than this.
fn shorter(limits: &Limits, slice: Duration) -> Limits {
    let mut part = limits.clone();
    if let Some(end) = Instant::now().checked_add(slice) {
        part.deadline = Some(part.deadline.map_or(end, |deadline| deadline.min(end)));
    }
    part
}

/// Has the search as a whole been stopped?
fn is_over(limits: &Limits) -> bool {
    let late = |deadline| Instant::now() >= deadline;
    limits.stop.load(Ordering::Relaxed) || limits.deadline.is_some_and(late)
}

fn compiled(theory: &Theory) -> (Signature, Vec<Equation>) {
    let laws = theory.laws.iter();
    let equations = laws
        .map(|law| Equation::compile(&theory.bank, law.left, law.right))
        .collect();
    let sorts = theory.signature.sorts().len();
    (Signature::new(&theory.bank, sorts), equations)
}

/// The part that the theory knows of an algebra of an extension by a sort and symbols behind its
/// own, in which constants stand for the variables `fixed` of the question; the other variables of
/// the question have no values of meaning.
pub(super) fn part(
    theory: &Theory,
    (left, right): (TermId, TermId),
    fixed: &[(Variable, Symbol)],
    example: &Counterexample,
) -> Option<Counterexample> {
    let whole = &example.algebra;
    let sorts = theory.signature.sorts().len();
    let signature = Signature::new(&theory.bank, sorts);
    let tables = &whole.tables()[..signature.symbols().len()];
    let values = tables.iter().map(|table| table.values().to_vec()).collect();
    let algebra = Algebra::new(&signature, whole.sizes()[..sorts].to_vec(), values).ok()?;
    let claim = Equation::compile(&theory.bank, left, right);
    let value = |variable: &Variable| {
        let (_, constant) = fixed.iter().find(|(known, _)| known == variable)?;
        whole.tables()[constant.index()].get(&[])
    };
    Some(Counterexample {
        algebra,
        assignment: claim
            .variables()
            .iter()
            .map(|v| value(v).unwrap_or(0))
            .collect(),
        values: [0, 0],
        smallest: example.smallest,
    })
}

/// The evidence that two terms of the theory differ in an algebra.
pub(super) fn evidence(
    theory: &Theory,
    (left, right): (TermId, TermId),
    found: &Counterexample,
) -> AlgebraEvidence {
    let naming = naming(theory);
    let mut terms = Terms::default();
    let laws = theory.laws.iter().map(|law| proof::Equation {
        name: terms.name(&law.name),
        left: plain_term(&theory.bank, &naming, &mut terms, law.left),
        right: plain_term(&theory.bank, &naming, &mut terms, law.right),
        when: Vec::new(),
    });
    let laws: Vec<_> = laws.collect();
    let sides = [left, right].map(|side| plain_term(&theory.bank, &naming, &mut terms, side));
    let claim = Equation::compile(&theory.bank, left, right);
    let with = claim
        .variables()
        .iter()
        .zip(&found.assignment)
        .map(|(variable, value)| {
            (
                terms.name(&naming.variables[variable.index as usize].0),
                *value,
            )
        });
    let with = with.collect();
    let sorts = theory.signature.sorts().iter().zip(found.algebra.sizes());
    let sorts = sorts
        .map(|(name, size)| (terms.name(name), *size))
        .collect();
    let tables = named_tables(&naming, &found.algebra);
    AlgebraEvidence {
        laws,
        sorts,
        tables: tables
            .into_iter()
            .map(|(name, table)| (terms.name(name), table))
            .collect(),
        claim: AlgebraClaim {
            left: sides[0],
            right: sides[1],
            when: Vec::new(),
            with,
            unknowns: Vec::new(),
            values: Some(found.values),
        },
        types: types(theory, &naming, &mut terms),
        terms,
    }
}

/// The tables of an algebra, with the names of the symbols.
pub(super) fn named_tables<'n>(
    naming: &'n Naming,
    algebra: &Algebra,
) -> Vec<(&'n str, proof::Table)> {
    let plain = |table: &crate::algebra::Table| proof::Table {
        shape: table.shape().to_vec(),
        values: table.values().iter().copied().map(u32::from).collect(),
    };
    let names = naming.symbols.iter().map(String::as_str);
    names.zip(algebra.tables().iter().map(plain)).collect()
}

/// The sorts of all symbols, and of the variables that occur, if the theory names sorts.
fn types(theory: &Theory, naming: &Naming, terms: &mut Terms) -> Option<proof::Types> {
    if !naming.typed {
        return None;
    }
    let mut operators = Vec::new();
    for (name, sorts) in naming.symbols.iter().zip(&naming.types) {
        let sorts = sorts.iter().map(|sort| theory.signature.sort_name(*sort));
        let sorts = sorts.map(|sort| terms.name(sort)).collect();
        operators.push((terms.name(name), sorts));
    }
    let mut variables = Vec::new();
    let used: Vec<_> = terms
        .all()
        .filter_map(|term| match terms.node(term) {
            proof::Node::Variable(name) => Some(name),
            proof::Node::Apply(..) => None,
        })
        .collect();
    for (name, sort) in &naming.variables {
        let name = terms.name(name);
        if used.contains(&name) {
            variables.push((name, terms.name(theory.signature.sort_name(*sort))));
        }
    }
    Some(proof::Types {
        operators,
        variables,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::cell::RefCell;

    /// Plays two searches by what each of their turns comes to; says how it ended and who had
    /// which turn, in units of the first one.
    fn play(
        first: &[Turn<u32>],
        second: Option<&[Turn<u32>]>,
        over_after: usize,
    ) -> (Turn<u32>, Vec<(char, Option<u128>)>) {
        let turns = RefCell::new(Vec::new());
        let (mut first, second) = (first.iter(), second.map(<[_]>::iter));
        let unit = FIRST_SLICE.as_millis();
        let direct = |slice: Option<Duration>| {
            let slice = slice.map(|slice| slice.as_millis() / unit);
            turns.borrow_mut().push(('d', slice));
            first.next().cloned().expect("no more turns than planned")
        };
        let other = second.map(|mut second| {
            let turns = &turns;
            move |slice: Duration| {
                turns
                    .borrow_mut()
                    .push(('s', Some(slice.as_millis() / unit)));
                second.next().cloned().expect("no more turns than planned")
            }
        });
        let ended = take_turns(direct, other, || turns.borrow().len() >= over_after);
        (ended, turns.into_inner())
    }

    #[test]
    fn two_searches_take_turns_of_growing_length() {
        use Turn::{Exhausted, Found, GivenUp, Stopped};
        let stopped = vec![Stopped; 9];
        let turn = |who, length| (who, Some(length));
        // The other search finds it in its third turn.
        let second = [Stopped, Stopped, Found(7)];
        let (ended, turns) = play(&stopped, Some(&second), usize::MAX);
        assert_eq!(ended, Found(7));
        let both = [1, 2, 4].map(|length| [turn('d', length), turn('s', length)]);
        assert_eq!(turns, both.concat());
        // The direct search, in its second.
        let (ended, turns) = play(&[Stopped, Found(5)], Some(&stopped), usize::MAX);
        assert_eq!(ended, Found(5));
        assert_eq!(turns, [turn('d', 1), turn('s', 1), turn('d', 2)]);
        // When the other search gives up, the direct one has the time to itself.
        let (ended, turns) = play(&[Stopped, Exhausted], Some(&[GivenUp]), usize::MAX);
        assert_eq!(ended, Exhausted);
        assert_eq!(turns, [turn('d', 1), turn('s', 1), ('d', None)]);
        // Alone it has it from the beginning.
        let (ended, turns) = play(&[Exhausted], None, usize::MAX);
        assert_eq!((ended, turns), (Exhausted, vec![('d', None)]));
        // Nobody begins another turn when all is over.
        let (ended, turns) = play(&stopped, Some(&stopped), 3);
        assert_eq!(ended, Stopped);
        assert_eq!(turns.len(), 3);
    }
}

//! The Knuth–Bendix order (Knuth & Bendix 1970; Baader & Nipkow 1998, section 5.4.4).

use super::Comparison;
use super::assumption::Assumption;
use crate::term::{Bank, Head, TermId};
use rustc_hash::FxHashMap;

/// Beyond this many additions of counts a comparison of terms with wide counts gives up.
const WORK_LIMIT: usize = 1 << 27;

/// Which of the two strict relations may still hold.
#[derive(Clone, Copy)]
pub(super) struct Open {
    /// The first term may be greater.
    pub greater: bool,
    /// The first term may be less.
    pub less: bool,
}

impl Open {
    /// The relation that the weights or the precedence decided, if the variables allow it.
    fn decide(self, greater: bool) -> Comparison {
        match greater {
            true if self.greater => Comparison::Greater,
            false if self.less => Comparison::Less,
            _ => Comparison::Incomparable,
        }
    }
}

/// Compares two terms, as far as `open` asks for it.
///
/// Terms with equal weights and heads are decided by their first pair of different arguments, so
/// the descent is a loop; a relation holds only if the variables allow it at every level of the
/// descent. Levels whose counts are wide are gathered and counted together at the end, since
/// counting them one by one would be quadratic in the depth.
#[inline]
pub(super) fn compare<A: Assumption>(
    bank: &Bank,
    ranks: &[u64],
    (mut s, mut t): (TermId, TermId),
    assumed: &A,
    mut open: Open,
) -> Comparison {
    if s == t {
        return Comparison::Equal;
    }
    let mut wide = Vec::new();
    let first_is_greater = loop {
        let (a, b) = (bank.counts(s), bank.counts(t));
        if a.is_wide() || b.is_wide() {
            wide.push((s, t));
        } else if a != b {
            open.greater = open.greater && assumed.covers(a, b);
            open.less = open.less && assumed.covers(b, a);
        }
        let (v, w) = (bank.weight(s), bank.weight(t));
        // Saturated weights are lower bounds, and two of them say nothing.
        if !(open.greater || open.less) || v == u64::MAX && w == u64::MAX {
            return Comparison::Incomparable;
        }
        if v != w {
            break v > w;
        }
        match (bank.head(s), bank.head(t)) {
            (Head::Symbol(f), Head::Symbol(g)) if f == g => {
                let mut pairs = bank.arguments(s).iter().zip(bank.arguments(t));
                let Some((&x, &y)) = pairs.find(|(x, y)| x != y) else {
                    // Different terms with one head differ in an argument; never reached.
                    return Comparison::Equal;
                };
                (s, t) = (x, y);
            }
            (Head::Symbol(f), Head::Symbol(g)) => break ranks[f.index()] > ranks[g.index()],
            (Head::Variable(x), Head::Variable(y)) => {
                if assumed.above(x.index, y.index) {
                    break true;
                } else if assumed.above(y.index, x.index) {
                    break false;
                }
                return Comparison::Incomparable;
            }
            // A term as light as a variable that covers it is f(…f(x)) with f of weight 0 and x
            // at least that variable. The other direction cannot hold.
            (Head::Symbol(_), Head::Variable(_)) => break true,
            (Head::Variable(_), Head::Symbol(_)) => break false,
        }
    };
    if !wide.is_empty() && open.decide(first_is_greater) != Comparison::Incomparable {
        let allowed = allowed(bank, &wide, assumed);
        open.greater &= allowed.greater;
        open.less &= allowed.less;
    }
    open.decide(first_is_greater)
}

/// What the variables allow at every one of these pairs, each of which consists of subterms of the
/// first pair. Costs a visit per distinct subterm and variable.
fn allowed<A: Assumption>(bank: &Bank, pairs: &[(TermId, TermId)], assumed: &A) -> Open {
    let tally = Tally::new(bank, pairs[0]);
    let places: Vec<_> = pairs
        .iter()
        .map(|(s, t)| (tally.places.get(s), tally.places.get(t)))
        .collect();
    let mut allowed = Open {
        greater: true,
        less: true,
    };
    if (tally.children.len() + pairs.len()).saturating_mul(tally.variables.len()) > WORK_LIMIT {
        allowed.greater = false;
        allowed.less = false;
        return allowed;
    }
    let mut counts = Vec::new();
    let mut differences = |variable| {
        tally.count(variable, &mut counts);
        let of = |place: Option<&u32>| place.map_or(0, |&place| i128::from(counts[place as usize]));
        places
            .iter()
            .map(|&(s, t)| of(s) - of(t))
            .collect::<Vec<_>>()
    };
    let mut sums = vec![0i128; pairs.len()];
    for &variable in assumed.descending() {
        for (sum, difference) in sums.iter_mut().zip(differences(variable)) {
            *sum += difference;
            allowed.greater &= *sum >= 0;
            allowed.less &= *sum <= 0;
        }
    }
    for &variable in &tally.variables {
        if !assumed.descending().contains(&variable) {
            for difference in differences(variable) {
                allowed.greater &= difference >= 0;
                allowed.less &= difference <= 0;
            }
        }
    }
    allowed
}

/// The distinct subterms with variables of two terms, laid out for counting.
struct Tally {
    /// Where each subterm stands in `nodes`; arguments come before the terms they stand in.
    places: FxHashMap<TermId, u32>,
    /// For each subterm the variable that it is, if it is one, and the end of its `children`.
    nodes: Vec<(Option<u32>, usize)>,
    children: Vec<u32>,
    variables: Vec<u32>,
}

impl Tally {
    fn new(bank: &Bank, (s, t): (TermId, TermId)) -> Tally {
        let mut seen = rustc_hash::FxHashSet::default();
        let mut stack = vec![s, t];
        while let Some(term) = stack.pop() {
            if !bank.is_ground(term) && seen.insert(term) {
                stack.extend_from_slice(bank.arguments(term));
            }
        }
        let mut terms: Vec<_> = seen.into_iter().collect();
        terms.sort_unstable();
        let mut tally = Tally {
            places: FxHashMap::default(),
            nodes: Vec::with_capacity(terms.len()),
            children: Vec::new(),
            variables: Vec::new(),
        };
        for term in terms {
            let variable = bank.as_variable(term).map(|variable| variable.index);
            tally.variables.extend(variable);
            for argument in bank.arguments(term) {
                tally.children.extend(tally.places.get(argument));
            }
            tally.places.insert(term, tally.nodes.len() as u32);
            tally.nodes.push((variable, tally.children.len()));
        }
        tally
    }

    /// The occurrences of a variable in every subterm; saturating.
    fn count(&self, variable: u32, counts: &mut Vec<u64>) {
        counts.clear();
        let mut start = 0;
        for &(own, end) in &self.nodes {
            let mut sum = u64::from(own == Some(variable));
            for &child in &self.children[start..end] {
                sum = sum.saturating_add(counts[child as usize]);
            }
            counts.push(sum);
            start = end;
        }
    }
}

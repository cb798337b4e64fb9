//! Looking for a precedence under which laws decrease in the lexicographic path order.

use super::shape::{Law, parts as parts_of};
use crate::term::{Bank, Head, Symbol, TermId};

/// A law is searched for only if its pairs of subterms are at most this many.
const PAIR_LIMIT: usize = 1 << 14;

/// How long a search may take, in visits to pairs of subterms: for laws that must decrease, and for
/// one that had better.
pub(super) const PATIENT: usize = 1 << 23;
pub(super) const BRIEF: usize = 1 << 17;

/// A strict partial order of symbols, transitively closed.
#[derive(Clone, Debug)]
pub(super) struct Precedence {
    /// The symbols that may be related.
    symbols: Vec<Symbol>,
    /// By symbol: its place in `symbols`, if it has one.
    places: Vec<Option<u32>>,
    /// Row by row: is the symbol of the row above that of the column?
    above: Vec<bool>,
}

impl Precedence {
    /// Nothing is known of the symbols that occur in these laws; none if they are more than `most`.
    pub(super) fn over<'a>(
        bank: &Bank,
        laws: impl IntoIterator<Item = &'a Law>,
        most: usize,
    ) -> Option<Self> {
        let parts = parts_of(bank, laws).into_iter();
        let mut symbols: Vec<Symbol> = parts.filter_map(|term| bank.as_symbol(term)).collect();
        symbols.sort_unstable();
        symbols.dedup();
        (symbols.len() <= most).then(|| Precedence::new(symbols))
    }

    fn new(symbols: Vec<Symbol>) -> Self {
        let slots = symbols.iter().map(|s| s.index() + 1).max().unwrap_or(0);
        let mut places = vec![None; slots];
        for (place, symbol) in symbols.iter().enumerate() {
            places[symbol.index()] = Some(place as u32);
        }
        Precedence {
            above: vec![false; symbols.len() * symbols.len()],
            symbols,
            places,
        }
    }

    fn place(&self, symbol: Symbol) -> Option<usize> {
        let place = self.places.get(symbol.index()).copied().flatten()?;
        Some(place as usize)
    }

    fn above(&self, f: Symbol, g: Symbol) -> bool {
        match (self.place(f), self.place(g)) {
            (Some(f), Some(g)) => self.above[f * self.symbols.len() + g],
            _ => false,
        }
    }

    /// Puts `f` above `g`; false, with nothing done, if it cannot be.
    pub(super) fn put(&mut self, f: Symbol, g: Symbol) -> bool {
        if f == g || self.above(g, f) {
            return false;
        }
        if self.above(f, g) {
            return true;
        }
        let (Some(row), Some(column)) = (self.place(f), self.place(g)) else {
            return false;
        };
        let count = self.symbols.len();
        let uppers: Vec<_> = (0..count)
            .filter(|&a| a == row || self.above[a * count + row])
            .collect();
        let lowers: Vec<_> = (0..count)
            .filter(|&b| b == column || self.above[column * count + b])
            .collect();
        for upper in &uppers {
            for lower in &lowers {
                self.above[upper * count + lower] = true;
            }
        }
        true
    }

    /// All symbols, greatest first: where nothing is known, as in `otherwise`, which has them all.
    pub(super) fn extend(&self, otherwise: &[Symbol]) -> Vec<Symbol> {
        let mut left = otherwise.to_vec();
        let mut extended = Vec::with_capacity(left.len());
        while !left.is_empty() {
            let free = |f: &Symbol| left.iter().all(|&g| !self.above(g, *f));
            let next = left.iter().position(free);
            extended.push(left.remove(next.expect("a partial order has maximal elements")));
        }
        extended
    }
}

/// The pairs of subterms of a law, laid out so that every pair comes after those that it needs.
struct LawPairs {
    lefts: Vec<Part>,
    rights: Vec<Part>,
    /// Which left part is the same term as which right part, row by row.
    same: Vec<bool>,
}

struct Part {
    term: TermId,
    symbol: Option<Symbol>,
    arguments: Vec<usize>,
}

/// What is known of a pair: the left one is greater under every, or under some, completion of the
/// precedence. The second is an upper bound.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
struct Known {
    surely: bool,
    possibly: bool,
}

impl LawPairs {
    fn new(bank: &Bank, (left, right): (TermId, TermId)) -> Option<Self> {
        let (lefts, rights) = (parts(bank, left)?, parts(bank, right)?);
        if lefts.len() * rights.len() > PAIR_LIMIT {
            return None;
        }
        let same = lefts
            .iter()
            .flat_map(|s| rights.iter().map(|t| s.term == t.term))
            .collect();
        Some(LawPairs {
            lefts,
            rights,
            same,
        })
    }

    /// The definition of the order (Baader & Nipkow 1998, 5.4.12), from the smallest pairs up.
    fn evaluate(&self, precedence: &Precedence, known: &mut Vec<Known>) -> Known {
        known.clear();
        for s in &self.lefts {
            for t in 0..self.rights.len() {
                known.push(self.pair(precedence, known, s, t));
            }
        }
        known.last().copied().unwrap_or_default()
    }

    fn pair(&self, precedence: &Precedence, known: &[Known], s: &Part, t: usize) -> Known {
        let width = self.rights.len();
        let (place, t_part) = (known.len(), &self.rights[t]);
        let (Some(f), false) = (s.symbol, self.same[place]) else {
            return Known::default();
        };
        let mut found = Known::default();
        for &argument in &s.arguments {
            let same = self.same[argument * width + t];
            found.surely |= same || known[argument * width + t].surely;
            found.possibly |= same || known[argument * width + t].possibly;
        }
        let Some(g) = t_part.symbol else {
            return found;
        };
        let mut by_head = if f == g {
            let mut pairs = s.arguments.iter().zip(&t_part.arguments);
            let first = pairs.find(|(s, t)| !self.same[*s * width + *t]);
            first.map_or(Known::default(), |(s, t)| known[s * width + t])
        } else {
            Known {
                surely: precedence.above(f, g),
                possibly: !precedence.above(g, f),
            }
        };
        let row = place - t;
        for &argument in &t_part.arguments {
            by_head.surely &= known[row + argument].surely;
            by_head.possibly &= known[row + argument].possibly;
        }
        Known {
            surely: found.surely || by_head.surely,
            possibly: found.possibly || by_head.possibly,
        }
    }

    /// Two symbols that have no order yet, at the greatest undecided pair whose heads they are.
    fn undecided(&self, precedence: &Precedence, known: &[Known]) -> Option<(Symbol, Symbol)> {
        let width = self.rights.len();
        let undecided = (0..known.len()).rev().filter(|&place| {
            let Known { surely, possibly } = known[place];
            possibly && !surely
        });
        undecided
            .filter_map(|place| {
                let s = self.lefts[place / width].symbol;
                s.zip(self.rights[place % width].symbol)
            })
            .find(|&(f, g)| f != g && !precedence.above(f, g) && !precedence.above(g, f))
    }
}

/// The distinct subterms, arguments first; nothing if they are too many.
fn parts(bank: &Bank, term: TermId) -> Option<Vec<Part>> {
    let mut seen = rustc_hash::FxHashSet::from_iter([term]);
    let mut stack = vec![term];
    while let Some(term) = stack.pop() {
        stack.extend(bank.arguments(term).iter().filter(|a| seen.insert(**a)));
        if seen.len() > PAIR_LIMIT {
            return None;
        }
    }
    let mut terms: Vec<_> = seen.into_iter().collect();
    terms.sort_unstable();
    let place = |argument: &TermId| terms.binary_search(argument).ok();
    let part = |&term: &TermId| Part {
        term,
        symbol: match bank.head(term) {
            Head::Symbol(symbol) => Some(symbol),
            Head::Variable(_) => None,
        },
        arguments: bank.arguments(term).iter().filter_map(place).collect(),
    };
    Some(terms.iter().map(part).collect())
}

/// The least extension found of a precedence under which all these laws decrease from left to
/// right, if there is one: depth first over the orders of pairs of symbols, abandoning a branch
/// when some law cannot decrease under any completion of it.
///
/// Nothing also if the search, which is exponential in the worst case, takes too much work, or if
/// a law is too large to search for.
pub(super) fn extend_for(
    bank: &Bank,
    start: &Precedence,
    laws: &[(TermId, TermId)],
    limit: usize,
) -> Option<Precedence> {
    let laws: Option<Vec<_>> = laws.iter().map(|&law| LawPairs::new(bank, law)).collect();
    let laws = laws?;
    let mut branches = vec![start.clone()];
    let (mut known, mut work) = (Vec::new(), 0);
    'branches: while let Some(precedence) = branches.pop() {
        let mut choice = None;
        // Copying and closing a precedence is work, too.
        work += start.above.len() / 16;
        for law in &laws {
            let Known { surely, possibly } = law.evaluate(&precedence, &mut known);
            work += known.len();
            if !possibly {
                continue 'branches;
            }
            if !surely && choice.is_none() {
                choice = law.undecided(&precedence, &known);
            }
        }
        let Some((f, g)) = choice else {
            return Some(precedence);
        };
        if work > limit {
            return None;
        }
        for (f, g) in [(g, f), (f, g)] {
            let mut branch = precedence.clone();
            if branch.put(f, g) {
                branches.push(branch);
            }
        }
    }
    None
}

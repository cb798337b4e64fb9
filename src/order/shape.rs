//! What laws look like, as far as the choice of an order goes by it.

use crate::term::{Bank, Symbol, TermId};
use rustc_hash::FxHashSet;
use std::cmp::Reverse;

/// A law, by its two sides.
pub type Law = (TermId, TermId);

/// The shape of some laws.
pub(super) struct Shape {
    /// All symbols: operations that look like an inverse, then more arguments first, then rarer
    /// ones first, then later ones first.
    pub by_arity: Vec<Symbol>,
    /// All symbols: constants last, and the rarer the later.
    pub rare_low: Vec<Symbol>,
    /// The unary operation that is best made weightless: the only one that looks like an inverse,
    /// or the only one at all.
    pub weightless: Option<Symbol>,
    /// Is there exactly one operation that looks like an inverse?
    pub has_inverse: bool,
    /// The laws of distributivity, with the product of sums on the left.
    pub distributive: Vec<Law>,
    constants: FxHashSet<Symbol>,
    occurrences: Vec<u32>,
}

impl Shape {
    pub(super) fn new(bank: &Bank, laws: &[Law]) -> Shape {
        let parts = parts(bank, laws);
        let mut occurrences = vec![0u32; bank.symbols().len()];
        for symbol in parts.iter().filter_map(|&term| bank.as_symbol(term)) {
            occurrences[symbol.index()] += 1;
        }
        let inverses = inverses(bank, laws, &parts);
        let symbols = || (0..occurrences.len() as u32).map(Symbol);
        let arity = |symbol: Symbol| bank.info(symbol).arguments.len();
        let rarity = |symbol: Symbol| occurrences[symbol.index()];
        let mut by_arity: Vec<_> = symbols().collect();
        by_arity.sort_by_key(|&symbol| {
            let inverse = inverses.contains(&symbol);
            let later_first = Reverse(symbol.0);
            (
                !inverse,
                Reverse(arity(symbol)),
                rarity(symbol),
                later_first,
            )
        });
        let mut rare_low: Vec<_> = symbols().collect();
        rare_low.sort_by_key(|&symbol| (arity(symbol) == 0, Reverse(rarity(symbol)), symbol.0));
        let unary: Vec<_> = symbols().filter(|&symbol| arity(symbol) == 1).collect();
        let single = |symbols: &[Symbol]| match symbols {
            [symbol] => Some(*symbol),
            _ => None,
        };
        Shape {
            weightless: single(&inverses).or_else(|| single(&unary)),
            has_inverse: inverses.len() == 1,
            distributive: laws.iter().filter_map(|&l| distributive(bank, l)).collect(),
            constants: symbols().filter(|&symbol| arity(symbol) == 0).collect(),
            by_arity,
            rare_low,
            occurrences,
        }
    }

    /// All symbols: constants last, and the rarer the earlier.
    pub(super) fn by_rarity(&self) -> Vec<Symbol> {
        let mut symbols = self.by_arity.clone();
        symbols.sort_by_key(|symbol| {
            let constant = self.constants.contains(symbol);
            (constant, self.occurrences[symbol.index()])
        });
        symbols
    }
}

/// The distinct subterms of some laws.
pub(super) fn parts<'a>(bank: &Bank, laws: impl IntoIterator<Item = &'a Law>) -> Vec<TermId> {
    let mut seen = FxHashSet::default();
    let mut stack: Vec<_> = laws.into_iter().flat_map(|&(l, r)| [l, r]).collect();
    let mut parts = Vec::new();
    while let Some(term) = stack.pop() {
        if seen.insert(term) {
            parts.push(term);
            stack.extend_from_slice(bank.arguments(term));
        }
    }
    parts
}

/// The unary operations i with a subterm i(x) * x or x * i(x), or with i(x * y) = i(y) * i(x).
fn inverses(bank: &Bank, laws: &[Law], parts: &[TermId]) -> Vec<Symbol> {
    let unary = |term: TermId| match bank.arguments(term) {
        [argument] => bank.as_symbol(term).map(|symbol| (symbol, *argument)),
        _ => None,
    };
    let beside = |&term: &TermId| {
        let [x, y] = bank.arguments(term) else {
            return None;
        };
        let undone = |x, y| unary(x).filter(|(_, argument)| *argument == y);
        undone(*x, *y).or_else(|| undone(*y, *x))
    };
    let turned = |&(left, right): &Law| {
        let (symbol, product) = unary(left)?;
        let ([x, y], [u, v]) = (bank.arguments(product), bank.arguments(right)) else {
            return None;
        };
        let same = bank.as_symbol(product) == bank.as_symbol(right);
        let crossed = unary(*u) == Some((symbol, *y)) && unary(*v) == Some((symbol, *x));
        (same && crossed).then_some((symbol, product))
    };
    let found = parts.iter().filter_map(beside);
    let mut found: Vec<_> = found
        .chain(laws.iter().filter_map(turned))
        .map(|(symbol, _)| symbol)
        .collect();
    found.sort_unstable();
    found.dedup();
    found
}

/// The law with the product of a sum on the left, if it is f(…, g(…), …) = g(f(…), …).
fn distributive(bank: &Bank, (left, right): Law) -> Option<Law> {
    let of = |product: TermId, sum: TermId| {
        let (f, g) = (bank.as_symbol(product)?, bank.as_symbol(sum)?);
        let is = |symbol: Symbol| move |term: &&TermId| bank.as_symbol(**term) == Some(symbol);
        let below = bank.arguments(sum);
        let all = below.len() > 1 && below.iter().filter(is(f)).count() == below.len();
        let over = bank.arguments(product).iter().filter(is(g)).count() == 1;
        let simple = bank.size(product) <= bank.size(sum);
        (f != g && all && over && simple).then_some((product, sum))
    };
    of(left, right).or_else(|| of(right, left))
}

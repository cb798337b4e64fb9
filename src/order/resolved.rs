//! An order that is ready for use: checked, and laid out by symbol.

use super::assumption::{Assumption, Nothing, VariableOrder};
use super::kbo::{self, Open};
use super::lpo::{self, Scratch};
use super::{OrderKind, OrderSetting};
use crate::term::{Bank, Symbol, SymbolInfo, TermId};
use std::cell::RefCell;

/// How two terms compare.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Comparison {
    /// The first is greater.
    Greater,
    /// The first is less.
    Less,
    /// They are the same term.
    Equal,
    /// Neither is greater, or finding out takes too much work.
    Incomparable,
}

/// Why a setting is no reduction order.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum OrderProblem {
    /// The setting mentions a symbol that does not exist.
    UnknownSymbol(Symbol),
    /// The precedence names the symbol twice.
    NamedTwice(Symbol),
    /// The symbol has two weights.
    WeighedTwice(Symbol),
    /// A variable weighs nothing.
    VariableWithoutWeight,
    /// The constant weighs less than a variable.
    LightConstant {
        /// The constant.
        constant: Symbol,
        /// Its weight.
        weight: u32,
        /// The weight of a variable.
        variable_weight: u32,
    },
    /// The unary symbol weighs nothing, but is not the greatest in the precedence.
    WeightlessNotGreatest {
        /// The symbol of weight 0.
        symbol: Symbol,
        /// The greatest symbol.
        greatest: Symbol,
    },
}

/// A reduction order that is total on ground terms.
///
/// The Knuth–Bendix order reads [`Bank::weight`]: the bank must have been made with
/// [`Order::variable_weight`], and its symbols declared with [`Order::weight`]. The lexicographic
/// path order weighs every symbol 1 and does not read weights.
///
/// A comparison reuses memory inside the order, so each thread has its own clone.
#[derive(Clone, Debug)]
pub struct Order {
    kind: OrderKind,
    /// By symbol; all differ. Symbols of the theory have [`THEORY`] set, later constants have not.
    ranks: Vec<u64>,
    /// By symbol.
    weights: Vec<u32>,
    variable_weight: u32,
    scratch: RefCell<Scratch>,
}

const THEORY: u64 = 1 << 63;

impl Order {
    /// Checks a setting against the symbols of a theory and makes it ready for use.
    ///
    /// The conditions on weights are those of Baader & Nipkow 1998, definition 5.4.18, over all
    /// sorts together. Stated weights are not looked at for the lexicographic path order.
    pub fn new(setting: &OrderSetting, symbols: &[SymbolInfo]) -> Result<Order, OrderProblem> {
        let (ranks, greatest) = ranks(setting, symbols.len())?;
        let order = Order {
            kind: setting.kind,
            ranks,
            weights: weights(setting, symbols.len())?,
            variable_weight: match setting.kind {
                OrderKind::Kbo => setting.variable_weight,
                OrderKind::Lpo => 1,
            },
            scratch: RefCell::default(),
        };
        if order.variable_weight == 0 {
            return Err(OrderProblem::VariableWithoutWeight);
        }
        for (index, info) in symbols.iter().enumerate() {
            let (symbol, weight) = (Symbol(index as u32), order.weights[index]);
            if info.arguments.is_empty() && weight < order.variable_weight {
                return Err(OrderProblem::LightConstant {
                    constant: symbol,
                    weight,
                    variable_weight: order.variable_weight,
                });
            }
            if let ([_], 0, Some(greatest)) = (&*info.arguments, weight, greatest)
                && symbol != greatest
            {
                return Err(OrderProblem::WeightlessNotGreatest { symbol, greatest });
            }
        }
        Ok(order)
    }

    /// The family.
    pub fn kind(&self) -> OrderKind {
        self.kind
    }

    /// The weight of a symbol.
    pub fn weight(&self, symbol: Symbol) -> u32 {
        self.weights[symbol.index()]
    }

    /// The weight of a variable.
    pub fn variable_weight(&self) -> u32 {
        self.variable_weight
    }

    /// Two numbers by which constants compare, the first one first; no two constants share both.
    pub fn constant_key(&self, constant: Symbol) -> (u32, u64) {
        let weight = match self.kind {
            OrderKind::Kbo => self.weights[constant.index()],
            OrderKind::Lpo => 0,
        };
        (weight, self.ranks[constant.index()])
    }

    /// Is the first symbol above the second in the precedence?
    pub fn above(&self, f: Symbol, g: Symbol) -> bool {
        self.ranks[f.index()] > self.ranks[g.index()]
    }

    /// All symbols, greatest first, with the constants that were added.
    pub fn precedence(&self) -> Vec<Symbol> {
        let mut symbols: Vec<_> = (0..self.ranks.len() as u32).map(Symbol).collect();
        symbols.sort_by_key(|symbol| std::cmp::Reverse(self.ranks[symbol.index()]));
        symbols
    }

    /// Adds a constant below every symbol of the theory, as light as a variable. Constants added
    /// so compare by `rank_among_least`, below 2⁶³ and different for each.
    ///
    /// The symbol is the next of the bank, or one that was added before and is given a new rank.
    pub fn add_least(&mut self, symbol: Symbol, rank_among_least: u64) {
        let slots = self.ranks.len().max(symbol.index() + 1);
        self.ranks.resize(slots, 0);
        self.weights.resize(slots, self.variable_weight);
        self.ranks[symbol.index()] = rank_among_least & !THEORY;
    }

    /// Compares two terms.
    #[inline]
    pub fn compare(&self, bank: &Bank, s: TermId, t: TermId) -> Comparison {
        if s == t {
            return Comparison::Equal;
        }
        match self.kind {
            OrderKind::Kbo => {
                let open = Open {
                    greater: true,
                    less: true,
                };
                kbo::compare(bank, &self.ranks, (s, t), &Nothing, open)
            }
            OrderKind::Lpo => self.compare_by_path(bank, s, t),
        }
    }

    /// Is `s` greater than `t`? Cheaper than comparing both ways.
    #[inline]
    pub fn greater(&self, bank: &Bank, s: TermId, t: TermId) -> bool {
        self.greater_under(bank, s, t, &Nothing)
    }

    /// Is every ground instance of `s` greater than that of `t`, if the variables stand for terms
    /// in the assumed order?
    ///
    /// Sufficient, not necessary, as in Martin & Nipkow 1990: the Knuth–Bendix order wants every
    /// sum of the differences of occurrences, from the greatest variable down, not negative; the
    /// lexicographic path order treats variables as constants in the assumed order, of which
    /// nothing is known in relation to other terms.
    #[inline]
    pub fn greater_assuming(
        &self,
        bank: &Bank,
        s: TermId,
        t: TermId,
        assumed: &VariableOrder,
    ) -> bool {
        self.greater_under(bank, s, t, assumed)
    }

    /// Does a law decrease from left to right?
    pub fn orients(&self, bank: &Bank, left: TermId, right: TermId) -> bool {
        self.greater(bank, left, right)
    }

    #[inline]
    fn greater_under<A: Assumption>(&self, bank: &Bank, s: TermId, t: TermId, assumed: &A) -> bool {
        match self.kind {
            OrderKind::Kbo => {
                debug_assert_eq!(bank.variable_weight(), self.variable_weight);
                // Most answers are no, by weight.
                if bank.weight(s) < bank.weight(t) {
                    return false;
                }
                let open = Open {
                    greater: true,
                    less: false,
                };
                kbo::compare(bank, &self.ranks, (s, t), assumed, open) == Comparison::Greater
            }
            OrderKind::Lpo => {
                let scratch = &mut self.scratch.borrow_mut();
                lpo::greater(bank, &self.ranks, (s, t), assumed, scratch) == Some(true)
            }
        }
    }

    fn compare_by_path(&self, bank: &Bank, s: TermId, t: TermId) -> Comparison {
        let scratch = &mut self.scratch.borrow_mut();
        let ground = bank.is_ground(s) && bank.is_ground(t);
        match lpo::greater(bank, &self.ranks, (s, t), &Nothing, scratch) {
            Some(true) => return Comparison::Greater,
            Some(false) if ground => return Comparison::Less,
            _ => {}
        }
        match lpo::greater(bank, &self.ranks, (t, s), &Nothing, scratch) {
            Some(true) => Comparison::Less,
            Some(false) if ground => Comparison::Greater,
            _ => Comparison::Incomparable,
        }
    }
}

/// The rank of each symbol, and the greatest symbol.
fn ranks(
    setting: &OrderSetting,
    symbols: usize,
) -> Result<(Vec<u64>, Option<Symbol>), OrderProblem> {
    let mut ranks = vec![0; symbols];
    let mut rank = THEORY + symbols as u64;
    for &symbol in &setting.precedence {
        match ranks.get_mut(symbol.index()) {
            None => return Err(OrderProblem::UnknownSymbol(symbol)),
            Some(0) => {}
            Some(_) => return Err(OrderProblem::NamedTwice(symbol)),
        }
        ranks[symbol.index()] = rank;
        rank -= 1;
    }
    for slot in ranks.iter_mut().filter(|rank| **rank == 0) {
        *slot = rank;
        rank -= 1;
    }
    let top = THEORY + symbols as u64;
    let greatest = ranks.iter().position(|&rank| rank == top);
    Ok((ranks, greatest.map(|index| Symbol(index as u32))))
}

fn weights(setting: &OrderSetting, symbols: usize) -> Result<Vec<u32>, OrderProblem> {
    let mut weights = vec![None; symbols];
    if setting.kind == OrderKind::Kbo {
        for &(symbol, weight) in &setting.weights {
            match weights.get_mut(symbol.index()) {
                None => return Err(OrderProblem::UnknownSymbol(symbol)),
                Some(Some(_)) => return Err(OrderProblem::WeighedTwice(symbol)),
                Some(slot) => *slot = Some(weight),
            }
        }
    }
    Ok(weights.into_iter().map(|w| w.unwrap_or(1)).collect())
}

//! Looking for weights under which laws decrease in the Knuth–Bendix order.

use super::search::Precedence;
use super::{OrderKind, OrderSetting};
use crate::term::{Bank, Copier, Head, Symbol, SymbolInfo, TermId};

/// No law with a larger side is searched for.
const SIZE_LIMIT: u32 = 1 << 16;

/// How many rounds of correction the weights get.
const ROUNDS: usize = 200;

/// A copy of terms in a bank of their own, with other weights.
pub(super) struct Reweighed {
    pub bank: Bank,
    pub laws: Vec<(TermId, TermId)>,
}

impl Reweighed {
    pub(super) fn new(
        from: &Bank,
        laws: &[(TermId, TermId)],
        variable_weight: u32,
        weight: impl Fn(Symbol) -> u32,
    ) -> Self {
        let mut bank = Bank::new(variable_weight);
        for (index, info) in from.symbols().iter().enumerate() {
            bank.declare(SymbolInfo {
                weight: weight(Symbol(index as u32)),
                ..info.clone()
            });
        }
        let mut copier = Copier::default();
        let mut copy = |term| {
            let variable = |bank: &mut Bank, variable| bank.variable(variable);
            copier.copy(from, &mut bank, term, |symbol| symbol, variable)
        };
        let laws = laws.iter().map(|&(l, r)| (copy(l), copy(r))).collect();
        Reweighed { bank, laws }
    }
}

/// How a law weighs: by symbol, how much more often it occurs on the left; and the same for all
/// variables together.
struct Balance {
    symbols: Vec<i64>,
    variables: i64,
}

impl Balance {
    fn new(bank: &Bank, (left, right): (TermId, TermId)) -> Option<Balance> {
        let covered = {
            let in_left = bank.count_by_walking(left);
            let count = |wanted| {
                in_left
                    .iter()
                    .find(|(v, _)| *v == wanted)
                    .map_or(0, |c| c.1)
            };
            let in_right = bank.count_by_walking(right);
            in_right.iter().all(|&(v, n)| count(v) >= n)
        };
        if !covered || bank.size(left).max(bank.size(right)) > SIZE_LIMIT {
            return None;
        }
        let mut balance = Balance {
            symbols: vec![0; bank.symbols().len()],
            variables: 0,
        };
        for (term, sign) in [(left, 1), (right, -1)] {
            let mut stack = vec![term];
            while let Some(term) = stack.pop() {
                match bank.head(term) {
                    Head::Symbol(symbol) => balance.symbols[symbol.index()] += sign,
                    Head::Variable(_) => balance.variables += sign,
                }
                stack.extend_from_slice(bank.arguments(term));
            }
        }
        Some(balance)
    }

    /// The weight of the left side less that of the right side.
    fn of(&self, weights: &[u32]) -> i64 {
        let symbols = self.symbols.iter().zip(weights);
        self.variables + symbols.map(|(n, w)| n * i64::from(*w)).sum::<i64>()
    }
}

/// What the precedence must do for a law to decrease under given weights.
enum Need {
    Nothing,
    Above(Symbol, Symbol),
    Impossible,
}

/// A Knuth–Bendix order under which all these laws decrease from left to right, if a short search
/// finds one; symbols whose order does not matter come as in `otherwise`, which has them all.
///
/// The weights are corrected like those of a perceptron (Rosenblatt 1958) until no law gets
/// heavier; then the laws that keep their weight say which symbols must be above which.
pub(super) fn weigh(
    bank: &Bank,
    laws: &[(TermId, TermId)],
    otherwise: &[Symbol],
) -> Option<OrderSetting> {
    let balances: Option<Vec<_>> = laws.iter().map(|&law| Balance::new(bank, law)).collect();
    let balances = balances?;
    let mut weights = vec![1u32; bank.symbols().len()];
    let mut strict = vec![false; laws.len()];
    for _ in 0..ROUNDS {
        let short = |(balance, strict): (&Balance, &bool)| {
            let margin = balance.of(&weights);
            margin < 0 || *strict && margin == 0
        };
        if let Some(law) = balances.iter().zip(&strict).position(short) {
            if !correct(&mut weights, &balances[law], bank) {
                return None;
            }
            continue;
        }
        match precedence(bank, laws, &weights) {
            Ok(precedence) => {
                let weights = weights.iter().enumerate().filter(|(_, w)| **w != 1);
                return Some(OrderSetting {
                    kind: OrderKind::Kbo,
                    precedence: precedence.extend(otherwise),
                    weights: weights.map(|(s, w)| (Symbol(s as u32), *w)).collect(),
                    variable_weight: 1,
                });
            }
            // A law that the precedence cannot decide has to lose weight.
            Err(law) if strict[law] => return None,
            Err(law) => strict[law] = true,
        }
    }
    None
}

/// Makes the left side heavier against the right side; false if no weight does that.
fn correct(weights: &mut [u32], balance: &Balance, bank: &Bank) -> bool {
    let mut changed = false;
    for (index, &difference) in balance.symbols.iter().enumerate() {
        // Only symbols with two arguments or more may weigh nothing whatever the precedence.
        let least = u32::from(bank.symbols()[index].arguments.len() < 2);
        if difference > 0 {
            weights[index] = weights[index].saturating_add(1);
            changed = true;
        } else if difference < 0 && weights[index] > least {
            weights[index] -= 1;
            changed = true;
        }
    }
    changed
}

/// A precedence under which the laws decrease with these weights, or the first law that does not.
fn precedence(
    bank: &Bank,
    laws: &[(TermId, TermId)],
    weights: &[u32],
) -> Result<Precedence, usize> {
    let copy = Reweighed::new(bank, laws, 1, |symbol| weights[symbol.index()]);
    let precedence = Precedence::over(bank, laws, usize::MAX);
    let mut precedence = precedence.expect("there is no bound");
    for (index, &law) in copy.laws.iter().enumerate() {
        let possible = match need(&copy.bank, law) {
            Need::Nothing => true,
            Need::Above(f, g) => precedence.put(f, g),
            Need::Impossible => false,
        };
        if !possible {
            return Err(index);
        }
    }
    Ok(precedence)
}

/// The descent of the Knuth–Bendix order, up to where the precedence decides.
fn need(bank: &Bank, (mut s, mut t): (TermId, TermId)) -> Need {
    loop {
        let covers = !bank.counts(s).is_wide()
            && !bank.counts(t).is_wide()
            && bank.counts(s).cover(bank.counts(t));
        if !covers || bank.weight(s) < bank.weight(t) {
            return Need::Impossible;
        }
        if bank.weight(s) > bank.weight(t) {
            return Need::Nothing;
        }
        match (bank.as_symbol(s), bank.as_symbol(t)) {
            (Some(f), Some(g)) if f == g => {
                let mut pairs = bank.arguments(s).iter().zip(bank.arguments(t));
                match pairs.find(|(x, y)| x != y) {
                    Some((&x, &y)) => (s, t) = (x, y),
                    None => return Need::Impossible,
                }
            }
            (Some(f), Some(g)) => return Need::Above(f, g),
            _ => return Need::Impossible,
        }
    }
}

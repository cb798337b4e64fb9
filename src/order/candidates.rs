//! The orders that are worth trying for some laws.
//!
//! Which order completes a theory, or proves a question soonest, cannot be told beforehand; that a
//! few rather different ones are tried is worth more than much time for one. The list is made from
//! the shape of the laws alone, so that it is the same on every machine.

use super::search::{BRIEF, PATIENT, Precedence, extend_for};
use super::shape::{Law, Shape};
use super::weighing::{Reweighed, weigh};
use super::{Order, OrderKind, OrderProblem, OrderSetting};
use crate::term::{Bank, Symbol};

/// At most so many orders are proposed.
const CANDIDATE_LIMIT: usize = 8;

/// A search for parameters looks at no more laws than this, and at no more symbols of theirs.
const LAW_LIMIT: usize = 64;
const SYMBOL_LIMIT: usize = 256;

/// An order that is worth trying.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Candidate {
    /// The order, admissible for the symbols of the bank.
    pub setting: OrderSetting,
    /// Why it is worth trying, as the rest of a sentence that begins with the order.
    pub why: &'static str,
}

/// The orders that are worth trying for these laws, the most promising first.
///
/// `directed` are laws that have to decrease from left to right: an order under which one of them
/// does not is left out, so that nothing is left if there is no such order or none was found;
/// [`misdirected`] says of one order which rules stand in the way. The bank holds the symbols of
/// the theory and no others.
pub fn candidates(bank: &Bank, laws: &[Law], directed: &[Law]) -> Vec<Candidate> {
    let all: Vec<Law> = directed.iter().chain(laws).copied().collect();
    let shape = Shape::new(bank, &all);
    let mut found = Vec::new();
    let mut propose = |setting: Option<OrderSetting>, why| {
        let Some(setting) = setting else { return };
        let known = |candidate: &Candidate| candidate.setting == setting;
        if found.len() < CANDIDATE_LIMIT
            && !found.iter().any(known)
            && misdirected(bank, &setting, directed) == Ok(vec![])
        {
            found.push(Candidate { setting, why });
        }
    };
    let by_definition = lpo_for(bank, directed, laws, &shape.by_arity);
    let plain = kbo(&shape.by_arity, vec![], 1);
    let weightless = shape.weightless;
    let inverse_weightless = weightless.map(|top| kbo_without_weight(top, &shape.by_arity));
    if shape.has_inverse {
        propose(
            by_definition.clone(),
            "puts each operation above those that define it",
        );
        propose(
            inverse_weightless.clone(),
            "lets the inverse weigh nothing and come first, as groups need it",
        );
    } else if directs_more(bank, by_definition.as_ref(), &plain, laws) {
        propose(
            by_definition.clone(),
            "lets definitions decrease that are larger than what they define",
        );
    }
    propose(Some(plain), "measures terms by their size");
    propose(
        by_definition,
        "puts each operation above those that define it",
    );
    propose(
        balanced(bank, directed, laws, &shape.by_arity),
        "has weights under which most laws decrease from left to right",
    );
    propose(
        distributive(bank, directed, &shape),
        "puts an operation that distributes above the one that it distributes over",
    );
    let low = weightless.map(|top| kbo_without_weight(top, &shape.rare_low));
    propose(
        Some(low.unwrap_or_else(|| kbo(&shape.rare_low, vec![], 1))),
        "puts rare symbols low",
    );
    propose(
        Some(lpo(shape.by_arity.clone())),
        "puts operations with more arguments first",
    );
    propose(Some(lpo(shape.by_rarity())), "puts rare symbols first");
    propose(
        inverse_weightless,
        "lets the unary operation weigh nothing and come first",
    );
    propose(
        heavy_variables(bank, &shape.by_arity),
        "lets variables weigh 2, so that few variables count for more",
    );
    if found.is_empty() {
        let setting = search(bank, directed);
        found.extend(setting.map(|setting| Candidate {
            setting,
            why: "lets every rule decrease",
        }));
    }
    found
}

/// An order under which all these laws decrease from left to right, if a bounded search finds one:
/// first among the lexicographic path orders, where the search finds all there is to find unless
/// it takes too much work, then among the Knuth–Bendix orders, by correcting weights.
pub fn search(bank: &Bank, directed: &[Law]) -> Option<OrderSetting> {
    let otherwise = Shape::new(bank, directed).by_arity;
    let by_path = || {
        let start = Precedence::over(bank, directed, SYMBOL_LIMIT)?;
        let precedence = extend_for(bank, &start, directed, PATIENT)?;
        Some(lpo(precedence.extend(&otherwise)))
    };
    let right = |setting: &OrderSetting| misdirected(bank, setting, directed) == Ok(vec![]);
    by_path()
        .filter(right)
        .or_else(|| weigh(bank, directed, &otherwise).filter(right))
}

/// Which of these laws, by place, do not decrease from left to right.
///
/// Unlike [`Order::greater`] this takes a bank with any weights: it weighs the laws afresh.
pub fn misdirected(
    bank: &Bank,
    setting: &OrderSetting,
    directed: &[Law],
) -> Result<Vec<usize>, OrderProblem> {
    let order = Order::new(setting, bank.symbols())?;
    if directed.is_empty() {
        return Ok(Vec::new());
    }
    let weight = |symbol| order.weight(symbol);
    let copy = Reweighed::new(bank, directed, order.variable_weight(), weight);
    let decreases = |&(l, r): &Law| order.orients(&copy.bank, l, r);
    let places = copy.laws.iter().enumerate();
    Ok(places
        .filter(|(_, law)| !decreases(law))
        .map(|(place, _)| place)
        .collect())
}

/// Is there a law that decreases from left to right under the first order but not the second?
fn directs_more(
    bank: &Bank,
    first: Option<&OrderSetting>,
    second: &OrderSetting,
    laws: &[Law],
) -> bool {
    let wrong = |setting| misdirected(bank, setting, laws);
    match (first.map(wrong), wrong(second)) {
        (Some(Ok(first)), Ok(second)) => second.iter().any(|law| !first.contains(law)),
        _ => false,
    }
}

fn lpo(precedence: Vec<Symbol>) -> OrderSetting {
    OrderSetting {
        kind: OrderKind::Lpo,
        precedence,
        weights: Vec::new(),
        variable_weight: 1,
    }
}

fn kbo(precedence: &[Symbol], weights: Vec<(Symbol, u32)>, variable_weight: u32) -> OrderSetting {
    OrderSetting {
        kind: OrderKind::Kbo,
        precedence: precedence.to_vec(),
        weights,
        variable_weight,
    }
}

fn kbo_without_weight(top: Symbol, others: &[Symbol]) -> OrderSetting {
    let others = others.iter().copied().filter(|&symbol| symbol != top);
    let precedence: Vec<_> = std::iter::once(top).chain(others).collect();
    kbo(&precedence, vec![(top, 0)], 1)
}

fn heavy_variables(bank: &Bank, precedence: &[Symbol]) -> Option<OrderSetting> {
    let constants = bank.symbols().iter().enumerate();
    let weights = constants
        .filter(|(_, info)| info.arguments.is_empty())
        .map(|(index, _)| (Symbol(index as u32), 2))
        .collect();
    Some(kbo(precedence, weights, 2))
}

/// A lexicographic path order under which all directed laws decrease, and as many of the others
/// as will, one after the other, from left to right if possible, else from right to left.
fn lpo_for(
    bank: &Bank,
    directed: &[Law],
    laws: &[Law],
    otherwise: &[Symbol],
) -> Option<OrderSetting> {
    let looked_at = &laws[..laws.len().min(LAW_LIMIT)];
    let start = Precedence::over(bank, directed.iter().chain(looked_at), SYMBOL_LIMIT)?;
    let mut precedence = extend_for(bank, &start, directed, PATIENT)?;
    for &(left, right) in looked_at {
        let better = extend_for(bank, &precedence, &[(left, right)], BRIEF)
            .or_else(|| extend_for(bank, &precedence, &[(right, left)], BRIEF));
        precedence = better.unwrap_or(precedence);
    }
    Some(lpo(precedence.extend(otherwise)))
}

/// As [`lpo_for`], but the laws of distributivity come first, whichever way they are written.
fn distributive(bank: &Bank, directed: &[Law], shape: &Shape) -> Option<OrderSetting> {
    if shape.distributive.is_empty() {
        return None;
    }
    lpo_for(bank, directed, &shape.distributive, &shape.by_arity)
}

/// A Knuth–Bendix order under which all directed laws decrease, and as many of the others as will.
fn balanced(
    bank: &Bank,
    directed: &[Law],
    laws: &[Law],
    otherwise: &[Symbol],
) -> Option<OrderSetting> {
    let mut setting = weigh(bank, directed, otherwise)?;
    let mut kept = directed.to_vec();
    for &law in laws.iter().take(LAW_LIMIT) {
        kept.push(law);
        match weigh(bank, &kept, otherwise) {
            Some(better) => setting = better,
            None => drop(kept.pop()),
        }
    }
    Some(setting)
}

#[cfg(test)]
mod tests;

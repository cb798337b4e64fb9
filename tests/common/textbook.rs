//! Reduction orders word for word from the textbook: Baader & Nipkow, Term Rewriting and All That
//! (1998), 5.4.12 and 5.4.18, from memory; recursive, on trees, for ground terms too.

use super::tree::Tree::{self, App, Var};
use equable::order::{OrderKind, OrderSetting};
use equable::session::Session;
use serde_json::Value;
use std::collections::{BTreeMap, BTreeSet};

/// An order by the names of symbols. Prefix and infix uses of one sign must not both occur.
pub struct Textbook {
    kind: OrderKind,
    /// All symbols, greatest first.
    precedence: Vec<String>,
    weights: BTreeMap<String, u64>,
    variable: u64,
}

impl Textbook {
    /// The order that a session's theory states.
    pub fn stated(session: &Session) -> Self {
        let setting = session.theory().order.as_ref().expect("a stated order");
        Self::new(session, setting)
    }

    fn new(session: &Session, setting: &OrderSetting) -> Self {
        let symbols = session.theory().signature.symbols();
        let named = setting.precedence.iter().map(|s| s.index());
        let rest = (0..symbols.len()).filter(|n| named.clone().all(|other| other != *n));
        let order = named.clone().chain(rest);
        let weights = symbols.iter().enumerate().map(|(n, symbol)| {
            let stated = setting.weights.iter().find(|(s, _)| s.index() == n);
            (
                symbol.name.clone(),
                stated.map_or(1, |(_, weight)| u64::from(*weight)),
            )
        });
        Textbook {
            kind: setting.kind,
            precedence: order.map(|n| symbols[n].name.clone()).collect(),
            weights: weights.collect(),
            variable: u64::from(setting.variable_weight),
        }
    }

    /// The order of a file of evidence, if its parameters are those of a reduction order.
    pub fn of_json(order: &Value, operators: &BTreeMap<String, usize>) -> Result<Self, String> {
        let precedence = order["precedence"].as_array().ok_or("no precedence")?;
        let precedence = precedence.iter().filter_map(|name| name.as_str());
        let precedence: Vec<String> = precedence.map(str::to_owned).collect();
        let distinct: BTreeSet<&String> = precedence.iter().collect();
        let all = operators.keys().all(|name| distinct.contains(name));
        if distinct.len() != precedence.len() || !all {
            return Err("the precedence is not one".to_owned());
        }
        if order["kind"] == "lpo" {
            return Ok(Textbook {
                kind: OrderKind::Lpo,
                precedence,
                weights: BTreeMap::new(),
                variable: 1,
            });
        }
        let variable = order["variable"].as_u64().filter(|weight| *weight > 0);
        let mut weights = BTreeMap::new();
        for (name, arity) in operators {
            let weight = order["weights"][name].as_u64().ok_or("no weight")?;
            let too_light = *arity == 0 && variable.is_none_or(|least| weight < least);
            if too_light || *arity == 1 && weight == 0 && precedence[0] != *name {
                return Err("the weights are not admissible".to_owned());
            }
            weights.insert(name.clone(), weight);
        }
        Ok(Textbook {
            kind: OrderKind::Kbo,
            precedence,
            weights,
            variable: variable.ok_or("variables weigh nothing")?,
        })
    }

    pub fn greater(&self, s: &Tree, t: &Tree) -> bool {
        match self.kind {
            OrderKind::Kbo => self.kbo(s, t),
            OrderKind::Lpo => self.lpo(s, t),
        }
    }

    fn above(&self, f: &str, g: &str) -> bool {
        let place = |f: &str| self.precedence.iter().position(|name| name == f);
        place(f) < place(g)
    }

    fn weight(&self, t: &Tree) -> u64 {
        match t {
            Var(_) => self.variable,
            App(f, arguments) => {
                self.weights[f] + arguments.iter().map(|t| self.weight(t)).sum::<u64>()
            }
        }
    }

    fn kbo(&self, s: &Tree, t: &Tree) -> bool {
        let (in_s, in_t) = (occurrences(s), occurrences(t));
        let too_many = |(x, n): (&&str, &u32)| in_s.get(x).unwrap_or(&0) < n;
        if in_t.iter().any(too_many) {
            return false;
        }
        let (of_s, of_t) = (self.weight(s), self.weight(t));
        if of_s != of_t {
            return of_s > of_t;
        }
        match (s, t) {
            (Var(_), _) => false,
            (App(..), Var(_)) => s != t,
            (App(f, _), App(g, _)) if f != g => self.above(f, g),
            (App(_, ss), App(_, ts)) => self.first_greater(ss, ts),
        }
    }

    fn lpo(&self, s: &Tree, t: &Tree) -> bool {
        let (App(f, ss), true) = (s, s != t) else {
            return false;
        };
        match t {
            Var(x) => occurrences(s).contains_key(x.as_str()),
            App(g, ts) => {
                ss.iter().any(|a| a == t || self.lpo(a, t))
                    || ts.iter().all(|a| self.lpo(s, a))
                        && (self.above(f, g) || f == g && self.first_greater(ss, ts))
            }
        }
    }

    fn first_greater(&self, ss: &[Tree], ts: &[Tree]) -> bool {
        let first = ss.iter().zip(ts).find(|(s, t)| s != t);
        first.is_some_and(|(s, t)| self.greater(s, t))
    }
}

fn occurrences(t: &Tree) -> BTreeMap<&str, u32> {
    let mut counts = BTreeMap::new();
    let mut stack = vec![t];
    while let Some(t) = stack.pop() {
        match t {
            Var(x) => *counts.entry(x.as_str()).or_default() += 1,
            App(_, arguments) => stack.extend(arguments),
        }
    }
    counts
}

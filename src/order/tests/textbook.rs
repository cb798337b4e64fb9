//! The orders word for word from the textbook, recursive and for trees.

use super::world::Tree::{self, App, Var};
use crate::order::{OrderKind, OrderSetting};
use std::collections::BTreeMap;

/// The definitions of Baader & Nipkow 1998, 5.4.12 and 5.4.18, word for word, for trees.
pub struct Textbook<'a>(pub &'a OrderSetting);

impl Textbook<'_> {
    pub fn greater(&self, s: &Tree, t: &Tree) -> bool {
        match self.0.kind {
            OrderKind::Kbo => self.kbo(s, t),
            OrderKind::Lpo => self.lpo(s, t),
        }
    }

    pub fn above(&self, f: usize, g: usize) -> bool {
        let place = |f| self.0.precedence.iter().position(|s| s.index() == f);
        place(f) < place(g)
    }

    pub fn weight(&self, t: &Tree) -> u32 {
        match t {
            Var(_) => self.0.variable_weight,
            App(f, arguments) => {
                let own = self.0.weights.iter().find(|(s, _)| s.index() == *f);
                own.expect("every symbol has a weight").1
                    + arguments.iter().map(|t| self.weight(t)).sum::<u32>()
            }
        }
    }

    pub fn kbo(&self, s: &Tree, t: &Tree) -> bool {
        let (in_s, in_t) = (occurrences(s), occurrences(t));
        if in_t.iter().any(|(x, n)| in_s.get(x).unwrap_or(&0) < n) {
            return false;
        }
        if self.weight(s) != self.weight(t) {
            return self.weight(s) > self.weight(t);
        }
        match (s, t) {
            (Var(_), _) => false,
            (App(..), Var(_)) => {
                let mut inner = s;
                while let App(_, arguments) = inner {
                    let [argument] = &arguments[..] else {
                        return false;
                    };
                    inner = argument;
                }
                inner == t
            }
            (App(f, _), App(g, _)) if f != g => self.above(*f, *g),
            (App(_, ss), App(_, ts)) => self.first_greater(ss, ts),
        }
    }

    pub fn lpo(&self, s: &Tree, t: &Tree) -> bool {
        let (App(f, ss), true) = (s, s != t) else {
            return false;
        };
        match t {
            Var(x) => occurrences(s).contains_key(x),
            App(g, ts) => {
                ss.iter()
                    .any(|argument| argument == t || self.lpo(argument, t))
                    || ts.iter().all(|argument| self.lpo(s, argument))
                        && (self.above(*f, *g) || f == g && self.first_greater(ss, ts))
            }
        }
    }

    pub fn first_greater(&self, ss: &[Tree], ts: &[Tree]) -> bool {
        let first = ss.iter().zip(ts).find(|(s, t)| s != t);
        first.is_some_and(|(s, t)| self.greater(s, t))
    }
}

pub fn occurrences(t: &Tree) -> BTreeMap<u32, u32> {
    let mut counts = BTreeMap::new();
    let mut stack = vec![t];
    while let Some(t) = stack.pop() {
        match t {
            Var(x) => *counts.entry(*x).or_default() += 1,
            App(_, arguments) => stack.extend(arguments),
        }
    }
    counts
}

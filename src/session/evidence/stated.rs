//! What evidence states beside its chains: the sorts of what it mentions, and the order.

use super::Writer;
use crate::order::OrderKind;
use crate::proof::{self, Name};
use crate::term::Symbol;

impl Writer<'_> {
    pub(super) fn types(&mut self) -> Option<proof::Types> {
        if !self.naming.typed {
            return None;
        }
        let mut types = proof::Types::default();
        for symbol in &self.operators {
            let name = self.terms.name(&self.naming.symbols[symbol.index()]);
            let sorts = self.naming.types[symbol.index()].iter();
            let sorts = sorts.map(|s| self.terms.name(&self.naming.sorts[usize::from(s.0)]));
            types.operators.push((name, sorts.collect()));
        }
        for (name, sort) in &self.variables {
            let sort = self.terms.name(&self.naming.sorts[usize::from(sort.0)]);
            types.variables.push((*name, sort));
        }
        types.variables.sort_unstable();
        Some(types)
    }

    pub(super) fn order(&mut self) -> proof::StatedOrder {
        let order = &self.engine.system.order;
        let theory = |s: &Symbol| s.index() < self.naming.symbols.len();
        let precedence: Vec<Symbol> = order.precedence().into_iter().filter(theory).collect();
        let kbo = order.kind() == OrderKind::Kbo;
        let weight = |s: &Symbol| u64::from(order.weight(*s));
        let weights: Vec<u64> = precedence.iter().map(weight).collect();
        let names: Vec<Name> = precedence
            .iter()
            .map(|s| self.terms.name(&self.naming.symbols[s.index()]))
            .collect();
        proof::StatedOrder {
            kind: if kbo {
                proof::OrderKind::KnuthBendix
            } else {
                proof::OrderKind::LexicographicPath
            },
            weights: if kbo {
                names.iter().copied().zip(weights).collect()
            } else {
                Vec::new()
            },
            precedence: names,
            variable: u64::from(order.variable_weight()),
        }
    }
}

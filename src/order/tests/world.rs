//! Small terms and settings to try orders on.

use crate::order::{Comparison, Order, OrderKind, OrderSetting};
use crate::term::{Bank, Sort, Symbol, SymbolInfo, TermId, Variable};
use Tree::{App, Var};
use proptest::prelude::*;

/// Arities of the symbols: three constants, two unary, two binary, one ternary symbol.
pub const ARITIES: [usize; 8] = [0, 0, 0, 1, 1, 2, 2, 3];

/// Variables 0 to 2 have packed counts; a term with variable 20 is wide.
pub const VARIABLES: [u32; 4] = [0, 1, 2, 20];

#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Tree {
    Var(u32),
    App(usize, Vec<Tree>),
}

pub fn trees(leaf: BoxedStrategy<Tree>) -> impl Strategy<Value = Tree> {
    leaf.prop_recursive(5, 24, 3, |inner| {
        (3usize..8, prop::collection::vec(inner, 3)).prop_map(|(symbol, mut arguments)| {
            arguments.truncate(ARITIES[symbol]);
            App(symbol, arguments)
        })
    })
}

pub fn ground() -> impl Strategy<Value = Tree> {
    trees((0usize..3).prop_map(|symbol| App(symbol, vec![])).boxed())
}

pub fn open() -> impl Strategy<Value = Tree> {
    let constants = (0usize..3).prop_map(|symbol| App(symbol, vec![]));
    let few = (0usize..2).prop_map(|index| Var(VARIABLES[index]));
    let any = prop::sample::select(VARIABLES.to_vec()).prop_map(Var);
    trees(prop_oneof![1 => constants, 4 => few, 1 => any].boxed())
}

/// Settings that are admissible by construction; half of them have a weightless unary symbol.
pub fn settings() -> impl Strategy<Value = OrderSetting> {
    let precedence = Just((0..8).map(Symbol).collect::<Vec<_>>()).prop_shuffle();
    (
        any::<[bool; 2]>(),
        precedence,
        prop::array::uniform8(0u32..3),
        1u32..3,
    )
        .prop_map(
            |([kbo, weightless], mut precedence, weights, variable_weight)| {
                if !kbo {
                    return setting(OrderKind::Lpo, precedence, vec![], 1);
                }
                let mut weights = weights.to_vec();
                for (weight, arity) in weights.iter_mut().zip(ARITIES) {
                    match arity {
                        0 => *weight += variable_weight,
                        1 => *weight += 1,
                        _ => {}
                    }
                }
                if weightless {
                    weights[3] = 0;
                    precedence.retain(|&symbol| symbol != Symbol(3));
                    precedence.insert(0, Symbol(3));
                }
                let weights = (0..8).map(Symbol).zip(weights).collect();
                setting(OrderKind::Kbo, precedence, weights, variable_weight)
            },
        )
}

pub fn setting(
    kind: OrderKind,
    precedence: Vec<Symbol>,
    weights: Vec<(Symbol, u32)>,
    variable_weight: u32,
) -> OrderSetting {
    OrderSetting {
        kind,
        precedence,
        weights,
        variable_weight,
    }
}

pub fn shapes() -> Vec<SymbolInfo> {
    let shape = |&arity: &usize| SymbolInfo {
        arguments: vec![Sort(0); arity].into(),
        result: Sort(0),
        weight: 1,
    };
    ARITIES.iter().map(shape).collect()
}

pub struct World {
    pub order: Order,
    pub bank: Bank,
}

impl World {
    pub fn new(setting: &OrderSetting) -> World {
        let order = Order::new(setting, &shapes()).expect("the setting is admissible");
        let mut bank = Bank::new(order.variable_weight());
        for (index, mut info) in shapes().into_iter().enumerate() {
            info.weight = order.weight(Symbol(index as u32));
            bank.declare(info);
        }
        World { order, bank }
    }

    pub fn term(&mut self, tree: &Tree) -> TermId {
        match tree {
            Var(index) => self.variable(*index),
            App(symbol, arguments) => {
                let arguments: Vec<_> = arguments.iter().map(|tree| self.term(tree)).collect();
                self.bank.apply(Symbol(*symbol as u32), &arguments)
            }
        }
    }

    pub fn variable(&mut self, index: u32) -> TermId {
        let sort = Sort(0);
        self.bank.variable(Variable { index, sort })
    }

    pub fn compare(&mut self, s: &Tree, t: &Tree) -> Comparison {
        let (s, t) = (self.term(s), self.term(t));
        self.order.compare(&self.bank, s, t)
    }

    pub fn greater(&self, s: TermId, t: TermId) -> bool {
        self.order.greater(&self.bank, s, t)
    }
}

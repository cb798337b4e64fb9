//! The parameters of a reduction order, as a user states them.

use crate::term::Symbol;

/// Which family of orders.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum OrderKind {
    /// The Knuth–Bendix order (Knuth & Bendix 1970).
    Kbo,
    /// The lexicographic path order (Kamin & Lévy 1980), arguments from left to right.
    Lpo,
}

/// The parameters of a reduction order.
///
/// Symbols that the precedence does not name come after those that it names, in the order of
/// their declaration; a symbol without a stated weight weighs 1.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct OrderSetting {
    /// The family.
    pub kind: OrderKind,
    /// The precedence, greatest first.
    pub precedence: Vec<Symbol>,
    /// Stated weights; only for the Knuth–Bendix order.
    pub weights: Vec<(Symbol, u32)>,
    /// The weight of a variable, at least 1; only for the Knuth–Bendix order.
    pub variable_weight: u32,
}

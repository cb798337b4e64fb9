//! What the benchmarks share: symbols, orders, and the best of several timings.
//!
//! Every figure is the best of several runs in one process, and every ratio compares two things
//! that were timed in turn in the same process, so that a slow machine slows both.

// Each benchmark compiles this for itself and uses a part of it.
#![allow(dead_code)]

use equable::order::{Order, OrderKind, OrderSetting};
use equable::term::{Sort, Symbol, SymbolInfo};
use std::time::{Duration, Instant};

pub const ONE: Sort = Sort(0);

/// Symbols of one sort with these numbers of arguments.
pub fn symbols(arities: impl IntoIterator<Item = usize>) -> Vec<SymbolInfo> {
    let info = |arity| SymbolInfo {
        arguments: vec![ONE; arity].into(),
        result: ONE,
        weight: 1,
    };
    arities.into_iter().map(info).collect()
}

/// The order by size, precedence as declared.
pub fn by_size(symbols: &[SymbolInfo]) -> Order {
    order(OrderKind::Kbo, symbols)
}

/// The lexicographic path order, precedence as declared.
pub fn by_path(symbols: &[SymbolInfo]) -> Order {
    order(OrderKind::Lpo, symbols)
}

fn order(kind: OrderKind, symbols: &[SymbolInfo]) -> Order {
    let setting = OrderSetting {
        kind,
        precedence: (0..symbols.len() as u32).map(Symbol).collect(),
        weights: Vec::new(),
        variable_weight: 1,
    };
    Order::new(&setting, symbols).expect("an admissible order")
}

/// The shortest of so many runs; `prepare` is not timed.
pub fn best<T, R>(
    runs: usize,
    mut prepare: impl FnMut() -> T,
    mut run: impl FnMut(T) -> R,
) -> Duration {
    let mut shortest = Duration::MAX;
    for _ in 0..runs {
        let input = prepare();
        let begun = Instant::now();
        let result = std::hint::black_box(run(input));
        shortest = shortest.min(begun.elapsed());
        drop(result);
    }
    shortest
}

/// A sequence of numbers that looks random and is the same everywhere (Marsaglia 2003).
pub struct Random(pub u64);

impl Random {
    pub fn below(&mut self, bound: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % bound as u64) as usize
    }
}

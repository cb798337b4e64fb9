//! Reduction orders and the choice of their parameters.

mod setting;

pub use setting::{OrderKind, OrderSetting};

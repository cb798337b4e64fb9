//! Reduction orders and the choice of their parameters.

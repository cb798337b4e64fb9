//! Proof objects and the independent checkers.

//! Symbols, hash-consed terms, substitutions, positions, matching and unification.

//! The table of rewrites, the index of rules, and ordered rewriting.

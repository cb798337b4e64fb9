//! Signatures with names, laws, definitions and claims.

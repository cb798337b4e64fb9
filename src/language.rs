//! Text to theories and terms, and back.

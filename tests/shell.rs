//! The shell in a real pseudo-terminal: keys go in, and what counts is what stands on the screen.

mod shell {
    pub mod editing;
    pub mod leaving;
    pub mod terminal;
    pub mod working;
}

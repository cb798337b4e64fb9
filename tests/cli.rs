//! The program on the command line and behind a pipe: what it prints, and with what status it ends.

mod cli {
    pub mod bad_input;
    pub mod clauses;
    pub mod help;
    pub mod json;
    pub mod program;
    pub mod statuses;
    pub mod streams;
}

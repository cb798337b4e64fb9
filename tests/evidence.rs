//! Evidence outside the program: written by one process, verified by another, read by hand.

mod common;

mod evidence {
    pub mod files;
    pub mod hostile;
    pub mod place;
}

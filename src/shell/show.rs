//! Results as text.

mod algebra;
mod answer;
mod claims;
mod completion;
mod proof;

pub use algebra::known as known_algebra;
pub use answer::{Place, answer, answer_again, ink, normal, program_fault};
pub use claims::{claims, claims_left, claims_summary};
pub use completion::completion;
pub use proof::{chain, proof, proof_short};

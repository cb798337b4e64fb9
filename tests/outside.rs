//! Values from outside the project, each with its source, and files that are opened and saved.

mod common;

#[path = "outside/arithmetic.rs"]
mod arithmetic;
#[path = "outside/classics.rs"]
mod classics;
#[path = "outside/complete_sets.rs"]
mod complete_sets;
#[path = "outside/finite_groups.rs"]
mod finite_groups;
#[path = "outside/free_algebras.rs"]
mod free_algebras;
#[path = "outside/questions.rs"]
mod questions;
#[path = "outside/saving.rs"]
mod saving;

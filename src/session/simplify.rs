//! Which techniques simplify and delete what, for all engines of a session.

use super::Session;
use crate::engine::{Arrows, Tallies};
use std::time::Duration;

/// The table in force, and what its cells have done.
#[derive(Clone, Debug)]
pub struct Simplifying {
    /// The table: as it was stated, else that of the engine that answers.
    pub arrows: Arrows,
    /// Was it stated?
    pub stated: bool,
    /// What the cells have done in all engines that there are.
    pub tallies: Tallies,
    /// How long these engines have worked, together.
    pub worked: Duration,
    /// Are there engines with other tables?
    pub helpers: bool,
}

impl Session {
    /// The table of techniques, with what each has done.
    pub fn simplifying(&self) -> Simplifying {
        let stated = self.workers.arrows();
        let best = self.workers.best_ref();
        let arrows = stated.or(best.map(|runner| runner.engine.arrows()));
        let arrows = arrows.unwrap_or_default();
        let mut now = Simplifying {
            arrows,
            stated: stated.is_some(),
            tallies: Tallies::default(),
            worked: Duration::ZERO,
            helpers: false,
        };
        for runner in &self.workers.runners {
            now.tallies.add(runner.engine.tallies());
            now.worked += runner.engine.worked();
            now.helpers |= runner.engine.arrows() != arrows;
        }
        now
    }
}

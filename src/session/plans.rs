//! Which engines are worth having for a question, beside the one that answers from its rules.

use super::workers::Plan;
use crate::engine::{Arrow, Arrows, Strategy, Technique};
use crate::order::{Candidate, candidates};
use crate::theory::Theory;

/// An engine for questions: which of the orders that are worth trying, and how pairs are chosen.
struct Helper {
    order: usize,
    larger: u32,
    smaller: u32,
    variable: u32,
    foreign: u32,
    connected: bool,
    aimed: bool,
    inside: bool,
}

const fn aimed(order: usize, [larger, smaller, variable, foreign]: [u32; 4]) -> Helper {
    Helper {
        order,
        larger,
        smaller,
        variable,
        foreign,
        connected: true,
        aimed: true,
        inside: true,
    }
}

const fn open(order: usize, weights: [u32; 4]) -> Helper {
    Helper {
        // So that it may claim to be complete.
        connected: false,
        aimed: false,
        ..aimed(order, weights)
    }
}

const fn outside(order: usize, weights: [u32; 4]) -> Helper {
    Helper {
        inside: false,
        ..open(order, weights)
    }
}

/// In the order in which they are tried. The first ones cover, taken greedily, what any settled of
/// 60 published problems in 1.5 s of CPU time; the later ones are there for variety.
const HELPERS: [Helper; 10] = [
    aimed(0, [4, 1, 5, 1]),
    aimed(1, [4, 1, 3, 2]),
    aimed(2, [4, 1, 3, 2]),
    aimed(0, [4, 1, 2, 1]),
    aimed(0, [4, 1, 3, 2]),
    open(0, [1, 1, 1, 1]),
    aimed(3, [4, 1, 3, 1]),
    open(0, [2, 1, 2, 2]),
    aimed(2, [4, 1, 5, 1]),
    aimed(4, [4, 1, 3, 1]),
];

/// The same for a question that has no subterms to aim at, as one with unknowns has not.
const UNAIMED: [Helper; 6] = [
    outside(0, [1, 1, 1, 1]),
    open(0, [1, 1, 1, 1]),
    open(0, [2, 1, 2, 2]),
    outside(1, [1, 1, 1, 1]),
    open(0, [4, 1, 3, 1]),
    outside(2, [1, 1, 1, 1]),
];

/// The helpers for a theory, the first one first; with those that are aimed only if the question
/// can be aimed at.
pub(super) fn helpers(theory: &Theory, can_be_aimed: bool) -> Vec<Plan> {
    let laws: Vec<_> = theory.laws.iter().map(|l| (l.left, l.right)).collect();
    let orders: Vec<Candidate> = candidates(&theory.bank, &laws, &[]);
    let plan = |helper: &Helper| {
        Some(Plan {
            candidate: orders.get(helper.order)?.clone(),
            strategy: Strategy {
                larger: helper.larger,
                smaller: helper.smaller,
                variable: helper.variable,
                foreign: helper.foreign,
                inside: helper.inside,
                arrows: match helper.connected {
                    true => Arrows::USUAL.with(Arrow::Chosen, Technique::Connected),
                    false => Arrows::USUAL,
                },
                ..Strategy::default()
            },
            own: false,
            aimed: helper.aimed,
        })
    };
    let helpers: &[Helper] = if can_be_aimed { &HELPERS } else { &UNAIMED };
    helpers.iter().filter_map(plan).collect()
}

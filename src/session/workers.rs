//! The engines of a session: one per order that is tried.
//!
//! While no order is stated, several are tried for a short time each, longer each round, and the
//! first that completes is kept. Each engine keeps its state, so that no work is done twice. Some
//! questions are settled by an order that never completes, so all engines take part in a search.

use super::control::Work;
use super::goal::Aim;
use super::plans;
use super::race::{Course, race};
use super::runner::Runner;
use crate::engine::{Arrows, Strategy};
use crate::order::{Candidate, OrderSetting, candidates};
use crate::rewrite::Stopped;
use crate::term::TermId;
use crate::theory::{Law, LawKind, Theory};

/// How a search by all engines ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Ended {
    /// This engine is complete.
    Complete(usize),
    /// The sides of the question met in this engine.
    Met(usize),
    /// No engine has a pair left, but each has given some up.
    Exhausted,
    /// Stopped from outside, or by a bound.
    Stopped(Stopped),
}

/// Why there is no engine.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum NoOrder {
    /// No order was found in which all directed rules decrease.
    Directed {
        /// The rule in the way, by name.
        rule: String,
        /// Why it is.
        because: Obstacle,
    },
    /// The stated order is not admissible for the symbols as they are now.
    Stated(crate::order::OrderProblem),
    /// In the stated order these directed rules, by name, do not decrease.
    Misdirected(Vec<String>),
}

/// Why a directed rule stands in the way of every order.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Obstacle {
    /// This variable stands on its right side only.
    OpenVariable(String),
    /// Its two sides differ in nothing but the places of their variables, so that it can be
    /// applied again to its own result.
    Permutation,
    /// By itself it decreases in no order that was tried.
    Alone,
    /// It decreases, but not in one order with these rules.
    With(Vec<String>),
}

/// An engine that may be worth having.
pub(super) struct Plan {
    pub(super) candidate: Candidate,
    pub(super) strategy: Strategy,
    /// May it answer from its rules, and complete? Others look for proofs only.
    pub(super) own: bool,
    /// Is it aimed at the question?
    pub(super) aimed: bool,
}

#[derive(Default)]
pub(super) struct Workers {
    pub(super) runners: Vec<Runner>,
    /// Those that have no engine yet, the next one last.
    pub(super) planned: Vec<Plan>,
    /// The engine that answers from its rules.
    best: usize,
    /// How many engines have been tried, those that were let go included.
    pub(super) tried: usize,
    /// The question for which helpers were planned.
    aimed_at: Option<(TermId, TermId)>,
    /// Did one complete?
    pub(super) settled: bool,
    /// Which ids the terms of the theory had when the engines took them in.
    lineage: u32,
    /// The order that the theory states.
    stated: Option<OrderSetting>,
    /// The table of techniques for all engines, if it was stated.
    arrows: Option<Arrows>,
}

impl Workers {
    /// Engines for the theory as it is: those there are, with what was added since, or new ones.
    pub(super) fn catch_up(&mut self, theory: &Theory, lineage: u32) -> Result<(), NoOrder> {
        let arrows = self.arrows;
        let done = self.follow(theory, lineage);
        self.set_arrows(arrows);
        done
    }

    /// States the table of techniques for all engines, or leaves it to their plans. Returns what
    /// was stated before.
    pub(super) fn set_arrows(&mut self, arrows: Option<Arrows>) -> Option<Arrows> {
        for runner in &mut self.runners {
            let wanted = arrows.unwrap_or(runner.strategy.arrows);
            if runner.engine.arrows() != wanted {
                runner.engine.set_arrows(wanted);
            }
        }
        std::mem::replace(&mut self.arrows, arrows)
    }

    /// The table of techniques, if it was stated.
    pub(super) fn arrows(&self) -> Option<Arrows> {
        self.arrows
    }

    fn follow(&mut self, theory: &Theory, lineage: u32) -> Result<(), NoOrder> {
        if self.lineage != lineage {
            *self = Workers {
                lineage,
                ..Workers::default()
            };
        }
        if !self.runners.is_empty() && self.stated != theory.order {
            // Old steps could cycle under another order, so nothing is kept.
            *self = Workers {
                lineage,
                ..Workers::default()
            };
        }
        if self.runners.iter().any(|runner| !runner.is_current(theory)) {
            self.runners.retain(|runner| runner.goal.is_none());
            self.aimed_at = None;
            self.best = 0;
        }
        let laws = self
            .runners
            .first()
            .map(|runner| runner.engine.laws().len());
        let kept = !self.runners.is_empty()
            && self
                .runners
                .iter_mut()
                .all(|runner| runner.catch_up(theory));
        if !kept {
            *self = Workers {
                lineage,
                ..Workers::fresh(theory)?
            };
        } else if laws
            != self
                .runners
                .first()
                .map(|runner| runner.engine.laws().len())
        {
            self.plan_again(theory)?;
        }
        Ok(())
    }

    /// After new laws, the order that completed the old ones is tried first, not alone.
    fn plan_again(&mut self, theory: &Theory) -> Result<(), NoOrder> {
        self.settled = false;
        let mut fresh = Workers::plan(theory)?;
        fresh.retain(|plan| {
            self.runners.iter().all(|runner| {
                runner.setting != plan.candidate.setting || runner.strategy != plan.strategy
            })
        });
        self.planned = fresh;
        Ok(())
    }

    fn fresh(theory: &Theory) -> Result<Self, NoOrder> {
        let mut workers = Workers {
            planned: Workers::plan(theory)?,
            stated: theory.order.clone(),
            ..Workers::default()
        };
        if let Some(plan) = workers.planned.pop() {
            workers.runners.push(Runner::planned(theory, plan)?);
            workers.tried = 1;
        }
        Ok(workers)
    }

    /// The engines to try, the first one last.
    fn plan(theory: &Theory) -> Result<Vec<Plan>, NoOrder> {
        let sides = |kind: fn(LawKind) -> bool| -> Vec<(TermId, TermId)> {
            let laws = theory.laws.iter().filter(|law| kind(law.kind));
            laws.map(|law| (law.left, law.right)).collect()
        };
        let directed = sides(|kind| kind == LawKind::Rule);
        let planned = match &theory.order {
            Some(setting) => {
                check_directed(theory, setting)?;
                vec![Candidate {
                    setting: setting.clone(),
                    why: "is the one that was stated",
                }]
            }
            None => {
                let rest = sides(|kind| kind != LawKind::Rule);
                candidates(&theory.bank, &rest, &directed)
            }
        };
        if planned.is_empty() {
            return Err(obstacle(theory));
        }
        let own = planned.into_iter().map(|candidate| Plan {
            candidate,
            strategy: Strategy::default(),
            own: true,
            aimed: false,
        });
        let mut planned: Vec<Plan> = own.collect();
        planned.reverse();
        Ok(planned)
    }

    /// From now on the order of the engine that answers is stated, and the only one.
    pub(super) fn state_order(&mut self) {
        self.settle(self.best);
        self.stated = self.runners.first().map(|runner| runner.setting.clone());
    }

    /// Begins with rules that were derived under a stated order.
    pub(super) fn begin_with(runner: Runner) -> Self {
        Workers {
            stated: Some(runner.setting.clone()),
            runners: vec![runner],
            tried: 1,
            ..Workers::default()
        }
    }

    /// Have the terms of the theory the ids that they had for the engines?
    pub(super) fn is_of(&self, lineage: u32) -> bool {
        self.lineage == lineage
    }

    /// The engine that answers.
    pub(super) fn best(&mut self) -> Option<&mut Runner> {
        self.runners.get_mut(self.best)
    }

    pub(super) fn best_ref(&self) -> Option<&Runner> {
        self.runners.get(self.best)
    }

    pub(super) fn get(&mut self, place: usize) -> &mut Runner {
        &mut self.runners[place]
    }

    pub(super) fn tried(&self) -> usize {
        self.tried
    }

    /// Pairs formed by all engines.
    pub(super) fn formed(&self) -> u64 {
        self.runners
            .iter()
            .map(|runner| runner.engine.counts().formed)
            .sum()
    }

    /// Runs the engines, by turns of slices that become longer, until one completes, the question
    /// is met, or the work is over: for a question on all cores, else on one, so that which order
    /// is kept does not depend on the machine.
    pub(super) fn run(
        &mut self,
        theory: &Theory,
        question: Option<(TermId, TermId)>,
        work: &mut Work,
    ) -> Result<Ended, NoOrder> {
        self.aim_at(theory, question, !work.pauses());
        let course = Course::new(self, theory, question);
        let (ended, course) = race(course, theory, work);
        course.give_back(self);
        match ended? {
            Ended::Complete(place) if self.runners[place].own => {
                self.settle(place);
                Ok(Ended::Complete(0))
            }
            ended => {
                self.choose();
                Ok(ended)
            }
        }
    }

    /// Lets go the engines that are aimed at another question, and plans those for this one if
    /// they are wanted.
    fn aim_at(&mut self, theory: &Theory, question: Option<(TermId, TermId)>, wanted: bool) {
        let fits = |runner: &Runner| {
            let goal = runner.goal.as_ref();
            goal.is_none_or(|goal| question.is_none_or(|question| goal.question == question))
        };
        let before = self.runners[..self.best.min(self.runners.len())].iter();
        self.best -= before.filter(|runner| !fits(runner)).count();
        self.runners.retain(fits);
        if question.is_none() || question == self.aimed_at || !wanted || self.settled {
            return;
        }
        self.aimed_at = question;
        self.planned.retain(|plan| plan.own);
        let known = |plan: &Plan| {
            self.runners.iter().any(|runner| {
                let same = runner.setting == plan.candidate.setting;
                !plan.aimed && same && runner.strategy == plan.strategy
            })
        };
        let can_be_aimed = question.is_some_and(|q| Aim::new(theory, q).is_some());
        let mut helpers = plans::helpers(theory, can_be_aimed);
        helpers.retain(|plan| !known(plan));
        // The next one is the last one: helpers and own orders by turns.
        let mut own = std::mem::take(&mut self.planned).into_iter().rev();
        let mut next = Vec::new();
        for helper in helpers {
            next.push(helper);
            next.extend(own.next());
        }
        next.extend(own);
        next.reverse();
        self.planned = next;
    }

    /// Keeps the engine that completed and lets the others go.
    fn settle(&mut self, place: usize) {
        self.runners.swap(0, place);
        self.runners.truncate(1);
        self.planned.clear();
        self.best = 0;
        self.settled = true;
    }

    /// The most promising engine is the one with the fewest rules: under an order that suits the
    /// laws, rules make each other redundant.
    fn choose(&mut self) {
        let rules = |place: &usize| self.runners[*place].engine.system.active();
        let own = (0..self.runners.len()).filter(|place| self.runners[*place].own);
        self.best = own.min_by_key(rules).unwrap_or(0);
    }
}

/// Is there an order under which all directed rules decrease?
pub(super) fn can_plan(theory: &Theory) -> Result<(), NoOrder> {
    if theory.laws.iter().all(|law| law.kind != LawKind::Rule) {
        return Ok(());
    }
    Workers::plan(theory).map(|_| ())
}

/// In a stated order, all directed rules must decrease.
pub(super) fn check_directed(theory: &Theory, setting: &OrderSetting) -> Result<(), NoOrder> {
    let rules: Vec<_> = theory
        .laws
        .iter()
        .filter(|law| law.kind == LawKind::Rule)
        .collect();
    let sides: Vec<_> = rules.iter().map(|law| (law.left, law.right)).collect();
    let wrong = crate::order::misdirected(&theory.bank, setting, &sides);
    match wrong.map_err(NoOrder::Stated)? {
        wrong if wrong.is_empty() => Ok(()),
        wrong => Err(NoOrder::Misdirected(
            wrong.iter().map(|&at| rules[at].name.clone()).collect(),
        )),
    }
}

/// Which directed rule stands in the way, the newest first.
fn obstacle(theory: &Theory) -> NoOrder {
    let rules: Vec<&Law> = theory
        .laws
        .iter()
        .filter(|law| law.kind == LawKind::Rule)
        .collect();
    let found = |rule: &Law, because| NoOrder::Directed {
        rule: rule.name.clone(),
        because,
    };
    for rule in rules.iter().rev() {
        if let Some(because) = obstacle_alone(theory, rule) {
            return found(rule, because);
        }
    }
    let orders = |rules: &[&Law]| {
        let sides: Vec<_> = rules.iter().map(|law| (law.left, law.right)).collect();
        crate::order::search(&theory.bank, &sides).is_some()
    };
    // Rules are taken out as long as no order suits the rest: what is left is needed.
    let mut needed = rules.clone();
    let mut place = 0;
    while place < needed.len() && needed.len() <= MOST_EXPLAINED {
        let mut rest = needed.clone();
        rest.remove(place);
        if orders(&rest) {
            place += 1;
        } else {
            needed = rest;
        }
    }
    let newest = needed.pop().expect("no rule at all is in nobody's way");
    found(
        newest,
        Obstacle::With(needed.iter().map(|law| law.name.clone()).collect()),
    )
}

/// With more directed rules than this, it is not found out which of them do not go together.
const MOST_EXPLAINED: usize = 64;

fn obstacle_alone(theory: &Theory, rule: &Law) -> Option<Obstacle> {
    let bank = &theory.bank;
    let left = bank.variables(rule.left);
    let open = bank
        .variables(rule.right)
        .into_iter()
        .find(|v| !left.contains(v));
    if let Some(open) = open {
        let name = theory.signature.variables()[open.index as usize]
            .name
            .clone();
        return Some(Obstacle::OpenVariable(name));
    }
    if crate::order::search(bank, &[(rule.left, rule.right)]).is_some() {
        return None;
    }
    let mut forth = crate::term::Substitution::default();
    let mut back = crate::term::Substitution::default();
    let variants = crate::term::match_term(bank, rule.left, rule.right, &mut forth)
        && crate::term::match_term(bank, rule.right, rule.left, &mut back);
    Some(if variants {
        Obstacle::Permutation
    } else {
        Obstacle::Alone
    })
}

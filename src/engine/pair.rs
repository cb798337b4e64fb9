//! What becomes of a pair that is chosen.

use super::arrows::Arrow;
use super::judge::Overlapping;
use super::occurrences::path;
use super::record::{Origin, Record, RecordStep};
use super::run::Engine;
use super::waiting::Choice;
use crate::order::Comparison;
use crate::rewrite::{Limits, RuleId, Step, StepBy, Stopped};
use crate::term::{TermId, renumber};

/// Sides larger than this are not kept: such a rule would cost more than it can be worth.
const LARGEST: u32 = 20_000;
/// How many numbers the simplification of one side may take to write down.
const MOST_NUMBERS: usize = 1 << 20;

impl Engine {
    /// Makes a rule of a chosen pair unless it is redundant.
    pub(super) fn process(&mut self, choice: &Choice, limits: &mut Limits) -> Result<(), Stopped> {
        if matches!(choice, Choice::Overlap { .. }) && self.is_redundant(choice, limits)? {
            self.counts.redundant += 1;
            return Ok(());
        }
        let Some((left, right)) = self.sides_of(choice) else {
            return Ok(());
        };
        let left_normal = self.system.normal_form(left, limits)?;
        let right_normal = self.system.normal_form(right, limits)?;
        // Overlaps were judged; without these tests, a rule that was retired could come back.
        let is_known = |engine: &mut Engine| {
            !matches!(choice, Choice::Overlap { .. })
                && (engine.is_instance(left_normal, right_normal)
                    || engine.joins_by_ac(left_normal, right_normal))
        };
        if left_normal == right_normal || is_known(self) {
            self.counts.redundant += 1;
            return Ok(());
        }
        let size = self
            .system
            .bank
            .size(left_normal)
            .max(self.system.bank.size(right_normal));
        if size > LARGEST && !matches!(choice, Choice::Law(_)) {
            self.counts.dropped += 1;
            return Ok(());
        }
        let steps = self
            .steps(left, left_normal)
            .zip(self.steps(right, right_normal));
        let Some((left_steps, right_steps)) = steps else {
            // A derivation that is too long to write down.
            self.counts.dropped += 1;
            return Ok(());
        };
        let record = Record {
            origin: self.origin_of(choice),
            left: left_steps,
            right: right_steps,
            swapped: false,
        };
        self.add_rule(left_normal, right_normal, record);
        Ok(())
    }

    /// Is the pair of an overlap deleted by some technique? Leaves no trace.
    fn is_redundant(&mut self, choice: &Choice, limits: &mut Limits) -> Result<bool, Stopped> {
        let mark = self.system.mark();
        let answer = match self.sides_of(choice) {
            None => Ok(true),
            Some(pair) => {
                let overlap = match *choice {
                    Choice::Overlap {
                        outer,
                        inner,
                        heir: false,
                        ..
                    } => Some(Overlapping { outer, inner }),
                    // What stands for another pair has not only its own peak.
                    _ => None,
                };
                let judged = self.judge(Arrow::Chosen, pair, overlap, limits);
                judged.map(|kept| kept.is_none())
            }
        };
        self.system.rollback(mark);
        answer
    }

    /// The sides of a pair as it is made, before simplification.
    pub(super) fn sides_of(&mut self, choice: &Choice) -> Option<(TermId, TermId)> {
        match *choice {
            Choice::Law(law) => Some(self.laws[law.0 as usize]),
            Choice::Whole(rule) => Some(self.system.rule(rule).sides(false)),
            Choice::Overlap {
                outer, at, inner, ..
            } => {
                if !self.unifies(outer, at, inner) {
                    return None;
                }
                self.build(outer, at, inner)
            }
        }
    }

    fn origin_of(&self, choice: &Choice) -> Origin {
        match *choice {
            Choice::Law(law) => Origin::Law(law),
            Choice::Whole(rule) => Origin::Rule(rule),
            Choice::Overlap {
                outer, at, inner, ..
            } => {
                let (side, _) = self.system.rule(outer.rule).sides(outer.backward);
                Origin::Overlap {
                    outer,
                    at: path(&self.system, side, at),
                    inner,
                }
            }
        }
    }

    /// The steps from a term to its normal form, as the record has them; nothing if they are too
    /// many.
    pub(super) fn steps(&mut self, from: TermId, to: TermId) -> Option<Vec<RecordStep>> {
        let steps = self.system.explain(from, to, MOST_NUMBERS)?;
        let expanded = steps.into_iter().flat_map(|step| self.record_steps(step));
        Some(expanded.collect())
    }

    fn record_steps(&mut self, step: Step) -> Vec<RecordStep> {
        match step.by {
            StepBy::Rule(by) => vec![RecordStep { by, at: step.at }],
            StepBy::Canonical => {
                let below = self.system.canonical_steps(step.before, step.after);
                let place = |rest: Vec<u32>| [&step.at[..], &rest[..]].concat();
                below
                    .into_iter()
                    .map(|(by, rest)| RecordStep {
                        by,
                        at: place(rest),
                    })
                    .collect()
            }
        }
    }

    /// Adds an equation in normal form as a rule, simplifies the others by it and lists its
    /// overlaps.
    fn add_rule(&mut self, left: TermId, right: TermId, mut record: Record) {
        let comparison = self.system.order.compare(&self.system.bank, left, right);
        let oriented = matches!(comparison, Comparison::Greater | Comparison::Less);
        let size = |term| self.system.bank.size(term);
        record.swapped = match comparison {
            Comparison::Greater => false,
            Comparison::Less => true,
            _ => size(left) < size(right),
        };
        let (left, right) = if record.swapped {
            (right, left)
        } else {
            (left, right)
        };
        let ([left, right], _) = renumber(&mut self.system.bank, [left, right]);
        let id = self.system.add(left, right, oriented);
        self.records.push(record);
        debug_assert_eq!(self.records.len(), self.system.rules().len());
        self.enter(id);
        self.reduce_others(id);
    }

    /// Makes an active rule known to the parts of the engine.
    pub(super) fn enter(&mut self, id: RuleId) {
        let rule = self.system.rule(id);
        let most = self
            .system
            .bank
            .size(rule.left)
            .max(self.system.bank.size(rule.right));
        if most > super::occurrences::MOST_PLACES {
            self.counts.dropped += 1;
        }
        self.unoriented += usize::from(!rule.oriented);
        self.notice_ac(id);
        self.occurrences.add(&self.system, id);
        self.parts.add(&self.system, id);
        self.unformed.push_back(id);
    }

    /// The priority of a rule that is to be simplified again.
    pub(super) fn priority_of(&mut self, rule: RuleId) -> u32 {
        let (left, right) = self.system.rule(rule).sides(false);
        self.weigher.priority(&self.system.bank, left, right)
    }
}

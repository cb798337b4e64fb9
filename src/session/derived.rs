//! Derived rules between the engine and the theory file.

use super::runner::Runner;
use crate::engine::{LawId, Origin, Record, RecordStep, ReplayError};
use crate::rewrite::{RuleId, RuleState, Use};
use crate::term::{Bank, Copier};
use crate::theory::{self, Derived, Law, LineId, Theory};
use rustc_hash::FxHashMap;
use std::collections::BTreeSet;

impl Runner {
    /// Derives the rules of the file again, in their order, and takes in those that come out as
    /// they are written. For each rule why it was refused, if it was.
    pub(super) fn take_derived<'t>(
        &mut self,
        theory: &'t Theory,
    ) -> Vec<(&'t Derived, Result<(), String>)> {
        let laws: FxHashMap<&str, u32> = theory
            .laws
            .iter()
            .enumerate()
            .map(|(n, law)| (law.name.as_str(), n as u32))
            .collect();
        let mut ids: FxHashMap<u32, RuleId> = FxHashMap::default();
        let mut results = Vec::new();
        for rule in &theory.derived {
            let taken = self.take_one(theory, rule, &laws, &ids);
            if let Ok(id) = taken {
                ids.insert(rule.number, id);
            }
            results.push((rule, taken.map(|_| ())));
        }
        results
    }

    fn take_one(
        &mut self,
        theory: &Theory,
        rule: &Derived,
        laws: &FxHashMap<&str, u32>,
        ids: &FxHashMap<u32, RuleId>,
    ) -> Result<RuleId, String> {
        let record = read_record(&rule.record, laws, ids)?;
        let sides = (self.term(theory, rule.left), self.term(theory, rule.right));
        let replayed = self
            .engine
            .replay(sides, rule.oriented, rule.retired, record);
        replayed.map_err(|error| explain(&error))
    }

    /// The active rules and those that their records rest on, numbered from 1 in the order of
    /// their derivation; terms are made in the theory's bank.
    pub(super) fn derived(&self, bank: &mut Bank, laws: &[Law]) -> Vec<Derived> {
        let mut needed: BTreeSet<RuleId> = self.engine.active_rules().collect();
        let mut open: Vec<RuleId> = needed.iter().copied().collect();
        while let Some(id) = open.pop() {
            open.extend(
                self.engine
                    .record(id)
                    .rules()
                    .filter(|below| needed.insert(*below)),
            );
        }
        let numbers: FxHashMap<RuleId, u32> = needed.iter().copied().zip(1..).collect();
        let mut copier = Copier::default();
        let from = &self.engine.system.bank;
        let mut copy = |term| copier.copy(from, bank, term, |s| s, |bank, v| bank.variable(v));
        needed
            .iter()
            .map(|&id| {
                let rule = self.engine.system.rule(id);
                Derived {
                    number: numbers[&id],
                    left: copy(rule.left),
                    right: copy(rule.right),
                    oriented: rule.oriented,
                    retired: rule.state != RuleState::Active,
                    record: write_record(self.engine.record(id), laws, &numbers),
                    line: LineId(u32::MAX),
                }
            })
            .collect()
    }
}

fn write_record(record: &Record, laws: &[Law], numbers: &FxHashMap<RuleId, u32>) -> theory::Record {
    let using = |by: &Use| theory::Use {
        rule: numbers[&by.rule],
        backward: by.backward,
    };
    let step = |step: &RecordStep| theory::RecordStep {
        by: using(&step.by),
        at: step.at.clone(),
    };
    theory::Record {
        origin: match &record.origin {
            Origin::Law(law) => theory::Origin::Law(laws[law.0 as usize].name.clone()),
            Origin::Rule(rule) => theory::Origin::Rule(numbers[rule]),
            Origin::Overlap { outer, at, inner } => theory::Origin::Overlap {
                outer: using(outer),
                at: at.clone(),
                inner: using(inner),
            },
        },
        left: record.left.iter().map(step).collect(),
        right: record.right.iter().map(step).collect(),
        swapped: record.swapped,
    }
}

fn read_record(
    record: &theory::Record,
    laws: &FxHashMap<&str, u32>,
    ids: &FxHashMap<u32, RuleId>,
) -> Result<Record, String> {
    let rule = |number: &u32| {
        let missing = || format!("it rests on rule {number}, which is not there or was refused");
        ids.get(number).copied().ok_or_else(missing)
    };
    let using = |by: &theory::Use| {
        rule(&by.rule).map(|rule| Use {
            rule,
            backward: by.backward,
        })
    };
    let step = |step: &theory::RecordStep| {
        using(&step.by).map(|by| RecordStep {
            by,
            at: step.at.clone(),
        })
    };
    Ok(Record {
        origin: match &record.origin {
            theory::Origin::Law(name) => {
                let law = laws.get(name.as_str());
                let law = law.ok_or_else(|| format!("there is no law {name}"))?;
                Origin::Law(LawId(*law))
            }
            theory::Origin::Rule(number) => Origin::Rule(rule(number)?),
            theory::Origin::Overlap { outer, at, inner } => Origin::Overlap {
                outer: using(outer)?,
                at: at.clone(),
                inner: using(inner)?,
            },
        },
        left: record.left.iter().map(step).collect::<Result<_, _>>()?,
        right: record.right.iter().map(step).collect::<Result<_, _>>()?,
        swapped: record.swapped,
    })
}

fn explain(error: &ReplayError) -> String {
    match error {
        ReplayError::NoSuchRule(_) => "it rests on a rule that is not there".to_owned(),
        ReplayError::NoSuchLaw => "it rests on a law that is not there".to_owned(),
        ReplayError::NoSuchPlace(at) => {
            let at: Vec<String> = at.iter().map(u32::to_string).collect();
            format!(
                "its record names the place {}, where there is nothing",
                at.join(" ")
            )
        }
        ReplayError::NoOverlap => "its record names two rules that do not overlap there".to_owned(),
        ReplayError::DoesNotApply(_) => "a step of its record does not apply".to_owned(),
        ReplayError::Differs => "its record derives another equation".to_owned(),
        ReplayError::NotOriented => "it does not decrease in the stated order".to_owned(),
    }
}

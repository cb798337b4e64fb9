//! Aiming an engine at one question.
//!
//! Each subterm of the question gets a name: a constant, defined to be that subterm, that weighs as
//! little as a variable and stands lowest in the order. So whatever the laws make of these subterms
//! becomes short and is looked at early. That is conservative: a proof from the laws and the
//! definitions becomes one from the laws alone when every name is read as what it stands for, and
//! that is how it is written down. The question's variables are constants of the engine here.

use super::runner::Runner;
use super::workers::{NoOrder, Plan};
use crate::order::{OrderKind, OrderSetting};
use crate::term::{Copier, Sort, Symbol, SymbolInfo, TermId, Variable};
use crate::theory::Theory;
use rustc_hash::{FxHashMap, FxHashSet};

/// A question with more subterms than this is not aimed at.
const MOST_NAMES: usize = 64;

/// What the additional constants of an engine stand for.
#[derive(Clone, Debug)]
pub(super) struct Goal {
    /// The question, in the theory's bank.
    pub(super) question: (TermId, TermId),
    /// The question, in the engine's.
    pub(super) sides: [TermId; 2],
    /// The variables of the question.
    pub(super) variables: FxHashMap<Symbol, (String, Sort)>,
    /// The subterms that have names.
    pub(super) named: FxHashMap<Symbol, TermId>,
}

/// The question, prepared for any number of engines; nothing if it is too large.
pub(super) struct Aim {
    question: (TermId, TermId),
    variables: Vec<Variable>,
    /// Arguments come before the terms that they stand in.
    subterms: Vec<TermId>,
}

impl Aim {
    /// At a question between terms of the theory.
    pub(super) fn new(theory: &Theory, question: (TermId, TermId)) -> Option<Aim> {
        let bank = &theory.bank;
        let mut seen = FxHashSet::default();
        let mut stack = vec![question.0, question.1];
        while let Some(term) = stack.pop() {
            if !bank.arguments(term).is_empty() && seen.insert(term) {
                stack.extend(bank.arguments(term));
            }
            if seen.len() > MOST_NAMES {
                return None;
            }
        }
        let mut subterms: Vec<TermId> = seen.into_iter().collect();
        subterms.sort_unstable();
        let mut variables = bank.variables(question.0);
        variables.extend(bank.variables(question.1));
        variables.sort_unstable();
        variables.dedup();
        (!subterms.is_empty()).then_some(Aim {
            question,
            variables,
            subterms,
        })
    }
}

impl Runner {
    /// The engine of a plan, aimed at a question.
    pub(super) fn aimed(theory: &Theory, plan: Plan, aim: &Aim) -> Result<Self, NoOrder> {
        let mut symbols = theory.bank.symbols().to_vec();
        let first = symbols.len() as u32;
        let variables = aim.variables.iter().map(|v| v.sort);
        let named = aim.subterms.iter().map(|&term| theory.bank.sort(term));
        symbols.extend(variables.chain(named).map(|result| SymbolInfo {
            arguments: Box::new([]),
            result,
            weight: 1,
        }));
        let added = (first..symbols.len() as u32).map(Symbol);
        let setting = light(&plan.candidate.setting, added.clone());
        let mut runner = Runner::over(theory, &symbols, setting, plan)?;
        let constants: Vec<Symbol> = added.collect();
        let (of_variables, of_subterms) = constants.split_at(aim.variables.len());
        let bank = &mut runner.engine.system.bank;
        let values: FxHashMap<Variable, TermId> = aim
            .variables
            .iter()
            .zip(of_variables)
            .map(|(v, constant)| (*v, bank.apply(*constant, &[])))
            .collect();
        let mut copier = Copier::default();
        let mut copy = |runner: &mut Runner, term| {
            let bank = &mut runner.engine.system.bank;
            copier.copy(&theory.bank, bank, term, |s| s, |_, v| values[&v])
        };
        let sides = [aim.question.0, aim.question.1].map(|side| copy(&mut runner, side));
        let mut named = FxHashMap::default();
        for (&term, &constant) in aim.subterms.iter().zip(of_subterms) {
            let term = copy(&mut runner, term);
            let name = runner.engine.system.bank.apply(constant, &[]);
            runner.engine.add_law(term, name);
            named.insert(constant, term);
        }
        let variables: FxHashMap<Symbol, (String, Sort)> = aim
            .variables
            .iter()
            .zip(of_variables)
            .map(|(v, constant)| {
                let name = &theory.signature.variables()[v.index as usize].name;
                (*constant, (name.clone(), v.sort))
            })
            .collect();
        let reserved = variables.values().map(|(name, _)| name.clone());
        runner.naming.reserved = reserved.collect();
        runner.goal = Some(Goal {
            question: aim.question,
            sides,
            variables,
            named,
        });
        Ok(runner)
    }
}

/// The setting with constants that weigh what a variable weighs. Those that the precedence does
/// not name come last in it.
fn light(setting: &OrderSetting, added: impl Iterator<Item = Symbol>) -> OrderSetting {
    let mut setting = setting.clone();
    if setting.kind == OrderKind::Kbo {
        let weight = setting.variable_weight;
        setting.weights.extend(added.map(|symbol| (symbol, weight)));
    }
    setting
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::{Engine, Outcome, Strategy};
    use crate::order::candidates;
    use crate::proof::{self, Evidence, WorkLimit};
    use crate::rewrite::Limits;
    use crate::session::runner::Compared;
    use crate::session::subject::is_about;
    use crate::session::{Library, Session};
    use std::sync::Arc;
    use std::sync::atomic::{AtomicBool, Ordering};

    /// The claims of these theories, proved by an engine that is aimed at them.
    #[test]
    fn what_an_aimed_engine_proves_follows_from_the_laws_alone() {
        for (name, least) in [("group", 4), ("lattice", 3), ("natural", 1), ("list", 1)] {
            let session = Session::open(name, Library::default()).expect("it opens");
            let theory = session.session.theory();
            let proved = theory.claims.iter().filter(|claim| {
                let question = (claim.left, claim.right);
                let aim = Aim::new(theory, question).expect("it has subterms");
                let laws: Vec<_> = theory.laws.iter().map(|l| (l.left, l.right)).collect();
                let plan = Plan {
                    candidate: candidates(&theory.bank, &laws, &[])[0].clone(),
                    strategy: Strategy::default(),
                    own: false,
                    aimed: true,
                };
                let mut runner = Runner::aimed(theory, plan, &aim).expect("the order fits");
                let asked = runner.ask(theory, claim.left, claim.right);
                let stop = Arc::new(AtomicBool::new(false));
                let mut limits = Limits::new(stop.clone());
                let enough = |engine: &Engine| {
                    stop.store(engine.counts().chosen >= 300, Ordering::Relaxed);
                };
                let asking = Some(&asked.question);
                if runner.engine.run(&mut limits, asking, enough) != Outcome::Met {
                    return false;
                }
                let Ok(Compared::Same { proof, .. }) = runner.compare(&asked, &mut Limits::none())
                else {
                    return false;
                };
                let evidence = Evidence::Proof(*proof.expect("it is short"));
                assert_eq!(is_about(theory, &evidence, Some(question)), Ok(()));
                let outcome = proof::check(&evidence, WorkLimit::DEFAULT);
                assert!(matches!(outcome, proof::Outcome::Accepted), "{outcome:?}");
                true
            });
            assert!(proved.count() >= least, "{name}");
        }
    }
}

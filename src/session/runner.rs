//! A theory in an engine.

use super::evidence::{ClaimVariables, Writer};
use super::goal::Goal;
use super::naming::{Naming, naming};
use super::shorten::shorten;
use super::workers::{NoOrder, Plan};
use crate::engine::{Engine, Question, Strategy};
use crate::order::{Candidate, Order, OrderSetting};
use crate::proof;
use crate::rewrite::{Limits, RuleId, Stopped};
use crate::term::{Copier, Head, Sort, SymbolInfo, TermId, Variable, fold};
use crate::theory::Theory;
use rustc_hash::FxHashMap;
use std::sync::Arc;

/// A question in an engine: ground terms, in which constants stand for the variables.
#[derive(Clone, Debug)]
pub(super) struct Asked {
    pub(super) question: Question,
    pub(super) variables: ClaimVariables,
}

/// What the rules say of a question.
pub(super) enum Compared {
    /// The sides have the same normal form.
    Same {
        /// Were both normal forms in the table?
        known: bool,
        /// That they are equal; nothing if the proof would be too long to write down.
        proof: Option<Box<proof::Proof>>,
    },
    /// The normal forms differ.
    Different([TermId; 2]),
}

/// A term's normal form.
pub(super) struct Rewritten {
    pub(super) normal: TermId,
    /// How many steps lead there, those of equal subterms counted once.
    pub(super) steps: Option<usize>,
    /// The chain, its rules cited and not proved.
    pub(super) chain: Option<proof::Proof>,
    /// That the term equals its normal form, if it took few steps.
    pub(super) proof: Option<proof::Proof>,
}

/// The normal form of a term is proved equal to it if it took no more steps than this.
const MOST_PROVED: usize = 1_000;

/// An engine with one order, and what of the theory it has.
pub(super) struct Runner {
    pub(super) engine: Engine,
    pub(super) setting: OrderSetting,
    pub(super) strategy: Strategy,
    /// May it answer from its rules, and complete? Others look for proofs only.
    pub(super) own: bool,
    /// The question that it is aimed at, if it is.
    pub(super) goal: Option<Goal>,
    /// How many slices it had.
    pub(super) rounds: u32,
    /// Why this order is tried.
    pub(super) why: &'static str,
    pub(super) naming: Naming,
    /// The theory's terms in the engine's bank.
    copier: Copier,
    symbols: usize,
    /// The last question, as sides in the theory's bank, since the last time of catching up.
    asked: Option<((TermId, TermId), Arc<Asked>)>,
    /// The laws that the engine has, as sides in the theory's bank.
    laws: Vec<(String, TermId, TermId)>,
}

impl Runner {
    pub(super) fn new(
        theory: &Theory,
        setting: OrderSetting,
        why: &'static str,
    ) -> Result<Self, NoOrder> {
        let plan = Plan {
            candidate: Candidate { setting, why },
            strategy: Strategy::default(),
            own: true,
            aimed: false,
        };
        Runner::planned(theory, plan)
    }

    /// The engine of a plan.
    pub(super) fn planned(theory: &Theory, plan: Plan) -> Result<Self, NoOrder> {
        let setting = plan.candidate.setting.clone();
        Runner::over(theory, theory.bank.symbols(), setting, plan)
    }

    /// The engine of a plan over the symbols of the theory and some more, with this order.
    pub(super) fn over(
        theory: &Theory,
        symbols: &[SymbolInfo],
        setting: OrderSetting,
        plan: Plan,
    ) -> Result<Self, NoOrder> {
        let order = Order::new(&setting, symbols).map_err(NoOrder::Stated)?;
        let mut engine = Engine::new(order, symbols);
        engine.set_strategy(plan.strategy.clone());
        if let Some(equality) = theory.signature.equality() {
            engine.set_equality(equality);
        }
        let mut runner = Runner {
            engine,
            setting: plan.candidate.setting,
            strategy: plan.strategy,
            own: plan.own,
            goal: None,
            rounds: 0,
            why: plan.candidate.why,
            naming: naming(theory),
            copier: Copier::default(),
            symbols: theory.bank.symbols().len(),
            asked: None,
            laws: Vec::new(),
        };
        runner.add_laws(theory);
        Ok(runner)
    }

    /// Takes in what was added to the theory since. False if more has changed than that.
    pub(super) fn catch_up(&mut self, theory: &Theory) -> bool {
        if !self.is_part_of(theory) {
            return false;
        }
        self.naming = naming(theory);
        self.asked = None;
        self.add_laws(theory);
        true
    }

    /// Has the engine nothing that the theory has not?
    pub(super) fn is_part_of(&self, theory: &Theory) -> bool {
        let same = theory
            .laws
            .iter()
            .zip(&self.laws)
            .all(|(law, (name, left, right))| {
                law.name == *name && (law.left, law.right) == (*left, *right)
            });
        theory.bank.symbols().len() == self.symbols && theory.laws.len() >= self.laws.len() && same
    }

    /// Has the engine all laws of the theory, and no others?
    pub(super) fn is_current(&self, theory: &Theory) -> bool {
        self.is_part_of(theory) && theory.laws.len() == self.laws.len()
    }

    fn add_laws(&mut self, theory: &Theory) {
        for law in &theory.laws[self.laws.len()..] {
            let left = self.term(theory, law.left);
            let right = self.term(theory, law.right);
            self.engine.add_law(left, right);
            self.laws.push((law.name.clone(), law.left, law.right));
        }
    }

    /// A term of the theory, with its variables, in the engine's bank.
    pub(super) fn term(&mut self, theory: &Theory, term: TermId) -> TermId {
        let bank = &mut self.engine.system.bank;
        self.copier
            .copy(&theory.bank, bank, term, |s| s, |bank, v| bank.variable(v))
    }

    /// A question in the engine. The constants for its variables are in the order of the alphabet,
    /// the earlier the smaller.
    pub(super) fn ask(&mut self, theory: &Theory, left: TermId, right: TermId) -> Arc<Asked> {
        let sides = (left, right);
        if let Some((_, asked)) = self.asked.as_ref().filter(|(known, _)| *known == sides) {
            return asked.clone();
        }
        let asked = Arc::new(self.ask_anew(theory, left, right));
        self.asked = Some((sides, asked.clone()));
        asked
    }

    fn ask_anew(&mut self, theory: &Theory, left: TermId, right: TermId) -> Asked {
        if let Some(goal) = self.goal.as_ref().filter(|g| g.question == (left, right)) {
            return Asked {
                question: Question {
                    left: goal.sides[0],
                    right: goal.sides[1],
                    constants: Vec::new(),
                },
                variables: ClaimVariables::default(),
            };
        }
        let mut variables = theory.bank.variables(left);
        variables.extend(theory.bank.variables(right));
        let name = |v: &Variable| theory.signature.variables()[v.index as usize].name.as_str();
        variables.sort_by(|a, b| name(a).cmp(name(b)));
        variables.dedup();
        let rank: FxHashMap<Variable, u32> = variables
            .iter()
            .enumerate()
            .map(|(rank, v)| (*v, rank as u32))
            .collect();
        let system = &mut self.engine.system;
        let constants: FxHashMap<Variable, TermId> = variables
            .iter()
            .map(|v| (*v, system.question_constant(rank[v], v.sort)))
            .collect();
        let mut copier = Copier::default();
        let mut copy = |term| {
            copier.copy(
                &theory.bank,
                &mut system.bank,
                term,
                |s| s,
                |_, v| constants[&v],
            )
        };
        let (left, right) = (copy(left), copy(right));
        let variables: ClaimVariables = variables
            .iter()
            .map(|v| ((rank[v], v.sort), name(v).to_owned()))
            .collect();
        let mut constants: Vec<TermId> = constants.into_values().collect();
        constants.sort_unstable();
        Asked {
            question: Question {
                left,
                right,
                constants,
            },
            variables,
        }
    }

    /// Compares the normal forms of a question's sides; proves them equal if they are.
    pub(super) fn compare(
        &mut self,
        asked: &Asked,
        limits: &mut Limits,
    ) -> Result<Compared, Stopped> {
        let Asked {
            question,
            variables,
        } = asked;
        let (left, right) = (question.left, question.right);
        self.engine.system.begin_asking(&question.constants);
        let system = &mut self.engine.system;
        let known =
            system.known_normal_form(left).is_some() && system.known_normal_form(right).is_some();
        let normal = system.normal_form(left, limits);
        let normal = normal.and_then(|s| Ok([s, system.normal_form(right, limits)?]));
        let compared = normal.map(|normal| match normal {
            [s, t] if s == t => {
                let goal = self.goal.as_ref();
                let writer = Writer::new(&mut self.engine, &self.naming, variables);
                Compared::Same {
                    known,
                    proof: writer
                        .aimed(goal)
                        .proof(left, right)
                        .map(|proof| Box::new(shorten(proof))),
                }
            }
            normal => Compared::Different(normal),
        });
        self.engine.system.end_asking();
        compared
    }

    /// The normal form of a question's left side, and the chain that leads there if it takes no
    /// more numbers than `most`.
    pub(super) fn normal_form(
        &mut self,
        asked: &Asked,
        most: usize,
        limits: &mut Limits,
    ) -> Result<Rewritten, Stopped> {
        let left = asked.question.left;
        self.engine.system.begin_asking(&asked.question.constants);
        let normal = self.engine.system.normal_form(left, limits);
        let rewritten = normal.map(|normal| {
            let steps = self.engine.system.count_steps(left, normal);
            let chain = Writer::new(&mut self.engine, &self.naming, &asked.variables)
                .trace(left, normal, most);
            let few = steps.is_some_and(|steps| steps <= MOST_PROVED);
            let proof = few.then(|| {
                let writer = Writer::new(&mut self.engine, &self.naming, &asked.variables);
                writer.proof(left, normal)
            });
            Rewritten {
                normal,
                steps,
                chain,
                proof: proof.flatten(),
            }
        });
        self.engine.system.end_asking();
        rewritten
    }

    /// The proof of a rule.
    pub(super) fn rule_proof(&mut self, rule: RuleId) -> Option<proof::Proof> {
        let none = ClaimVariables::default();
        Writer::new(&mut self.engine, &self.naming, &none)
            .rule_proof(rule)
            .ok()
    }

    /// The active rules as a complete set, with the two normal forms of a question.
    pub(super) fn complete_set(
        &mut self,
        question: Option<(&Asked, [TermId; 2])>,
    ) -> Option<proof::CompleteSet> {
        let none = ClaimVariables::default();
        let variables = question.map_or(&none, |(asked, _)| &asked.variables);
        let claim = question.map(|(asked, _)| [asked.question.left, asked.question.right]);
        let normal = question.map(|(_, normal)| normal);
        let writer = Writer::new(&mut self.engine, &self.naming, variables);
        writer.complete(claim.zip(normal)).ok()
    }

    /// A term of the engine, ground, in the theory's bank, with the variables back.
    pub(super) fn term_back(
        &self,
        theory: &mut Theory,
        term: TermId,
        variables: &ClaimVariables,
    ) -> TermId {
        let system = &self.engine.system;
        let of_name: FxHashMap<&str, u32> = theory
            .signature
            .variables()
            .iter()
            .enumerate()
            .map(|(index, v)| (v.name.as_str(), index as u32))
            .collect();
        let numbers: FxHashMap<(u32, Sort), u32> = variables
            .iter()
            .filter_map(|(rank, name)| Some((*rank, *of_name.get(name.as_str())?)))
            .collect();
        copy_back(system, &mut theory.bank, term, &numbers)
    }
}

/// Copies a ground term, constants of a question becoming variables.
fn copy_back(
    system: &crate::rewrite::System,
    bank: &mut crate::term::Bank,
    term: TermId,
    numbers: &FxHashMap<(u32, Sort), u32>,
) -> TermId {
    let mut known = FxHashMap::default();
    fold(&system.bank, term, &mut known, |head, arguments| {
        let Head::Symbol(symbol) = head else {
            unreachable!("a question's terms are ground");
        };
        match system.question_rank(symbol) {
            Some(rank) => {
                let index = numbers.get(&rank).copied().unwrap_or(0);
                bank.variable(Variable {
                    index,
                    sort: rank.1,
                })
            }
            None => bank.apply(symbol, arguments),
        }
    })
}

//! Evidence from what the engine knows: chains of the engine's terms become proof objects.

use super::derivation::{Chain, Cited, Link, of_ground_lemma, of_rule, of_table};
use super::goal::Goal;
use super::naming::Naming;
use super::patterns::{Outline, outline};
use crate::engine::{Engine, ReplayError};
use crate::proof;
use crate::proof::{Equation, Lemma, Name, Step, TermIndex, Terms, Way};
use crate::rewrite::RuleId;
use crate::term::{Head, Sort, Symbol, TermId, Variable, match_term};
use crate::term::{Substitution, renumber};
use rustc_hash::{FxHashMap, FxHashSet};
use std::collections::BTreeSet;

mod stated;

/// How many numbers a chain of single steps may take before it is written with lemmas.
const FLAT: usize = 20_000;

/// Where no more steps lead to the normal form, those of equal subterms counted once, patterns do
/// not pay.
const FEW: usize = 1_000;

/// The variables of a question: the constants that stand for them, and their names.
pub(super) type ClaimVariables = FxHashMap<(u32, Sort), String>;

/// How the variables of some terms are called.
enum Reading<'a> {
    /// As the theory calls them.
    Theory,
    /// As variables of a rule, numbered anew in this order.
    Rule(&'a [Variable]),
}

/// Writes one piece of evidence.
pub(super) struct Writer<'a> {
    engine: &'a mut Engine,
    naming: &'a Naming,
    claim_variables: &'a ClaimVariables,
    goal: Option<&'a Goal>,
    terms: Terms,
    ground: FxHashMap<TermId, TermIndex>,
    variables: FxHashMap<Name, Sort>,
    operators: BTreeSet<Symbol>,
    laws: BTreeSet<u32>,
    /// Rules that are cited and have to be proved.
    rules: BTreeSet<RuleId>,
    lemmas: Vec<Lemma>,
    /// What the lemmas prove that are not rules: both sides of a question may need the same.
    written: FxHashSet<Cited>,
}

impl<'a> Writer<'a> {
    pub(super) fn new(
        engine: &'a mut Engine,
        naming: &'a Naming,
        claim_variables: &'a ClaimVariables,
    ) -> Self {
        Writer {
            engine,
            naming,
            claim_variables,
            goal: None,
            terms: Terms::default(),
            ground: FxHashMap::default(),
            variables: FxHashMap::default(),
            operators: BTreeSet::new(),
            laws: BTreeSet::new(),
            rules: BTreeSet::new(),
            lemmas: Vec::new(),
            written: FxHashSet::default(),
        }
    }

    /// Names of the engine that the theory does not have are read as what they stand for.
    pub(super) fn aimed(mut self, goal: Option<&'a Goal>) -> Self {
        self.goal = goal;
        self
    }

    /// The proof that two ground terms are equal, which have been rewritten to the same term.
    /// Nothing if it is too long to be written down.
    pub(super) fn proof(mut self, left: TermId, right: TermId) -> Option<proof::Proof> {
        let normal = self.engine.system.known_normal_form(left)?;
        // Before the mark: what patterns need goes into the table, which outlives it.
        let by_patterns = [left, right].map(|side| self.by_patterns(side, normal));
        let mark = self.engine.system.bank.mark();
        let chain = self.meeting([left, right], normal, by_patterns);
        let steps = chain
            .as_ref()
            .map(|chain| self.steps(chain, &Reading::Theory));
        let ground = std::mem::take(&mut self.lemmas);
        let proved = steps.zip(self.prove_rules().ok());
        self.lemmas.extend(ground);
        self.engine.system.bank.rollback(mark);
        proved.map(|(steps, ())| self.finish(left, right, steps))
    }

    /// The chain from a ground term to what it was rewritten to; rules are cited, not proved.
    pub(super) fn trace(mut self, from: TermId, to: TermId, most: usize) -> Option<proof::Proof> {
        let mark = self.engine.system.bank.mark();
        let chain = of_table(self.engine, from, to, most);
        let steps = chain.map(|chain| self.steps(&chain, &Reading::Theory));
        self.engine.system.bank.rollback(mark);
        steps.map(|steps| self.finish(from, to, steps))
    }

    /// The proof of a rule, with the rules that it rests on as lemmas.
    pub(super) fn rule_proof(mut self, rule: RuleId) -> Result<proof::Proof, ReplayError> {
        let mark = self.engine.system.bank.mark();
        self.rules.insert(rule);
        let proved = self.prove_rules();
        self.engine.system.bank.rollback(mark);
        proved?;
        let Lemma { equation, steps } = self.lemmas.pop().expect("the rule itself");
        let claim = proof::Claim {
            left: equation.left,
            right: equation.right,
            when: vec![],
            steps,
            witness: vec![],
        };
        Ok(self.finished(claim))
    }

    fn finish(mut self, left: TermId, right: TermId, steps: Vec<Step>) -> proof::Proof {
        let (left, right) = (self.ground_term(left), self.ground_term(right));
        self.finished(proof::Claim {
            left,
            right,
            when: vec![],
            steps,
            witness: vec![],
        })
    }

    fn finished(mut self, claim: proof::Claim) -> proof::Proof {
        let laws = self
            .laws
            .clone()
            .into_iter()
            .map(|law| self.law(law))
            .collect();
        proof::Proof {
            types: self.types(),
            laws,
            definitions: Vec::new(),
            lemmas: self.lemmas,
            claim,
            terms: self.terms,
        }
    }

    /// The active rules as a complete set, with the question that they decide and the normal forms
    /// of its sides, if there is one.
    pub(super) fn complete(
        mut self,
        claim: Option<([TermId; 2], [TermId; 2])>,
    ) -> Result<proof::CompleteSet, ReplayError> {
        let mark = self.engine.system.bank.mark();
        let active: Vec<RuleId> = self.engine.active_rules().collect();
        self.rules.extend(&active);
        let proved = self.prove_rules();
        self.engine.system.bank.rollback(mark);
        proved?;
        let rules = active.iter().map(|&id| self.rule(id)).collect();
        let laws = (0..self.engine.laws().len() as u32)
            .map(|law| self.law(law))
            .collect();
        let claim = claim.map(|([left, right], normal)| proof::CompleteClaim {
            left: self.ground_term(left),
            right: self.ground_term(right),
            normal: normal.map(|term| self.ground_term(term)),
        });
        self.operators
            .extend((0..self.naming.symbols.len() as u32).map(Symbol));
        let order = self.order();
        Ok(proof::CompleteSet {
            types: self.types(),
            laws,
            definitions: Vec::new(),
            lemmas: self.lemmas,
            order,
            rules,
            claim,
            terms: self.terms,
        })
    }

    fn meeting(
        &mut self,
        [left, right]: [TermId; 2],
        normal: TermId,
        [there, back]: [Option<Outline>; 2],
    ) -> Option<Chain> {
        let there = self.chain_to_normal(left, normal, there)?;
        let back = self.chain_to_normal(right, normal, back)?;
        Some(there.then(back.reversed()).without_detours())
    }

    /// The rewriting to the normal form by patterns, if it is so long that they pay.
    fn by_patterns(&mut self, from: TermId, to: TermId) -> Option<Outline> {
        let system = &mut self.engine.system;
        let steps = system.count_steps(from, to).filter(|steps| *steps > FEW)?;
        let mark = system.bank.mark();
        let is_long = system.explain(from, to, FLAT).is_none();
        system.bank.rollback(mark);
        is_long
            .then(|| outline(self.engine, from, to, steps))
            .flatten()
    }

    /// The chain to the normal form, in single steps or, if that is too long, by patterns or by
    /// lemmas about subterms.
    fn chain_to_normal(
        &mut self,
        from: TermId,
        to: TermId,
        by_patterns: Option<Outline>,
    ) -> Option<Chain> {
        if let Some(outline) = by_patterns {
            return Some(self.parts(outline));
        }
        if let Some(chain) = of_table(self.engine, from, to, FLAT) {
            return Some(chain);
        }
        self.ground_lemmas(from, to)
    }

    /// Proves, as lemmas, that the subterms on the way equal what they were rewritten to; the
    /// chain of the whole term by these.
    fn ground_lemmas(&mut self, from: TermId, to: TermId) -> Option<Chain> {
        let mut stack = vec![(from, to)];
        while let Some(&(s, t)) = stack.last() {
            // The whole is no lemma, but may have been one for the other side.
            if stack.len() > 1 && self.written.contains(&Cited::Ground(s, t)) {
                stack.pop();
                continue;
            }
            let (chain, needed) = of_ground_lemma(self.engine, s, t, FLAT)?;
            let open: Vec<_> = needed
                .into_iter()
                .filter(|(s, t)| !self.written.contains(&Cited::Ground(*s, *t)))
                .collect();
            if !open.is_empty() {
                stack.extend(open);
                continue;
            }
            stack.pop();
            if stack.is_empty() {
                return Some(chain);
            }
            self.ground_lemma(&chain);
        }
        Some(Chain::new(from))
    }

    fn ground_lemma(&mut self, chain: &Chain) {
        self.lemma(
            Cited::Ground(chain.from, chain.end()),
            chain,
            &Reading::Theory,
        );
    }

    /// Writes a lemma with its chain.
    fn lemma(&mut self, proves: Cited, chain: &Chain, reading: &Reading) {
        if !self.written.insert(proves) {
            return;
        }
        let steps = self.steps(chain, reading);
        let mut memo = FxHashMap::default();
        let equation = Equation {
            name: self.citation(proves),
            left: self.term(chain.from, reading, &mut memo),
            right: self.term(chain.end(), reading, &mut memo),
            when: Vec::new(),
        };
        self.lemmas.push(Lemma { equation, steps });
    }

    /// Writes the lemmas of a rewriting by patterns.
    fn parts(&mut self, outline: Outline) -> Chain {
        for part in outline.parts {
            match part.proves {
                Cited::Pattern(left, _) => {
                    let mut order = self.engine.system.bank.variables(left);
                    order.sort_unstable_by_key(|variable| variable.index);
                    self.lemma(part.proves, &part.chain, &Reading::Rule(&order));
                }
                proves => self.lemma(proves, &part.chain, &Reading::Theory),
            }
        }
        outline.chain
    }

    /// Proves the cited rules, and those that their proofs cite, in the order of their numbers,
    /// which is the order of their derivation.
    fn prove_rules(&mut self) -> Result<(), ReplayError> {
        let mut lemmas = Vec::new();
        while let Some(rule) = self.rules.pop_last() {
            let chain = of_rule(self.engine, rule)?;
            let bank = &mut self.engine.system.bank;
            let (_, mut order) = renumber(bank, [chain.from, chain.end()]);
            for link in &chain.links {
                for variable in bank.variables(link.to) {
                    if !order.contains(&variable) {
                        order.push(variable);
                    }
                }
            }
            // The variables of the sides come first, so that the numbers are those of the rule.
            let steps = self.steps(&chain, &Reading::Rule(&order));
            let rule = self.rule(rule);
            let proof::Rule {
                name, left, right, ..
            } = rule;
            let equation = Equation {
                name,
                left,
                right,
                when: Vec::new(),
            };
            lemmas.push(Lemma { equation, steps });
        }
        lemmas.reverse();
        self.lemmas = lemmas;
        Ok(())
    }

    /// The steps of a chain. One that changes nothing once names are read as what they stand for
    /// is left out.
    fn steps(&mut self, chain: &Chain, reading: &Reading) -> Vec<Step> {
        let mut memo = FxHashMap::default();
        let mut steps = Vec::new();
        let mut whole = self.term(chain.from, reading, &mut memo);
        for link in &chain.links {
            let to = self.term(link.to, reading, &mut memo);
            if to != whole {
                steps.push(self.step(link, reading, &mut memo));
                whole = to;
            }
        }
        steps
    }

    fn step(
        &mut self,
        link: &Link,
        reading: &Reading,
        memo: &mut FxHashMap<TermId, TermIndex>,
    ) -> Step {
        let (left, right) = match link.by {
            Cited::Law(law) => self.engine.laws()[law.0 as usize],
            Cited::Rule(rule) => self.engine.system.rule(rule).sides(false),
            Cited::Ground(from, to) | Cited::Pattern(from, to) => (from, to),
        };
        let (from, to) = if link.forward {
            (link.before, link.after)
        } else {
            (link.after, link.before)
        };
        let mut substitution = Substitution::default();
        let bank = &self.engine.system.bank;
        let fits = match_term(bank, left, from, &mut substitution)
            && match_term(bank, right, to, &mut substitution);
        debug_assert!(fits, "a step is an instance of what it cites");
        let mut variables = bank.variables(left);
        variables.extend(bank.variables(right));
        let mut with: Vec<(Name, TermIndex)> = Vec::new();
        for variable in variables {
            let name = match link.by {
                Cited::Law(_) => self.naming.variables[variable.index as usize].0.clone(),
                _ => self.naming.rule_variable(variable),
            };
            let name = self.variable_name(&name, variable.sort);
            if with.iter().all(|(known, _)| *known != name) {
                let value = substitution.get(variable.index);
                with.push((name, self.term(value, reading, memo)));
            }
        }
        match link.by {
            Cited::Ground(..) => with = self.identity(left, right),
            Cited::Rule(_) | Cited::Pattern(..) => with.extend(self.identity(left, right)),
            Cited::Law(_) => {}
        }
        Step {
            by: self.citation(link.by),
            way: if link.forward {
                Way::Forward
            } else {
                Way::Backward
            },
            at: link.at.clone(),
            with,
            to: self.term(link.to, reading, memo),
            given: Vec::new(),
        }
    }

    /// What a lemma says about the question's own terms is used with its variables as they are.
    fn identity(&mut self, left: TermId, right: TermId) -> Vec<(Name, TermIndex)> {
        if self.claim_variables.is_empty() && self.goal.is_none() {
            return Vec::new();
        }
        let mut seen = FxHashSet::default();
        let mut stack = vec![left, right];
        let mut with = Vec::new();
        while let Some(term) = stack.pop() {
            if !seen.insert(term) {
                continue;
            }
            let bank = &self.engine.system.bank;
            stack.extend(bank.arguments(term));
            let Some(symbol) = bank.as_symbol(term) else {
                continue;
            };
            stack.extend(self.stands_for(symbol));
            let asked = self.engine.system.question_rank(symbol).is_some();
            if asked || self.goal.is_some_and(|g| g.variables.contains_key(&symbol)) {
                let variable = self.ground_term(term);
                if let proof::Node::Variable(name) = self.terms.node(variable) {
                    with.push((name, variable));
                }
            }
        }
        with
    }

    /// What a name stands for, if the symbol is one.
    fn stands_for(&self, symbol: Symbol) -> Option<TermId> {
        self.goal?.named.get(&symbol).copied()
    }

    fn citation(&mut self, by: Cited) -> Name {
        match by {
            Cited::Law(law) => {
                self.laws.insert(law.0);
                self.terms.name(&self.naming.laws[law.0 as usize])
            }
            Cited::Rule(rule) => {
                self.rules.insert(rule);
                self.terms.name(&rule_name(rule))
            }
            Cited::Ground(from, to) => self.terms.name(&ground_name(from, to)),
            Cited::Pattern(left, right) => self.terms.name(&pattern_name(left, right)),
        }
    }

    fn law(&mut self, law: u32) -> Equation {
        let (left, right) = self.engine.laws()[law as usize];
        let mut memo = FxHashMap::default();
        Equation {
            name: self.terms.name(&self.naming.laws[law as usize]),
            left: self.term(left, &Reading::Theory, &mut memo),
            right: self.term(right, &Reading::Theory, &mut memo),
            when: Vec::new(),
        }
    }

    fn rule(&mut self, id: RuleId) -> proof::Rule {
        let rule = self.engine.system.rule(id);
        let (left, right, oriented) = (rule.left, rule.right, rule.oriented);
        let mut order = self.engine.system.bank.variables(left);
        for variable in self.engine.system.bank.variables(right) {
            if !order.contains(&variable) {
                order.push(variable);
            }
        }
        let mut memo = FxHashMap::default();
        proof::Rule {
            name: self.terms.name(&rule_name(id)),
            left: self.term(left, &Reading::Rule(&order), &mut memo),
            right: self.term(right, &Reading::Rule(&order), &mut memo),
            oriented,
        }
    }

    fn ground_term(&mut self, term: TermId) -> TermIndex {
        self.term(term, &Reading::Theory, &mut FxHashMap::default())
    }

    /// The plain form of a term of the engine.
    fn term(
        &mut self,
        term: TermId,
        reading: &Reading,
        memo: &mut FxHashMap<TermId, TermIndex>,
    ) -> TermIndex {
        let mut stack = vec![term];
        let mut arguments = Vec::new();
        while let Some(&top) = stack.last() {
            let ground = self.engine.system.bank.is_ground(top);
            let known = |t: &TermId| self.ground.get(t).or_else(|| memo.get(t)).copied();
            if known(&top).is_some() {
                stack.pop();
                continue;
            }
            let bank = &self.engine.system.bank;
            let head = bank.head(top);
            let named = match head {
                Head::Symbol(symbol) => self.stands_for(symbol),
                Head::Variable(_) => None,
            };
            let needed = match &named {
                Some(term) => std::slice::from_ref(term),
                None => bank.arguments(top),
            };
            let before = stack.len();
            stack.extend(needed.iter().filter(|a| known(a).is_none()));
            if stack.len() > before {
                continue;
            }
            arguments.clear();
            arguments.extend(needed.iter().filter_map(known));
            let made = match head {
                Head::Variable(variable) => self.variable(variable, reading),
                Head::Symbol(_) if named.is_some() => arguments[0],
                Head::Symbol(symbol) => self.application(symbol, &arguments),
            };
            if ground {
                self.ground.insert(top, made)
            } else {
                memo.insert(top, made)
            };
            stack.pop();
        }
        self.ground
            .get(&term)
            .or_else(|| memo.get(&term))
            .copied()
            .expect("it was just made")
    }

    fn application(&mut self, symbol: Symbol, arguments: &[TermIndex]) -> TermIndex {
        if let Some((name, sort)) = self.goal.and_then(|g| g.variables.get(&symbol)).cloned() {
            let name = self.variable_name(&name, sort);
            return self.terms.variable_named(name);
        }
        match self.engine.system.question_rank(symbol) {
            Some(rank) => {
                let name = self.claim_variables.get(&rank).cloned();
                let name = name.unwrap_or_else(|| format!("any{}", rank.0));
                let name = self.variable_name(&name, rank.1);
                self.terms.variable_named(name)
            }
            None => {
                self.operators.insert(symbol);
                self.terms
                    .apply(&self.naming.symbols[symbol.index()], arguments)
            }
        }
    }

    fn variable(&mut self, variable: Variable, reading: &Reading) -> TermIndex {
        let name = match reading {
            Reading::Theory => self.naming.variables[variable.index as usize].0.clone(),
            Reading::Rule(order) => {
                let place = order.iter().position(|v| *v == variable);
                let index = place.expect("all variables of the chain are listed") as u32;
                self.naming.rule_variable(Variable { index, ..variable })
            }
        };
        let name = self.variable_name(&name, variable.sort);
        self.terms.variable_named(name)
    }

    fn variable_name(&mut self, name: &str, sort: Sort) -> Name {
        let name = self.terms.name(name);
        self.variables.insert(name, sort);
        name
    }
}

/// How a rule is called.
pub(super) fn rule_name(rule: RuleId) -> String {
    format!("rule {}", rule.0 + 1)
}

fn pattern_name(left: TermId, right: TermId) -> String {
    format!("pattern {}-{}", left.0, right.0)
}

fn ground_name(from: TermId, to: TermId) -> String {
    format!("value {}-{}", from.0, to.0)
}

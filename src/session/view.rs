//! What there is: laws, rules, symbols, claims, and where rules come from.

use super::Session;
use super::derivation::{Cited, cited};
use super::sheet::Sheet;
use crate::engine::Counts;
use crate::language::{Printer, RuleNames, TheoryNames, print_order, print_symbol};
use crate::rewrite::RuleId;
use crate::term::{Bank, Symbol, TermId};
use crate::theory::{Expected, LawKind};

/// A law, for a list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct LawView {
    /// Its name.
    pub name: String,
    /// The equation (`s = t`; `s -> t` for a directed rule).
    pub text: String,
    /// Where it came from.
    pub kind: LawKind,
    /// The theory that brought it, if by `use`.
    pub from: Option<String>,
}

/// An active rule, for a list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct RuleView {
    /// Its number, as in `why 7` and in proofs (`rule 7`).
    pub number: u32,
    /// The rule: `s -> t`, or `s = t` if it is used both ways on decreasing instances.
    pub text: String,
    /// Is it oriented?
    pub oriented: bool,
    /// The law that it is, if it is one as it stands.
    pub law: Option<String>,
}

/// A symbol, for a list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SymbolView {
    /// The line that declares it, such as `infix * 40 left`.
    pub text: String,
    /// Its name.
    pub name: String,
    /// Is it known to be associative and commutative?
    pub ac: bool,
}

/// A claim, for a list.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ClaimView {
    /// Its name.
    pub name: Option<String>,
    /// The claim, with `=` or `!=`, or `find x: s = t`.
    pub text: String,
    /// What it expects.
    pub expected: Expected,
}

/// The state of the session in numbers.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Status {
    /// The theory's name.
    pub name: String,
    /// Its file.
    pub path: Option<String>,
    /// Changed since it was saved?
    pub changed: bool,
    /// Sorts, symbols, laws, claims, answers.
    pub sorts: usize,
    /// Symbols.
    pub symbols: usize,
    /// Laws.
    pub laws: usize,
    /// Claims.
    pub claims: usize,
    /// Answers so far.
    pub answers: usize,
    /// The order as a line to type; `order auto` while none was chosen.
    pub order: String,
    /// Was the order stated by the user?
    pub order_stated: bool,
    /// Is the rule set complete?
    pub complete: bool,
    /// Active rules.
    pub rules: usize,
    /// Of these, oriented.
    pub oriented: usize,
    /// Waiting pairs.
    pub waiting: usize,
    /// Named counts of what the engine has done (pairs formed, chosen, redundant, …).
    pub counts: Vec<(&'static str, u64)>,
    /// Symbols known to be associative and commutative.
    pub ac: Vec<String>,
    /// Terms in the table's bank.
    pub terms: usize,
}

impl Session {
    /// The laws, in the order in which they were stated.
    pub fn laws(&self) -> Vec<LawView> {
        let view = |law: &crate::theory::Law| {
            let sign = if law.kind == LawKind::Rule { "->" } else { "=" };
            LawView {
                name: law.name.clone(),
                text: self.equation_text(law.left, sign, law.right),
                kind: law.kind,
                from: law.from.clone(),
            }
        };
        self.theory.laws.iter().map(view).collect()
    }

    /// The active rules, oldest first. Empty before anything was completed or asked.
    pub fn rules(&self) -> Vec<RuleView> {
        let Some(runner) = self.current() else {
            return Vec::new();
        };
        let engine = &runner.engine;
        let view = |id: RuleId| {
            let rule = engine.system.rule(id);
            let sign = if rule.oriented { "->" } else { "=" };
            let law = match cited(engine, id) {
                (Cited::Law(law), _) => Some(runner.naming.laws[law.0 as usize].clone()),
                _ => None,
            };
            RuleView {
                number: id.0 + 1,
                text: self.rule_text(&engine.system.bank, rule.left, sign, rule.right),
                oriented: rule.oriented,
                law,
            }
        };
        engine.active_rules().map(view).collect()
    }

    /// The engine that answers, unless it has what the theory no longer has.
    fn current(&self) -> Option<&super::runner::Runner> {
        let runner = self.workers.best_ref()?;
        let fits = self.workers.is_of(self.lineage) && runner.is_part_of(&self.theory);
        fits.then_some(runner)
    }

    fn rule_text(&self, bank: &Bank, left: TermId, sign: &str, right: TermId) -> String {
        let base = TheoryNames(&self.theory.signature);
        let names = RuleNames::new(&base, &self.theory.signature, bank, &[left, right]);
        Printer::new(&names)
            .limit(LONGEST_RULE)
            .equation(bank, left, sign, right)
    }

    /// The symbols, in the order of declaration.
    pub fn symbols(&self) -> Vec<SymbolView> {
        let known = self.current().map_or(&[][..], |r| r.engine.ac_symbols());
        let symbols = self.theory.signature.symbols().iter().enumerate();
        let view = |(place, declaration): (usize, &crate::theory::SymbolDeclaration)| {
            let symbol = Symbol(place as u32);
            SymbolView {
                text: print_symbol(&self.theory.signature, symbol),
                name: declaration.name.clone(),
                ac: known.contains(&symbol),
            }
        };
        symbols.map(view).collect()
    }

    /// The claims.
    pub fn claims(&self) -> Vec<ClaimView> {
        let view = |claim: &crate::theory::Claim| ClaimView {
            name: claim.name.clone(),
            text: self.claim_text(claim),
            expected: claim.expected,
        };
        self.theory.claims.iter().map(view).collect()
    }

    /// A claim as it is typed, without its name.
    pub(super) fn claim_text(&self, claim: &crate::theory::Claim) -> String {
        let sign = match claim.expected {
            Expected::Equal => "=",
            Expected::NotEqual => "!=",
        };
        match self.find_of(claim) {
            Some(find) => self.find_text(&find),
            None => self.equation_text(claim.left, sign, claim.right),
        }
    }

    /// The session in numbers.
    pub fn status(&self) -> Status {
        let signature = &self.theory.signature;
        let runner = self.current();
        let setting = self.theory.order.as_ref().or(runner.map(|r| &r.setting));
        let engine = runner.map(|r| &r.engine);
        let oriented = |e: &crate::engine::Engine| {
            e.active_rules()
                .filter(|id| e.system.rule(*id).oriented)
                .count()
        };
        let ac = |e: &crate::engine::Engine| -> Vec<String> {
            let name = |s: &Symbol| signature.symbol(*s).map(|d| d.name.clone());
            e.ac_symbols().iter().filter_map(name).collect()
        };
        Status {
            name: self.name().to_owned(),
            path: self.path().map(|path| path.display().to_string()),
            changed: self.is_changed(),
            sorts: if signature.has_sorts() {
                signature.sorts().len()
            } else {
                0
            },
            symbols: signature.symbols().len(),
            laws: self.theory.laws.len(),
            claims: self.theory.claims.len(),
            answers: self.answers.len(),
            order: setting.map_or("order auto".to_owned(), |s| print_order(signature, s)),
            order_stated: self.theory.order.is_some(),
            complete: self.is_complete(),
            rules: engine.map_or(0, |e| e.system.active()),
            oriented: engine.map_or(0, oriented),
            waiting: engine.map_or(0, |e| e.waiting()),
            counts: engine.map_or(Vec::new(), |e| named_counts(e.counts())),
            ac: engine.map_or(Vec::new(), ac),
            terms: engine.map_or(0, |e| e.system.bank.len()),
        }
    }

    /// Are the rules, as the engine has them, complete for the laws as they are now?
    fn is_complete(&self) -> bool {
        self.current()
            .is_some_and(|r| r.is_current(&self.theory) && r.engine.is_complete())
            && !self.distrusted
    }

    /// Where a rule comes from, as proof text: its own chain last, the rules that it rests on
    /// before it. Nothing if there is no rule of this number.
    pub fn why(&mut self, number: u32) -> Option<super::ProofText> {
        self.current()?;
        let runner = self.workers.best()?;
        let id = RuleId(number.checked_sub(1)?);
        if id.index() >= runner.engine.system.rules().len() {
            return None;
        }
        let proof = runner.rule_proof(id)?;
        Some(Sheet::new(&self.theory, &runner.naming, &proof.terms).proof(&proof))
    }

    /// How many rules there ever were; their numbers begin with 1.
    pub fn rule_count(&self) -> u32 {
        self.current()
            .map_or(0, |r| r.engine.system.rules().len() as u32)
    }
}

/// A rule in a list is cut where it is longer than this.
const LONGEST_RULE: usize = 2_000;

fn named_counts(counts: Counts) -> Vec<(&'static str, u64)> {
    vec![
        ("pairs formed", counts.formed),
        ("pairs chosen", counts.chosen),
        ("redundant when chosen", counts.redundant),
        ("joined modulo AC", counts.ac),
        (
            "joined for every order of the variables",
            counts.ground_joined,
        ),
        ("connected below the peak", counts.connected),
        ("not prime", counts.composite),
        ("dropped with a retired rule", counts.orphans),
        ("rules retired", counts.retired),
        ("right sides simplified", counts.simplified),
        ("given up as too large", counts.dropped),
        ("given up as too many", counts.trimmed),
    ]
}

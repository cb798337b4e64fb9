//! A set of rules with everything that rewriting by them needs.

use super::asking::of_sort;
use super::canonical::{AcLaws, Spine};
use super::index::{Index, Matcher};
use super::normal::{Build, Frame};
use super::{Rule, RuleId, RuleState, Table, Use};
use crate::order::{Order, OrderKind};
use crate::term::{Bank, Sort, Symbol, SymbolInfo, TermId};

/// Rules, an index of the active ones, and the table of what they have rewritten.
///
/// Invariants: the index has exactly the active rules, unoriented ones both ways; every step in the
/// table decreases in the order and is an instance of a rule, active or not, or of the laws of an
/// associative and commutative symbol.
pub struct System {
    /// The terms.
    pub bank: Bank,
    /// The reduction order; the bank's weights are its weights.
    pub order: Order,
    pub(super) rules: Vec<Rule>,
    pub(super) index: Index,
    pub(super) table: Table,
    /// By symbol: the laws, if the symbol is known to be associative and commutative.
    pub(super) ac: Vec<Option<AcLaws>>,
    /// By sort, the least ground term of the theory.
    pub(super) theory_least: Vec<TermId>,
    /// By sort, the least ground term of the theory with the constants of the question.
    pub(super) asked_least: Vec<TermId>,
    /// Are the terms of a question rewritten, by rules some of which leave variables open?
    pub(super) asking: bool,
    /// The number of the state of the rules.
    pub(super) state: u32,
    /// How many active rules have variables on one side only.
    pub(super) open_rules: usize,
    /// The number of the state of the rules, and in the lowest bit whether open variables become
    /// constants of a question: what [`System::generation`] says.
    pub(super) generation: u32,
    active: usize,
    pub(super) theory_symbols: usize,
    /// The symbols after those of the theory.
    pub(super) question: Vec<(u32, Sort)>,
    pub(super) matcher: Matcher,
    pub(super) built: Vec<TermId>,
    pub(super) frames: Vec<Frame>,
    pub(super) values: Vec<TermId>,
    pub(super) spines: Vec<Spine>,
    pub(super) leaves: Vec<TermId>,
    pub(super) builds: Vec<Build>,
    /// The values of the variables of the rules whose replacing sides are being built.
    pub(super) saved: Vec<TermId>,
}

impl System {
    /// A system without rules over these symbols, whose weights are taken from the order.
    pub fn new(order: Order, symbols: &[SymbolInfo]) -> Self {
        let mut bank = Bank::new(order.variable_weight());
        for (index, info) in symbols.iter().enumerate() {
            let weight = order.weight(Symbol(index as u32));
            bank.declare(SymbolInfo {
                weight,
                ..info.clone()
            });
        }
        let mut system = System {
            bank,
            order,
            rules: Vec::new(),
            index: Index::default(),
            table: Table::default(),
            ac: vec![None; symbols.len()],
            theory_least: Vec::new(),
            asked_least: Vec::new(),
            state: 1,
            asking: false,
            open_rules: 0,
            generation: 2,
            active: 0,
            theory_symbols: symbols.len(),
            question: Vec::new(),
            matcher: Matcher::default(),
            built: Vec::new(),
            frames: Vec::new(),
            values: Vec::new(),
            spines: Vec::new(),
            leaves: Vec::new(),
            builds: Vec::new(),
            saved: Vec::new(),
        };
        system.theory_least = system.least_terms(&[]);
        system
    }

    /// A rule.
    pub fn rule(&self, id: RuleId) -> &Rule {
        &self.rules[id.index()]
    }

    /// All rules that ever were, in the order of their numbers.
    pub fn rules(&self) -> &[Rule] {
        &self.rules
    }

    /// The normal form of a term, if it is known by the rules as they are or were.
    pub fn known_normal_form(&self, term: TermId) -> Option<TermId> {
        self.table.normal(term, self.generation)
    }

    /// How many rules are active.
    pub fn active(&self) -> usize {
        self.active
    }

    /// The number of the state of the rules: normal forms are up to date within one generation.
    pub fn generation(&self) -> u32 {
        self.generation
    }

    /// The table.
    pub fn table(&self) -> &Table {
        &self.table
    }

    /// The rule that stands for this one now, if any.
    pub fn current(&self, mut id: RuleId) -> Option<RuleId> {
        loop {
            match self.rules[id.index()].state {
                RuleState::Active => return Some(id),
                RuleState::Retired => return None,
                RuleState::Replaced(by) => id = by,
            }
        }
    }

    /// Adds an active rule. Its variables must be numbered in the order of first occurrence, and
    /// the left side of an oriented rule must be greater than the right.
    pub fn add(&mut self, left: TermId, right: TermId, oriented: bool) -> RuleId {
        let id = RuleId(self.rules.len() as u32);
        self.rules
            .push(Rule::new(&self.bank, left, right, oriented));
        self.enter(id);
        id
    }

    /// Adds a rule that is never active: an equation of the past that others were derived from.
    pub fn add_retired(&mut self, left: TermId, right: TermId, oriented: bool) -> RuleId {
        let id = RuleId(self.rules.len() as u32);
        let mut rule = Rule::new(&self.bank, left, right, oriented);
        rule.state = RuleState::Retired;
        self.rules.push(rule);
        id
    }

    fn enter(&mut self, id: RuleId) {
        let rule = &self.rules[id.index()];
        self.index.insert(
            &self.bank,
            rule.left,
            Use {
                rule: id,
                backward: false,
            },
        );
        if !rule.oriented {
            self.index.insert(
                &self.bank,
                rule.right,
                Use {
                    rule: id,
                    backward: true,
                },
            );
        }
        self.active += 1;
        self.open_rules += usize::from(rule.is_open());
        self.changed();
    }

    /// Takes an active rule out of use.
    pub fn retire(&mut self, id: RuleId) {
        self.leave(id, RuleState::Retired);
        // What the rule made of its own sides would make it trivial when it is simplified again.
        let (left, right) = self.rules[id.index()].sides(false);
        self.table.clear_step(left);
        self.table.clear_step(right);
    }

    /// Puts a rule with the same left side and a simplified right side in the place of another.
    pub fn replace(&mut self, id: RuleId, right: TermId) -> RuleId {
        let left = self.rules[id.index()].left;
        let by = RuleId(self.rules.len() as u32);
        self.leave(id, RuleState::Replaced(by));
        self.table.clear_step(left);
        self.add(left, right, true)
    }

    fn leave(&mut self, id: RuleId, state: RuleState) {
        let rule = &mut self.rules[id.index()];
        debug_assert_eq!(rule.state, RuleState::Active);
        rule.state = state;
        self.index.remove(
            &self.bank,
            rule.left,
            Use {
                rule: id,
                backward: false,
            },
        );
        if !rule.oriented {
            self.index.remove(
                &self.bank,
                rule.right,
                Use {
                    rule: id,
                    backward: true,
                },
            );
        }
        self.active -= 1;
        self.open_rules -= usize::from(rule.is_open());
    }

    /// The laws by which a symbol is known to be associative and commutative.
    pub fn ac_laws(&self, symbol: Symbol) -> Option<AcLaws> {
        self.ac.get(symbol.index()).copied().flatten()
    }

    /// From now on the symbol is known to be associative and commutative, by these rules.
    pub fn set_ac(&mut self, symbol: Symbol, laws: AcLaws) {
        self.ac[symbol.index()] = Some(laws);
        self.changed();
    }

    /// Does a rule that leaves variables open decrease this term, which it matches?
    pub fn reduces_open(&mut self, term: TermId, by: Use) -> bool {
        let mark = self.bank.mark();
        self.matcher.start(term);
        let mut reduces = false;
        while let Some(hit) = self.matcher.next(&self.index, &self.bank) {
            if hit == by {
                let next = self.replacement(term, by);
                reduces = next.is_some_and(|next| self.order.greater(&self.bank, term, next));
                break;
            }
        }
        self.bank.rollback(mark);
        reduces
    }

    /// The instance of a rule's replacing side under the last hit's substitution, which makes the
    /// other side `term`; nothing if there
    /// is none, or if the rule is not oriented and the instance does not decrease by its weight.
    pub(super) fn replacement(&mut self, term: TermId, by: Use) -> Option<TermId> {
        let rule = &self.rules[by.rule.index()];
        let (_, to) = rule.sides(by.backward);
        for variable in &rule.program(by.backward).extra {
            if !self.matcher.substitution.get(variable.index).is_some() {
                // Set for this instance only: the next hit's search clears what it has bound.
                let least = if self.asking {
                    &self.asked_least
                } else {
                    &self.theory_least
                };
                let least = of_sort(least, variable.sort)?;
                self.matcher.bind(variable.index, least);
            }
        }
        let program = rule.program(by.backward);
        let substitution = &self.matcher.substitution;
        if !rule.oriented && self.order.kind() == OrderKind::Kbo {
            let weight = program.weight(&self.bank, to, substitution);
            if weight.is_some_and(|weight| weight > self.bank.weight(term)) {
                return None;
            }
        }
        Some(program.run(&mut self.bank, to, substitution, &mut self.built))
    }
}

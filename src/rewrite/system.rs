//! A set of rules with everything that rewriting by them needs.

use super::canonical::{AcLaws, Spine};
use super::index::{Index, Matcher};
use super::normal::{Build, Frame};
use super::{Rule, RuleId, RuleState, Table, Use};
use crate::order::Order;
use crate::term::{Bank, Mark, Sort, Symbol, SymbolInfo, TermId};

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
    /// By sort, the least constant: of the theory, and of the questions.
    least: [Vec<TermId>; 2],
    asking: bool,
    /// How many active rules have variables on one side only.
    open_rules: usize,
    /// The number of the state of the rules, and in the lowest bit whether open variables become
    /// constants of a question: what [`System::generation`] says.
    pub(super) generation: u32,
    active: usize,
    theory_symbols: usize,
    /// The symbols after those of the theory.
    question: Vec<(u32, Sort)>,
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
            least: Default::default(),
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
        for (index, info) in symbols.iter().enumerate() {
            if info.arguments.is_empty() {
                system.offer_least(Symbol(index as u32), false);
            }
        }
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

    /// The constant that stands for the variable of a question with this rank among its variables.
    ///
    /// It is below every symbol of the theory; a lower rank is below a higher one.
    pub fn question_constant(&mut self, rank: u32, sort: Sort) -> TermId {
        let place = self
            .question
            .iter()
            .position(|known| *known == (rank, sort));
        let place = place.unwrap_or_else(|| {
            let weight = self.order.variable_weight();
            let info = SymbolInfo {
                arguments: Box::new([]),
                result: sort,
                weight,
            };
            let symbol = self.bank.declare(info);
            self.order
                .add_least(symbol, u64::from(rank) << 16 | u64::from(sort.0));
            self.ac.push(None);
            self.question.push((rank, sort));
            self.offer_least(symbol, true);
            self.changed();
            self.question.len() - 1
        });
        let symbol = Symbol((self.theory_symbols + place) as u32);
        self.bank.apply(symbol, &[])
    }

    /// The rank and sort of a question constant; nothing for the theory's symbols.
    pub fn question_rank(&self, symbol: Symbol) -> Option<(u32, Sort)> {
        let place = symbol.index().checked_sub(self.theory_symbols)?;
        self.question.get(place).copied()
    }

    /// Are the terms that will be rewritten those of a question, in which variables have become
    /// constants? Then a variable that a rule leaves open becomes the least of these constants;
    /// otherwise it becomes the theory's least constant, and without one the rule is not used.
    pub fn set_asking(&mut self, asking: bool) {
        self.asking = asking;
        self.generation = self.generation & !1 | u32::from(asking && self.open_rules > 0);
    }

    /// Terms that were in normal form may no longer be.
    fn changed(&mut self) {
        self.generation = self.generation + 2 & !1;
        self.set_asking(self.asking);
    }

    /// The term that an open variable of this sort becomes.
    pub fn least(&self, sort: Sort) -> Option<TermId> {
        let of = |least: &[TermId]| {
            let term = least.get(usize::from(sort.0)).copied();
            term.filter(|term| term.is_some())
        };
        let asked = self.asking.then(|| of(&self.least[1])).flatten();
        asked.or_else(|| of(&self.least[0]))
    }

    fn offer_least(&mut self, constant: Symbol, of_question: bool) {
        let sort = usize::from(self.bank.info(constant).result.0);
        let term = self.bank.apply(constant, &[]);
        let least = &mut self.least[usize::from(of_question)];
        if least.len() <= sort {
            least.resize(sort + 1, TermId::NONE);
        }
        if !least[sort].is_some() || self.order.greater(&self.bank, least[sort], term) {
            least[sort] = term;
        }
    }

    /// Takes a mark: until [`System::rollback`], terms and steps are for the moment only.
    pub fn mark(&mut self) -> Mark {
        let mark = self.bank.mark();
        self.table.mark(mark);
        mark
    }

    /// Forgets the terms and steps since the mark.
    pub fn rollback(&mut self, mark: Mark) {
        self.table.rollback();
        self.bank.rollback(mark);
    }

    /// Does a rule that leaves variables open decrease this term, which it matches?
    pub fn reduces_open(&mut self, term: TermId, by: Use) -> bool {
        let mark = self.bank.mark();
        self.matcher.start(term);
        let mut reduces = false;
        while let Some(hit) = self.matcher.next(&self.index, &self.bank) {
            if hit == by {
                let next = self.replacement(by);
                reduces = next.is_some_and(|next| self.order.greater(&self.bank, term, next));
                break;
            }
        }
        self.bank.rollback(mark);
        reduces
    }

    /// The instance of a rule's replacing side under the last hit's substitution.
    pub(super) fn replacement(&mut self, by: Use) -> Option<TermId> {
        let rule = &self.rules[by.rule.index()];
        let (_, to) = rule.sides(by.backward);
        if rule.has_extra(by.backward) {
            for variable in self.bank.variables(to) {
                if !self.matcher.substitution.get(variable.index).is_some() {
                    // Set for this instance only: the next hit's search clears what it has bound.
                    let least = self.least(variable.sort)?;
                    self.matcher.bind(variable.index, least);
                }
            }
        }
        let rule = &self.rules[by.rule.index()];
        let program = rule.program(by.backward);
        Some(program.run(
            &mut self.bank,
            to,
            &self.matcher.substitution,
            &mut self.built,
        ))
    }
}

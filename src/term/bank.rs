//! The bank: every term once.

use super::slots::{Key, Place, Slots};
use super::{Sort, Symbol, TermId, Variable, VariableCounts};

/// What a term begins with.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Head {
    /// The term is a variable.
    Variable(Variable),
    /// The term is a symbol applied to arguments.
    Symbol(Symbol),
}

/// The shape of a symbol.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SymbolInfo {
    /// The sorts of the arguments.
    pub arguments: Box<[Sort]>,
    /// The sort of the result.
    pub result: Sort,
    /// The weight that it adds to a term, for orders that weigh.
    pub weight: u32,
}

#[derive(Clone, Copy)]
struct Node {
    head: u32,
    first: u32,
    arity: u32,
}

#[derive(Clone, Copy)]
struct Facts {
    counts: VariableCounts,
    weight: u64,
    size: u32,
    ground: bool,
}

/// A state of the bank to return to: see [`Bank::rollback`].
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Mark {
    nodes: u32,
    arguments: u32,
}

impl Mark {
    /// How many terms there were when the mark was taken.
    pub fn terms(self) -> usize {
        self.nodes as usize
    }

    /// Did this term exist when the mark was taken?
    pub fn has(self, term: TermId) -> bool {
        term.0 < self.nodes
    }
}

/// Hash-consed terms with cached facts.
///
/// Invariants: equal terms have equal ids; arguments have smaller ids than the term they stand in;
/// sizes and weights saturate instead of overflowing. Building a term costs one hash look-up.
/// Most terms are built, looked at and thrown away: [`Bank::mark`] and [`Bank::rollback`] return
/// the memory at a cost that is linear in what is thrown away.
#[derive(Clone)]
pub struct Bank {
    symbols: Vec<SymbolInfo>,
    variable_weight: u32,
    nodes: Vec<Node>,
    facts: Vec<Facts>,
    arguments: Vec<TermId>,
    slots: Slots,
}

impl Default for Bank {
    fn default() -> Self {
        Self::new(1)
    }
}

impl Bank {
    /// An empty bank in which every variable weighs `variable_weight`.
    pub fn new(variable_weight: u32) -> Self {
        Bank {
            symbols: Vec::new(),
            variable_weight,
            nodes: Vec::new(),
            facts: Vec::new(),
            arguments: Vec::new(),
            slots: Slots::default(),
        }
    }

    /// Adds a symbol.
    pub fn declare(&mut self, info: SymbolInfo) -> Symbol {
        self.symbols.push(info);
        Symbol(self.symbols.len() as u32 - 1)
    }

    /// All symbols, in the order of their declaration.
    pub fn symbols(&self) -> &[SymbolInfo] {
        &self.symbols
    }

    /// The shape of one symbol.
    pub fn info(&self, symbol: Symbol) -> &SymbolInfo {
        &self.symbols[symbol.index()]
    }

    /// The weight of a variable.
    pub fn variable_weight(&self) -> u32 {
        self.variable_weight
    }

    /// How many terms there are.
    pub fn len(&self) -> usize {
        self.nodes.len()
    }

    /// Is there no term yet?
    pub fn is_empty(&self) -> bool {
        self.nodes.is_empty()
    }

    /// The term that is this variable.
    pub fn variable(&mut self, variable: Variable) -> TermId {
        self.intern(variable.pack(), &[])
    }

    /// The term that is this symbol applied to these arguments.
    ///
    /// The number and the sorts of the arguments are the caller's business.
    pub fn apply(&mut self, symbol: Symbol, arguments: &[TermId]) -> TermId {
        debug_assert_eq!(self.info(symbol).arguments.len(), arguments.len());
        self.intern(symbol.0, arguments)
    }

    /// The term with this head and these arguments, if it is in the bank already.
    pub fn find(&self, symbol: Symbol, arguments: &[TermId]) -> Option<TermId> {
        match self.search(Key::new(symbol.0, arguments), symbol.0, arguments) {
            Place::Known(id) => Some(id),
            Place::Free(..) => None,
        }
    }

    /// What the term begins with.
    #[inline]
    pub fn head(&self, term: TermId) -> Head {
        let head = self.nodes[term.index()].head;
        if head & Variable::BIT != 0 {
            Head::Variable(Variable::unpack(head))
        } else {
            Head::Symbol(Symbol(head))
        }
    }

    /// The variable that the term is, if it is one.
    #[inline]
    pub fn as_variable(&self, term: TermId) -> Option<Variable> {
        match self.head(term) {
            Head::Variable(variable) => Some(variable),
            Head::Symbol(_) => None,
        }
    }

    /// The symbol that the term begins with, if it is no variable.
    #[inline]
    pub fn as_symbol(&self, term: TermId) -> Option<Symbol> {
        match self.head(term) {
            Head::Symbol(symbol) => Some(symbol),
            Head::Variable(_) => None,
        }
    }

    /// The arguments.
    #[inline]
    pub fn arguments(&self, term: TermId) -> &[TermId] {
        let node = &self.nodes[term.index()];
        &self.arguments[node.first as usize..(node.first + node.arity) as usize]
    }

    /// The sort.
    pub fn sort(&self, term: TermId) -> Sort {
        match self.head(term) {
            Head::Variable(variable) => variable.sort,
            Head::Symbol(symbol) => self.info(symbol).result,
        }
    }

    /// How many symbols and variables the term has, written out; saturating.
    #[inline]
    pub fn size(&self, term: TermId) -> u32 {
        self.facts[term.index()].size
    }

    /// The sum of the weights of its symbols and variables; saturating.
    #[inline]
    pub fn weight(&self, term: TermId) -> u64 {
        self.facts[term.index()].weight
    }

    /// Has the term no variable?
    #[inline]
    pub fn is_ground(&self, term: TermId) -> bool {
        self.facts[term.index()].ground
    }

    /// How often each variable occurs.
    #[inline]
    pub fn counts(&self, term: TermId) -> VariableCounts {
        self.facts[term.index()].counts
    }

    /// How often each variable occurs, by walking: distinct subterms once each, whatever the size
    /// written out. Sorted by variable.
    pub fn count_by_walking(&self, term: TermId) -> Vec<(Variable, u64)> {
        let mut waiting = std::collections::BTreeMap::from([(term, 1u64)]);
        let mut counts = Vec::new();
        while let Some((term, times)) = waiting.pop_last() {
            if self.is_ground(term) {
                continue;
            }
            if let Some(variable) = self.as_variable(term) {
                counts.push((variable, times));
            }
            for &argument in self.arguments(term) {
                let sum = waiting.entry(argument).or_insert(0);
                *sum = sum.saturating_add(times);
            }
        }
        counts.sort_unstable();
        counts
    }

    /// The variables of a term, each once, in the order of their first occurrence.
    pub fn variables(&self, term: TermId) -> Vec<Variable> {
        let mut seen = rustc_hash::FxHashSet::default();
        let mut found = Vec::new();
        let mut stack = vec![term];
        while let Some(term) = stack.pop() {
            if self.is_ground(term) || !seen.insert(term) {
                continue;
            }
            if let Some(variable) = self.as_variable(term) {
                found.push(variable);
            }
            stack.extend(self.arguments(term).iter().rev());
        }
        found
    }

    /// Does every variable of `small` occur in `large`?
    pub fn mentions_all(&self, large: TermId, small: TermId) -> bool {
        let (a, b) = (self.counts(large), self.counts(small));
        if !a.is_wide() && !b.is_wide() {
            return a.mention(b);
        }
        let present = self.variables(large);
        self.variables(small).iter().all(|v| present.contains(v))
    }

    /// Takes a mark.
    pub fn mark(&self) -> Mark {
        Mark {
            nodes: self.nodes.len() as u32,
            arguments: self.arguments.len() as u32,
        }
    }

    /// Forgets every term that came after the mark.
    pub fn rollback(&mut self, mark: Mark) {
        for id in (mark.nodes..self.nodes.len() as u32).rev() {
            let id = TermId(id);
            let key = Key::new(self.nodes[id.index()].head, self.arguments(id));
            self.slots.remove(key, id);
        }
        self.nodes.truncate(mark.nodes as usize);
        self.facts.truncate(mark.nodes as usize);
        self.arguments.truncate(mark.arguments as usize);
    }

    fn intern(&mut self, head: u32, arguments: &[TermId]) -> TermId {
        let key = Key::new(head, arguments);
        let (line, place) = match self.search(key, head, arguments) {
            Place::Known(id) => return id,
            Place::Free(line, place) => (line, place),
        };
        let id = self.nodes.len() as u32;
        assert!(
            id < TermId::NONE.0,
            "a bank holds fewer than 2^32 - 1 terms"
        );
        self.facts.push(self.facts_of(head, arguments));
        self.nodes.push(Node {
            head,
            first: self.arguments.len() as u32,
            arity: arguments.len() as u32,
        });
        self.arguments.extend_from_slice(arguments);
        self.slots.insert(key, line, place, TermId(id));
        if self.slots.is_full() {
            let Bank {
                nodes,
                arguments,
                slots,
                ..
            } = self;
            slots.grow(nodes.iter().map(|node| {
                let end = (node.first + node.arity) as usize;
                Key::new(node.head, &arguments[node.first as usize..end])
            }));
        }
        TermId(id)
    }

    #[inline]
    fn search(&self, key: Key, head: u32, arguments: &[TermId]) -> Place {
        self.slots.search(key, |id| {
            self.nodes[id.index()].head == head && self.arguments(id) == arguments
        })
    }

    fn facts_of(&self, head: u32, arguments: &[TermId]) -> Facts {
        if head & Variable::BIT != 0 {
            return Facts {
                counts: VariableCounts::one(Variable::unpack(head).index),
                weight: u64::from(self.variable_weight),
                size: 1,
                ground: false,
            };
        }
        let mut facts = Facts {
            counts: VariableCounts::NONE,
            weight: u64::from(self.symbols[head as usize].weight),
            size: 1,
            ground: true,
        };
        for argument in arguments {
            let part = &self.facts[argument.index()];
            facts.counts = facts.counts.plus(part.counts);
            facts.weight = facts.weight.saturating_add(part.weight);
            facts.size = facts.size.saturating_add(part.size);
            facts.ground &= part.ground;
        }
        facts
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn bank() -> (Bank, Symbol, Symbol) {
        let mut bank = Bank::default();
        let sort = Sort(0);
        let constant = bank.declare(SymbolInfo {
            arguments: Box::new([]),
            result: sort,
            weight: 1,
        });
        let pair = bank.declare(SymbolInfo {
            arguments: Box::new([sort, sort]),
            result: sort,
            weight: 1,
        });
        (bank, constant, pair)
    }

    #[test]
    fn equal_terms_have_equal_ids_and_rollback_forgets() {
        let (mut bank, constant, pair) = bank();
        let c = bank.apply(constant, &[]);
        let cc = bank.apply(pair, &[c, c]);
        assert_eq!(cc, bank.apply(pair, &[c, c]));
        let mark = bank.mark();
        let mut top = cc;
        for _ in 0..10_000 {
            top = bank.apply(pair, &[top, c]);
        }
        bank.rollback(mark);
        assert_eq!(bank.len(), 2);
        assert_eq!(bank.find(pair, &[cc, c]), None);
        assert_eq!(bank.find(pair, &[c, c]), Some(cc));
        let again = bank.apply(pair, &[cc, c]);
        assert_eq!(again, TermId(2));
    }

    #[test]
    fn a_term_doubled_a_hundred_times_saturates() {
        let (mut bank, constant, pair) = bank();
        let mut top = bank.apply(constant, &[]);
        for _ in 0..100 {
            top = bank.apply(pair, &[top, top]);
        }
        assert_eq!(bank.size(top), u32::MAX);
        assert_eq!(bank.weight(top), u64::MAX);
        let x = bank.variable(Variable {
            index: 3,
            sort: Sort(0),
        });
        let mut top = x;
        for _ in 0..100 {
            top = bank.apply(pair, &[top, top]);
        }
        assert!(bank.counts(top).is_wide());
        assert_eq!(bank.count_by_walking(top).len(), 1);
    }
}

//! A perfect discrimination tree: which rules' left sides match a term?
//!
//! Paths spell left sides in preorder (McCune 1992; Graf 1996, chapter 4, of which this is the
//! perfect variant: variables keep their identity on the path). The search walks the subject with
//! an explicit list of what is still to be read, so that backing up is cutting a list.

use super::Use;
use crate::term::{Bank, Head, Sort, Substitution, Symbol, TermId, match_term};
use rustc_hash::FxHashMap;

/// The tree. Inserting, removing and one path of a search cost the size of the pattern.
#[derive(Clone, Debug)]
pub struct Index {
    nodes: Vec<Node>,
    free: Vec<u32>,
}

#[derive(Clone, Debug, Default)]
struct Node {
    symbols: Edges,
    variables: Vec<VariableEdge>,
    leaf: Vec<Use>,
}

#[derive(Clone, Copy, Debug)]
struct VariableEdge {
    index: u32,
    sort: Sort,
    child: u32,
}

/// Few edges are searched one by one; many by hashing, so that a million constants cost the same.
#[derive(Clone, Debug)]
enum Edges {
    Few(Vec<(Symbol, u32)>),
    Many(FxHashMap<Symbol, u32>),
}

impl Default for Edges {
    fn default() -> Self {
        Edges::Few(Vec::new())
    }
}

impl Edges {
    #[inline]
    fn get(&self, symbol: Symbol) -> Option<u32> {
        match self {
            Edges::Few(edges) => edges.iter().find(|e| e.0 == symbol).map(|e| e.1),
            Edges::Many(edges) => edges.get(&symbol).copied(),
        }
    }

    fn insert(&mut self, symbol: Symbol, child: u32) {
        match self {
            Edges::Few(edges) if edges.len() < 16 => edges.push((symbol, child)),
            Edges::Few(edges) => {
                let mut many: FxHashMap<_, _> = edges.drain(..).collect();
                many.insert(symbol, child);
                *self = Edges::Many(many);
            }
            Edges::Many(edges) => {
                edges.insert(symbol, child);
            }
        }
    }

    fn remove(&mut self, child: u32) {
        match self {
            Edges::Few(edges) => edges.retain(|e| e.1 != child),
            Edges::Many(edges) => edges.retain(|_, c| *c != child),
        }
    }

    fn is_empty(&self) -> bool {
        match self {
            Edges::Few(edges) => edges.is_empty(),
            Edges::Many(edges) => edges.is_empty(),
        }
    }
}

const ROOT: u32 = 0;
const END: u32 = u32::MAX;

impl Default for Index {
    fn default() -> Self {
        Index {
            nodes: vec![Node::default()],
            free: Vec::new(),
        }
    }
}

impl Index {
    /// Adds a pattern.
    pub fn insert(&mut self, bank: &Bank, pattern: TermId, entry: Use) {
        let mut node = ROOT;
        let mut stack = vec![pattern];
        while let Some(term) = stack.pop() {
            node = self.child(node, bank.head(term)).unwrap_or_else(|| {
                let child = self.fresh();
                let parent = &mut self.nodes[node as usize];
                match bank.head(term) {
                    Head::Symbol(symbol) => parent.symbols.insert(symbol, child),
                    Head::Variable(v) => {
                        parent.variables.push(VariableEdge {
                            index: v.index,
                            sort: v.sort,
                            child,
                        });
                    }
                }
                child
            });
            stack.extend(bank.arguments(term).iter().rev());
        }
        self.nodes[node as usize].leaf.push(entry);
    }

    /// Removes a pattern that was added.
    pub fn remove(&mut self, bank: &Bank, pattern: TermId, entry: Use) {
        let mut path = vec![ROOT];
        let mut stack = vec![pattern];
        while let Some(term) = stack.pop() {
            let Some(child) = self.child(path[path.len() - 1], bank.head(term)) else {
                debug_assert!(false, "only what was added is removed");
                return;
            };
            path.push(child);
            stack.extend(bank.arguments(term).iter().rev());
        }
        self.nodes[path[path.len() - 1] as usize]
            .leaf
            .retain(|e| *e != entry);
        while let [.., parent, child] = path[..] {
            if !self.nodes[child as usize].is_empty() {
                break;
            }
            let parent = &mut self.nodes[parent as usize];
            parent.symbols.remove(child);
            parent.variables.retain(|e| e.child != child);
            self.free.push(child);
            path.pop();
        }
    }

    fn child(&self, node: u32, head: Head) -> Option<u32> {
        let node = &self.nodes[node as usize];
        match head {
            Head::Symbol(symbol) => node.symbols.get(symbol),
            Head::Variable(v) => {
                let same = |e: &&VariableEdge| e.index == v.index && e.sort == v.sort;
                node.variables.iter().find(same).map(|e| e.child)
            }
        }
    }

    fn fresh(&mut self) -> u32 {
        self.free.pop().unwrap_or_else(|| {
            self.nodes.push(Node::default());
            self.nodes.len() as u32 - 1
        })
    }
}

impl Node {
    fn is_empty(&self) -> bool {
        self.symbols.is_empty() && self.variables.is_empty() && self.leaf.is_empty()
    }
}

#[derive(Clone, Copy, Debug)]
struct Choice {
    node: u32,
    list: u32,
    alternative: u32,
    cells: u32,
    bound: u32,
}

/// A search through an index: [`Matcher::start`], then [`Matcher::next`] until it has no more.
///
/// The bank may grow between the calls. After a hit, `substitution` has the pattern's variables.
#[derive(Clone, Debug, Default)]
pub struct Matcher {
    /// The substitution of the last hit.
    pub substitution: Substitution,
    /// What is still to be read, as linked cells.
    cells: Vec<(TermId, u32)>,
    choices: Vec<Choice>,
    bound: Vec<u32>,
    leaf: u32,
    leaf_next: usize,
    /// What was bound when the leaf was reached; what came later was bound from outside.
    leaf_bound: usize,
}

impl Matcher {
    /// Begins a search for the patterns that match `subject`.
    pub fn start(&mut self, subject: TermId) {
        self.unbind(0);
        self.cells.clear();
        self.cells.push((subject, END));
        self.choices.clear();
        self.choices.push(Choice {
            node: ROOT,
            list: 0,
            alternative: 0,
            cells: 1,
            bound: 0,
        });
        self.leaf = END;
    }

    /// The next hit.
    #[inline]
    pub fn next(&mut self, index: &Index, bank: &Bank) -> Option<Use> {
        loop {
            if self.leaf != END {
                self.unbind(self.leaf_bound);
                if let Some(hit) = index.nodes[self.leaf as usize].leaf.get(self.leaf_next) {
                    self.leaf_next += 1;
                    return Some(*hit);
                }
                self.leaf = END;
            }
            let choice = self.choices.pop()?;
            self.cells.truncate(choice.cells as usize);
            self.unbind(choice.bound as usize);
            if let Some(leaf) = self.descend(index, bank, choice) {
                self.leaf = leaf;
                self.leaf_next = 0;
                self.leaf_bound = self.bound.len();
            }
        }
    }

    /// Follows one path down, leaving choices behind, to a node at which all has been read.
    fn descend(&mut self, index: &Index, bank: &Bank, from: Choice) -> Option<u32> {
        let Choice {
            mut node,
            mut list,
            mut alternative,
            ..
        } = from;
        while list != END {
            let here = &index.nodes[node as usize];
            let (term, rest) = self.cells[list as usize];
            if alternative == 0 {
                alternative = 1;
                let child = bank
                    .as_symbol(term)
                    .and_then(|symbol| here.symbols.get(symbol));
                if let Some(child) = child {
                    if !here.variables.is_empty() {
                        self.choose(node, list, 1);
                    }
                    list = rest;
                    for &argument in bank.arguments(term).iter().rev() {
                        self.cells.push((argument, list));
                        list = self.cells.len() as u32 - 1;
                    }
                    node = child;
                    alternative = 0;
                    continue;
                }
            }
            let edge = here.variables.get(alternative as usize - 1)?;
            alternative += 1;
            let value = self.substitution.get(edge.index);
            // Below the root the sorts agree, since both terms are well sorted.
            let fits = if value.is_some() {
                value == term
            } else {
                node != ROOT || bank.sort(term) == edge.sort
            };
            if !fits {
                continue;
            }
            if here.variables.len() >= alternative as usize {
                self.choose(node, list, alternative);
            }
            if !value.is_some() {
                self.substitution.set(edge.index, term);
                self.bound.push(edge.index);
            }
            node = edge.child;
            list = rest;
            alternative = 0;
        }
        Some(node)
    }

    /// Matches one pattern alone, as if it were the last hit of a search; it must match.
    pub(super) fn rebind(&mut self, bank: &Bank, pattern: TermId, subject: TermId) {
        self.unbind(0);
        self.choices.clear();
        self.leaf = END;
        let matches = match_term(bank, pattern, subject, &mut self.substitution);
        debug_assert!(matches);
        let variables = bank.variables(pattern);
        self.bound
            .extend(variables.iter().map(|variable| variable.index));
    }

    /// Gives a variable that the last hit left open a value, until the search goes on.
    pub(super) fn bind(&mut self, index: u32, term: TermId) {
        self.substitution.set(index, term);
        self.bound.push(index);
    }

    #[inline]
    fn choose(&mut self, node: u32, list: u32, alternative: u32) {
        let (cells, bound) = (self.cells.len() as u32, self.bound.len() as u32);
        self.choices.push(Choice {
            node,
            list,
            alternative,
            cells,
            bound,
        });
    }

    #[inline]
    fn unbind(&mut self, to: usize) {
        while self.bound.len() > to {
            let index = self.bound.pop().expect("it is longer");
            self.substitution.set(index, TermId::NONE);
        }
    }
}

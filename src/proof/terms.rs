//! Plain terms with names, each distinct term stored once.

use std::hash::{BuildHasher, RandomState};
use std::sync::Arc;

use rustc_hash::{FxHashMap, FxHashSet};

use super::work::{NEW_TERM, Stop, Work};

/// A name (of an operator, variable, sort or equation) as an index into the names of a [`Terms`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Name(u32);

/// A term as an index into a [`Terms`]; arguments have smaller indices than their term.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct TermIndex(u32);

impl TermIndex {
    /// The number by which JSON refers to the term.
    pub fn number(self) -> u32 {
        self.0
    }
}

/// One layer of a term.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Node<'a> {
    /// A variable.
    Variable(Name),
    /// An operator with its arguments; a constant has none.
    Apply(Name, &'a [TermIndex]),
}

#[derive(Clone, Copy, Debug)]
struct Entry {
    name: Name,
    is_variable: bool,
    ground: bool,
    /// The arguments are `arguments[first..end]`.
    first: u32,
    end: u32,
    /// The previous term with the same hash, if any.
    same_hash: Option<TermIndex>,
    /// Number of nodes of the term written out as a tree, saturating.
    size: u64,
}

/// A table of terms in which equal terms have equal indices.
///
/// Comparing terms is comparing indices. The hash is keyed at random, since the table is also
/// filled from files of unknown origin.
///
/// ```
/// use equable::proof::Terms;
/// let mut terms = Terms::default();
/// let x = terms.variable("x");
/// let once = terms.apply("f", &[x, x]);
/// assert_eq!(once, terms.apply("f", &[x, x]));
/// assert_eq!(terms.size(once), 3);
/// ```
#[derive(Clone, Debug, Default)]
pub struct Terms {
    names: Vec<Arc<str>>,
    name_of: std::collections::HashMap<Arc<str>, Name>,
    entries: Vec<Entry>,
    arguments: Vec<TermIndex>,
    by_hash: FxHashMap<u64, TermIndex>,
    hasher: RandomState,
}

/// What stands for each variable.
pub(super) type Substitution = FxHashMap<Name, TermIndex>;

impl Terms {
    /// The name written `text`.
    pub fn name(&mut self, text: &str) -> Name {
        if let Some(&name) = self.name_of.get(text) {
            return name;
        }
        let name = Name(index(self.names.len()));
        // Shared, since a hostile file may hold names of many megabytes and the checkers copy the
        // table.
        let text: Arc<str> = text.into();
        self.names.push(Arc::clone(&text));
        self.name_of.insert(text, name);
        name
    }

    /// How `name` is written.
    pub fn text(&self, name: Name) -> &str {
        &self.names[name.0 as usize]
    }

    /// A name that was not used before; `hint` is part of it.
    pub(super) fn fresh_name(&mut self, hint: &str) -> Name {
        let mut text = format!("\u{0}{hint}");
        while self.name_of.contains_key(text.as_str()) {
            text.insert(0, '\u{0}');
        }
        self.name(&text)
    }

    /// The variable written `text`.
    pub fn variable(&mut self, text: &str) -> TermIndex {
        let name = self.name(text);
        self.variable_named(name)
    }

    /// The variable called `name`.
    pub fn variable_named(&mut self, name: Name) -> TermIndex {
        self.intern(name, true, &[])
    }

    /// The application of the operator written `operator`; the arguments are of this table.
    pub fn apply(&mut self, operator: &str, arguments: &[TermIndex]) -> TermIndex {
        let name = self.name(operator);
        self.apply_named(name, arguments)
    }

    /// The application of the operator called `name`.
    pub fn apply_named(&mut self, name: Name, arguments: &[TermIndex]) -> TermIndex {
        self.intern(name, false, arguments)
    }

    /// The outermost layer of `term`.
    pub fn node(&self, term: TermIndex) -> Node<'_> {
        let entry = &self.entries[term.0 as usize];
        if entry.is_variable {
            Node::Variable(entry.name)
        } else {
            let range = entry.first as usize..entry.end as usize;
            Node::Apply(entry.name, &self.arguments[range])
        }
    }

    /// The arguments of `term`; none for a variable.
    pub fn arguments(&self, term: TermIndex) -> &[TermIndex] {
        match self.node(term) {
            Node::Variable(_) => &[],
            Node::Apply(_, arguments) => arguments,
        }
    }

    /// The number of distinct terms.
    pub fn len(&self) -> usize {
        self.entries.len()
    }

    /// Whether there is no term yet.
    pub fn is_empty(&self) -> bool {
        self.entries.is_empty()
    }

    /// The term with this number, if there is one.
    pub fn get(&self, number: u64) -> Option<TermIndex> {
        let number = u32::try_from(number).ok()?;
        ((number as usize) < self.len()).then_some(TermIndex(number))
    }

    /// All terms, arguments before the terms they stand in.
    pub fn all(&self) -> impl Iterator<Item = TermIndex> + use<> {
        (0..index(self.len())).map(TermIndex)
    }

    /// The number of nodes of `term` written out as a tree; `u64::MAX` if it is that or more.
    pub fn size(&self, term: TermIndex) -> u64 {
        self.entries[term.0 as usize].size
    }

    /// Whether no variable occurs in `term`.
    pub fn is_ground(&self, term: TermIndex) -> bool {
        self.entries[term.0 as usize].ground
    }

    /// The distinct subterms that satisfy `keep` and are reached through such, arguments first.
    fn subterms_where(
        &self,
        roots: &[TermIndex],
        keep: impl Fn(TermIndex) -> bool,
        work: &mut Work,
    ) -> Result<Vec<TermIndex>, Stop> {
        let mut seen = FxHashSet::default();
        let mut waiting = roots.to_vec();
        while let Some(term) = waiting.pop() {
            if keep(term) && seen.insert(term) {
                let arguments = self.arguments(term);
                work.spend(1 + arguments.len() as u64)?;
                waiting.extend_from_slice(arguments);
            }
        }
        let mut found: Vec<TermIndex> = seen.into_iter().collect();
        found.sort_unstable();
        Ok(found)
    }

    /// The distinct subterms of `roots`, arguments first; cost in their number.
    pub(super) fn subterms(
        &self,
        roots: &[TermIndex],
        work: &mut Work,
    ) -> Result<Vec<TermIndex>, Stop> {
        self.subterms_where(roots, |_| true, work)
    }

    /// The distinct variables of `roots`.
    pub(super) fn variables(
        &self,
        roots: &[TermIndex],
        work: &mut Work,
    ) -> Result<Vec<Name>, Stop> {
        let open = self.subterms_where(roots, |term| !self.is_ground(term), work)?;
        Ok(open
            .into_iter()
            .filter_map(|term| match self.node(term) {
                Node::Variable(name) => Some(name),
                Node::Apply(..) => None,
            })
            .collect())
    }

    /// `term` with its variables replaced; a variable without entry stays. Cost in the number of
    /// distinct subterms that are not ground.
    pub(super) fn instantiate(
        &mut self,
        term: TermIndex,
        with: &Substitution,
        work: &mut Work,
    ) -> Result<TermIndex, Stop> {
        work.spend(1)?;
        if self.is_ground(term) {
            return Ok(term);
        }
        if let Node::Variable(name) = self.node(term) {
            return Ok(with.get(&name).copied().unwrap_or(term));
        }
        let open = self.subterms_where(&[term], |term| !self.is_ground(term), work)?;
        let mut image: FxHashMap<TermIndex, TermIndex> = FxHashMap::default();
        let mut arguments = Vec::new();
        for open_term in open {
            let instance = match self.node(open_term) {
                Node::Variable(name) => with.get(&name).copied().unwrap_or(open_term),
                Node::Apply(name, old) => {
                    arguments.clear();
                    arguments.extend(old.iter().map(|old| *image.get(old).unwrap_or(old)));
                    self.apply_charged(name, &arguments, work)?
                }
            };
            image.insert(open_term, instance);
        }
        Ok(image[&term])
    }

    /// As [`Terms::apply_named`], and a term that is new is paid for.
    pub(super) fn apply_charged(
        &mut self,
        name: Name,
        arguments: &[TermIndex],
        work: &mut Work,
    ) -> Result<TermIndex, Stop> {
        let before = self.len();
        let term = self.apply_named(name, arguments);
        if self.len() > before {
            work.spend(NEW_TERM + arguments.len() as u64)?;
        }
        Ok(term)
    }

    /// The term as text for messages, `f(x, g(y))`, cut off when it is long.
    pub fn show(&self, term: TermIndex) -> String {
        enum Piece<'a> {
            Term(TermIndex),
            Text(&'a str),
        }
        const LONGEST: usize = 120;
        let mut text = String::new();
        let mut pieces = vec![Piece::Term(term)];
        while let Some(piece) = pieces.pop() {
            if text.len() > LONGEST {
                text.push('…');
                return text;
            }
            match piece {
                Piece::Text(fixed) => text.push_str(fixed),
                Piece::Term(term) => {
                    let name = self.entries[term.0 as usize].name;
                    text.extend(self.text(name).chars().filter(|c| !c.is_control()).take(60));
                    let arguments = self.arguments(term);
                    if let Some((first, others)) = arguments.split_first() {
                        text.push('(');
                        pieces.push(Piece::Text(")"));
                        // A wide node does not push more than could ever be shown.
                        for &other in others.iter().take(LONGEST).rev() {
                            pieces.push(Piece::Term(other));
                            pieces.push(Piece::Text(", "));
                        }
                        pieces.push(Piece::Term(*first));
                    }
                }
            }
        }
        text
    }

    fn intern(&mut self, name: Name, is_variable: bool, arguments: &[TermIndex]) -> TermIndex {
        let hash = self.hasher.hash_one((name, is_variable, arguments));
        let newest = self.by_hash.get(&hash).copied();
        let mut candidate = newest;
        while let Some(term) = candidate {
            let entry = &self.entries[term.0 as usize];
            if entry.name == name
                && entry.is_variable == is_variable
                && self.arguments(term) == arguments
            {
                return term;
            }
            candidate = entry.same_hash;
        }
        let term = TermIndex(index(self.entries.len()));
        let first = index(self.arguments.len());
        self.arguments.extend_from_slice(arguments);
        let size = |&argument: &TermIndex| self.size(argument);
        self.entries.push(Entry {
            name,
            is_variable,
            ground: !is_variable && arguments.iter().all(|&a| self.is_ground(a)),
            first,
            end: index(self.arguments.len()),
            same_hash: newest,
            size: arguments.iter().map(size).fold(1, u64::saturating_add),
        });
        self.by_hash.insert(hash, term);
        term
    }
}

/// A length as a 32-bit index.
fn index(length: usize) -> u32 {
    // Four thousand million entries do not fit the memory that the work limit allows.
    u32::try_from(length).expect("fewer than 2^32 entries")
}

//! Matching, unification and normal forms, written as plainly as polynomial cost allows.

use rustc_hash::{FxHashMap, FxHashSet};

use super::check_order::{Assumption, Comparison, Order};
use super::signature::Signature;
use super::terms::{Name, Node, Substitution, TermIndex, Terms};
use super::work::{Stop, Work};

/// A rule, or an equation in one of its two directions.
#[derive(Clone, Debug)]
pub(super) struct Directed {
    /// The number of the rule.
    pub rule: usize,
    pub left: TermIndex,
    pub right: TermIndex,
    /// Whether it is used only on instances that decrease. The others always decrease.
    pub ordered: bool,
    /// The variables that are only on the right, with their sorts.
    pub extra: Vec<(Name, Name)>,
}

/// Everything that normal forms depend on besides the assumption about variables.
pub(super) struct Rewriting {
    pub terms: Terms,
    pub signature: Signature,
    pub order: Order,
    pub rules: Vec<Directed>,
    /// The rules by the operator of their left side; `None` for a variable.
    by_operator: FxHashMap<Option<Name>, Vec<usize>>,
    /// The least ground term of each sort.
    pub least: FxHashMap<Name, TermIndex>,
}

impl Rewriting {
    pub(super) fn new(
        terms: Terms,
        signature: Signature,
        order: Order,
        rules: Vec<Directed>,
        least: FxHashMap<Name, TermIndex>,
    ) -> Self {
        let mut by_operator: FxHashMap<Option<Name>, Vec<usize>> = FxHashMap::default();
        for (number, rule) in rules.iter().enumerate() {
            let operator = root(&terms, rule.left);
            by_operator.entry(operator).or_default().push(number);
        }
        Rewriting {
            terms,
            signature,
            order,
            rules,
            by_operator,
            least,
        }
    }

    /// The rules whose left side can be that of a term with this root.
    pub(super) fn candidates(&self, operator: Option<Name>) -> Vec<usize> {
        let of = |operator| {
            self.by_operator
                .get(&operator)
                .map_or(&[][..], Vec::as_slice)
        };
        let mut candidates = of(operator).to_vec();
        if operator.is_some() {
            candidates.extend_from_slice(of(None));
        }
        candidates
    }
}

/// The operator of a term, `None` for a variable.
pub(super) fn root(terms: &Terms, term: TermIndex) -> Option<Name> {
    match terms.node(term) {
        Node::Variable(_) => None,
        Node::Apply(operator, _) => Some(operator),
    }
}

/// Normal forms under one assumption about variables; remembers what it has found.
pub(super) struct NormalForms {
    comparison: Comparison,
    /// A variable of each sort that is the smallest of the assumption, for variables that are
    /// only on the right of a rule.
    smallest: FxHashMap<Name, TermIndex>,
    normal: FxHashMap<TermIndex, TermIndex>,
}

enum Task {
    /// Find the normal form.
    Visit(TermIndex),
    /// The arguments have theirs.
    Build(TermIndex),
    /// The first two have the normal form of the third.
    Link(TermIndex, TermIndex, TermIndex),
}

impl NormalForms {
    pub(super) fn under(assumption: Assumption, smallest: FxHashMap<Name, TermIndex>) -> Self {
        NormalForms {
            comparison: Comparison::under(assumption),
            smallest,
            normal: FxHashMap::default(),
        }
    }

    /// Whether `left` is certainly greater than `right` under the assumption.
    pub(super) fn is_greater(
        &mut self,
        system: &Rewriting,
        left: TermIndex,
        right: TermIndex,
        work: &mut Work,
    ) -> Result<bool, Stop> {
        self.comparison
            .is_greater(&system.order, &system.terms, left, right, work)
    }

    /// A normal form of `term`, innermost first. Every step decreases in the order, so it ends.
    pub(super) fn normal_form(
        &mut self,
        system: &mut Rewriting,
        term: TermIndex,
        work: &mut Work,
    ) -> Result<TermIndex, Stop> {
        let mut tasks = vec![Task::Visit(term)];
        while let Some(task) = tasks.pop() {
            work.spend(1)?;
            match task {
                Task::Visit(term) => {
                    if !self.normal.contains_key(&term) {
                        let arguments = system.terms.arguments(term);
                        work.spend(arguments.len() as u64)?;
                        tasks.push(Task::Build(term));
                        tasks.extend(arguments.iter().map(|&argument| Task::Visit(argument)));
                    }
                }
                Task::Build(term) => {
                    // Remembering costs memory.
                    work.spend(10)?;
                    self.build(system, term, &mut tasks, work)?;
                }
                Task::Link(term, built, reduct) => {
                    let normal = self.normal[&reduct];
                    self.normal.insert(term, normal);
                    self.normal.insert(built, normal);
                }
            }
        }
        Ok(self.normal[&term])
    }

    fn build(
        &mut self,
        system: &mut Rewriting,
        term: TermIndex,
        tasks: &mut Vec<Task>,
        work: &mut Work,
    ) -> Result<(), Stop> {
        let built = match system.terms.node(term) {
            Node::Variable(_) => term,
            Node::Apply(operator, arguments) => {
                let arguments: Vec<TermIndex> = arguments
                    .iter()
                    .map(|argument| self.normal[argument])
                    .collect();
                system.terms.apply_charged(operator, &arguments, work)?
            }
        };
        if let Some(&normal) = self.normal.get(&built) {
            self.normal.insert(term, normal);
            return Ok(());
        }
        match self.step_at_root(system, built, work)? {
            Some(reduct) => {
                tasks.push(Task::Link(term, built, reduct));
                tasks.push(Task::Visit(reduct));
            }
            None => {
                self.normal.insert(built, built);
                self.normal.insert(term, built);
            }
        }
        Ok(())
    }

    /// What the first rule that applies at the root makes of `term`.
    ///
    /// A variable that is only on the right of an equation stands for the least ground term of its
    /// sort. If any instance of the right side is smaller than the term then so is that one, so
    /// for ground terms nothing is lost. For terms with variables the smallest variable of the
    /// assumption is tried too; any instance that decreases is a step.
    fn step_at_root(
        &mut self,
        system: &mut Rewriting,
        term: TermIndex,
        work: &mut Work,
    ) -> Result<Option<TermIndex>, Stop> {
        for number in system.candidates(root(&system.terms, term)) {
            work.spend(1)?;
            let rule = &system.rules[number];
            let (left, right, ordered) = (rule.left, rule.right, rule.ordered);
            let Some(mut with) = match_term(&system.terms, &system.signature, left, term, work)?
            else {
                continue;
            };
            if !ordered {
                return system.terms.instantiate(right, &with, work).map(Some);
            }
            let extra = rule.extra.clone();
            for (variable, sort) in &extra {
                // Every sort of a rule has a least ground term.
                if let Some(&least) = system.least.get(sort) {
                    with.insert(*variable, least);
                }
            }
            let mut instances = vec![system.terms.instantiate(right, &with, work)?];
            if extra
                .iter()
                .any(|(_, sort)| self.smallest.contains_key(sort))
            {
                for (variable, sort) in &extra {
                    if let Some(&smallest) = self.smallest.get(sort) {
                        with.insert(*variable, smallest);
                    }
                }
                instances.push(system.terms.instantiate(right, &with, work)?);
            }
            for instance in instances {
                if self.is_greater(system, term, instance, work)? {
                    return Ok(Some(instance));
                }
            }
        }
        Ok(None)
    }
}

/// Whether one replacement by an instance of an ordered equation makes `left` into `right`. Each
/// ground instance of the replacement is a step in one direction or the other, or changes nothing,
/// so the two join, although it may depend on the instance how.
pub(super) fn one_replacement(
    system: &Rewriting,
    left: TermIndex,
    right: TermIndex,
    work: &mut Work,
) -> Result<bool, Stop> {
    let Rewriting {
        terms,
        signature,
        rules,
        ..
    } = system;
    let (mut one, mut other) = (left, right);
    loop {
        for number in system.candidates(root(terms, one)) {
            work.spend(1)?;
            let rule = &rules[number];
            let pairs = vec![(rule.left, one), (rule.right, other)];
            if rule.ordered && match_all(terms, signature, pairs, work)?.is_some() {
                return Ok(true);
            }
        }
        // Further down there is a place for both only if all else is the same.
        let (Node::Apply(f, some), Node::Apply(g, others)) = (terms.node(one), terms.node(other))
        else {
            return Ok(false);
        };
        work.spend(1 + some.len() as u64)?;
        let mut differing = some.iter().zip(others).filter(|(one, other)| one != other);
        match (differing.next(), differing.next()) {
            (Some((&inner, &other_inner)), None) if f == g => (one, other) = (inner, other_inner),
            _ => return Ok(false),
        }
    }
}

/// The substitution that makes `pattern` into `subject`.
pub(super) fn match_term(
    terms: &Terms,
    signature: &Signature,
    pattern: TermIndex,
    subject: TermIndex,
    work: &mut Work,
) -> Result<Option<Substitution>, Stop> {
    match_all(terms, signature, vec![(pattern, subject)], work)
}

/// The substitution that makes the first of each pair into the second.
fn match_all(
    terms: &Terms,
    signature: &Signature,
    pairs: Vec<(TermIndex, TermIndex)>,
    work: &mut Work,
) -> Result<Option<Substitution>, Stop> {
    let mut with = Substitution::default();
    let mut waiting = pairs;
    while let Some((pattern, subject)) = waiting.pop() {
        work.spend(1)?;
        if terms.is_ground(pattern) {
            if pattern != subject {
                return Ok(None);
            }
            continue;
        }
        match (terms.node(pattern), terms.node(subject)) {
            (Node::Variable(name), _) => {
                if signature.sort(terms, pattern) != signature.sort(terms, subject)
                    || *with.entry(name).or_insert(subject) != subject
                {
                    return Ok(None);
                }
            }
            (Node::Apply(f, patterns), Node::Apply(g, subjects)) if f == g => {
                waiting.extend(patterns.iter().copied().zip(subjects.iter().copied()));
            }
            (Node::Apply(..), _) => return Ok(None),
        }
    }
    Ok(Some(with))
}

/// The most general substitution that makes `one` and `other` equal, as an idempotent one on the
/// variables of both. Robinson 1965; a pair of subterms is looked at once.
pub(super) fn unify(
    terms: &mut Terms,
    signature: &Signature,
    one: TermIndex,
    other: TermIndex,
    work: &mut Work,
) -> Result<Option<Substitution>, Stop> {
    let mut bindings = Substitution::default();
    let mut seen = FxHashSet::default();
    let mut waiting = vec![(one, other)];
    while let Some((one, other)) = waiting.pop() {
        work.spend(5)?;
        let one = follow(terms, &bindings, one, work)?;
        let other = follow(terms, &bindings, other, work)?;
        if one == other || !seen.insert((one, other)) {
            continue;
        }
        match (terms.node(one), terms.node(other)) {
            (Node::Variable(name), _) | (_, Node::Variable(name)) => {
                let value = if root(terms, one).is_none() {
                    other
                } else {
                    one
                };
                if signature.sort(terms, one) != signature.sort(terms, other) {
                    return Ok(None);
                }
                bindings.insert(name, value);
            }
            (Node::Apply(f, some), Node::Apply(g, others)) => {
                if f != g {
                    return Ok(None);
                }
                waiting.extend(some.iter().copied().zip(others.iter().copied()));
            }
        }
    }
    resolve(terms, bindings, work)
}

/// `term`, or if it is a bound variable what it is bound to.
fn follow(
    terms: &Terms,
    bindings: &Substitution,
    mut term: TermIndex,
    work: &mut Work,
) -> Result<TermIndex, Stop> {
    loop {
        work.spend(1)?;
        match terms.node(term) {
            Node::Variable(name) if bindings.contains_key(&name) => term = bindings[&name],
            _ => return Ok(term),
        }
    }
}

/// Puts bindings into each other; `None` if one contains itself.
fn resolve(
    terms: &mut Terms,
    bindings: Substitution,
    work: &mut Work,
) -> Result<Option<Substitution>, Stop> {
    let mut resolved = Substitution::default();
    let mut open: FxHashSet<Name> = FxHashSet::default();
    for &first in bindings.keys() {
        let mut waiting = vec![first];
        while let Some(&name) = waiting.last() {
            work.spend(1)?;
            if resolved.contains_key(&name) {
                waiting.pop();
                continue;
            }
            let inside = terms.variables(&[bindings[&name]], work)?;
            let needed =
                |inner: &Name| bindings.contains_key(inner) && !resolved.contains_key(inner);
            let needed: Vec<Name> = inside.into_iter().filter(needed).collect();
            if needed.is_empty() {
                let term = terms.instantiate(bindings[&name], &resolved, work)?;
                resolved.insert(name, term);
                waiting.pop();
            } else if !open.insert(name) {
                // It was opened before and still needs something: what it needs needs it.
                return Ok(None);
            } else {
                waiting.extend(needed);
            }
        }
    }
    Ok(Some(resolved))
}

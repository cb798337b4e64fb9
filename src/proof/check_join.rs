//! Whether two terms come together under a rule set, on all ground instances.
//!
//! Without ordered equations this is equality of normal forms. With them it is decided by cases on
//! how the ground terms for the variables compare (Martin & Nipkow 1990, "Ordered rewriting and
//! confluence", §4): each two variables stand for the same term, or one for the smaller. The cases
//! are opened one variable at a time and only where the terms have not met yet. If some equation
//! has variables on one side only, then also whether a variable stands for the least ground term.

use rustc_hash::{FxHashMap, FxHashSet};

use super::check_ac;
use super::check_order::Assumption;
use super::check_rewrite::{NormalForms, Rewriting, one_replacement};
use super::terms::{Name, Substitution, TermIndex};
use super::work::{Stop, Work};

/// What a variable made here is for. Variables of different roles are different.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub(super) enum Role {
    /// A variable of the rule that is overlapped on.
    Outer,
    /// A variable of the rule that overlaps.
    Inner,
    /// A variable of a goal of which nothing is assumed.
    Free,
    /// A variable of a goal that has a place among the others.
    Placed,
}

/// Two terms that have to join on all ground instances on which, in each of `peaks`, the first
/// term is greater than the second.
#[derive(Clone, Debug)]
pub(super) struct Goal {
    pub left: TermIndex,
    pub right: TermIndex,
    pub peaks: Vec<(TermIndex, TermIndex)>,
}

/// Whether a goal joins.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Joined {
    Yes,
    /// In some case the normal forms are these.
    No(TermIndex, TermIndex),
}

/// A rule set with what is remembered between goals.
pub(super) struct Joining {
    pub system: Rewriting,
    /// Normal forms without assumption, also for ground terms.
    pub plain: NormalForms,
    /// Normal forms when the placed variables of these sorts are assumed to ascend.
    ascending: FxHashMap<Vec<Name>, NormalForms>,
    variables: FxHashMap<(Role, u32, Name), TermIndex>,
    has_ordered: bool,
    has_extra: bool,
    /// The operators modulo whose associativity and commutativity ground terms join.
    ac: FxHashSet<Name>,
}

/// What is assumed of a variable of the goal.
#[derive(Clone, Copy, Debug)]
enum Standing {
    /// It stands for the least ground term of its sort.
    Least,
    /// It belongs to the class of this number, counted from the smallest.
    Class(u32),
}

/// A case: the first variables of the goal have a standing.
#[derive(Clone, Debug, Default)]
struct Case {
    standings: Vec<Standing>,
    /// The sort of each class.
    classes: Vec<Name>,
}

impl Joining {
    pub(super) fn new(system: Rewriting) -> Self {
        let has_ordered = system.rules.iter().any(|rule| rule.ordered);
        let ac = check_ac::operators(&system.terms, &system.rules);
        let has_extra = system.rules.iter().any(|rule| !rule.extra.is_empty());
        Joining {
            system,
            plain: NormalForms::under(Assumption::default(), FxHashMap::default()),
            ascending: FxHashMap::default(),
            variables: FxHashMap::default(),
            has_ordered,
            has_extra,
            ac,
        }
    }

    /// The variable number `number` of a role and sort.
    pub(super) fn variable(&mut self, role: Role, number: u32, sort: Name) -> TermIndex {
        let system = &mut self.system;
        *self
            .variables
            .entry((role, number, sort))
            .or_insert_with(|| {
                let name = system.terms.fresh_name(&format!("x{number}"));
                system.signature.add_variable(name, sort);
                system.terms.variable_named(name)
            })
    }

    /// Whether `goal` joins in every case.
    pub(super) fn joins(&mut self, goal: &Goal, work: &mut Work) -> Result<Joined, Stop> {
        if goal.left == goal.right {
            return Ok(Joined::Yes);
        }
        let terms = &mut self.system.terms;
        if check_ac::equal(terms, &self.ac, goal.left, goal.right, work)? {
            return Ok(Joined::Yes);
        }
        let mut roots = vec![goal.left, goal.right];
        roots.extend(goal.peaks.iter().flat_map(|&(one, other)| [one, other]));
        let variables: Vec<(Name, Name)> = self
            .system
            .terms
            .variables(&roots, work)?
            .into_iter()
            .filter_map(|name| Some((name, self.system.signature.variable_sort(name)?)))
            .collect();
        let mut waiting = vec![Case::default()];
        while let Some(case) = waiting.pop() {
            work.spend(1 + variables.len() as u64)?;
            let Joined::No(left, right) = self.joins_in(goal, &variables, &case, work)? else {
                continue;
            };
            // Without ordered equations a case knows nothing that a normal form could use.
            match variables.get(case.standings.len()) {
                Some(&(_, sort)) if self.has_ordered => self.split(&case, sort, &mut waiting),
                _ => return Ok(Joined::No(left, right)),
            }
        }
        Ok(Joined::Yes)
    }

    /// The cases into which `case` falls by the standing of one more variable, of sort `sort`.
    fn split(&self, case: &Case, sort: Name, cases: &mut Vec<Case>) {
        let with = |standing: Standing| {
            let mut new = case.clone();
            new.standings.push(standing);
            new
        };
        if self.has_extra && self.system.least.contains_key(&sort) {
            cases.push(with(Standing::Least));
        }
        for (number, &class_sort) in case.classes.iter().enumerate() {
            // Terms of different sorts are never the same.
            if class_sort == sort {
                cases.push(with(Standing::Class(number as u32)));
            }
        }
        for position in 0..=case.classes.len() {
            let mut new = case.clone();
            new.classes.insert(position, sort);
            for standing in &mut new.standings {
                if let Standing::Class(class) = standing
                    && *class as usize >= position
                {
                    *class += 1;
                }
            }
            new.standings.push(Standing::Class(position as u32));
            cases.push(new);
        }
    }

    fn joins_in(
        &mut self,
        goal: &Goal,
        variables: &[(Name, Name)],
        case: &Case,
        work: &mut Work,
    ) -> Result<Joined, Stop> {
        let mut with = Substitution::default();
        for (number, &(name, sort)) in variables.iter().enumerate() {
            let term = match case.standings.get(number) {
                None => self.variable(Role::Free, number as u32, sort),
                Some(Standing::Class(class)) => self.variable(Role::Placed, *class, sort),
                Some(Standing::Least) => self.system.least[&sort],
            };
            with.insert(name, term);
        }
        self.open_ascending(&case.classes);
        let Joining {
            system,
            plain,
            ascending,
            ac,
            ..
        } = self;
        let forms = match ascending.get_mut(&case.classes) {
            Some(forms) if !case.classes.is_empty() => forms,
            _ => plain,
        };
        for &(greater, smaller) in &goal.peaks {
            let greater = system.terms.instantiate(greater, &with, work)?;
            let smaller = system.terms.instantiate(smaller, &with, work)?;
            if greater == smaller || forms.is_greater(system, smaller, greater, work)? {
                // No instance has this peak.
                return Ok(Joined::Yes);
            }
        }
        let left = system.terms.instantiate(goal.left, &with, work)?;
        let right = system.terms.instantiate(goal.right, &with, work)?;
        if left == right {
            return Ok(Joined::Yes);
        }
        let left = forms.normal_form(system, left, work)?;
        let right = forms.normal_form(system, right, work)?;
        if left == right || one_replacement(system, left, right, work)? {
            return Ok(Joined::Yes);
        }
        let equal = check_ac::equal(&mut system.terms, ac, left, right, work)?;
        Ok(if equal {
            Joined::Yes
        } else {
            Joined::No(left, right)
        })
    }

    /// Makes sure that there are normal forms for ascending variables of these sorts.
    fn open_ascending(&mut self, classes: &[Name]) {
        if classes.is_empty() || self.ascending.contains_key(classes) {
            return;
        }
        let mut assumption = Assumption::default();
        let mut smallest = FxHashMap::default();
        for (class, &sort) in classes.iter().enumerate() {
            let variable = self.variable(Role::Placed, class as u32, sort);
            smallest.entry(sort).or_insert(variable);
            if let super::terms::Node::Variable(name) = self.system.terms.node(variable) {
                assumption.rank.insert(name, class as u32);
                // A variable that may stand for the least term has its own case for that, but
                // only where such cases are made.
                if let (true, Some(&least)) = (self.has_extra, self.system.least.get(&sort)) {
                    assumption.above.insert(name, least);
                }
            }
        }
        let forms = NormalForms::under(assumption, smallest);
        self.ascending.insert(classes.to_vec(), forms);
    }
}

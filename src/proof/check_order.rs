//! The two reduction orders, straight from their definitions.
//!
//! * The Knuth–Bendix order: Knuth & Bendix 1970, "Simple word problems in universal algebras",
//!   §2; Baader & Nipkow 1998, "Term Rewriting and All That", §5.4.4.
//! * The lexicographic path order: Kamin & Lévy 1980; Baader & Nipkow 1998, §5.4.2.
//!
//! Both are compared under an [`Assumption`] about variables (Martin & Nipkow 1990, "Ordered
//! rewriting and confluence"): `s` is greater than `t` only if every ground instance that obeys
//! the assumption is greater. With the empty assumption these are the textbook orders. On ground
//! terms over the precedence they are total.

use rustc_hash::{FxHashMap, FxHashSet};

use super::evidence::{OrderKind, StatedOrder};
use super::signature::Signature;
use super::terms::{Name, Node, TermIndex, Terms};
use super::work::{Stop, Work, rejected};

/// An admissible order.
#[derive(Clone, Debug)]
pub(super) struct Order {
    kind: OrderKind,
    /// Greater operators have greater ranks.
    rank: FxHashMap<Name, i64>,
    weights: FxHashMap<Name, u64>,
    variable: u64,
}

impl Order {
    /// The stated order, with `constants` below every operator, the first of them smallest, and
    /// of the weight of a variable.
    ///
    /// Admissible means for the Knuth–Bendix order: variables have a positive weight, constants
    /// weigh at least as much, and a unary operator of weight 0 is greatest in the precedence.
    pub(super) fn new(
        terms: &Terms,
        signature: &Signature,
        stated: &StatedOrder,
        constants: &[Name],
    ) -> Result<Order, Stop> {
        let mut order = Order {
            kind: stated.kind,
            rank: FxHashMap::default(),
            weights: FxHashMap::default(),
            variable: stated.variable,
        };
        let place = |name: Name| format!("order.precedence.{}", terms.text(name));
        for (position, &name) in stated.precedence.iter().enumerate() {
            let rank = (stated.precedence.len() - position) as i64;
            if order.rank.insert(name, rank).is_some() {
                return Err(rejected(place(name), "the operator is listed twice"));
            }
        }
        for (position, &name) in constants.iter().enumerate() {
            let rank = position as i64 - constants.len() as i64;
            order.rank.insert(name, rank);
            order.weights.insert(name, stated.variable);
        }
        if stated.kind == OrderKind::KnuthBendix {
            order.read_weights(terms, signature, stated)?;
        }
        Ok(order)
    }

    fn read_weights(
        &mut self,
        terms: &Terms,
        signature: &Signature,
        stated: &StatedOrder,
    ) -> Result<(), Stop> {
        if stated.variable == 0 {
            return Err(rejected(
                "order.variable",
                "the weight of a variable is positive",
            ));
        }
        let place = |name: Name| format!("order.weights.{}", terms.text(name));
        for &(name, weight) in &stated.weights {
            if self.weights.insert(name, weight).is_some() {
                return Err(rejected(place(name), "the operator has two weights"));
            }
        }
        for (position, &name) in stated.precedence.iter().enumerate() {
            let Some(&weight) = self.weights.get(&name) else {
                return Err(rejected(place(name), "the weight is missing"));
            };
            let arity = signature.operators.get(&name).map(|(sorts, _)| sorts.len());
            if arity == Some(0) && weight < stated.variable {
                return Err(rejected(
                    place(name),
                    "a constant is lighter than a variable",
                ));
            }
            if arity == Some(1) && weight == 0 && position != 0 {
                let reason = "a unary operator of weight 0 is not greatest in the precedence";
                return Err(rejected(place(name), reason));
            }
        }
        Ok(())
    }

    /// Whether the precedence, or the constants below it, have `operator`.
    pub(super) fn lists(&self, operator: Name) -> bool {
        self.rank.contains_key(&operator)
    }

    /// The operators of the precedence, and the constants below it.
    pub(super) fn operators(&self) -> impl Iterator<Item = Name> + '_ {
        self.rank.keys().copied()
    }

    fn above(&self, one: Name, other: Name) -> bool {
        match (self.rank.get(&one), self.rank.get(&other)) {
            (Some(one), Some(other)) => one > other,
            _ => false,
        }
    }
}

/// What is assumed of the ground terms that variables stand for.
#[derive(Clone, Debug, Default)]
pub(super) struct Assumption {
    /// Of two variables in here the one of the lower rank stands for the smaller term.
    pub rank: FxHashMap<Name, u32>,
    /// A variable in here stands for a greater term than this one, the least of its sort.
    pub above: FxHashMap<Name, TermIndex>,
}

impl Assumption {
    fn smaller(&self, one: Name, other: Name) -> bool {
        match (self.rank.get(&one), self.rank.get(&other)) {
            (Some(one), Some(other)) => one < other,
            _ => false,
        }
    }
}

/// The weight of a term whose variables weigh as little as they can, and how often they occur.
#[derive(Clone, Debug, Default)]
struct Profile {
    weight: u128,
    /// Sorted by name.
    counts: Box<[(Name, u128)]>,
}

/// Compares terms under one assumption; remembers what it has found.
#[derive(Debug, Default)]
pub(super) struct Comparison {
    assumption: Assumption,
    /// Pairs compared by the lexicographic path order. Two entries for each pair of subterms at
    /// most, which makes it polynomial.
    greater: FxHashMap<(TermIndex, TermIndex), bool>,
    profiles: FxHashMap<TermIndex, Profile>,
}

impl Comparison {
    /// Compares under `assumption`.
    pub(super) fn under(assumption: Assumption) -> Self {
        Comparison {
            assumption,
            ..Comparison::default()
        }
    }

    /// Whether `left` is certainly greater than `right`.
    pub(super) fn is_greater(
        &mut self,
        order: &Order,
        terms: &Terms,
        left: TermIndex,
        right: TermIndex,
        work: &mut Work,
    ) -> Result<bool, Stop> {
        match order.kind {
            OrderKind::KnuthBendix => self.knuth_bendix(order, terms, left, right, work),
            OrderKind::LexicographicPath => self.path_order(order, terms, left, right, work),
        }
    }

    /// `s > t` if no variable can make `t` heavier, and `s` is heavier, or as heavy and
    ///
    /// * its operator is greater, or
    /// * the operators are the same and the first arguments that differ are `s_i > t_i`;
    ///
    /// and `s > x` if `s` properly contains `x` or a variable assumed to be greater. The last
    /// clause covers `f(…f(x)) > x` for an `f` of weight 0.
    fn knuth_bendix(
        &mut self,
        order: &Order,
        terms: &Terms,
        left: TermIndex,
        right: TermIndex,
        work: &mut Work,
    ) -> Result<bool, Stop> {
        let (mut left, mut right) = (left, right);
        loop {
            if left == right {
                return Ok(false);
            }
            match (terms.node(left), terms.node(right)) {
                (Node::Variable(one), Node::Variable(other)) => {
                    return Ok(self.assumption.smaller(other, one));
                }
                (Node::Variable(one), Node::Apply(..)) => {
                    return Ok(self.assumption.above.get(&one) == Some(&right));
                }
                (Node::Apply(..), Node::Variable(other)) => {
                    self.weigh(order, terms, left, work)?;
                    let assumption = &self.assumption;
                    let mut inside = self.profiles[&left].counts.iter();
                    return Ok(
                        inside.any(|&(name, _)| name == other || assumption.smaller(other, name))
                    );
                }
                (Node::Apply(f, arguments), Node::Apply(g, others)) => {
                    self.weigh(order, terms, left, work)?;
                    self.weigh(order, terms, right, work)?;
                    match self.never_lighter(left, right, work)? {
                        None => return Ok(false),
                        Some(true) => return Ok(true),
                        Some(false) => {}
                    }
                    if f != g {
                        return Ok(order.above(f, g));
                    }
                    let mut pairs = arguments.iter().zip(others);
                    let Some((&one, &other)) = pairs.find(|(one, other)| one != other) else {
                        return Ok(false);
                    };
                    work.spend(arguments.len() as u64)?;
                    (left, right) = (one, other);
                }
            }
        }
    }

    /// `None` if `left` may be lighter than `right` in some ground instance that obeys the
    /// assumption; otherwise whether it is certainly heavier.
    ///
    /// A ground term weighs at least as much as a variable. Let `e_x ≥ 0` be by how much more the
    /// term for `x` weighs, and `d_x` by how much more often `x` occurs on the left. The difference
    /// is that of the least weights plus the sum of all `d_x · e_x`. For `x1 < x2 < …` it is known
    /// that `e_x1 ≤ e_x2 ≤ …`, so the sum is never negative if all sums `d_xi + d_x(i+1) + …` are
    /// not, and a variable without assumption has `d_x ≥ 0`.
    fn never_lighter(
        &self,
        left: TermIndex,
        right: TermIndex,
        work: &mut Work,
    ) -> Result<Option<bool>, Stop> {
        let (one, other) = (&self.profiles[&left], &self.profiles[&right]);
        work.spend(1 + (one.counts.len() + other.counts.len()) as u64)?;
        let mut differences: FxHashMap<Name, i128> = FxHashMap::default();
        for (counts, sign) in [(&one.counts, 1), (&other.counts, -1)] {
            for &(name, count) in counts.iter() {
                let count = i128::try_from(count).map_err(|_| Stop::TooCostly)?;
                *differences.entry(name).or_default() += sign * count;
            }
        }
        let mut chain = Vec::new();
        for (name, difference) in differences {
            match self.assumption.rank.get(&name) {
                Some(&rank) => chain.push((rank, difference)),
                None if difference < 0 => return Ok(None),
                None => {}
            }
        }
        chain.sort_unstable_by(|one, other| other.cmp(one));
        let mut sum: i128 = 0;
        for (_, difference) in chain {
            sum = sum.checked_add(difference).ok_or(Stop::TooCostly)?;
            if sum < 0 {
                return Ok(None);
            }
        }
        Ok((one.weight >= other.weight).then_some(one.weight > other.weight))
    }

    /// Fills in the profiles of `term` and its subterms.
    fn weigh(
        &mut self,
        order: &Order,
        terms: &Terms,
        term: TermIndex,
        work: &mut Work,
    ) -> Result<(), Stop> {
        let mut waiting = vec![term];
        while let Some(&term) = waiting.last() {
            if self.profiles.contains_key(&term) {
                waiting.pop();
                continue;
            }
            let unknown = |argument: &&TermIndex| !self.profiles.contains_key(argument);
            let arguments = terms.arguments(term);
            work.spend(10 + arguments.len() as u64)?;
            let before = waiting.len();
            waiting.extend(arguments.iter().filter(unknown));
            if waiting.len() == before {
                let profile = self.profile(order, terms, term, work)?;
                self.profiles.insert(term, profile);
                waiting.pop();
            }
        }
        Ok(())
    }

    /// The profile of a term whose arguments have theirs. Numbers beyond 128 bits are too costly.
    fn profile(
        &self,
        order: &Order,
        terms: &Terms,
        term: TermIndex,
        work: &mut Work,
    ) -> Result<Profile, Stop> {
        match terms.node(term) {
            Node::Variable(name) => Ok(Profile {
                weight: u128::from(order.variable),
                counts: [(name, 1)].into(),
            }),
            Node::Apply(name, arguments) => {
                let own = order.weights.get(&name).copied().unwrap_or(0);
                let mut weight = u128::from(own);
                let mut counts: Vec<(Name, u128)> = Vec::new();
                for argument in arguments {
                    let inner = &self.profiles[argument];
                    weight = weight.checked_add(inner.weight).ok_or(Stop::TooCostly)?;
                    counts.extend_from_slice(&inner.counts);
                }
                work.spend(2 * counts.len() as u64)?;
                counts.sort_unstable();
                let mut merged: Vec<(Name, u128)> = Vec::new();
                for (name, count) in counts {
                    match merged.last_mut() {
                        Some((last, sum)) if *last == name => {
                            *sum = sum.checked_add(count).ok_or(Stop::TooCostly)?;
                        }
                        _ => merged.push((name, count)),
                    }
                }
                let counts = merged.into();
                Ok(Profile { weight, counts })
            }
        }
    }

    /// Works off the pairs that [`Comparison::path_order_once`] asks for.
    fn path_order(
        &mut self,
        order: &Order,
        terms: &Terms,
        left: TermIndex,
        right: TermIndex,
        work: &mut Work,
    ) -> Result<bool, Stop> {
        let mut waiting = vec![(left, right)];
        while let Some(&pair) = waiting.last() {
            if self.greater.contains_key(&pair) {
                waiting.pop();
                continue;
            }
            let width = terms.arguments(pair.0).len() + terms.arguments(pair.1).len();
            work.spend(10 + width as u64)?;
            match self.path_order_once(order, terms, pair) {
                Ok(answer) => {
                    self.greater.insert(pair, answer);
                    waiting.pop();
                }
                Err(needed) => waiting.push(needed),
            }
        }
        Ok(self.greater[&(left, right)])
    }

    /// `s > t` if some `s_i ≥ t`, or `f` is greater than `g` and `s` than every `t_j`, or `f` is
    /// `g`, the first arguments that differ are `s_i > t_i`, and `s` is greater than every `t_j`.
    ///
    /// The error is a smaller pair whose answer is needed first.
    fn path_order_once(
        &self,
        order: &Order,
        terms: &Terms,
        (left, right): (TermIndex, TermIndex),
    ) -> Result<bool, (TermIndex, TermIndex)> {
        let greater = |one: TermIndex, other: TermIndex| {
            if one == other {
                return Ok(false);
            }
            self.greater.get(&(one, other)).copied().ok_or((one, other))
        };
        if left == right {
            return Ok(false);
        }
        let (f, arguments) = match (terms.node(left), terms.node(right)) {
            (Node::Variable(one), Node::Variable(other)) => {
                return Ok(self.assumption.smaller(other, one));
            }
            (Node::Variable(one), Node::Apply(..)) => {
                return Ok(self.assumption.above.get(&one) == Some(&right));
            }
            (Node::Apply(f, arguments), _) => (f, arguments),
        };
        for &argument in arguments {
            if argument == right || greater(argument, right)? {
                return Ok(true);
            }
        }
        let Node::Apply(g, others) = terms.node(right) else {
            return Ok(false);
        };
        if f == g {
            let mut pairs = arguments.iter().zip(others);
            match pairs.find(|(one, other)| one != other) {
                Some((&one, &other)) if greater(one, other)? => {}
                _ => return Ok(false),
            }
        } else if !order.above(f, g) {
            return Ok(false);
        }
        for &other in others {
            if !greater(left, other)? {
                return Ok(false);
            }
        }
        Ok(true)
    }
}

/// The least ground term of each sort that has one: of the operators that `order` lists.
///
/// The least term with operator `f` has the least terms of the argument sorts as arguments, since
/// the order is monotone, and it contains no other term of its own sort, since terms are greater
/// than their subterms. So as many rounds as there are sorts suffice.
pub(super) fn least_terms(
    order: &Order,
    terms: &mut Terms,
    signature: &Signature,
    work: &mut Work,
) -> Result<FxHashMap<Name, TermIndex>, Stop> {
    let mut comparison = Comparison::default();
    let mut operators: Vec<Name> = order.operators().collect();
    operators.sort_unstable();
    let mut least: FxHashMap<Name, TermIndex> = FxHashMap::default();
    loop {
        let mut changed = false;
        for &operator in &operators {
            let Some((sorts, result)) = signature.operators.get(&operator) else {
                continue;
            };
            work.spend(1 + sorts.len() as u64)?;
            // A term that contains a term of its own sort is not least.
            let arguments: Option<Vec<TermIndex>> =
                sorts.iter().map(|sort| least.get(sort).copied()).collect();
            let Some(arguments) = arguments else { continue };
            let term = terms.apply_charged(operator, &arguments, work)?;
            let better = match least.get(result) {
                None => true,
                Some(&known) => comparison.is_greater(order, terms, known, term, work)?,
            };
            if better {
                least.insert(*result, term);
                changed = true;
            }
        }
        if !changed {
            return Ok(least);
        }
    }
}

/// The operators of `roots` that `order` does not list.
pub(super) fn unlisted(
    order: &Order,
    terms: &Terms,
    roots: &[TermIndex],
    work: &mut Work,
) -> Result<FxHashSet<Name>, Stop> {
    let mut missing = FxHashSet::default();
    for term in terms.subterms(roots, work)? {
        if let Node::Apply(operator, _) = terms.node(term)
            && !order.lists(operator)
        {
            missing.insert(operator);
        }
    }
    Ok(missing)
}

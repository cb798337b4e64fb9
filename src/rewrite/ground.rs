//! Joining two terms for every order of their variables.
//!
//! Two terms may have no common normal form and yet agree on all ground instances, because ordered
//! equations rewrite the instances one way or the other. They do if for every total preorder of
//! their variables, with tied variables made one, they come to the same term under the order that
//! this preorder induces (Martin & Nipkow 1990; Avenhaus, Hillenbrand & Löchner 2003).

use super::{Limits, Stopped, System};
use crate::order::VariableOrder;
use crate::term::{Substitution, TermId, Variable, instantiate};
use rustc_hash::FxHashMap;
use std::cmp::Ordering;
use std::sync::OnceLock;

/// Did the two terms join?
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Joining {
    /// On all ground instances.
    Joined,
    /// Not by this test.
    Open,
}

/// With more variables the preorders are too many: 541 of five, 4,683 of six.
const MOST_VARIABLES: usize = 5;

impl System {
    /// Do all ground instances of the two terms join? The terms that this builds are forgotten.
    ///
    /// Costs two normal forms per preorder of the variables, until one does not join. Of a preorder
    /// under which they join only what the comparisons made use of is kept; other preorders that
    /// agree with that need no look, so that usually a few cover all.
    pub fn ground_joins(
        &mut self,
        s: TermId,
        t: TermId,
        limits: &mut Limits,
    ) -> Result<Joining, Stopped> {
        let mut variables = self.bank.variables(s);
        for variable in self.bank.variables(t) {
            if !variables.contains(&variable) {
                variables.push(variable);
            }
        }
        if variables.len() < 2 || variables.len() > MOST_VARIABLES {
            return Ok(Joining::Open);
        }
        let mut covered: Vec<Facts> = Vec::new();
        for preorder in preorders(variables.len()) {
            if covered.iter().any(|facts| preorder.facts.include(*facts)) {
                continue;
            }
            let mark = self.bank.mark();
            let joined = self.joins_under(s, t, &variables, preorder, limits);
            self.bank.rollback(mark);
            match joined? {
                Some(used) => covered.push(used),
                None => return Ok(Joining::Open),
            }
        }
        Ok(Joining::Joined)
    }

    /// What of the preorder was needed for the two terms to join; nothing if they do not.
    fn joins_under(
        &mut self,
        s: TermId,
        t: TermId,
        variables: &[Variable],
        preorder: &Preorder,
        limits: &mut Limits,
    ) -> Result<Option<Facts>, Stopped> {
        let classes = preorder.classes.iter().max().map_or(0, |most| most + 1);
        let mut chosen: Vec<Vec<usize>> = vec![Vec::new(); classes];
        let mut substitution = Substitution::default();
        for (place, (variable, &class)) in variables.iter().zip(&preorder.classes).enumerate() {
            // Variables of different sorts are never equal; they share a place in the order only.
            let same = chosen[class]
                .iter()
                .find(|other| variables[**other].sort == variable.sort);
            match same {
                Some(&same) => {
                    let term = self.bank.variable(variables[same]);
                    substitution.set(variable.index, term);
                }
                None => chosen[class].push(place),
            }
        }
        if chosen.iter().any(|class| class.len() > 1) {
            // A tie between different sorts: covered by the preorders without it.
            return Ok(Some(preorder.facts));
        }
        let order: Vec<u32> = chosen.iter().map(|c| variables[c[0]].index).collect();
        let assumed = VariableOrder::new(&order);
        let s = instantiate(&mut self.bank, s, &substitution);
        let t = instantiate(&mut self.bank, t, &substitution);
        let mut memo = FxHashMap::default();
        let s = self.normal_assuming(s, &assumed, &mut memo, limits)?;
        let t = self.normal_assuming(t, &assumed, &mut memo, limits)?;
        if s != t {
            return Ok(None);
        }
        let mut used = Facts {
            above: 0,
            ties: preorder.facts.ties,
        };
        for (i, j) in assumed.used() {
            used.above |= Facts::bit(chosen[i][0], chosen[j][0]);
        }
        Ok(Some(used))
    }

    /// The normal form when the variables are assumed to be ordered, without the table.
    fn normal_assuming(
        &mut self,
        term: TermId,
        assumed: &VariableOrder,
        memo: &mut FxHashMap<TermId, TermId>,
        limits: &mut Limits,
    ) -> Result<TermId, Stopped> {
        let mut stack = vec![term];
        let mut chains: Vec<(TermId, TermId)> = Vec::new();
        let mut arguments = Vec::new();
        while let Some(&top) = stack.last() {
            if memo.contains_key(&top) {
                stack.pop();
                continue;
            }
            // What the term waits for is the normal form of the next one.
            if let Some(&(_, next)) = chains.last().filter(|(from, _)| *from == top) {
                if let Some(&normal) = memo.get(&next) {
                    memo.insert(top, normal);
                    chains.pop();
                    stack.pop();
                } else {
                    stack.push(next);
                }
                continue;
            }
            limits.poll(self.bank.len())?;
            let before = stack.len();
            let waiting = self
                .bank
                .arguments(top)
                .iter()
                .filter(|a| !memo.contains_key(a));
            stack.extend(waiting);
            if stack.len() > before {
                continue;
            }
            arguments.clear();
            arguments.extend(self.bank.arguments(top).iter().map(|a| memo[a]));
            let next = if arguments != self.bank.arguments(top) {
                let symbol = self.bank.as_symbol(top).expect("it has arguments");
                Some(self.bank.apply(symbol, &arguments))
            } else {
                self.root_step_assuming(top, assumed)
            };
            match next {
                Some(next) => chains.push((top, next)),
                None => {
                    memo.insert(top, top);
                    stack.pop();
                }
            }
        }
        Ok(memo[&term])
    }

    fn root_step_assuming(&mut self, term: TermId, assumed: &VariableOrder) -> Option<TermId> {
        self.bank.as_symbol(term)?;
        self.matcher.start(term);
        while let Some(by) = self.matcher.next(&self.index, &self.bank) {
            let mark = self.bank.mark();
            let Some(next) = self.replacement(term, by) else {
                continue;
            };
            if self.rules[by.rule.index()].oriented
                || self.order.greater_assuming(&self.bank, term, next, assumed)
            {
                return Some(next);
            }
            self.bank.rollback(mark);
        }
        None
    }
}

/// What is known of the variables of a pair, by their places: which are above which, and which are
/// equal.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
struct Facts {
    above: u64,
    ties: u64,
}

impl Facts {
    fn bit(i: usize, j: usize) -> u64 {
        1 << (i * MOST_VARIABLES + j)
    }

    fn include(self, other: Facts) -> bool {
        self.above & other.above == other.above && self.ties & other.ties == other.ties
    }
}

/// A total preorder of the variables of a pair.
#[derive(Clone, Debug)]
struct Preorder {
    /// The class of each; class 0 is the greatest.
    classes: Vec<usize>,
    facts: Facts,
}

impl Preorder {
    fn new(classes: Vec<usize>) -> Preorder {
        let mut facts = Facts { above: 0, ties: 0 };
        for (i, a) in classes.iter().enumerate() {
            for (j, b) in classes.iter().enumerate() {
                match a.cmp(b) {
                    Ordering::Less => facts.above |= Facts::bit(i, j),
                    Ordering::Equal => facts.ties |= Facts::bit(i, j),
                    Ordering::Greater => {}
                }
            }
        }
        Preorder { classes, facts }
    }
}

/// All total preorders of `count` things; strict orders first, since most pairs that do not join
/// fail on the first.
fn preorders(count: usize) -> &'static [Preorder] {
    static ALL: [OnceLock<Vec<Preorder>>; MOST_VARIABLES + 1] =
        [const { OnceLock::new() }; MOST_VARIABLES + 1];
    ALL[count].get_or_init(|| {
        let mut found = Vec::new();
        let mut classes = vec![0; count];
        loop {
            let most = *classes.iter().max().unwrap_or(&0);
            if (0..=most).all(|class| classes.contains(&class)) {
                found.push(classes.clone());
            }
            let Some(place) = (0..count).rev().find(|&place| classes[place] + 1 < count) else {
                break;
            };
            classes[place] += 1;
            classes[place + 1..].fill(0);
        }
        found.sort_by_key(|classes| std::cmp::Reverse(classes.iter().max().copied()));
        found.into_iter().map(Preorder::new).collect()
    })
}

#[cfg(test)]
mod tests {
    use super::preorders;

    #[test]
    fn the_preorders_are_counted_by_the_ordered_bell_numbers() {
        // OEIS A000670, from memory.
        for (count, expected) in [(1, 1), (2, 3), (3, 13), (4, 75), (5, 541)] {
            assert_eq!(preorders(count).len(), expected);
        }
    }
}

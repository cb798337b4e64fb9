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
    /// Costs two normal forms per preorder of the variables, until one does not join.
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
        for preorder in preorders(variables.len()) {
            let mark = self.bank.mark();
            let joined = self.joins_under(s, t, &variables, &preorder, limits);
            self.bank.rollback(mark);
            if !joined? {
                return Ok(Joining::Open);
            }
        }
        Ok(Joining::Joined)
    }

    /// `preorder` has the class of each variable; class 0 is the greatest.
    fn joins_under(
        &mut self,
        s: TermId,
        t: TermId,
        variables: &[Variable],
        preorder: &[usize],
        limits: &mut Limits,
    ) -> Result<bool, Stopped> {
        let classes = preorder.iter().max().map_or(0, |most| most + 1);
        let mut chosen: Vec<Vec<Variable>> = vec![Vec::new(); classes];
        let mut substitution = Substitution::default();
        for (variable, &class) in variables.iter().zip(preorder) {
            // Variables of different sorts are never equal; they share a place in the order only.
            let same = chosen[class]
                .iter()
                .find(|v| v.sort == variable.sort)
                .copied();
            match same {
                Some(same) => {
                    let term = self.bank.variable(same);
                    substitution.set(variable.index, term);
                }
                None => chosen[class].push(*variable),
            }
        }
        if chosen.iter().any(|class| class.len() > 1) {
            // A tie between different sorts: covered by the preorders without it.
            return Ok(true);
        }
        let order: Vec<u32> = chosen.iter().map(|class| class[0].index).collect();
        let assumed = VariableOrder::new(&order);
        let s = instantiate(&mut self.bank, s, &substitution);
        let t = instantiate(&mut self.bank, t, &substitution);
        let mut memo = FxHashMap::default();
        let s = self.normal_assuming(s, &assumed, &mut memo, limits)?;
        let t = self.normal_assuming(t, &assumed, &mut memo, limits)?;
        Ok(s == t)
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
            let Some(next) = self.replacement(by) else {
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

/// All total preorders of `count` things, as the class of each; strict orders first, since most
/// pairs that do not join fail on the first.
fn preorders(count: usize) -> Vec<Vec<usize>> {
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
    found
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

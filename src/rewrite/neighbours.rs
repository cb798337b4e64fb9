//! What a term becomes by one step of an unoriented rule, in either direction.

use super::{System, Use};
use crate::term::TermId;

/// No more subterms of a term than this are looked at.
const MOST_PLACES: usize = 64;

impl System {
    /// The terms below `bound` that unoriented rules make of a term in one step, whether or not it
    /// decreases. Rules that leave variables open are left out.
    ///
    /// Costs a search in the index per subterm, and a term per hit.
    pub fn neighbours(&mut self, term: TermId, bound: TermId) -> Vec<TermId> {
        let mut found = Vec::new();
        let mut stack: Vec<(TermId, Vec<u32>)> = vec![(term, Vec::new())];
        let mut places = 0;
        while let Some((here, path)) = stack.pop() {
            places += 1;
            if places > MOST_PLACES || self.bank.as_symbol(here).is_none() {
                continue;
            }
            for (step, &argument) in self.bank.arguments(here).iter().enumerate() {
                let mut path = path.clone();
                path.push(step as u32);
                stack.push((argument, path));
            }
            self.matcher.start(here);
            while let Some(by) = self.matcher.next(&self.index, &self.bank) {
                let Some(made) = self.unoriented_instance(by) else {
                    continue;
                };
                let whole = self.put(term, &path, made);
                if whole != term && self.order.greater(&self.bank, bound, whole) {
                    found.push(whole);
                }
            }
        }
        found
    }

    fn unoriented_instance(&mut self, by: Use) -> Option<TermId> {
        let rule = &self.rules[by.rule.index()];
        if rule.oriented || rule.has_extra(by.backward) {
            return None;
        }
        let (_, to) = rule.sides(by.backward);
        let program = rule.program(by.backward);
        let substitution = &self.matcher.substitution;
        Some(program.run(&mut self.bank, to, substitution, &mut self.built))
    }

    /// The term with another one at a place.
    fn put(&mut self, whole: TermId, path: &[u32], part: TermId) -> TermId {
        let mut spine = Vec::with_capacity(path.len());
        let mut here = whole;
        for &step in path {
            spine.push(here);
            here = self.bank.arguments(here)[step as usize];
        }
        let mut made = part;
        for (&above, &step) in spine.iter().zip(path).rev() {
            let symbol = self.bank.as_symbol(above).expect("it has arguments");
            let mut arguments = self.bank.arguments(above).to_vec();
            arguments[step as usize] = made;
            made = self.bank.apply(symbol, &arguments);
        }
        made
    }
}

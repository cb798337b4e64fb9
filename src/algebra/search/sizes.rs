//! Vectors of sizes in the order of their totals.

use super::super::signature::Problem;

/// Runs through all vectors of sizes, a smaller total first.
///
/// A sort that nothing in the problem speaks of has one element.
pub(in crate::algebra) struct Sizes {
    /// The sorts that vary.
    varying: Vec<usize>,
    sorts: usize,
    /// The vector to hand out next, for the sorts that vary; none when all are handed out.
    next: Option<Vec<u32>>,
    largest_total: u32,
}

/// Domains are words of 64 bits.
pub(super) const LARGEST_SIZE: u32 = 64;

impl Sizes {
    pub(in crate::algebra) fn new(problem: &Problem, largest_total: u32) -> Self {
        let sorts = problem.signature.sorts();
        let mut mentioned = vec![false; sorts];
        for (used, shape) in problem.used().iter().zip(problem.signature.symbols()) {
            for sort in shape.arguments.iter().chain([&shape.result]) {
                mentioned[sort.0 as usize] |= used;
            }
        }
        for equation in problem.laws.iter().chain([&problem.claim]) {
            for variable in equation.variables() {
                mentioned[variable.sort.0 as usize] = true;
            }
        }
        let varying: Vec<usize> = (0..sorts).filter(|&sort| mentioned[sort]).collect();
        let first = vec![1; varying.len()];
        let mut sizes = Sizes {
            varying,
            sorts,
            next: Some(first),
            largest_total,
        };
        if sizes.next_total() > largest_total {
            sizes.next = None;
        }
        sizes
    }

    /// The total of the next vector; past all of them, one more than the largest.
    pub(in crate::algebra) fn next_total(&self) -> u32 {
        let constant = (self.sorts - self.varying.len()) as u32;
        match &self.next {
            Some(sizes) => sizes.iter().sum::<u32>() + constant,
            None => self.largest_total.saturating_add(1),
        }
    }

    /// The next vector with the sorts that do not vary put in.
    pub(in crate::algebra) fn next(&mut self) -> Option<Vec<u32>> {
        loop {
            let current = self.next.take()?;
            self.next = self.after(&current);
            // Vectors with a sort that is too large are passed over.
            if current.iter().all(|&size| size <= LARGEST_SIZE) {
                let mut full = vec![1; self.sorts];
                for (&sort, &size) in self.varying.iter().zip(&current) {
                    full[sort] = size;
                }
                return Some(full);
            }
        }
    }

    /// The vector after this one: the next with the same total, else the first of the next total.
    fn after(&self, current: &[u32]) -> Option<Vec<u32>> {
        let mut sizes = current.to_vec();
        let last = sizes.len().checked_sub(1)?;
        // Move one element from the last place to the rightmost earlier place that can take it,
        // and gather all that stands behind that place at the end.
        for place in (0..last).rev() {
            let behind: u32 = sizes[place + 1..].iter().map(|size| size - 1).sum();
            if behind > 0 {
                sizes[place] += 1;
                sizes[place + 1..].fill(1);
                sizes[last] += behind - 1;
                return Some(sizes);
            }
        }
        let constant = (self.sorts - self.varying.len()) as u32;
        let total: u32 = sizes.iter().sum::<u32>() + 1;
        let most = self.varying.len() as u32 * LARGEST_SIZE;
        if total + constant > self.largest_total || total > most {
            return None;
        }
        sizes.fill(1);
        sizes[last] = total - last as u32;
        Some(sizes)
    }
}

//! All tables of one binary operation on two and three elements, up to renaming the elements.

use super::equation::Equation;
use std::sync::OnceLock;

/// A table with rows of four entries, of which as many as there are elements count.
pub(super) type Small = [u8; 16];

/// All tables of this size, 2 or 3: 10 of two elements, 3330 of three (OEIS A001329).
pub(super) fn all(size: u8) -> &'static [Small] {
    static TWO: OnceLock<Vec<Small>> = OnceLock::new();
    static THREE: OnceLock<Vec<Small>> = OnceLock::new();
    let cell = if size == 2 { &TWO } else { &THREE };
    cell.get_or_init(|| enumerate(if size == 2 { 2 } else { 3 }))
}

/// The values without those that do not count.
pub(super) fn values(table: &Small, size: u8) -> Vec<u8> {
    let rows = table.chunks(4).take(usize::from(size));
    rows.flat_map(|row| &row[..usize::from(size)])
        .copied()
        .collect()
}

fn enumerate(size: u8) -> Vec<Small> {
    let permutations: &[[u8; 3]] = match size {
        2 => &[[1, 0, 2]],
        _ => &[[0, 2, 1], [1, 0, 2], [1, 2, 0], [2, 0, 1], [2, 1, 0]],
    };
    let mut found = Vec::new();
    let mut table = [0; 16];
    loop {
        let least = |permutation: &&[u8; 3]| renamed(&table, size, permutation) >= table;
        if permutations.iter().all(|p| least(&p)) {
            found.push(table);
        }
        if !advance(&mut table, size) {
            return found;
        }
    }
}

fn places(size: u8) -> impl DoubleEndedIterator<Item = (u8, u8)> {
    (0..size).flat_map(move |a| (0..size).map(move |b| (a, b)))
}

fn renamed(table: &Small, size: u8, permutation: &[u8; 3]) -> Small {
    let name = |element: u8| permutation[usize::from(element)];
    let mut renamed = [0; 16];
    for (a, b) in places(size) {
        renamed[usize::from(name(a) * 4 + name(b))] = name(table[usize::from(a * 4 + b)]);
    }
    renamed
}

fn advance(table: &mut Small, size: u8) -> bool {
    for (a, b) in places(size).rev() {
        let entry = &mut table[usize::from(a * 4 + b)];
        *entry += 1;
        if *entry < size {
            return true;
        }
        *entry = 0;
    }
    false
}

/// Does the equation, whose only symbol is this operation, hold? `registers` is a buffer.
pub(super) fn holds(table: &Small, size: u8, law: &Equation, registers: &mut Vec<u8>) -> bool {
    let variables = law.variables().len();
    registers.clear();
    registers.resize(law.registers(), 0);
    loop {
        for (number, &step) in law.steps().iter().enumerate() {
            let &[a, b] = law.arguments(step) else {
                return false;
            };
            let (a, b) = (registers[a as usize], registers[b as usize]);
            registers[variables + number] = table[usize::from((a << 2 | b) & 15)];
        }
        if registers[law.left()] != registers[law.right()] {
            return false;
        }
        if !next_assignment(&mut registers[..variables], size) {
            return true;
        }
    }
}

fn next_assignment(values: &mut [u8], size: u8) -> bool {
    for value in values {
        *value += 1;
        if *value < size {
            return true;
        }
        *value = 0;
    }
    false
}

#[cfg(test)]
mod tests {
    #[test]
    fn as_many_as_there_should_be() {
        // OEIS A001329: 1, 10, 3330.
        assert_eq!(super::all(2).len(), 10);
        assert_eq!(super::all(3).len(), 3330);
    }
}

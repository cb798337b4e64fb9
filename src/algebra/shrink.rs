//! Making a counterexample smaller.

use super::signature::{Problem, Signature};
use super::tables::{Algebra, Counterexample};
use crate::term::{Sort, Symbol};

/// The subalgebra that the values of the claim's variables and the constants generate.
///
/// The laws hold in a subalgebra, and the sides of the claim keep their values, so it is a
/// counterexample again. A sort in which nothing is generated keeps one element, with what it
/// generates; symbols that occur neither in a law nor in the claim generate nothing. Costs time
/// linear in the tables times the number of elements at most.
pub fn shrink(problem: &Problem, example: &Counterexample) -> Counterexample {
    let algebra = &example.algebra;
    let used = problem.used();
    let mut inside: Vec<Vec<bool>> = algebra
        .sizes()
        .iter()
        .map(|&size| vec![false; size as usize])
        .collect();
    for (&value, variable) in example.assignment.iter().zip(problem.claim.variables()) {
        inside[variable.sort.0 as usize][value as usize] = true;
    }
    close(&problem.signature, &used, algebra, &mut inside);
    while let Some(empty) = inside.iter_mut().find(|sort| !sort.contains(&true)) {
        empty[0] = true;
        close(&problem.signature, &used, algebra, &mut inside);
    }
    if inside.iter().flatten().all(|&inside| inside) {
        return example.clone();
    }
    let kept = kept(&inside);
    let number = |sort: Sort, element: u32| -> u32 {
        let kept = &kept[sort.0 as usize];
        kept.partition_point(|&other| other < element) as u32
    };
    let mut tables = Vec::new();
    for (place, shape) in problem.signature.symbols().iter().enumerate() {
        let table = algebra.table(Symbol(place as u32));
        let mut values = Vec::new();
        each(&shape.arguments, &kept, |arguments| {
            let value = table.get(arguments).filter(|_| used[place]);
            values.push(value.map_or(0, |value| number(shape.result, value) as u8));
        });
        tables.push(values);
    }
    let sizes = kept.iter().map(|kept| kept.len() as u32).collect();
    let Ok(smaller) = Algebra::new(&problem.signature, sizes, tables) else {
        // The elements kept are closed under all operations, so this is out of reach.
        return example.clone();
    };
    let pairs = example.assignment.iter().zip(problem.claim.variables());
    let assignment: Vec<u32> = pairs
        .map(|(&value, variable)| number(variable.sort, value))
        .collect();
    Counterexample {
        values: smaller.evaluate(&problem.claim, &assignment),
        algebra: smaller,
        assignment,
        smallest: example.smallest,
    }
}

/// The elements that are inside, by sort.
fn kept(inside: &[Vec<bool>]) -> Vec<Vec<u32>> {
    let elements = |sort: &Vec<bool>| {
        (0..sort.len() as u32)
            .filter(|&e| sort[e as usize])
            .collect()
    };
    inside.iter().map(elements).collect()
}

/// Adds what the operations make of the elements that are inside, until nothing is new.
fn close(signature: &Signature, used: &[bool], algebra: &Algebra, inside: &mut [Vec<bool>]) {
    loop {
        let mut grown = false;
        for (place, shape) in signature
            .symbols()
            .iter()
            .enumerate()
            .filter(|&(s, _)| used[s])
        {
            let table = algebra.table(Symbol(place as u32));
            each(&shape.arguments, &kept(inside), |arguments| {
                let value = table.get(arguments).unwrap_or(0);
                let entry = &mut inside[shape.result.0 as usize][value as usize];
                grown |= !*entry;
                *entry = true;
            });
        }
        if !grown {
            return;
        }
    }
}

/// Calls `visit` with every row of elements of these sorts, the last changing fastest.
fn each(sorts: &[Sort], kept: &[Vec<u32>], mut visit: impl FnMut(&[u32])) {
    let ranges: Vec<u32> = sorts
        .iter()
        .map(|sort| kept[sort.0 as usize].len() as u32)
        .collect();
    if ranges.contains(&0) {
        return;
    }
    let mut places = vec![0; sorts.len()];
    let mut arguments = vec![0; sorts.len()];
    loop {
        for (argument, (&place, sort)) in arguments.iter_mut().zip(places.iter().zip(sorts)) {
            *argument = kept[sort.0 as usize][place as usize];
        }
        visit(&arguments);
        if !super::evaluate::advance(&mut places, &ranges) {
            return;
        }
    }
}

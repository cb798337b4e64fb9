//! Reversing a list of 1,000 elements by append: about half a million steps from a cold table.

mod common;

use common::{ONE, best, by_path, symbols};
use equable::rewrite::{Limits, System};
use equable::term::{Symbol, TermId, Variable};

const ELEMENTS: u32 = 1_000;

/// reverse, append, cons, nil and the elements.
fn system() -> (System, TermId) {
    let symbols = symbols([1, 2, 2, 0].into_iter().chain(vec![0; ELEMENTS as usize]));
    let mut system = System::new(by_path(&symbols), &symbols);
    let [reverse, append, cons, nil] = [0, 1, 2, 3].map(Symbol);
    let [x, y, z] = [0, 1, 2].map(|index| system.bank.variable(Variable { index, sort: ONE }));
    let bank = &mut system.bank;
    let empty = bank.apply(nil, &[]);
    let reverse_empty = bank.apply(reverse, &[empty]);
    let xy = bank.apply(cons, &[x, y]);
    let reverse_xy = bank.apply(reverse, &[xy]);
    let reverse_y = bank.apply(reverse, &[y]);
    let only_x = bank.apply(cons, &[x, empty]);
    let reversed = bank.apply(append, &[reverse_y, only_x]);
    let append_empty = bank.apply(append, &[empty, x]);
    let append_xy = bank.apply(append, &[xy, z]);
    let rest = bank.apply(append, &[y, z]);
    let appended = bank.apply(cons, &[x, rest]);
    for (left, right) in [
        (reverse_empty, empty),
        (reverse_xy, reversed),
        (append_empty, x),
        (append_xy, appended),
    ] {
        system.add(left, right, true);
    }
    let mut list = system.bank.apply(nil, &[]);
    for element in 0..ELEMENTS {
        let element = system.bank.apply(Symbol(4 + element), &[]);
        list = system.bank.apply(cons, &[element, list]);
    }
    let term = system.bank.apply(reverse, &[list]);
    (system, term)
}

fn main() {
    let (mut once, term) = system();
    let normal = once
        .normal_form(term, &mut Limits::none())
        .expect("no bound");
    let steps = once
        .count_steps(term, normal)
        .expect("the table leads there");
    let time = best(10, system, |(mut system, term)| {
        let normal = system.normal_form(term, &mut Limits::none());
        (system, normal)
    });
    println!(
        "{steps} steps in {:.1} ms: {:.1} million a second",
        time.as_secs_f64() * 1e3,
        steps as f64 / time.as_secs_f64() / 1e6
    );
}

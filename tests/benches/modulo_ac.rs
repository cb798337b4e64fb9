//! Equality modulo associativity and commutativity of two shuffled sums of 100,000 constants.
//!
//! Cold, the two canonical forms are built; the yardstick is sorting the two lists of keys. Aim:
//! at most 8 times that, better 4; and one comparison of ids when the forms are known.

mod common;

use common::{ONE, Random, best, by_size, symbols};
use equable::rewrite::{AcLaws, System, Use};
use equable::term::{Symbol, TermId, Variable};

const CONSTANTS: u32 = 100_000;

fn system() -> (System, TermId, TermId, [Vec<u32>; 2]) {
    let symbols = symbols([2].into_iter().chain(vec![0; CONSTANTS as usize]));
    let mut system = System::new(by_size(&symbols), &symbols);
    let sum = Symbol(0);
    let [x, y, z] = [0, 1, 2].map(|index| system.bank.variable(Variable { index, sort: ONE }));
    let bank = &mut system.bank;
    let xy = bank.apply(sum, &[x, y]);
    let yx = bank.apply(sum, &[y, x]);
    let xy_z = bank.apply(sum, &[xy, z]);
    let yz = bank.apply(sum, &[y, z]);
    let x_yz = bank.apply(sum, &[x, yz]);
    let commutative = system.add(xy, yx, false);
    let associative = Use {
        rule: system.add(xy_z, x_yz, true),
        backward: false,
    };
    system.set_ac(
        sum,
        AcLaws {
            associative,
            commutative,
        },
    );
    let mut random = Random(11);
    let mut shuffled = || {
        let mut keys: Vec<u32> = (1..=CONSTANTS).collect();
        for place in (1..keys.len()).rev() {
            keys.swap(place, random.below(place + 1));
        }
        keys
    };
    let keys = [shuffled(), shuffled()];
    let mut add = |keys: &[u32]| {
        let terms: Vec<TermId> = keys
            .iter()
            .map(|c| system.bank.apply(Symbol(*c), &[]))
            .collect();
        let (last, rest) = terms.split_last().expect("there are many");
        rest.iter().rev().fold(*last, |sum_so_far, t| {
            system.bank.apply(sum, &[*t, sum_so_far])
        })
    };
    let (s, t) = (add(&keys[0]), add(&keys[1]));
    (system, s, t, keys)
}

fn main() {
    let mut cold = std::time::Duration::MAX;
    let mut sorting = std::time::Duration::MAX;
    for _ in 0..10 {
        cold = cold.min(best(1, system, |(mut system, s, t, _)| {
            assert!(system.canonical_form(s) == system.canonical_form(t));
            system
        }));
        sorting = sorting.min(best(
            1,
            || system().3,
            |mut keys| {
                keys.iter_mut().for_each(|keys| keys.sort_unstable());
                assert!(keys[0] == keys[1]);
                keys
            },
        ));
    }
    println!(
        "cold {:.2} ms, sorting the keys {:.2} ms, ratio {:.1}",
        cold.as_secs_f64() * 1e3,
        sorting.as_secs_f64() * 1e3,
        cold.as_secs_f64() / sorting.as_secs_f64()
    );
    let (mut system, s, t, _) = system();
    let (s, t) = (system.canonical_form(s), system.canonical_form(t));
    let known = best(
        10,
        || (),
        |()| std::hint::black_box(s) == std::hint::black_box(t),
    );
    println!(
        "known: one comparison of ids, {} ns with the clock",
        known.as_nanos()
    );
}

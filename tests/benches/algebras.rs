//! Finding finite algebras, and refuting questions in those that are known.
//!
//! First the smallest algebra for each failing claim of the program's theories, with the share of
//! the checker in the whole answer. Then 100,000 random equations in 20 algebras: table look-ups a
//! second, and the ratio to a bare loop of dependent look-ups in one array. Aim: 500 million a
//! second, and a ratio of 3.

mod common;

use common::{ONE, Random, best, symbols};
use equable::algebra::{Algebra, Equation, Evaluator, Signature};
use equable::session::{By, Control, Library, Session, Verdict};
use equable::term::{Bank, Symbol, TermId, Variable};
use std::sync::Arc;
use std::time::Duration;

fn main() {
    claims();
    equations();
}

fn claims() {
    let mut whole = Duration::ZERO;
    let mut checking = Duration::ZERO;
    println!("claim                                      elements        ms");
    for listed in Library::default().list() {
        let opened = Session::open(&listed.name, Library::default());
        let mut session = opened
            .unwrap_or_else(|_| panic!("{} opens", listed.name))
            .session;
        for claim in session.theory().claims.clone() {
            let mut control = Control {
                stop: Arc::default(),
                watch: &mut |_| (),
            };
            let within = Duration::from_secs(10);
            let answer = session.ask(claim.left, claim.right, within, &mut control);
            let answer = answer.expect("an order").clone();
            whole += answer.elapsed;
            checking += answer.checking;
            if answer.by == Some(By::Algebra) || answer.verdict == Verdict::Undecided {
                let size = session.algebra_text(&answer).map(|text| {
                    let sizes: Vec<String> = text.sizes.iter().map(|s| s.1.to_string()).collect();
                    sizes.join("+")
                });
                let smallest = answer.algebra.is_some_and(|found| found.smallest);
                println!(
                    "{:<42} {:<8} {:>9.2}{}",
                    format!("{}: {}", listed.name, claim.name.unwrap_or_default()),
                    size.unwrap_or_else(|| "open".to_owned()),
                    answer.elapsed.as_secs_f64() * 1e3,
                    if smallest {
                        ""
                    } else {
                        "  not known to be smallest"
                    }
                );
            }
        }
    }
    println!(
        "all claims: {:.0} ms, of which the checker {:.0} %",
        whole.as_secs_f64() * 1e3,
        100.0 * checking.as_secs_f64() / whole.as_secs_f64()
    );
}

fn equations() {
    let mut random = Random(5);
    let mut bank = Bank::default();
    let sum = bank.declare(symbols([2])[0].clone());
    let signature = Signature::new(&bank, 1);
    let algebras: Vec<Algebra> = (0..20)
        .map(|place| {
            let size = 3 + place % 6;
            let values = (0..size * size).map(|_| random.below(size) as u8).collect();
            Algebra::new(&signature, vec![size as u32], vec![values]).expect("a table")
        })
        .collect();
    let equations: Vec<Equation> = (0..100_000)
        .map(|_| {
            let left = term(&mut bank, sum, &mut random, 4);
            let right = term(&mut bank, sum, &mut random, 4);
            Equation::compile(&bank, left, right)
        })
        .collect();
    let mut evaluator = Evaluator::default();
    let mut refuted = 0;
    let before = evaluator.looked_up();
    let time = best(
        1,
        || (),
        |()| {
            for equation in &equations {
                let fails = |algebra| evaluator.refute(algebra, equation).is_some();
                refuted += usize::from(algebras.iter().any(fails));
            }
        },
    );
    let looked_up = (evaluator.looked_up() - before) as f64;
    let all = best(
        1,
        || (),
        |()| {
            for equation in equations.iter().take(10_000) {
                for algebra in &algebras {
                    std::hint::black_box(evaluator.holds(algebra, equation));
                }
            }
        },
    );
    let table: Vec<u8> = (0..64u8).map(|i| i.wrapping_mul(37) % 64).collect();
    let steps = 100_000_000u64;
    let bare = best(
        3,
        || (),
        |()| (0..steps).fold(1u8, |value, _| table[usize::from(value & 63)]),
    );
    let (fast, slow) = (
        looked_up / time.as_secs_f64(),
        steps as f64 / bare.as_secs_f64(),
    );
    println!(
        "{refuted} of 100,000 equations refuted in {:.0} ms; {:.0} million look-ups a second; \
         bare dependent look-ups {:.0} million: ratio {:.2}; every algebra, 10,000 equations: {:.0} ms",
        time.as_secs_f64() * 1e3,
        fast / 1e6,
        slow / 1e6,
        slow / fast,
        all.as_secs_f64() * 1e3
    );
}

fn term(bank: &mut Bank, sum: Symbol, random: &mut Random, depth: usize) -> TermId {
    if depth == 0 || random.below(4) == 0 {
        let index = random.below(4) as u32;
        return bank.variable(Variable { index, sort: ONE });
    }
    let left = term(bank, sum, random, depth - 1);
    let right = term(bank, sum, random, depth - 1);
    bank.apply(sum, &[left, right])
}

//! Looking up normal forms that are known, whatever the number of rules.
//!
//! A term with 100,000 distinct subterms is normalised; then the normal form of every subterm is
//! asked for, from the innermost out. Beside it, the same walk with one look-up in a raw hash map
//! each. Aim: flat in the number of rules (at most 1.3), at most twice the raw map.

mod common;

use common::{ONE, Random, best, by_size, symbols};
use equable::rewrite::{Limits, System};
use equable::term::{Symbol, TermId, Variable};
use rustc_hash::FxHashMap;

const SUBTERMS: usize = 100_000;

/// f and g, and constants c₀ > c₁ > …; the rules g(cᵢ, x) → x.
fn system(rules: usize) -> (System, Vec<TermId>) {
    let constants = rules.max(1_000);
    let symbols = symbols([2, 2].into_iter().chain(std::iter::repeat_n(0, constants)));
    let mut system = System::new(by_size(&symbols), &symbols);
    let x = system.bank.variable(Variable {
        index: 0,
        sort: ONE,
    });
    for rule in 0..rules {
        let c = system.bank.apply(Symbol(2 + rule as u32), &[]);
        let left = system.bank.apply(Symbol(1), &[c, x]);
        system.add(left, x, true);
    }
    let mut random = Random(7);
    let mut terms: Vec<TermId> = (0..1_000)
        .map(|c| system.bank.apply(Symbol(2 + c), &[]))
        .collect();
    while terms.len() < SUBTERMS {
        let head = Symbol(random.below(2) as u32);
        let [a, b] = [random.below(terms.len()), random.below(terms.len())];
        let a = if head.0 == 1 {
            terms[a % 1_000]
        } else {
            terms[a]
        };
        let before = system.bank.len();
        let term = system.bank.apply(head, &[a, terms[b]]);
        if system.bank.len() > before {
            terms.push(term);
        }
    }
    (system, terms)
}

fn main() {
    println!("rules      table, ns each   raw map, ns each   ratio");
    let mut per_size = Vec::new();
    for rules in [100, 10_000, 1_000_000] {
        let (mut system, terms) = system(rules);
        let mut limits = Limits::none();
        for &term in &terms {
            system.normal_form(term, &mut limits).expect("no bound");
        }
        let raw: FxHashMap<u32, u32> = terms
            .iter()
            .map(|t| {
                (
                    t.0,
                    system.normal_form(*t, &mut limits).expect("no bound").0,
                )
            })
            .collect();
        let mut table = std::time::Duration::MAX;
        let mut map = std::time::Duration::MAX;
        for _ in 0..40 {
            table = table.min(best(
                1,
                || (),
                |()| {
                    terms
                        .iter()
                        .map(|t| {
                            u64::from(system.normal_form(*t, &mut limits).expect("no bound").0)
                        })
                        .sum::<u64>()
                },
            ));
            map = map.min(best(
                1,
                || (),
                |()| terms.iter().map(|t| u64::from(raw[&t.0])).sum::<u64>(),
            ));
        }
        let each = |time: std::time::Duration| time.as_secs_f64() * 1e9 / SUBTERMS as f64;
        println!(
            "{rules:<10} {:>14.2} {:>18.2} {:>7.2}",
            each(table),
            each(map),
            each(table) / each(map)
        );
        per_size.push(each(table));
    }
    let most = per_size.iter().fold(0f64, |a, b| a.max(*b));
    let least = per_size.iter().fold(f64::MAX, |a, b| a.min(*b));
    println!("largest to smallest: {:.2}", most / least);
}

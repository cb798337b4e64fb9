//! One engine on the first claim of theory files: how far it gets in a given CPU time.
//!
//! `cargo bench --bench saturation -- SECONDS ORDER FILE…` where ORDER is the place of the order
//! among those that are worth trying, or `all`. Prints one line a file and order: how it ended,
//! seconds of CPU, pairs formed, chosen and redundant, rules, and pairs a second.

use equable::engine::{Engine, Outcome, Question};
use equable::order::{Order, candidates};
use equable::rewrite::{Limits, Stopped};
use equable::session::{Library, Session};
use equable::term::{Copier, TermId};
use equable::theory::Theory;
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};

/// Nanoseconds that this thread has been on a core.
fn cpu() -> f64 {
    let text = std::fs::read_to_string("/proc/thread-self/schedstat").unwrap_or_default();
    let nanoseconds = text.split(' ').next().and_then(|n| n.parse::<u64>().ok());
    nanoseconds.unwrap_or(0) as f64 / 1e9
}

fn main() {
    let arguments: Vec<String> = std::env::args().filter(|a| a != "--bench").collect();
    let [_, seconds, order, files @ ..] = &arguments[..] else {
        return println!("SECONDS ORDER FILE…");
    };
    let seconds: f64 = seconds.parse().expect("a number of seconds");
    println!(
        "file                      order  ended     cpu s    formed   chosen  redund.  rules waiting  terms pairs/s"
    );
    for file in files {
        let opened = Session::open(file, Library::default()).expect("it opens");
        let theory = opened.session.theory();
        let laws: Vec<_> = theory.laws.iter().map(|l| (l.left, l.right)).collect();
        let orders = candidates(&theory.bank, &laws, &[]);
        for (place, candidate) in orders.iter().enumerate() {
            if order != "all" && *order != place.to_string() {
                continue;
            }
            let order = Order::new(&candidate.setting, theory.bank.symbols()).expect("it fits");
            run(file, place, theory, order, seconds);
        }
    }
}

fn run(file: &str, place: usize, theory: &Theory, order: Order, seconds: f64) {
    let mut engine = Engine::new(order, theory.bank.symbols());
    let mut copier = Copier::default();
    let mut copy = |engine: &mut Engine, term: TermId| {
        let bank = &mut engine.system.bank;
        copier.copy(&theory.bank, bank, term, |s| s, |bank, v| bank.variable(v))
    };
    for law in &theory.laws {
        let (left, right) = (copy(&mut engine, law.left), copy(&mut engine, law.right));
        engine.add_law(left, right);
    }
    let question = theory.claims.first().map(|claim| Question {
        left: copy(&mut engine, claim.left),
        right: copy(&mut engine, claim.right),
        constants: Vec::new(),
    });
    let stop = Arc::new(AtomicBool::new(false));
    let mut limits = Limits::new(stop.clone());
    let begun = cpu();
    let mut calls = 0u32;
    let ended = engine.run(&mut limits, question.as_ref(), |_| {
        calls += 1;
        if calls.is_multiple_of(16) && cpu() - begun > seconds {
            stop.store(true, Ordering::Relaxed);
        }
    });
    let took = cpu() - begun;
    let counts = engine.counts();
    let name = std::path::Path::new(file).file_stem().unwrap_or_default();
    let ended = match ended {
        Outcome::Complete => "complete",
        Outcome::Exhausted => "exhaust",
        Outcome::Met => "met",
        Outcome::Stopped(Stopped::Memory) => "memory",
        Outcome::Stopped(_) => "-",
    };
    println!(
        "{:<25} {place:>5}  {ended:<8} {took:>6.2} {:>9} {:>8} {:>8} {:>6} {:>7} {:>6} {:>7.0}",
        name.to_string_lossy(),
        counts.formed,
        counts.chosen,
        counts.redundant,
        engine.system.active(),
        engine.waiting(),
        engine.system.bank.len(),
        counts.formed as f64 / took,
    );
}

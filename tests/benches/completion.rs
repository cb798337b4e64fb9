//! Completing the theories that have a finite complete rule set: pairs formed, rules kept, pairs a
//! second. With `--within SECONDS` also those that have none.

use equable::session::{Control, Library, Session};
use std::sync::Arc;
use std::time::Duration;

fn main() {
    let seconds = std::env::args().skip_while(|a| a != "--within").nth(1);
    let seconds: u64 = seconds.and_then(|s| s.parse().ok()).unwrap_or(1);
    println!("theory                 complete  rules     pairs        ms  pairs/s  order");
    for listed in Library::default().list() {
        let mut shortest = f64::MAX;
        let mut last = None;
        for _ in 0..3 {
            let opened = Session::open(&listed.name, Library::default());
            let mut session = opened
                .unwrap_or_else(|_| panic!("{} opens", listed.name))
                .session;
            let mut control = Control {
                stop: Arc::default(),
                watch: &mut |_| (),
            };
            let done = session
                .complete(Some(Duration::from_secs(seconds)), &mut control)
                .unwrap_or_else(|fault| panic!("{}: {fault:?}", listed.name));
            shortest = shortest.min(done.elapsed.as_secs_f64());
            let complete = done.complete;
            last = Some(done);
            if !complete {
                break;
            }
        }
        let done = last.expect("it ran");
        println!(
            "{:<22} {:<8} {:>6} {:>9} {:>9.2} {:>8.0}  {}{}",
            listed.name,
            if done.complete { "yes" } else { "no" },
            done.rules,
            done.pairs,
            shortest * 1e3,
            done.pairs as f64 / shortest,
            done.order,
            if done.fault.is_some() { "  FAULT" } else { "" },
        );
    }
}

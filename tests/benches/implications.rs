//! Does one law of a binary operation imply another? Against published answers.
//!
//! `cargo bench --bench implications -- FOLDER [SECONDS]` reads `laws.tsv` (number, equation) and
//! `implications.tsv` (premise, conclusion, yes or no, remark) in the layout of the data of The
//! Equational Theories Project, which is not part of this project. Each question has the given
//! time, 2 s unless said. Prints how many of each kind were answered, and every wrong answer.

use equable::language::Question;
use equable::session::{Control, Library, Session, Verdict};
use std::collections::{BTreeMap, HashMap};
use std::sync::Arc;
use std::time::{Duration, Instant};

fn main() {
    let arguments: Vec<String> = std::env::args()
        .skip(1)
        .filter(|a| a != "--bench")
        .collect();
    let Some(folder) = arguments.first() else {
        println!("implications: no folder named, nothing measured");
        return;
    };
    let seconds = arguments.get(1).and_then(|s| s.parse().ok()).unwrap_or(2.0);
    let read = |name: &str| {
        let path = std::path::Path::new(folder).join(name);
        std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{path:?}: {error}"))
    };
    let laws = read("laws.tsv");
    let laws: HashMap<&str, &str> = laws.lines().filter_map(|l| l.split_once('\t')).collect();
    let mut tally: BTreeMap<(String, &str), (usize, f64)> = BTreeMap::new();
    let mut wrong = 0;
    for line in read("implications.tsv").lines().skip(1) {
        let fields: Vec<&str> = line.split('\t').collect();
        let [premise, conclusion, holds] = fields[..3] else {
            continue;
        };
        let remark = fields.get(3).copied().unwrap_or_default();
        let begun = Instant::now();
        let verdict = settle(
            laws[premise],
            laws[conclusion],
            Duration::from_secs_f64(seconds),
        );
        let took = begun.elapsed().as_secs_f64();
        let right = if holds == "yes" {
            Verdict::Equal
        } else {
            Verdict::NotEqual
        };
        if verdict != Verdict::Undecided && verdict != right {
            wrong += 1;
            println!("WRONG: {premise} implies {conclusion}: {}", verdict.text());
        }
        if verdict == Verdict::Undecided && std::env::var_os("EQUABLE_LIST_OPEN").is_some() {
            println!("open: {premise} {conclusion} {holds} {remark}");
        }
        let kind = if remark.is_empty() {
            holds.to_owned()
        } else {
            format!("{holds}, {remark}")
        };
        let entry = tally.entry((kind, verdict.text())).or_default();
        entry.0 += 1;
        entry.1 += took;
    }
    for ((kind, verdict), (count, time)) in &tally {
        println!("{kind:<20} {verdict:<10} {count:>5}   {time:.1} s");
    }
    println!("wrong: {wrong}");
}

/// Variables are letters; the operation is ◇.
fn settle(premise: &str, conclusion: &str, budget: Duration) -> Verdict {
    let mut session = Session::new(None, Library::default());
    for line in [
        "infix ◇ 40 none",
        "variable x y z w u v",
        &format!("law premise: {premise}"),
    ] {
        session
            .declare(line)
            .unwrap_or_else(|fault| panic!("{line}: {fault:?}"));
    }
    let Ok(Question::Equation(left, right)) = session.parse_question(conclusion) else {
        panic!("{conclusion} is no equation");
    };
    let mut control = Control {
        stop: Arc::default(),
        watch: &mut |_| (),
    };
    let answer = session
        .ask(left, right, budget, &mut control)
        .expect("an order");
    assert!(
        answer.fault.is_none(),
        "{premise} / {conclusion}: {:?}",
        answer.fault
    );
    answer.verdict
}

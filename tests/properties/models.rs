//! Random theories of one binary operation, against all their models of two and three elements.

use crate::common::tree::Tree::{self, App, Var};
use crate::common::tree::var;
use crate::common::{ask, complete_within, session};
use crate::{for_all, trees, verify};
use equable::session::Verdict;
use proptest::prelude::*;
use std::time::Duration;

/// A term as instructions for a stack: push a variable's value, or multiply the two topmost.
#[derive(Clone, Copy)]
enum Code {
    Push(usize),
    Multiply,
}

const VARIABLES: [&str; 3] = ["x", "y", "z"];

fn code(tree: &Tree, into: &mut Vec<Code>) {
    match tree {
        Var(name) => {
            let place = VARIABLES.iter().position(|known| known == name);
            into.push(Code::Push(place.expect("a variable")));
        }
        App(_, arguments) => {
            arguments.iter().for_each(|argument| code(argument, into));
            into.push(Code::Multiply);
        }
    }
}

struct Equation([Vec<Code>; 2]);

impl Equation {
    fn new((left, right): &(Tree, Tree)) -> Self {
        Equation([left, right].map(|side| {
            let mut steps = Vec::new();
            code(side, &mut steps);
            steps
        }))
    }

    /// Does it hold for all values in the algebra with this table?
    fn holds(&self, table: &[usize], size: usize, stack: &mut Vec<usize>) -> bool {
        (0..size.pow(3)).all(|values| {
            let value = |variable: usize| values / size.pow(variable as u32) % size;
            let [left, right] = [0, 1].map(|side: usize| {
                stack.clear();
                for step in &self.0[side] {
                    match *step {
                        Code::Push(variable) => stack.push(value(variable)),
                        Code::Multiply => {
                            let right = stack.pop().expect("two values");
                            let left = stack.pop().expect("two values");
                            stack.push(table[left * size + right]);
                        }
                    }
                }
                stack[0]
            });
            left == right
        })
    }
}

/// All models of up to three elements, as sizes and tables.
fn models(laws: &[Equation]) -> Vec<(usize, Vec<usize>)> {
    let mut found = Vec::new();
    let mut stack = Vec::new();
    for size in 1..=3usize {
        let cells = size * size;
        let mut table = vec![0; cells];
        loop {
            if laws.iter().all(|law| law.holds(&table, size, &mut stack)) {
                found.push((size, table.clone()));
            }
            // The next table, as a number with so many digits.
            let Some(place) = table.iter().position(|value| value + 1 < size) else {
                break;
            };
            table[..place].fill(0);
            table[place] += 1;
        }
    }
    found
}

#[test]
fn there_are_as_many_small_semigroups_as_published() {
    // All tables, not up to isomorphism: 1, 8, 113 (OEIS A023814, from memory).
    let text = ["x", "y", "z"].map(var);
    let [x, y, z] = text;
    let times = |s: &Tree, t: &Tree| App("*".to_owned(), vec![s.clone(), t.clone()]);
    let law = (times(&times(&x, &y), &z), times(&x, &times(&y, &z)));
    let found = models(&[Equation::new(&law)]);
    let sizes = [1, 2, 3].map(|size| found.iter().filter(|model| model.0 == size).count());
    assert_eq!(sizes, [1, 8, 113]);
}

#[test]
fn no_verdict_contradicts_a_small_model_or_another_order() {
    let terms = |size| trees(&VARIABLES.map(var), &[("*", 2)], size);
    let laws = prop::collection::vec((terms(3), terms(3)), 1..4);
    let questions = prop::collection::vec((terms(3), terms(3)), 12);
    let (mut equal, mut different, mut told) = (0, 0, 0);
    for_all(70, (laws, questions), |(laws, questions)| {
        let mut text = "infix * 40 none\nvariable x y z\n".to_owned();
        for (left, right) in &laws {
            text += &format!("law {left} = {right}\n");
        }
        let models = models(&laws.iter().map(Equation::new).collect::<Vec<_>>());
        let mut sessions = ["", "order lpo *\n", "order kbo *; variables 1\n"]
            .map(|order| session(&format!("{text}{order}")));
        for session in &mut sessions {
            complete_within(session, Duration::from_millis(20));
        }
        for (s, t) in questions {
            let question = Equation::new(&(s.clone(), t.clone()));
            let refuting = models
                .iter()
                .find(|(size, table)| !question.holds(table, *size, &mut Vec::new()));
            let mut verdicts = Vec::new();
            for session in &mut sessions {
                let within = Duration::from_millis(2);
                let answer = ask(session, &s.to_string(), &t.to_string(), within);
                verify(session, &s, &t, &answer);
                verdicts.push(answer.verdict);
            }
            let has = |verdict| verdicts.contains(&verdict);
            let contradiction = has(Verdict::Equal) && has(Verdict::NotEqual);
            assert!(!contradiction, "{text}{s} = {t}: {verdicts:?}");
            if let Some((size, table)) = refuting {
                assert!(
                    !has(Verdict::Equal),
                    "{text}{s} = {t} fails in {size}: {table:?}"
                );
                told += 1;
            }
            equal += u32::from(has(Verdict::Equal));
            different += u32::from(has(Verdict::NotEqual));
        }
    });
    println!("{equal} equal, {different} different, {told} refuted by a model");
    assert!(
        equal > 50 && different > 50 && told > 50,
        "{equal} {different} {told}"
    );
}

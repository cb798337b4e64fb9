//! Random theories of one binary operation, against all their models of two and three elements.

use crate::common::tree::Tree::{self, App, Var};
use crate::common::tree::var;
use crate::common::{ask, complete_within, session};
use crate::{for_all, trees, verify};
use equable::session::Verdict;
use proptest::prelude::*;
use std::time::Duration;

/// A term as instructions for a stack.
#[derive(Clone, Copy)]
enum Code {
    /// Push the value of a variable.
    Push(usize),
    /// Push the value of the constant.
    Constant,
    /// Apply the function to the topmost value.
    Function,
    /// Multiply the two topmost values.
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
            into.push([Code::Constant, Code::Function, Code::Multiply][arguments.len()]);
        }
    }
}

/// The values of the product, then of the function, then the constant.
struct Algebra {
    size: usize,
    table: Vec<usize>,
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

    /// Does it hold in the algebra for all values?
    fn holds(&self, algebra: &Algebra, stack: &mut Vec<usize>) -> bool {
        let Algebra { size, table } = algebra;
        (0..size.pow(3)).all(|values| {
            let value = |variable: usize| values / size.pow(variable as u32) % size;
            let [left, right] = [0, 1].map(|side: usize| {
                stack.clear();
                for step in &self.0[side] {
                    let found = match *step {
                        Code::Push(variable) => value(variable),
                        Code::Constant => table[size * size + size],
                        Code::Function => table[size * size + stack.pop().expect("a value")],
                        Code::Multiply => {
                            let right = stack.pop().expect("two values");
                            let left = stack.pop().expect("two values");
                            table[left * size + right]
                        }
                    };
                    stack.push(found);
                }
                stack[0]
            });
            left == right
        })
    }
}

/// All models of up to so many elements; with the function and the constant, or without.
fn models(laws: &[Equation], most: usize, all_symbols: bool) -> Vec<Algebra> {
    let mut found = Vec::new();
    let mut stack = Vec::new();
    for size in 1..=most {
        let cells = size * size + if all_symbols { size + 1 } else { 0 };
        let mut algebra = Algebra {
            size,
            table: vec![0; cells],
        };
        loop {
            if laws.iter().all(|law| law.holds(&algebra, &mut stack)) {
                let table = algebra.table.clone();
                found.push(Algebra { size, table });
            }
            // The next table, as a number with so many digits.
            let table = &mut algebra.table;
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
    let found = models(&[Equation::new(&law)], 3, false);
    let sizes = [1, 2, 3].map(|size| found.iter().filter(|model| model.size == size).count());
    assert_eq!(sizes, [1, 8, 113]);
}

/// Random theories and questions over these symbols, with the orders to ask under.
fn never_contradicted(
    cases: u32,
    leaves: &[Tree],
    inner: &[(&'static str, usize)],
    orders: [&str; 3],
) {
    let all_symbols = inner.len() > 1;
    let terms = |size| trees(leaves, inner, size);
    let laws = prop::collection::vec((terms(3), terms(3)), 1..4);
    let questions = prop::collection::vec((terms(3), terms(3)), 12);
    let (mut equal, mut different, mut told) = (0, 0, 0);
    for_all(cases, (laws, questions), |(laws, questions)| {
        let mut text = "infix * 40 none\nvariable x y z\n".to_owned();
        if all_symbols {
            text += "function f 1\nconstant c\n";
        }
        for (left, right) in &laws {
            text += &format!("law {left} = {right}\n");
        }
        let laws: Vec<Equation> = laws.iter().map(Equation::new).collect();
        let models = models(&laws, if all_symbols { 2 } else { 3 }, all_symbols);
        let mut sessions = orders.map(|order| session(&format!("{text}{order}\n")));
        for session in &mut sessions {
            complete_within(session, Duration::from_millis(20));
        }
        for (s, t) in questions {
            let question = Equation::new(&(s.clone(), t.clone()));
            let refutes = |model: &&Algebra| !question.holds(model, &mut Vec::new());
            let refuting = models.iter().find(refutes);
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
            if let Some(Algebra { size, table }) = refuting {
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

#[test]
fn no_verdict_contradicts_a_small_model_or_another_order() {
    let orders = ["", "order lpo *", "order kbo *; variables 1"];
    never_contradicted(50, &VARIABLES.map(var), &[("*", 2)], orders);
}

#[test]
fn no_verdict_contradicts_a_small_model_with_a_function_and_a_constant() {
    let constant = App("c".to_owned(), vec![]);
    let leaves = [var("x"), var("y"), constant];
    let orders = [
        "order lpo c, f, *",
        "order lpo *, f, c",
        "order kbo f, *, c; weights f 0",
    ];
    never_contradicted(80, &leaves, &[("*", 2), ("f", 1)], orders);
}

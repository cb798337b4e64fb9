//! Steps decrease, and normal forms are unique.

use crate::common::textbook::Textbook;
use crate::common::tree::{Symbols, Tree, app, apply_somewhere};
use crate::common::{Random, alone, ask, complete_within, normal, session, term};
use crate::{for_all, trees, verify};
use equable::session::{Session, Verdict};
use proptest::prelude::*;
use std::time::Duration;

const A_SECOND: Duration = Duration::from_secs(1);

/// A theory with the symbols for random ground terms.
struct Case {
    name: &'static str,
    laws: &'static str,
    orders: &'static [&'static str],
    constants: &'static [&'static str],
    inner: &'static [(&'static str, usize)],
}

impl Case {
    fn session(&self, order: &str) -> Session {
        let constants = self.constants.join(" ");
        let declared = constants
            .split_whitespace()
            .map(|c| format!("constant {c}\n"));
        let declared: String = declared.collect();
        session(&format!("{declared}variable x y z\n{}{order}\n", self.laws))
    }

    fn leaves(&self) -> Vec<Tree> {
        self.constants
            .iter()
            .map(|name| app(name, vec![]))
            .collect()
    }

    fn symbols(&self) -> Symbols<'_> {
        Symbols {
            leaves: self.constants,
            variables: &[],
            inner: self.inner,
        }
    }
}

/// Theories that have a complete set, ordered or not, in each of the orders.
const COMPLETE: &[Case] = &[
    Case {
        name: "groups",
        laws: "infix * 40 left\nfunction i 1\nlaw * is associative left unit e left inverse i\n",
        orders: &[
            "order lpo i, *, e",
            "order kbo i, *, e; weights i 0, * 1; variables 1",
            "order lpo i, *, a, b, e",
        ],
        constants: &["e", "a", "b"],
        inner: &[("*", 2), ("*", 2), ("i", 1)],
    },
    Case {
        name: "monoids",
        laws: "infix * 40 left\nlaw * is associative unit e\n",
        orders: &[
            "order lpo *, e",
            "order kbo *, e",
            "order kbo *, e; weights * 3; variables 1",
        ],
        constants: &["e", "a", "b"],
        inner: &[("*", 2)],
    },
    Case {
        name: "semilattices",
        laws: "infix * 40 left\nlaw * is associative commutative idempotent\n",
        orders: &["order lpo *", "order kbo *", "order kbo c, b, a, *"],
        constants: &["a", "b", "c"],
        inner: &[("*", 2)],
    },
    Case {
        name: "Boolean rings",
        laws: "infix + 30 left\ninfix * 40 left\nlaw + is associative commutative unit 0\n\
               law x + x = 0\nlaw * is associative commutative idempotent unit 1 distributes over +\n\
               law x * 0 = 0\n",
        orders: &["order lpo *, +, 1, 0"],
        constants: &["0", "1", "a", "b"],
        inner: &[("+", 2), ("*", 2)],
    },
    Case {
        name: "central groupoids",
        laws: "infix * 40 none\nlaw (x * y) * (y * z) = y\n",
        orders: &["order lpo *", "order kbo *"],
        constants: &["a", "b"],
        inner: &[("*", 2)],
    },
    Case {
        name: "groups of exponent two",
        laws: "infix * 40 left\nlaw * is associative unit e\nlaw x * x = e\n",
        orders: &["order lpo *, e", "order kbo *, e"],
        constants: &["e", "a", "b", "c"],
        inner: &[("*", 2)],
    },
    Case {
        name: "numbers",
        laws: "function s 1\ninfix + 40 left\ninfix * 50 left\nlaw x + 0 = x\n\
               law x + s(y) = s(x + y)\nlaw x * 0 = 0\nlaw x * s(y) = x * y + x\n",
        orders: &["order lpo *, +, s, 0"],
        constants: &["0", "a"],
        inner: &[("+", 2), ("*", 2), ("s", 1), ("s", 1)],
    },
];

/// Theories that have none, or none that is found soon.
const ENDLESS: &[Case] = &[
    Case {
        name: "abelian groups",
        laws: "infix + 40 left\nprefix - 60\nlaw + is associative commutative unit 0 inverse -\n",
        orders: &["order lpo -, +, 0", "order kbo -, +, 0; weights - 0"],
        constants: &["0", "a", "b", "c"],
        inner: &[("+", 2), ("+", 2), ("-", 1)],
    },
    Case {
        name: "lattices",
        laws: "infix ∨ 30 left\ninfix ∧ 40 left\nlaw ∨ is associative commutative absorbs ∧\n\
               law ∧ is associative commutative absorbs ∨\n",
        orders: &["order lpo ∧, ∨", "order kbo ∧, ∨"],
        constants: &["a", "b", "c"],
        inner: &[("∨", 2), ("∧", 2)],
    },
    Case {
        name: "bands",
        laws: "infix * 40 left\nlaw * is associative idempotent\n",
        orders: &["order lpo *", "order kbo *"],
        constants: &["a", "b", "c"],
        inner: &[("*", 2)],
    },
    Case {
        name: "quandles",
        laws: "infix > 40 none\ninfix < 40 none\nlaw x > x = x\nlaw x < (x > y) = y\n\
               law x > (x < y) = y\nlaw x > (y > z) = (x > y) > (x > z)\n",
        orders: &["order lpo >, <", "order kbo <, >"],
        constants: &["a", "b"],
        inner: &[(">", 2), ("<", 2)],
    },
];

/// Each of the orders of each of the theories, completed as far as it goes.
fn each(cases: &'static [Case], within: Duration, mut with: impl FnMut(&Case, Session, bool)) {
    for case in cases {
        for order in case.orders {
            let mut session = case.session(order);
            let complete = complete_within(&mut session, within).complete;
            println!(
                "{}, {order}: {complete}, {} rules",
                case.name,
                session.rules().len()
            );
            with(case, session, complete);
        }
    }
}

/// A term with the arguments of each sum in a row and sorted, by these symbols.
fn sorted(tree: &Tree, ac: &[String]) -> Tree {
    let Tree::App(name, arguments) = tree else {
        return tree.clone();
    };
    let mut parts = Vec::new();
    for argument in arguments.iter().map(|argument| sorted(argument, ac)) {
        match argument {
            Tree::App(inner, below) if inner == *name && ac.contains(name) => parts.extend(below),
            other => parts.push(other),
        }
    }
    if ac.contains(name) {
        parts.sort();
    }
    Tree::App(name.clone(), parts)
}

fn steps_decrease(case: &Case, mut session: Session) {
    let order = Textbook::stated(&session);
    let ac = session.status().ac;
    let mut checked = 0;
    let terms = trees(&case.leaves(), case.inner, 24);
    for_all(40, terms, |tree| {
        let asked = term(&mut session, &tree.to_string());
        let lines = alone(|control| session.trace(asked, control)).expect("a trace");
        assert_eq!(Tree::read(&mut session, &lines[0].text), tree);
        // The path order of the textbook takes exponential time, so large terms are left out.
        if lines.iter().any(|line| line.text.len() > 300) {
            return;
        }
        // The arguments of a sum are sorted at once, which decreases. It is shown as steps by
        // associativity and commutativity, of which single ones may not.
        let mut last = tree;
        let mut between = false;
        for line in &lines[1..] {
            let next = Tree::read(&mut session, &line.text);
            between = !order.greater(&last, &next);
            if between {
                let sorts = sorted(&last, &ac) == sorted(&next, &ac);
                assert!(sorts, "{}: {last} to {next} by {}", case.name, line.by);
            } else {
                last = next;
            }
        }
        assert!(!between, "{}: {lines:?} does not end decreasing", case.name);
        let normal = normal(&mut session, &last.to_string());
        assert_eq!(
            Tree::read(&mut session, &normal),
            last,
            "the trace ends in the normal form"
        );
        checked += lines.len();
    });
    assert!(checked > 20, "{}: only {checked} terms", case.name);
}

#[test]
fn steps_decrease_in_the_order_of_the_textbook() {
    each(COMPLETE, A_SECOND, |case, session, _| {
        steps_decrease(case, session)
    });
}

#[test]
fn steps_decrease_in_theories_without_a_complete_set() {
    each(ENDLESS, A_SECOND / 5, |case, session, _| {
        steps_decrease(case, session)
    });
}

/// The laws of a session as trees.
pub fn laws(session: &Session) -> Vec<(Tree, Tree)> {
    let laws = session.theory().laws.iter();
    laws.map(|law| (Tree::of(session, law.left), Tree::of(session, law.right)))
        .collect()
}

/// A term, and one that is equal to it by random uses of the laws.
pub fn walk(tree: &Tree, laws: &[(Tree, Tree)], symbols: &Symbols, seed: u64) -> Tree {
    let mut random = Random(seed | 1);
    let mut other = tree.clone();
    for _ in 0..1 + random.below(12) {
        let next = apply_somewhere(&other, laws, symbols, &mut random);
        if next.size() <= 60 {
            other = next;
        }
    }
    other
}

#[test]
fn equal_terms_have_the_same_normal_form_in_complete_theories() {
    each(COMPLETE, A_SECOND * 10, |case, mut session, complete| {
        assert!(complete, "{} with {:?}", case.name, session.status());
        let laws = laws(&session);
        let terms = (trees(&case.leaves(), case.inner, 16), any::<u64>());
        for_all(60, terms, |(tree, seed)| {
            let other = walk(&tree, &laws, &case.symbols(), seed);
            let left = normal(&mut session, &tree.to_string());
            let right = normal(&mut session, &other.to_string());
            assert_eq!(left, right, "{}: {tree} and {other}", case.name);
        });
    });
}

#[test]
fn terms_that_are_equal_by_the_laws_are_never_told_apart() {
    let mut equal = 0;
    let mut all = 0;
    for cases in [COMPLETE, ENDLESS] {
        each(cases, A_SECOND / 10, |case, mut session, _| {
            let laws = laws(&session);
            // Variables of a question stand for constants below all others.
            let mut leaves = case.leaves();
            leaves.extend(["x", "y"].map(|name| Tree::Var(name.to_owned())));
            let terms = (trees(&leaves, case.inner, 8), any::<u64>());
            for_all(12, terms, |(tree, seed)| {
                let other = walk(&tree, &laws, &case.symbols(), seed);
                let within = Duration::from_millis(30);
                let answer = ask(&mut session, &tree.to_string(), &other.to_string(), within);
                assert_ne!(
                    answer.verdict,
                    Verdict::NotEqual,
                    "{}: {tree} = {other}",
                    case.name
                );
                verify(&session, &tree, &other, &answer);
                equal += u32::from(answer.verdict == Verdict::Equal);
                all += 1;
            });
        });
    }
    assert!(equal * 10 > all * 8, "only {equal} of {all} were proved");
}

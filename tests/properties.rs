//! What holds for all terms, questions and theories, tried on random ones.
//!
//! Where a word problem has a solution of its own (words, sets, exponents, truth values, Whitman's
//! condition), every verdict is compared with it; where it has none, with all small models.

mod common;

#[path = "properties/decided.rs"]
mod decided;
#[path = "properties/models.rs"]
mod models;
#[path = "properties/rewriting.rs"]
mod rewriting;

use common::tree::Tree;
use equable::proof::{Evidence, Outcome, WorkLimit, check, check_json, to_json};
use equable::session::{Answer, Session, Verdict};
use proptest::prelude::*;
use proptest::strategy::BoxedStrategy;
use proptest::test_runner::{Config, RngAlgorithm, TestError, TestRng, TestRunner};
use std::cell::RefCell;

/// Tries a property on so many random values, always the same ones. What fails is made small.
fn for_all<V: std::fmt::Debug>(
    cases: u32,
    values: impl Strategy<Value = V>,
    property: impl FnMut(V),
) {
    let config = Config {
        cases,
        failure_persistence: None,
        max_shrink_iters: 500,
        ..Config::default()
    };
    let random = TestRng::deterministic_rng(RngAlgorithm::ChaCha);
    let property = RefCell::new(property);
    let result = TestRunner::new_with_rng(config, random).run(&values, |value| {
        (*property.borrow_mut())(value);
        Ok(())
    });
    match result {
        Ok(()) => {}
        Err(TestError::Fail(reason, value)) => panic!("{reason}\nfor {value:?}"),
        Err(TestError::Abort(reason)) => panic!("{reason}"),
    }
}

/// Random terms of at most about so many symbols, over leaves and functions.
fn trees(leaves: &[Tree], inner: &[(&'static str, usize)], size: u32) -> BoxedStrategy<Tree> {
    let leaf = prop::sample::select(leaves.to_vec());
    let inner = inner.to_vec();
    let grow = move |below: BoxedStrategy<Tree>| {
        let one = |(name, arity): (&'static str, usize)| {
            let arguments = prop::collection::vec(below.clone(), arity);
            arguments.prop_map(move |arguments| Tree::App(name.to_owned(), arguments))
        };
        prop::strategy::Union::new(inner.iter().copied().map(one).collect::<Vec<_>>()).boxed()
    };
    leaf.prop_recursive(6, size, 2, grow).boxed()
}

/// The evidence of an answer is accepted, also after it was written and read, and is about the
/// question and the laws of the session.
fn verify(session: &Session, left: &Tree, right: &Tree, answer: &Answer) {
    if answer.verdict == Verdict::Undecided {
        assert!(answer.evidence.is_none());
        return;
    }
    let evidence = answer.evidence.as_ref().expect("a verdict has evidence");
    assert_eq!(check(evidence, WorkLimit::default()), Outcome::Accepted);
    let json = to_json(evidence).to_string();
    assert_eq!(
        check_json(json.as_bytes(), WorkLimit::default()),
        Outcome::Accepted
    );
    match evidence {
        Evidence::Proof(_) => assert_eq!(answer.verdict, Verdict::Equal),
        _ => assert_eq!(answer.verdict, Verdict::NotEqual),
    }
    let terms = evidence.terms();
    let of = |term| Tree::of_evidence(terms, term);
    let claim = evidence.claim().expect("it is about a question");
    assert_eq!((of(claim.0), of(claim.1)), (left.clone(), right.clone()));
    let theory = session.theory();
    for law in evidence.laws() {
        let stated = theory
            .law(terms.text(law.name))
            .expect("a law of the theory");
        assert!(law.when.is_empty());
        let sides = (
            Tree::of(session, stated.left),
            Tree::of(session, stated.right),
        );
        assert_eq!((of(law.left), of(law.right)), sides);
    }
    if answer.verdict == Verdict::NotEqual {
        assert_eq!(evidence.laws().len(), theory.laws.len());
    }
}

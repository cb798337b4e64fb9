//! Questions one after the other, where rules have variables on one side only.
//!
//! Such a variable becomes the least constant: one of the question's own, if it has variables of
//! that sort, otherwise one of the theory's. What an earlier question was about must not matter.

use crate::common::{ask, normal, session};
use equable::session::Verdict;
use std::time::Duration;

const WITHIN: Duration = Duration::from_millis(50);

fn verdict(session: &mut equable::session::Session, left: &str, right: &str) -> Verdict {
    ask(session, left, right, WITHIN).verdict
}

#[test]
fn rules_are_proved_with_the_constants_they_were_derived_with() {
    // `c = x` is derived by way of `f(y) = c`. Written down for a question, it came out as
    // `f(y) = x`, with the variable of the question.
    let theory =
        "function f 1\nfunction g 1\nconstant c\nvariable x y\nlaw x = f(y)\norder lpo f, c\n";
    let mut session = session(theory);
    assert_eq!(verdict(&mut session, "f(x)", "g(c)"), Verdict::Equal);
    assert_eq!(verdict(&mut session, "c", "x"), Verdict::Equal);
}

#[test]
fn a_normal_form_has_no_variables_of_earlier_questions() {
    let mut session = session("function f 1\nconstant c\nvariable x y\nlaw f(x) = f(y)\n");
    assert_eq!(verdict(&mut session, "x", "y"), Verdict::NotEqual);
    assert_eq!(normal(&mut session, "f(f(c))"), "f(c)");
    assert_eq!(verdict(&mut session, "f(c)", "c"), Verdict::NotEqual);
    assert_eq!(normal(&mut session, "f(y)"), "f(y)");
    assert_eq!(normal(&mut session, "f(f(c))"), "f(c)");
}

#[test]
fn an_answer_does_not_depend_on_the_sorts_of_earlier_questions() {
    let mut session = session(
        "sort A B\nfunction f : A B -> B\nconstant c : A\nconstant d : B\nvariable x y : A\n\
         variable u v : B\nlaw f(x, u) = f(y, u)\n",
    );
    assert_eq!(verdict(&mut session, "x", "y"), Verdict::NotEqual);
    assert_eq!(verdict(&mut session, "u", "v"), Verdict::NotEqual);
    assert_eq!(verdict(&mut session, "f(c, u)", "u"), Verdict::NotEqual);
    assert_eq!(verdict(&mut session, "f(c, d)", "d"), Verdict::NotEqual);
    assert_eq!(verdict(&mut session, "f(x, d)", "f(c, d)"), Verdict::Equal);
}

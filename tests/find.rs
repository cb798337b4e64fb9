//! Questions with unknowns: the values that are found, asked again as they are printed, and the
//! evidence judged by hand.

mod common;

use common::{alone, by_hand, session};
use equable::language::Question;
use equable::proof::{Evidence, to_json};
use equable::session::{Answer, Library, Session, Verdict};
use std::time::Duration;

const WITHIN: Duration = Duration::from_secs(20);

fn find(session: &mut Session, question: &str, within: Duration) -> Answer {
    let (find, end) = session
        .parse_find(question, 0)
        .unwrap_or_else(|fault| panic!("{}", fault.render(false, 80)));
    assert_eq!(end, question.len(), "{question} is read whole");
    let answer = alone(|control| session.find(&find, within, control).cloned()).expect("an order");
    assert!(answer.fault.is_none(), "{question}: {:?}", answer.fault);
    if let Some(evidence) = &answer.evidence {
        let judged = by_hand::judge(&to_json(evidence));
        judged.unwrap_or_else(|why| panic!("{question}: {why}"));
    }
    answer
}

/// Values are found; the equation holds with what is printed of them in it. Names of unknowns must
/// not be parts of other words of the question.
fn has_values(session: &mut Session, question: &str) -> Answer {
    let answer = find(session, question, WITHIN);
    assert_eq!(
        answer.verdict,
        Verdict::Equal,
        "{question}: {:?}",
        answer.frontier
    );
    let (unknowns, equation) = question.split_once(':').expect("a colon");
    let names: Vec<&str> = unknowns.split_whitespace().collect();
    assert_eq!(answer.values.len(), names.len());
    let mut instance = equation.to_owned();
    for (name, value) in &answer.values {
        assert!(names.contains(&name.as_str()), "{name}");
        instance = instance.replace(name.as_str(), &format!("({value})"));
    }
    let parsed = session.parse_question(&instance);
    let Ok(Question::Equation(left, right)) = parsed else {
        panic!("{question}: {instance}: {parsed:?}");
    };
    let again = alone(|control| session.ask(left, right, WITHIN, control).cloned());
    assert_eq!(
        again.expect("an order").verdict,
        Verdict::Equal,
        "{instance}"
    );
    let Some(Evidence::Proof(proof)) = &answer.evidence else {
        panic!("{question}: a proof is the evidence");
    };
    assert_eq!(proof.claim.witness.len(), names.len());
    answer
}

fn has_none(session: &mut Session, question: &str) {
    let answer = find(session, question, WITHIN);
    assert_eq!(
        answer.verdict,
        Verdict::NotEqual,
        "{question}: {:?}",
        answer.frontier
    );
    let Some(Evidence::Algebra(algebra)) = &answer.evidence else {
        panic!("{question}: an algebra is the evidence");
    };
    assert!(algebra.claim.values.is_none() && !algebra.claim.unknowns.is_empty());
}

fn open(name: &str) -> Session {
    let opened = Session::open(name, Library::default());
    opened.unwrap_or_else(|fault| panic!("{fault:?}")).session
}

#[test]
fn equations_of_groups() {
    let mut group = open("group");
    group.declare("variable W V").expect("new variables");
    for question in [
        "W: x * W = y",
        "W: W * x = y",
        "W: x * (W * y) = z",
        "W: i(W) = x",
        "W V: W * x = y * V",
        "W: W * W = W",
        "W V: W * V = x",
    ] {
        has_values(&mut group, question);
    }
    // Not every element is a square, and a product does not determine a common factor.
    has_none(&mut group, "W: W * W = x");
    has_none(&mut group, "W: x * W = W");
    has_none(&mut group, "W V: W * x * i(W) = x * x * x * V * i(V)");
}

#[test]
fn theories_with_sorts() {
    let mut list = open("list");
    list.declare("variable A : Item").expect("a new variable");
    list.declare("variable L M : List").expect("new variables");
    let answer = has_values(&mut list, "L: L ++ (x :: nil) = x :: nil");
    assert_eq!(answer.values, [("L".to_owned(), "nil".to_owned())]);
    let answer = has_values(&mut list, "A L: A :: L = x :: y :: nil");
    assert_eq!(answer.values[0].1, "x");
    // No constant of this sort: the value is one of the question's own.
    has_values(&mut list, "A: A :: nil = A :: nil");
    has_values(&mut list, "L: reverse(L) = y :: x :: nil");
    has_values(&mut list, "L M: L ++ M = x :: nil");
    has_none(&mut list, "L: x :: L = nil");
}

#[test]
fn variables_that_are_left_open_get_some_value() {
    let mut session = session(
        "function f 2\nfunction g 1\nvariable x y z W V\nlaw left: f(x, y) = x\nlaw inner: g(g(z)) = g(x)",
    );
    let answer = has_values(&mut session, "W V: f(x, W) = f(V, y)");
    assert_eq!(answer.values[1].1, "x");
    has_values(&mut session, "W V: g(g(W)) = g(V)");
    has_values(&mut session, "W: g(W) = g(g(g(x)))");
    has_none(&mut session, "W: g(W) = x");
}

#[test]
fn combinators_that_do_what_is_asked() {
    let mut session = open("combinators");
    session.declare("variable U").expect("a new variable");
    has_values(&mut session, "U: U @ x = x");
    has_values(&mut session, "U: U @ x = x @ x");
    has_values(&mut session, "U: U @ x @ y = y");
}

/// The lark L has a fixed point of every x: L x (L x) (Smullyan 1985, from memory).
#[test]
fn a_fixed_point_by_larks() {
    let mut session =
        session("infix @ 50 left\nconstant L\nvariable x y U\nlaw lark: L @ x @ y = x @ (y @ y)");
    has_values(&mut session, "U: x @ U = U");
}

#[test]
fn a_time_that_is_used_up_leaves_it_open() {
    let mut session = session(
        "function f 1\nfunction g 2\nvariable x y z W\nlaw one: g(g(x, y), z) = g(f(x), g(y, f(z)))",
    );
    let answer = find(
        &mut session,
        "W: g(W, f(x)) = f(g(x, W))",
        Duration::from_millis(50),
    );
    if answer.verdict == Verdict::Undecided {
        let frontier = answer.frontier.expect("how far it came");
        assert!(frontier.next[0].starts_with("find W: "));
    }
}

#[test]
fn claims_with_unknowns_are_read_checked_and_saved() {
    let text = "infix * 40 left\nconstant e\nfunction i 1\nvariable x y z w\n\
        law assoc: (x * y) * z = x * (y * z)\nlaw left: e * x = x\nlaw inverse: i(x) * x = e\n\
        claim solvable: find w: x * w = y\nclaim find w: w * w = x\n";
    let mut session = session(text);
    assert_eq!(session.theory().document.text(), text);
    assert_eq!(session.claims()[0].text, "find w: x * w = y");
    assert_eq!(session.claims()[0].name.as_deref(), Some("solvable"));
    let results = alone(|control| session.check(WITHIN, control, &mut |_| {}));
    let results = results.expect("an order");
    let claimed: Vec<Option<bool>> = results.iter().map(|r| r.is_as_claimed()).collect();
    assert_eq!(claimed, [Some(true), Some(false)]);
    assert_eq!(results[0].text, "find w: x * w = y");
}

#[test]
fn what_is_no_question_with_unknowns_is_told_with_its_place() {
    let mut session = session("constant e\nfunction f 1\nvariable x y");
    for (question, column, message) in [
        ("x: f(x) = f(x) = e", None, ""),
        (": f(x) = e", Some(1), "an unknown is expected here"),
        ("x f(x) = e", Some(3), "`f` is not a variable"),
        ("x x: f(x) = e", Some(3), "`x` stands here twice"),
        (
            "x y: f(x) = e",
            Some(3),
            "`y` does not occur in the equation",
        ),
        (
            "x: f(x)",
            Some(8),
            "find looks for values that make two terms equal",
        ),
        (
            "x: f(x) != e",
            Some(9),
            "find looks for values that make two terms equal",
        ),
        ("e: f(x) = e", Some(1), "`e` is not a variable"),
    ] {
        match (session.parse_find(question, 0), column) {
            (Ok((_, end)), None) => assert!(end < question.len(), "the rest is left"),
            (Err(fault), Some(column)) => {
                assert_eq!(
                    fault.message.replace('`', ""),
                    message.replace('`', ""),
                    "{question}"
                );
                assert_eq!(fault.column, column, "{question}");
                assert!(!fault.help.is_empty());
            }
            (other, _) => panic!("{question}: {other:?}"),
        }
    }
    for line in [
        "claim a: find x: f(x) != e",
        "claim find: f(x) = e",
        "law a: find x: f(x) = e",
    ] {
        assert!(session.declare(line).is_err(), "{line}");
    }
}

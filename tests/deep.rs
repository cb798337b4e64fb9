//! Terms a million levels deep are read, normalised, printed and saved, on the usual stack of a
//! test's thread.

use equable::language::Question;
use equable::session::{Control, Library, Session, Verdict};
use std::sync::Arc;
use std::time::Duration;

const DEPTH: usize = 1_000_000;

fn deep(inside: &str) -> String {
    format!("{}{inside}{}", "s(".repeat(DEPTH), ")".repeat(DEPTH))
}

fn natural() -> Session {
    let opened = Session::open("natural", Library::default());
    opened.unwrap_or_else(|_| panic!("it is built in")).session
}

#[test]
fn a_million_levels_are_normalised_and_printed() {
    let mut session = natural();
    let mut control = Control {
        stop: Arc::default(),
        watch: &mut |_| (),
    };
    let text = format!("{} + s(0)", deep("x"));
    let Ok(Question::Term(term)) = session.parse_question(&text) else {
        panic!("a term")
    };
    let normal = session.normal(term, &mut control).expect("no fault");
    // x + s(y) = s(x + y) and x + 0 = x.
    assert!(normal.text == format!("s({})", deep("x")));
}

#[test]
fn a_million_levels_are_compared() {
    let mut session = natural();
    let mut control = Control {
        stop: Arc::default(),
        watch: &mut |_| (),
    };
    let text = format!("{} = {} + 0", deep("x"), deep("x"));
    let Ok(Question::Equation(s, t)) = session.parse_question(&text) else {
        panic!("one")
    };
    let answer = session
        .ask(s, t, Duration::from_secs(240), &mut control)
        .expect("no fault");
    assert_eq!(answer.verdict, Verdict::Equal, "{:?}", answer.frontier);
    let text = format!("{} = {}", deep("x"), deep("s(x)"));
    let Ok(Question::Equation(s, t)) = session.parse_question(&text) else {
        panic!("one")
    };
    let answer = session
        .ask(s, t, Duration::from_secs(240), &mut control)
        .expect("no fault");
    assert_eq!(answer.verdict, Verdict::NotEqual, "{:?}", answer.frontier);
}

#[test]
fn a_million_levels_are_saved_and_opened() {
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("deep.theory");
    let mut session = natural();
    session
        .declare(&format!("claim deep: {} = {}", deep("x"), deep("x")))
        .expect("it is taken");
    session
        .declare(&format!("law deeper: {} = 0", deep("s(x)")))
        .expect("it is taken");
    session.save(Some(&path)).expect("it is saved");
    let text = std::fs::read_to_string(&path).expect("it is there");
    assert!(text.contains(&deep("x")));
    let opened = Session::open(path.to_str().unwrap(), Library::default());
    let mut again = opened.unwrap_or_else(|_| panic!("it opens")).session;
    again.save(None).expect("it is saved again");
    assert!(std::fs::read_to_string(&path).expect("it is there") == text);
}

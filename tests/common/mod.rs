//! What the tests from outside share: sessions from text, and terms as plain trees.
//!
//! Trees are this test's own, so that what is computed on them rests on nothing of the program
//! but reading and printing.

// Each test crate uses a part of this.
#![allow(dead_code)]

pub mod by_hand;
pub mod textbook;
pub mod tree;

use equable::language::Question;
use equable::session::{Answer, ChangeFault, Completion, Control, Library, Session};
use equable::term::TermId;
use std::path::PathBuf;
use std::sync::Arc;
use std::time::Duration;

/// Long enough for everything here that is to be found; what takes so long has failed.
pub const LONG: Duration = Duration::from_secs(20);

/// A session with the declarations of a text, one a line.
pub fn session(text: &str) -> Session {
    let mut session = Session::new(None, Library::default());
    for line in text.lines().filter(|line| !line.trim().is_empty()) {
        match session.declare(line) {
            Ok(_) => {}
            Err(ChangeFault::Text(faults)) => panic!("{}", faults[0].render(false, 80)),
            Err(other) => panic!("{line}: {other:?}"),
        }
    }
    session
}

/// Runs a piece of work that nobody stops or watches.
pub fn alone<R>(work: impl FnOnce(&mut Control) -> R) -> R {
    work(&mut Control {
        stop: Arc::default(),
        watch: &mut |_| (),
    })
}

/// Completes for at most so long. A rejected rule set fails the test whatever is being tested.
pub fn complete_within(session: &mut Session, within: Duration) -> Completion {
    let completion = alone(|control| session.complete(Some(within), control)).expect("an order");
    assert!(
        completion.fault.is_none(),
        "the checker rejects the rule set of {}: {:?}",
        session.name(),
        completion.fault.as_ref().map(|(fault, _)| fault)
    );
    completion
}

/// Completes, which must come to an end with a rule set that the checker accepts.
pub fn complete(session: &mut Session) -> Completion {
    let completion = complete_within(session, LONG);
    assert!(completion.complete, "{completion:?}\n{:?}", session.rules());
    completion
}

/// Reads a term.
pub fn term(session: &mut Session, text: &str) -> TermId {
    match session.parse_question(text) {
        Ok(Question::Term(term)) => term,
        Ok(_) => panic!("{text} is an equation"),
        Err(fault) => panic!("{}", fault.render(false, 80)),
    }
}

/// The normal form of a term, as text.
pub fn normal(session: &mut Session, text: &str) -> String {
    let term = term(session, text);
    let normal = alone(|control| session.normal(term, control)).expect("an order");
    assert_eq!(normal.stopped, None, "{text}");
    normal.text
}

/// The answer to an equation. Rejected evidence fails the test whatever is being tested.
pub fn ask(session: &mut Session, left: &str, right: &str, within: Duration) -> Answer {
    let (left, right) = (term(session, left), term(session, right));
    let answer = alone(|control| session.ask(left, right, within, control).cloned());
    let answer = answer.expect("an order");
    assert!(
        answer.fault.is_none(),
        "{}: {:?}",
        answer.question,
        answer.fault.map(|(fault, _)| fault)
    );
    answer
}

/// All files of the folder `theories`, in the order of their names.
pub fn theory_files() -> Vec<PathBuf> {
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("theories");
    let entries = std::fs::read_dir(folder).expect("the folder of theories");
    let mut files: Vec<PathBuf> = entries
        .map(|entry| entry.expect("an entry").path())
        .collect();
    files.sort();
    assert!(files.len() >= 25);
    files
}

/// A small generator (xorshift, Marsaglia 2003), so that failures can be repeated.
pub struct Random(pub u64);

impl Random {
    /// A number below the bound.
    pub fn below(&mut self, bound: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % bound as u64) as usize
    }

    /// One of these.
    pub fn one_of<'t, T>(&mut self, of: &'t [T]) -> &'t T {
        &of[self.below(of.len())]
    }
}

//! One open theory with all that is known about it: its engines, its answers, what can be undone.
//!
//! Everything that the shell and the batch commands do goes through a [`Session`]. Nothing here
//! prints: results are data with text in them, for the shell to lay out.

mod algebra_view;
mod algebras;
mod answer;
mod ask;
mod change;
mod check;
mod control;
mod derivation;
mod derived;
mod evidence;
mod extension;
mod file;
mod find;
mod goal;
mod library;
mod naming;
mod patterns;
mod plans;
mod race;
mod runner;
mod sheet;
mod shorten;
mod simplify;
mod store;
mod subject;
mod view;
mod witness;
mod work;
mod workers;

pub use algebra_view::{AlgebraText, AlgebraView, Evaluation, EvaluationFault};
pub use answer::{
    Answer, By, Completion, FoundAlgebra, Frontier, NormalForm, ProgramFault, Verdict,
};
pub use change::{ChangeFault, Undone};
pub use check::ClaimResult;
pub use control::{Control, Progress};
pub use file::{write_atomically, write_evidence};
pub use library::{Library, Listed, Shelf};
pub use sheet::{LemmaText, ProofHead, ProofLine, ProofText};
pub use simplify::Simplifying;
pub use store::{OpenFault, Opened, SaveFault};
pub use subject::is_of_theory;
pub use view::{ClaimView, LawView, RuleView, Status, SymbolView};
pub use workers::{NoOrder, Obstacle};

use crate::language::Printer;
use crate::language::TheoryNames;
use crate::rewrite::Stopped;
use crate::term::TermId;
use crate::theory::Theory;
use algebras::Algebras;
use std::path::PathBuf;
use std::time::Duration;
use workers::Workers;

/// An open theory.
pub struct Session {
    theory: Theory,
    /// Where it was opened from or last saved to.
    path: Option<PathBuf>,
    /// The text as it was then.
    saved_text: String,
    workers: Workers,
    algebras: Algebras,
    answers: Vec<Answer>,
    it: Option<TermId>,
    budgets: Budgets,
    undo: Vec<change::Snapshot>,
    redo: Vec<change::Snapshot>,
    library: Library,
    /// The laws as text.
    law_text: std::sync::Arc<str>,
    /// Changes when terms of the theory's bank may have got other ids.
    lineage: u32,
    /// Was the theory ever completed, or worked on to that end?
    completed: bool,
    /// Has the checker rejected the rules as a complete set? Then they are not called one.
    distrusted: bool,
}

/// How long things may take that are not told a time.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Budgets {
    /// For a question that the rules do not settle.
    pub ask: Duration,
    /// For `complete`; nothing for as long as it takes.
    pub complete: Option<Duration>,
    /// For each claim of `check`.
    pub check: Duration,
}

impl Default for Budgets {
    fn default() -> Self {
        Budgets {
            ask: Duration::from_secs(2),
            complete: None,
            check: Duration::from_secs(10),
        }
    }
}

/// Why a piece of work could not be begun or finished.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum SessionFault {
    /// No usable reduction order.
    NoOrder(NoOrder),
    /// Stopped before there was anything to show.
    Stopped(Stopped),
}

impl From<NoOrder> for SessionFault {
    fn from(fault: NoOrder) -> Self {
        SessionFault::NoOrder(fault)
    }
}

impl Session {
    /// A session with an empty theory, named or not.
    pub fn new(name: Option<&str>, library: Library) -> Session {
        let mut theory = Theory {
            source: "typed".to_owned(),
            ..Theory::default()
        };
        if let Some(name) = name {
            let line = format!("theory {}", crate::language::quote_law(name));
            // A name that cannot be one is left out; the shell has checked it before.
            let _ = theory.declare(&line, "typed", &library);
        }
        Session::with(theory, None, library)
    }

    fn with(theory: Theory, path: Option<PathBuf>, library: Library) -> Session {
        let mut session = Session {
            law_text: "".into(),
            saved_text: theory.document.text(),
            theory,
            path,
            workers: Workers::default(),
            algebras: Algebras::default(),
            answers: Vec::new(),
            it: None,
            budgets: Budgets::default(),
            undo: Vec::new(),
            redo: Vec::new(),
            library,
            lineage: 0,
            completed: false,
            distrusted: false,
        };
        session.law_text = session.law_text();
        session
    }

    /// The theory.
    pub fn theory(&self) -> &Theory {
        &self.theory
    }

    /// What the prompt and messages call the theory.
    pub fn name(&self) -> &str {
        self.theory.name.as_deref().unwrap_or("unnamed")
    }

    /// Where the theory was opened from or last saved to.
    pub fn path(&self) -> Option<&std::path::Path> {
        self.path.as_deref()
    }

    /// Has the text changed since it was opened or saved?
    pub fn is_changed(&self) -> bool {
        self.theory.document.text() != self.saved_text
    }

    /// Where theories are looked for.
    pub fn library(&self) -> &Library {
        &self.library
    }

    /// The budgets in force.
    pub fn budgets(&self) -> Budgets {
        self.budgets
    }

    /// All answers, oldest first; `answers()[n - 1]` has number `n`.
    pub fn answers(&self) -> &[Answer] {
        &self.answers
    }

    /// The last normal form, for the name `it`.
    pub fn it(&self) -> Option<TermId> {
        self.it
    }

    /// A term of the theory as text.
    pub fn term_text(&self, term: TermId) -> String {
        let names = TheoryNames(&self.theory.signature);
        Printer::new(&names)
            .limit(LONGEST_TEXT)
            .term(&self.theory.bank, term)
    }

    /// An equation of the theory as text.
    pub fn equation_text(&self, left: TermId, sign: &str, right: TermId) -> String {
        format!("{} {sign} {}", self.term_text(left), self.term_text(right))
    }

    fn next_answer(&self) -> u32 {
        self.answers.len() as u32 + 1
    }
}

/// A term is cut where its text would be longer than this many bytes. The largest term that has
/// to be printed whole is a million levels deep.
const LONGEST_TEXT: usize = 16 << 20;

//! Changing the theory, and taking changes back.

use super::workers::check_directed;
use super::{Budgets, NoOrder, Session};
use crate::engine::Arrows;
use crate::language::{
    Change, Diagnostic, DropFault, Question, parse_question, parse_question_prefix,
};
use crate::term::TermId;
use crate::theory::Theory;
use std::sync::Arc;

/// The state before a change.
pub(super) struct Snapshot {
    theory: Theory,
    budgets: Budgets,
    arrows: Option<Arrows>,
    it: Option<TermId>,
    /// What the change was, as it was typed.
    line: String,
}

/// A change that was taken back or brought back, as it was typed.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Undone {
    /// The line.
    pub line: String,
}

/// Why a change was not made.
#[derive(Clone, Debug)]
pub enum ChangeFault {
    /// Something is wrong with the text.
    Text(Vec<Diagnostic>),
    /// The order does not suit.
    Order(NoOrder),
    /// The law or claim cannot be dropped.
    Drop(DropFault),
}

impl Session {
    /// Takes in a declaration as it was typed; the theory is unchanged on error. A directed rule,
    /// or an order, under which some directed rule does not decrease is refused.
    pub fn declare(&mut self, text: &str) -> Result<Vec<Change>, ChangeFault> {
        let before = self.snapshot(text.trim());
        let changes = self
            .theory
            .declare(text, "typed", &self.library)
            .map_err(ChangeFault::Text)?;
        let orders =
            |change: &Change| matches!(change, Change::Order | Change::Law(_) | Change::Used(_));
        if changes.iter().any(orders)
            && let Err(fault) = self.check_order()
        {
            self.theory = before.theory;
            return Err(ChangeFault::Order(fault));
        }
        if !changes.is_empty() {
            self.changed(before);
        }
        Ok(changes)
    }

    /// Is there, or is stated, an order under which all directed rules decrease?
    pub(super) fn check_order(&self) -> Result<(), NoOrder> {
        match &self.theory.order {
            Some(setting) => check_directed(&self.theory, setting),
            None => super::workers::can_plan(&self.theory),
        }
    }

    /// Reads a question as it was typed (a leading `?` is read past); `it` is known.
    pub fn parse_question(&mut self, text: &str) -> Result<Question, Diagnostic> {
        parse_question(&mut self.theory, "typed", text, self.it)
    }

    /// Reads a question at the start of `text[from..]` and says where it ends: for commands such as
    /// `prove s = t within 60s`.
    pub fn parse_question_prefix(
        &mut self,
        text: &str,
        from: usize,
    ) -> Result<(Question, usize), Diagnostic> {
        parse_question_prefix(&mut self.theory, "typed", text, from..text.len(), self.it)
    }

    /// Takes a law or a claim out; `line` is what was typed.
    pub fn drop_named(&mut self, name: &str, line: &str) -> Result<(), ChangeFault> {
        let before = self.snapshot(line);
        match self.theory.drop_law(name) {
            Ok(_) => {}
            Err(DropFault::Unknown) => {
                self.theory.drop_claim(name).map_err(ChangeFault::Drop)?;
            }
            Err(fault) => return Err(ChangeFault::Drop(fault)),
        }
        self.changed(before);
        Ok(())
    }

    /// Changes the budgets; `line` is what was typed.
    pub fn set_budgets(&mut self, budgets: Budgets, line: &str) {
        let before = self.snapshot(line);
        self.budgets = budgets;
        self.undo.push(before);
        self.redo.clear();
    }

    /// Changes the table of techniques of all engines, from now on; with nothing, each engine has
    /// the one that was planned for it. `line` is what was typed.
    pub fn set_arrows(&mut self, arrows: Option<Arrows>, line: &str) {
        let before = self.snapshot(line);
        self.workers.set_arrows(arrows);
        self.undo.push(before);
        self.redo.clear();
    }

    /// Takes the last change back.
    pub fn undo(&mut self) -> Option<Undone> {
        let snapshot = self.undo.pop()?;
        let line = snapshot.line.clone();
        let after = self.restore(snapshot);
        self.redo.push(after);
        Some(Undone { line })
    }

    /// Brings back the change that was taken back last.
    pub fn redo(&mut self) -> Option<Undone> {
        let snapshot = self.redo.pop()?;
        let line = snapshot.line.clone();
        let before = self.restore(snapshot);
        self.undo.push(before);
        Some(Undone { line })
    }

    fn restore(&mut self, snapshot: Snapshot) -> Snapshot {
        let now = Snapshot {
            theory: std::mem::replace(&mut self.theory, snapshot.theory),
            budgets: std::mem::replace(&mut self.budgets, snapshot.budgets),
            arrows: self.workers.set_arrows(snapshot.arrows),
            it: std::mem::replace(&mut self.it, snapshot.it),
            line: snapshot.line,
        };
        self.lineage += 1;
        self.outdate();
        now
    }

    fn snapshot(&self, line: &str) -> Snapshot {
        Snapshot {
            theory: self.theory.clone(),
            budgets: self.budgets,
            arrows: self.workers.arrows(),
            it: self.it,
            line: line.to_owned(),
        }
    }

    /// After a change of the theory, which can be undone.
    fn changed(&mut self, before: Snapshot) {
        self.undo.push(before);
        self.redo.clear();
        self.outdate();
    }

    /// Answers say whether the laws are still those that they were given under.
    fn outdate(&mut self) {
        self.distrusted = false;
        let now = self.law_text();
        for answer in &mut self.answers {
            answer.outdated = *answer.laws != *now;
        }
        self.law_text = now;
    }

    /// The laws as text, to tell whether they are the same.
    pub(super) fn law_text(&self) -> Arc<str> {
        let line = |law: &crate::theory::Law| {
            format!(
                "{}: {}\n",
                law.name,
                self.equation_text(law.left, "=", law.right)
            )
        };
        self.theory.laws.iter().map(line).collect::<String>().into()
    }
}

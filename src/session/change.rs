//! Changing the theory, and taking changes back.

use super::{Budgets, NoOrder, Session};
use crate::language::{Change, Diagnostic, DropFault, Question};
use crate::order::OrderSetting;
use crate::theory::Theory;

/// The state before a change.
pub(super) struct Snapshot {
    pub(super) theory: Theory,
    pub(super) budgets: Budgets,
    /// What the change was, as it was typed.
    pub(super) line: String,
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
    /// The law or claim cannot be dropped; with the names that are close.
    Drop(DropFault),
}

impl Session {
    /// Takes in a declaration as it was typed; the theory is unchanged on error. A directed rule
    /// or an order under which a directed rule does not decrease is refused.
    pub fn declare(&mut self, text: &str) -> Result<Vec<Change>, ChangeFault> {
        let _ = text;
        todo!()
    }

    /// Reads a question as it was typed (a leading `?` is read past); `it` is known.
    pub fn parse_question(&mut self, text: &str) -> Result<Question, Diagnostic> {
        let _ = text;
        todo!()
    }

    /// Reads a question at the start of `text[from..]` and says where it ends: for commands such as
    /// `prove s = t within 60s`.
    pub fn parse_question_prefix(
        &mut self,
        text: &str,
        from: usize,
    ) -> Result<(Question, usize), Diagnostic> {
        let _ = (text, from);
        todo!()
    }

    /// Sets the order, or with none leaves it to the program. `line` is what was typed.
    pub fn set_order(
        &mut self,
        setting: Option<OrderSetting>,
        line: &str,
    ) -> Result<(), ChangeFault> {
        let _ = (setting, line);
        todo!()
    }

    /// Takes a law or a claim out.
    pub fn drop_named(&mut self, name: &str, line: &str) -> Result<(), ChangeFault> {
        let _ = (name, line);
        todo!()
    }

    /// Changes the budgets.
    pub fn set_budgets(&mut self, budgets: Budgets, line: &str) {
        let _ = (budgets, line);
        todo!()
    }

    /// Takes the last change back.
    pub fn undo(&mut self) -> Option<Undone> {
        todo!()
    }

    /// Brings the change that was taken back last.
    pub fn redo(&mut self) -> Option<Undone> {
        todo!()
    }
}

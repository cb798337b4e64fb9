//! The commands. Each is one file with its words, its help, its parser and its rendering; the list
//! below is all that dispatch, help, hints and Tab know.

mod algebras;
mod answers;
mod budget;
mod check;
mod claims;
mod complete;
mod drop;
mod evaluate;
mod evidence;
mod find;
mod help;
mod import;
mod laws;
mod new;
pub mod open;
mod order;
mod proof;
mod prove;
mod quit;
mod redo;
mod rules;
mod save;
mod separate;
mod simplify;
mod status;
mod symbols;
mod theories;
mod trace;
mod undo;
mod why;

use super::desk::Shell;
use super::line::Line;
use super::problem::Problem;

/// All commands, by group, in the order in which help lists them.
pub const ALL: &[&Command] = &[
    &trace::COMMAND,
    &find::COMMAND,
    &prove::COMMAND,
    &separate::COMMAND,
    &proof::COMMAND,
    &evidence::COMMAND,
    &why::COMMAND,
    &evaluate::COMMAND,
    &answers::COMMAND,
    &complete::COMMAND,
    &check::COMMAND,
    &order::COMMAND,
    &budget::COMMAND,
    &simplify::COMMAND,
    &drop::COMMAND,
    &undo::COMMAND,
    &redo::COMMAND,
    &laws::COMMAND,
    &rules::COMMAND,
    &symbols::COMMAND,
    &claims::COMMAND,
    &algebras::COMMAND,
    &status::COMMAND,
    &new::COMMAND,
    &open::COMMAND,
    &import::COMMAND,
    &theories::COMMAND,
    &save::COMMAND,
    &help::COMMAND,
    &quit::COMMAND,
];

/// A command.
pub struct Command {
    /// The word that it begins with.
    pub word: &'static str,
    /// What it is about.
    pub group: Group,
    /// Its forms, each with its meaning in a few words; the first is the main one.
    pub forms: &'static [(&'static str, &'static str)],
    /// What else there is to know.
    pub page: &'static str,
    /// Lines that can be typed as they stand into a new shell.
    pub example: &'static str,
    /// What Tab offers behind the word.
    pub operand: Operand,
    /// Carries it out; the line stands behind the word.
    pub run: fn(&mut Shell, Line<'_>) -> Result<(), Problem>,
}

/// The groups of commands.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Group {
    /// Questions and their answers.
    Asking,
    /// Work on the theory and its rules.
    Working,
    /// Theories as files, and the shell itself.
    Keeping,
}

/// What stands behind a command's word.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Operand {
    /// Nothing but the words of its forms.
    Words,
    /// Terms.
    Terms,
    /// Names of laws and claims.
    Laws,
    /// Theories by name, and files.
    Theories,
    /// Files.
    Files,
    /// Numbers of answers.
    Answers,
    /// Numbers of rules.
    Rules,
    /// Words that help knows.
    Topics,
}

/// The command of this word.
pub fn named(word: &str) -> Option<&'static Command> {
    ALL.iter().copied().find(|command| command.word == word)
}

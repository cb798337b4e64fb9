//! The command line.

use super::quantity;
use clap::error::ErrorKind;
use clap::{Args, CommandFactory, Parser, Subcommand, ValueEnum};
use std::path::PathBuf;
use std::time::Duration;

const AFTER: &str = "\
FILE is a file, or the name of a theory: it is looked for in the working folder, in your theory
folder and among the theories inside the program. Files in clause syntax (.p, .ax) are imported. A theory whose name is a command of this list is
opened with ./NAME.

Exit status: 0 everything as asked or claimed, 1 something is not, 2 something is undecided,
3 the input is at fault, 4 the program could not do its work. For verify: 0 everything is accepted,
1 something is rejected, 2 something is too costly to check, 3 and 4 as before; where several
apply, 4 goes before 3, 3 before 1, and 1 before 2.";

/// Keeps equational laws and answers, with evidence, what follows from them.
#[derive(Debug, Parser)]
#[command(name = "equable", version, after_help = AFTER, disable_help_subcommand = true)]
pub struct Arguments {
    /// What to do; without it the shell is opened.
    #[command(subcommand)]
    pub task: Option<Task>,
    /// The theory to open in the shell.
    pub file: Option<String>,
    /// The folder in which the paths begin that files in clause syntax include; otherwise the
    /// environment variable EQUABLE_LIBRARY, or the folder of the file and those above it.
    #[arg(long, global = true, value_name = "FOLDER")]
    pub library: Option<PathBuf>,
    /// Without colours and without the line that shows progress.
    #[arg(long, global = true)]
    pub plain: bool,
    /// What the tasks that answer have in common.
    #[command(flatten)]
    pub options: Options,
    /// For ask, check and complete: write the evidence of every settled answer into this folder, one
    /// JSON file each.
    #[arg(long, global = true, value_name = "FOLDER")]
    pub evidence: Option<PathBuf>,
}

impl Arguments {
    /// Reads the command line. Options may stand before the word for the task and behind it.
    ///
    /// # Errors
    ///
    /// What cannot be read, an option that the task does not have, and the wish for help.
    pub fn read() -> Result<Arguments, clap::Error> {
        let read = Arguments::try_parse()?;
        match read.misplaced() {
            None => Ok(read),
            Some(message) => Err(Arguments::command().error(ErrorKind::ArgumentConflict, message)),
        }
    }

    /// Says what does not go with the task.
    fn misplaced(&self) -> Option<String> {
        if let (Some(file), Some(_)) = (&self.file, &self.task) {
            return Some(format!(
                "{file} stands before the word that says what to do"
            ));
        }
        let (word, allowed): (&str, &[&str]) = match &self.task {
            None => ("the shell", &[]),
            Some(Task::Run { .. }) => ("run", &[]),
            Some(Task::Ask { .. }) => ("ask", &["--json", "--within", "--evidence"]),
            Some(Task::Normal { .. }) => ("normal", &["--json", "--within"]),
            Some(Task::Check { .. }) => ("check", &["--json", "--within", "--evidence"]),
            Some(Task::Complete { .. }) => ("complete", &["--json", "--within", "--evidence"]),
            Some(Task::Verify { .. }) => ("verify", &["--json"]),
        };
        let given = [
            ("--json", self.options.json.is_some()),
            ("--within", self.options.within.is_some()),
            ("--evidence", self.evidence.is_some()),
        ];
        let mut wrong = given
            .iter()
            .filter(|(option, given)| *given && !allowed.contains(option));
        if let Some((option, _)) = wrong.next() {
            return Some(format!("{word} has no option {option}"));
        }
        let is_full = self.options.json == Some(Json::Full);
        (is_full && word == "verify").then(|| "verify writes no evidence: take --json".to_owned())
    }
}

/// What can be done without the shell.
#[derive(Debug, Subcommand)]
pub enum Task {
    /// Runs the lines of a script as if they were typed; - is standard input.
    Run {
        /// The script.
        script: String,
    },
    /// Are the two sides of an equation equal by the laws of a theory?
    Ask {
        /// The theory.
        file: String,
        /// The question, 's = t' or 's != t'.
        question: String,
    },
    /// The normal form of a term by the rules of a theory.
    Normal {
        /// The theory.
        file: String,
        /// The term.
        term: String,
    },
    /// Verifies every claim of the theories.
    Check {
        /// The theories.
        #[arg(required = true)]
        files: Vec<String>,
    },
    /// Looks for a complete set of rules for a theory.
    Complete {
        /// The theory.
        file: String,
        /// Print the rules even if they are not complete.
        #[arg(long)]
        all: bool,
    },
    /// Checks evidence in files, without searching for anything.
    Verify {
        /// The files, as --evidence and the command evidence write them; - is standard input.
        #[arg(required = true, value_name = "EVIDENCE")]
        files: Vec<String>,
        /// The laws and sorts must be those of this theory.
        #[arg(long, value_name = "FILE")]
        theory: Option<String>,
    },
}

/// What the tasks that answer have in common.
#[derive(Clone, Copy, Debug, Args)]
pub struct Options {
    /// For tasks that answer: one JSON object a line instead of text; full has the evidence inside.
    #[arg(long, global = true, value_name = "FORM", num_args = 0..=1, require_equals = true)]
    #[arg(default_missing_value = "brief")]
    pub json: Option<Json>,
    /// For tasks that search: for how long to work, such as 500ms, 60s, 2m or 1h.
    #[arg(long, global = true, value_name = "TIME", value_parser = duration)]
    pub within: Option<Duration>,
}

/// How much an answer as JSON holds.
#[derive(Clone, Copy, Debug, PartialEq, Eq, ValueEnum)]
pub enum Json {
    /// The answer, and where its evidence is.
    Brief,
    /// The evidence too.
    Full,
}

fn duration(text: &str) -> Result<Duration, String> {
    quantity::parse_duration(text)
        .ok_or_else(|| "a time is a number and a unit, such as 500ms, 60s, 2m or 1h".to_owned())
}

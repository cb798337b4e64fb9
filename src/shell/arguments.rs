//! The command line.

use super::quantity;
use clap::{Args, Parser, Subcommand, ValueEnum};
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
#[command(name = "equable", version, after_help = AFTER, subcommand_negates_reqs = true)]
#[command(args_conflicts_with_subcommands = true, disable_help_subcommand = true)]
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
        #[command(flatten)]
        options: Options,
        #[command(flatten)]
        evidence: EvidenceFolder,
    },
    /// The normal form of a term by the rules of a theory.
    Normal {
        /// The theory.
        file: String,
        /// The term.
        term: String,
        #[command(flatten)]
        options: Options,
    },
    /// Verifies every claim of the theories.
    Check {
        /// The theories.
        #[arg(required = true)]
        files: Vec<String>,
        #[command(flatten)]
        options: Options,
        #[command(flatten)]
        evidence: EvidenceFolder,
    },
    /// Looks for a complete set of rules for a theory.
    Complete {
        /// The theory.
        file: String,
        #[command(flatten)]
        options: Options,
        #[command(flatten)]
        evidence: EvidenceFolder,
    },
    /// Checks evidence in files, without searching for anything.
    Verify {
        /// The files, as --evidence and the command evidence write them; - is standard input.
        #[arg(required = true, value_name = "EVIDENCE")]
        files: Vec<String>,
        /// The laws and sorts must be those of this theory.
        #[arg(long, value_name = "FILE")]
        theory: Option<String>,
        /// One JSON object a line instead of text.
        #[arg(long)]
        json: bool,
    },
}

/// What the tasks that answer have in common.
#[derive(Clone, Copy, Debug, Args)]
pub struct Options {
    /// One JSON object a line instead of text; full has the evidence inside.
    #[arg(long, value_name = "FORM", num_args = 0..=1, require_equals = true)]
    #[arg(default_missing_value = "brief")]
    pub json: Option<Json>,
    /// For how long to work, such as 500ms, 60s, 2m or 1h.
    #[arg(long, value_name = "TIME", value_parser = duration)]
    pub within: Option<Duration>,
}

/// Where evidence goes.
#[derive(Clone, Debug, Args)]
pub struct EvidenceFolder {
    /// Write the evidence of every settled answer into this folder, one JSON file each.
    #[arg(long = "evidence", value_name = "FOLDER")]
    pub folder: Option<PathBuf>,
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

//! `new NAME`

use super::{Command, Group, Operand};
use crate::language::{Fault, is_reserved};
use crate::session::Session;
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;

/// The command.
pub const COMMAND: Command = Command {
    word: "new",
    group: Group::Keeping,
    forms: &[("new NAME", "begin an empty theory")],
    page: "The theory that was open is put away; if it has changes that are not saved, you are \
           asked first. Names begin with a letter; any other text stands in quotes.",
    example: "new gauges\nconstant harbour\nharbour = harbour",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let typed = line.peek();
    let Some((name, range)) = line.word() else {
        let fault = Fault::new(line.rest_range(), "the name of the theory is missing");
        return Err(line.problem(fault.help("write new NAME, such as new gauges")));
    };
    line.end()?;
    let quoted = typed.is_some_and(|(word, _)| word.starts_with('"'));
    let plain = name.starts_with(|c: char| c.is_alphabetic())
        && name
            .chars()
            .all(|c| c.is_alphanumeric() || matches!(c, '_' | '-'))
        && !name.ends_with('-')
        && !is_reserved(name);
    if name.is_empty() || name.contains('"') || !(plain || quoted) {
        let fault = Fault::new(range, "this cannot be the name of a theory")
            .help("names begin with a letter and hold letters, digits, _ and -")
            .help("any other name stands in quotes: new \"old gauges\"");
        return Err(line.problem(fault));
    }
    if shell.may_put_away() {
        let library = shell.session.library().clone();
        shell.session = Session::new(Some(name), library);
    }
    Ok(())
}

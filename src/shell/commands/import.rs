//! `import FILE`

use super::{Command, Group, Operand, open};
use crate::exchange;
use crate::language::Fault;
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use std::path::Path;

/// The command.
pub const COMMAND: Command = Command {
    word: "import",
    group: Group::Keeping,
    forms: &[(
        "import FILE",
        "open a file in clause syntax, such as cnf(name, axiom, f(X) = c).",
    )],
    page: "Statements cnf and fof of one equation each are understood, and include. Equations \
           become laws; the conjecture, or the opposite of an inequation, becomes a claim. An \
           inequation is the goal whatever its role, an axiom too, since some files state their goal \
           so. What is open is \
           put away; if it has changes that are not saved, you are asked first. save FILE keeps what \
           was imported as a theory. Paths in include begin in the folder that --library or the \
           environment variable EQUABLE_LIBRARY names; without one they are looked for beside the \
           file and above it. open and the command line take such files too, by their ending .p or \
           .ax or by what they begin with.",
    example: "",
    operand: Operand::Files,
    run,
};

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let rest = line.rest();
    let Some((name, _)) = line.word() else {
        let fault = Fault::new(line.rest_range(), "the name of a file is missing");
        return Err(line.problem(fault.help("write import FILE, such as import gauges.p")));
    };
    // A path with blanks is understood without quotes too, since nothing else can follow.
    let name = if line.end().is_ok() { name } else { rest };
    let library = shell.session.library().clone();
    let opened = exchange::open(Path::new(name), library).map_err(Problem::open)?;
    if shell.may_put_away() {
        open::enter(shell, opened);
    }
    Ok(())
}

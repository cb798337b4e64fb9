//! `open NAME`, `open FILE`

use super::{Command, Group, Operand};
use crate::language::Fault;
use crate::session::Opened;
use crate::shell::desk::Shell;
use crate::shell::layout::{fold, fold_hanging};
use crate::shell::line::Line;
use crate::shell::places;
use crate::shell::problem::Problem;
use crate::shell::quantity::count;

/// The command.
pub const COMMAND: Command = Command {
    word: "open",
    group: Group::Keeping,
    forms: &[
        ("open NAME", "open a theory by its name"),
        (
            "open FILE",
            "open a file; a path with blanks stands in quotes",
        ),
    ],
    page: "A name without a path is looked for in the working folder, then in your theory folder, \
           then among the theories inside the program; theories lists all. What is open is put \
           away; if it has changes that are not saved, you are asked first. Derived rules that the \
           file holds are verified, and only those that fail are left out.",
    example: "open group\nlaws",
    operand: Operand::Theories,
    run,
};

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let rest = line.rest();
    let Some((name, _)) = line.word() else {
        let fault = Fault::new(line.rest_range(), "the name of a theory or file is missing");
        return Err(line.problem(fault.help("write open NAME; theories lists the names")));
    };
    // A path with blanks is understood without quotes too, since nothing else can follow.
    let name = if line.end().is_ok() { name } else { rest };
    let library = shell.session.library().clone();
    let opened = places::open(name, library).map_err(Problem::open)?;
    if !shell.may_put_away() {
        return Ok(());
    }
    enter(shell, opened);
    Ok(())
}

/// Goes on with a theory that was opened, and says what it is.
pub fn enter(shell: &mut Shell, opened: Opened) {
    shell.session = opened.session;
    let theory = shell.session.theory();
    let width = shell.look().width;
    let mut facts = vec![
        count(theory.signature.symbols().len(), "symbol"),
        count(theory.laws.len(), "law"),
        count(theory.claims.len(), "claim"),
    ];
    if opened.derived > 0 {
        facts.push(format!(
            "{} verified",
            count(opened.derived, "derived rule")
        ));
    }
    let mut text = fold_hanging(
        &format!("{}: {}", shell.session.name(), facts.join(", ")),
        width,
        0,
        4,
    );
    for note in &theory.notes {
        text += &fold(note, width, 4);
    }
    shell.out(&text);
    shell.say_notes(&opened.notes);
    if !opened.refused.is_empty() {
        shell.tell(Problem::Text(opened.refused));
        shell.remark("These derived rules are left out; everything else was taken, and complete finds what is missing.");
    }
}

//! `theories`

use super::{Command, Group, Operand};
use crate::session::Shelf;
use crate::shell::desk::Shell;
use crate::shell::layout::{columns, cut, table};
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::screen::Ink;

/// The command.
pub const COMMAND: Command = Command {
    word: "theories",
    group: Group::Keeping,
    forms: &[("theories", "the theories that can be opened by name")],
    page: "Those of the working folder, of your own theory folder, and of the program itself, each \
           with the note that it begins with. A theory hides one of the same name further down.",
    example: "theories",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let look = shell.look();
    let list = shell.session.library().list();
    let user = shell.session.library().user.clone();
    let user = user.map_or(String::new(), |path| format!(", {}", path.display()));
    let widest = list
        .iter()
        .map(|theory| columns(&theory.name))
        .max()
        .unwrap_or(0);
    let mut text = String::new();
    for (shelf, title) in [
        (Shelf::Working, "in the working folder".to_owned()),
        (Shelf::User, format!("in your theory folder{user}")),
        (Shelf::BuiltIn, "inside the program".to_owned()),
    ] {
        let rows: Vec<Vec<String>> = list
            .iter()
            .filter(|theory| theory.shelf == shelf)
            .map(|theory| {
                let room = look.width.saturating_sub(widest + 6).max(8);
                let note = theory.note.as_deref().unwrap_or_default();
                vec![format!("  {}", theory.name), cut(note, room)]
            })
            .collect();
        if !rows.is_empty() {
            text += &format!("{}\n", look.ink(Ink::Strong, &title));
            text += &table(&rows, look);
        }
    }
    shell.out(&text);
    Ok(())
}

//! `laws`

use super::{Command, Group, Operand};
use crate::language::quote_law;
use crate::shell::desk::Shell;
use crate::shell::layout::table;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::theory::LawKind;

/// The command.
pub const COMMAND: Command = Command {
    word: "laws",
    group: Group::Working,
    forms: &[("laws", "the laws, with their names")],
    page: "In the order in which they were stated. A rule is a law that is used from left to right \
           only; a definition is the law of a symbol made with define.",
    example: "open group\nlaws",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let rows: Vec<Vec<String>> = shell
        .session
        .laws()
        .into_iter()
        .map(|law| {
            let mut about = Vec::new();
            match law.kind {
                LawKind::Law => {}
                LawKind::Rule => about.push("rule".to_owned()),
                LawKind::Definition => about.push("definition".to_owned()),
            }
            about.extend(law.from.map(|from| format!("from {from}")));
            let mut row = vec![quote_law(&law.name), law.text];
            if !about.is_empty() {
                row.push(about.join(", "));
            }
            row
        })
        .collect();
    if rows.is_empty() {
        shell.out("No laws yet. State one, such as law unit: x * e = x.\n");
    } else {
        let text = table(&rows, shell.look());
        shell.out(&text);
    }
    Ok(())
}

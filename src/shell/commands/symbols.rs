//! `symbols`

use super::{Command, Group, Operand};
use crate::shell::desk::Shell;
use crate::shell::layout::{fold_hanging, table};
use crate::shell::line::Line;
use crate::shell::problem::Problem;

/// The command.
pub const COMMAND: Command = Command {
    word: "symbols",
    group: Group::Working,
    forms: &[("symbols", "the sorts, symbols and variables")],
    page: "Each as the line that declares it. A symbol that is known to be associative and \
           commutative says so: terms that differ only in the order of its arguments are then equal \
           at once.",
    example: "open group\nsymbols",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let look = shell.look();
    let signature = &shell.session.theory().signature;
    let mut text = String::new();
    if signature.has_sorts() {
        let sorts = format!("sort {}", signature.sorts().join(" "));
        text += &fold_hanging(&sorts, look.width, 0, 4);
    }
    let row = |symbol: crate::session::SymbolView| {
        let mut row = vec![symbol.text];
        if symbol.ac {
            row.push("associative and commutative".to_owned());
        }
        row
    };
    let rows: Vec<Vec<String>> = shell.session.symbols().into_iter().map(row).collect();
    text += &table(&rows, look);
    for (place, sort) in signature.sorts().iter().enumerate() {
        let of_sort =
            |v: &&crate::theory::VariableDeclaration| usize::from(v.sort.0) == place && !v.implicit;
        let names: Vec<String> = signature
            .variables()
            .iter()
            .filter(of_sort)
            .map(|variable| crate::language::quote_symbol(&variable.name))
            .collect();
        if names.is_empty() {
            continue;
        }
        let of = if sort.is_empty() {
            String::new()
        } else {
            format!(" : {sort}")
        };
        let line = format!("variable {}{of}", names.join(" "));
        text += &fold_hanging(&line, look.width, 0, 4);
    }
    if text.is_empty() {
        text = "No symbols yet. Declare one, such as constant e or infix * 40 left.\n".to_owned();
    }
    shell.out(&text);
    Ok(())
}

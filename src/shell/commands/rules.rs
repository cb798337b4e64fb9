//! `rules`

use super::{Command, Group, Operand};
use crate::language::quote_law;
use crate::shell::desk::Shell;
use crate::shell::layout::table;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::quantity::{count, number};

/// The command.
pub const COMMAND: Command = Command {
    word: "rules",
    group: Group::Working,
    forms: &[("rules", "the rules that there are now")],
    page: "Rules are what terms are rewritten by: s -> t from left to right; s = t in both \
           directions, where the instance becomes smaller in the order. They are kept simplified by \
           each other. why 7 tells where rule 7 comes from.",
    example: "open group\ncomplete\nrules",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let rules = shell.session.rules();
    if rules.is_empty() {
        shell.out("No rules yet. complete makes them from the laws; so does a question.\n");
        return Ok(());
    }
    let digits = rules
        .iter()
        .map(|rule| rule.number)
        .max()
        .unwrap_or(0)
        .to_string()
        .len();
    let row = |rule: &crate::session::RuleView| {
        let mut row = vec![format!("{:>digits$}", rule.number), rule.text.clone()];
        row.extend(
            rule.law
                .as_deref()
                .map(|law| format!("law {}", quote_law(law))),
        );
        row
    };
    let rows: Vec<Vec<String>> = rules.iter().map(row).collect();
    let mut text = table(&rows, shell.look());
    let both = rules.iter().filter(|rule| !rule.oriented).count();
    let status = shell.session.status();
    text += &count(rules.len(), "rule");
    if both > 0 {
        text += &format!(", {} of them used both ways", number(both as u128));
    }
    text += if status.complete {
        "; complete\n"
    } else {
        "; not complete\n"
    };
    shell.out(&text);
    Ok(())
}

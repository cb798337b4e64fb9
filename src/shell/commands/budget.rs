//! `budget`, `budget ask 2s`

use super::{Command, Group, Operand};
use crate::language::Fault;
use crate::session::Budgets;
use crate::shell::desk::Shell;
use crate::shell::layout::table;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::quantity::show_duration;

/// The command.
pub const COMMAND: Command = Command {
    word: "budget",
    group: Group::Working,
    forms: &[
        ("budget", "how long things may take"),
        ("budget ask 2s", "for a question"),
        ("budget complete 60s", "for complete; none is without end"),
        ("budget check 10s", "for each claim of check"),
    ],
    page: "A question that the rules do not settle is worked on for the time of budget ask, 2 s at \
           first. complete works without end until it is done or Ctrl-C is pressed, unless it has a \
           budget. Times are written 500ms, 60s, 2m or 1h.",
    example: "budget ask 5s\nbudget complete none\nbudget",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let mut budgets = shell.session.budgets();
    let Some((word, range)) = line.word() else {
        let text = table(&rows(budgets), shell.look());
        shell.out(&text);
        return Ok(());
    };
    match word {
        "ask" => budgets.ask = line.duration("budget ask 2s")?,
        "check" => budgets.check = line.duration("budget check 10s")?,
        "complete" if line.keyword("none") => budgets.complete = None,
        "complete" => budgets.complete = Some(line.duration("budget complete 60s")?),
        "memory" => {
            let fault = Fault::new(range, "this version has no budget for memory yet")
                .help("budgets of time: budget ask 2s, budget complete 60s, budget check 10s");
            return Err(line.problem(fault));
        }
        _ => {
            let fault = Fault::new(range, "ask, complete or check is expected here")
                .help("write budget ask 2s, budget complete 60s or budget check 10s");
            return Err(line.problem(fault));
        }
    }
    line.end()?;
    shell.session.set_budgets(budgets, line.text.trim());
    Ok(())
}

fn rows(budgets: Budgets) -> Vec<Vec<String>> {
    let row = |name: &str, time: String, what: &str| vec![name.to_owned(), time, what.to_owned()];
    let complete = budgets.complete.map_or("none".to_owned(), show_duration);
    vec![
        row(
            "ask",
            show_duration(budgets.ask),
            "a question that the rules do not settle",
        ),
        row("complete", complete, "looking for a complete set of rules"),
        row("check", show_duration(budgets.check), "each claim"),
    ]
}

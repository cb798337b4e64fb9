//! `status`

use super::{Command, Group, Operand};
use crate::shell::desk::Shell;
use crate::shell::layout::table;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::quantity::{count, number};

/// The command.
pub const COMMAND: Command = Command {
    word: "status",
    group: Group::Working,
    forms: &[("status", "the session in numbers")],
    page: "The theory and its file, what it holds, the order, the rules, and what the engine has \
           done so far.\n\
           A pair is what two rules make of one term, the peak. Pairs are formed, wait, and are \
           chosen. One that is redundant when chosen has joined or is an instance of what is kept. \
           Others join modulo AC (associativity and commutativity) or for every order of their \
           variables, are connected below the peak, or are not prime: something below the place of \
           the inner rule can be rewritten. Waiting pairs of a retired rule are dropped. A pair may \
           be given up because it is too large, or because too many wait and it is among the worst; \
           after that the rules are never called complete. help simplify tells more of each.",
    example: "open group\ncomplete\nstatus",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let status = shell.session.status();
    let file = match (&status.path, status.changed) {
        (Some(path), true) => format!("{path}, with changes that are not saved"),
        (Some(path), false) => path.clone(),
        (None, true) => "none; not saved".to_owned(),
        (None, false) => "none".to_owned(),
    };
    let mut holds = vec![count(status.symbols, "symbol"), count(status.laws, "law")];
    if status.sorts > 0 {
        holds.insert(0, count(status.sorts, "sort"));
    }
    holds.push(count(status.claims, "claim"));
    let rules = format!(
        "{}, {} oriented; {}",
        count(status.rules, "rule"),
        number(status.oriented as u128),
        if status.complete {
            "complete"
        } else {
            "not complete"
        }
    );
    let mut rows = vec![
        row("theory", status.name.clone()),
        row("file", file),
        row("holds", holds.join(", ")),
        row("order", order(&status.order, status.order_stated)),
        row("rules", rules),
        row("waiting", count(status.waiting, "pair")),
        row("answers", number(status.answers as u128)),
        row("terms", number(status.terms as u128)),
    ];
    if !status.ac.is_empty() {
        let ac = format!("{} (associative and commutative)", status.ac.join(", "));
        rows.insert(4, row("known AC", ac));
    }
    let counts: Vec<_> = status
        .counts
        .iter()
        .map(|(name, n)| row(name, number(*n)))
        .collect();
    let look = shell.look();
    let text = table(&rows, look) + "\n" + &table(&counts, look);
    shell.out(&text);
    Ok(())
}

fn row(name: &str, value: String) -> Vec<String> {
    vec![name.to_owned(), value]
}

fn order(order: &str, stated: bool) -> String {
    let order = order.strip_prefix("order ").unwrap_or(order);
    match (order, stated) {
        ("auto", _) => "auto; none chosen yet".to_owned(),
        (order, true) => format!("{order} (stated)"),
        (order, false) => format!("{order} (chosen by the program)"),
    }
}

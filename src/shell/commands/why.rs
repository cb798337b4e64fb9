//! `why R`

use super::{Command, Group, Operand};
use crate::language::Fault;
use crate::shell::desk::Shell;
use crate::shell::layout::Breaker;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::show;

/// The command.
pub const COMMAND: Command = Command {
    word: "why",
    group: Group::Asking,
    forms: &[("why 7", "where rule 7 comes from, back to the laws")],
    page: "Shows the rules that it rests on, each with its chain of equalities, and its own chain \
           last. rules lists the rules with their numbers; rules that were replaced by better ones \
           are still known here.",
    example: "open group\ncomplete\nwhy 4",
    operand: Operand::Rules,
    run,
};

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    line.keyword("rule");
    let count = shell.session.rule_count();
    let help = match count {
        0 => "there are no rules yet: complete makes some".to_owned(),
        _ => format!(
            "there are rules up to {}; rules lists those in use",
            count - 1
        ),
    };
    let Some((word, range)) = line.word() else {
        let fault = Fault::new(line.rest_range(), "the number of a rule is missing");
        return Err(line.problem(fault.help("write why 7").help(help)));
    };
    line.end()?;
    let Ok(number) = word.parse::<u32>() else {
        let mut fault = Fault::new(range, "the number of a rule is expected").help("write why 7");
        if shell.session.theory().law(word).is_some() {
            fault = fault
                .label("a law")
                .help("laws are stated, not derived: laws shows them");
        }
        return Err(line.problem(fault));
    };
    let Some(proof) = shell.session.why(number) else {
        let fault = Fault::new(range, format!("there is no rule {number}")).help(help);
        return Err(line.problem(fault));
    };
    let breaker = Breaker::new(&shell.session.theory().signature);
    let rules = shell.session.rules();
    let text = rules.iter().find(|rule| rule.number == number);
    let title = match text {
        Some(rule) => format!("rule {number}: {}", rule.text),
        None => format!("rule {number}, replaced since"),
    };
    let text = show::proof(&proof, &title, shell.look(), breaker);
    shell.out(&text);
    Ok(())
}

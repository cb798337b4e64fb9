//! `drop NAME`

use super::{Command, Group, Operand};
use crate::language::{DropFault, Fault, law_name, nearest};
use crate::session::ChangeFault;
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;

/// The command.
pub const COMMAND: Command = Command {
    word: "drop",
    group: Group::Working,
    forms: &[("drop NAME", "take a law or a claim out")],
    page: "Rules that rest on the law are no longer used, and its line leaves the theory. undo \
           brings it back. Names such as + associative are written as laws shows them.",
    example: "constant a b\nlaw same: a = b\ndrop same\nundo",
    operand: Operand::Laws,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    let theory = shell.session.theory();
    let laws = theory.laws.iter().map(|law| law.name.as_str());
    let claims = theory
        .claims
        .iter()
        .filter_map(|claim| claim.name.as_deref());
    let names: Vec<String> = laws.chain(claims).map(str::to_owned).collect();
    let typed = line.rest();
    let range = line.rest_range();
    let Some((name, rest)) = law_name(typed, names.iter().map(String::as_str)) else {
        let fault = Fault::new(range, "the name of a law or claim is missing");
        return Err(line.problem(fault.help("write drop NAME; laws and claims list the names")));
    };
    line.from(range.end - rest.len()).end()?;
    match shell.session.drop_named(&name, line.text.trim()) {
        Ok(()) => {
            shell.out(&format!("dropped {name}; undo brings it back\n"));
            Ok(())
        }
        Err(ChangeFault::Drop(DropFault::Unknown)) => {
            let mut fault = Fault::new(range, format!("there is no law or claim {name}"));
            if let Some(near) = nearest(&name, names.iter().map(String::as_str)) {
                fault = fault.help(format!("did you mean {near}?"));
            }
            Err(line.problem(fault.help("laws and claims list the names")))
        }
        Err(ChangeFault::Drop(fault)) => {
            let fault =
                Fault::new(range, format!("{name} cannot be dropped")).help(fault.to_string());
            Err(line.problem(fault))
        }
        Err(fault) => Err(Problem::change(fault, &shell.session.theory().signature)),
    }
}

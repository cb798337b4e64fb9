//! `evaluate T in A2`

use super::{Command, Group, Operand};
use crate::language::{Fault, Question};
use crate::session::EvaluationFault;
use crate::shell::desk::Shell;
use crate::shell::layout::table;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::quantity::number;
use crate::shell::question;

/// The command.
pub const COMMAND: Command = Command {
    word: "evaluate",
    group: Group::Asking,
    forms: &[
        (
            "evaluate T in A2",
            "the values of a term in a known algebra",
        ),
        (
            "evaluate T in A2, x = 0, y = 1",
            "the same, for these values of the variables",
        ),
    ],
    page: "Variables without a value run through all elements, which are numbered from 0.",
    example: "open settings\nx ▷ y = y ▷ x\nevaluate x ▷ y in A1\nevaluate x ▷ y in A1, x = 0",
    operand: Operand::Terms,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    let (asked, mut rest) = question::read(shell, line)?;
    let Question::Term(term) = asked else {
        let fault = Fault::new(line.rest_range(), "evaluate takes a term")
            .label("an equation")
            .help("write evaluate T in A2");
        return Err(line.problem(fault));
    };
    if !rest.keyword("in") {
        let fault = Fault::new(rest.rest_range(), "the algebra is missing")
            .label("in and the number of an algebra are expected")
            .help("write evaluate T in A2; algebras lists them");
        return Err(rest.problem(fault));
    }
    let tail = rest.rest_range();
    let (name, given) = read(&rest)?;
    let values = shell.session.evaluate(term, name, &given);
    let values = values.map_err(|fault| {
        let (message, help) = match fault {
            EvaluationFault::NoAlgebra => (
                format!("there is no algebra A{name}"),
                "algebras lists them".to_owned(),
            ),
            EvaluationFault::NoVariable(variable) => (
                format!("{variable} does not occur in the term"),
                "leave it out".to_owned(),
            ),
            EvaluationFault::NoElement(variable, size) => (
                format!("{variable} has no such value"),
                format!("its values are 0 to {}", size - 1),
            ),
        };
        rest.problem(Fault::new(tail.clone(), message).label("here").help(help))
    })?;
    let look = shell.look();
    let row = |(choice, value): &(Vec<u32>, u32)| {
        let choice: Vec<String> = (values.variables.iter().zip(choice))
            .map(|(variable, value)| format!("{variable} = {value}"))
            .collect();
        vec![choice.join(", "), value.to_string()]
    };
    if values.variables.is_empty() {
        shell.out(&format!("{}\n", values.rows[0].1));
        return Ok(());
    }
    let rows: Vec<_> = values.rows.iter().map(row).collect();
    shell.out(&table(&rows, look));
    if values.missing > 0 {
        let missing = number(u128::from(values.missing));
        shell.out(&format!("… {missing} more; give some variables a value\n"));
    }
    Ok(())
}

/// Reads `A2, x = 0, y = 1`.
fn read(line: &Line<'_>) -> Result<(u32, Vec<(String, u32)>), Problem> {
    let wrong = || {
        let fault = Fault::new(line.rest_range(), "this is not an algebra with values")
            .label("expected: A2, or A2, x = 0, y = 1")
            .help("algebras lists the algebras");
        line.problem(fault)
    };
    let mut parts = line.rest().split(',');
    let name = parts.next().unwrap_or_default().trim();
    let number = name
        .strip_prefix(['A', 'a'])
        .and_then(|number| number.parse().ok());
    let given = parts.map(|part| {
        let (variable, value) = part.split_once('=')?;
        let variable = variable.trim().trim_matches('"').to_owned();
        Some((variable, value.trim().parse().ok()?))
    });
    let given: Option<Vec<_>> = given.collect();
    number.zip(given).ok_or_else(wrong)
}

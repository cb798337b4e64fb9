//! The claims of theories.

use super::{keep, open_quietly, unfinished};
use crate::session::ClaimResult;
use crate::shell::arguments::Options;
use crate::shell::desk::Shell;
use crate::shell::evidence::Folder;
use crate::shell::json::{self, Kept};
use crate::shell::{show, status};

/// Asks every claim of the theories; gives the exit status.
pub fn check(
    shell: &mut Shell,
    files: &[String],
    options: Options,
    folder: &mut Option<Folder>,
) -> u8 {
    let mut worst = status::FINE;
    for file in files {
        shell.status = status::FINE;
        let status = check_one(shell, file, files.len() > 1, options, folder);
        worst = status::worse(worst, status);
        if shell.interrupted || shell.screen.broken().is_some() {
            break;
        }
    }
    worst
}

fn check_one(
    shell: &mut Shell,
    file: &str,
    is_one_of_many: bool,
    options: Options,
    folder: &mut Option<Folder>,
) -> u8 {
    if let Err(status) = open_quietly(shell, file, options) {
        return status;
    }
    if is_one_of_many && options.json.is_none() {
        shell.out(&format!("{file}\n"));
    }
    let within = options.within.unwrap_or(shell.session.budgets().check);
    let claims = shell.session.theory().claims.len();
    let results = shell.work(|session, control| session.check(within, control, &mut |_| {}));
    let results = match results {
        Ok(results) => results,
        Err(fault) => return unfinished(shell, file, options, fault),
    };
    let look = shell.look();
    let paths: Vec<Option<String>> = results
        .iter()
        .map(|result| {
            let number = result.number.to_string();
            let about = result.name.as_deref().unwrap_or(&number);
            let evidence = result.answer.evidence.as_ref();
            keep(shell, folder, (file, about), evidence)
        })
        .collect();
    let text = if let Some(form) = options.json {
        let line = |(result, path): (&ClaimResult, Option<String>)| {
            let kept = Kept::new(form, result.answer.evidence.as_ref(), path);
            format!("{}\n", json::claim(file, result, kept))
        };
        results.iter().zip(paths).map(line).collect()
    } else if claims == 0 {
        "no claims\n".to_owned()
    } else {
        show::claims(&results, &shell.session, look, Some(file))
            + &show::claims_summary(&results, look)
            + &show::claims_left(results.len(), claims, look)
    };
    shell.out(&text);
    for (fault, evidence) in results
        .iter()
        .filter_map(|result| result.answer.fault.as_ref())
    {
        shell.report_fault(fault, evidence);
    }
    let all_done = results.len() == claims;
    let left = if all_done {
        status::FINE
    } else {
        status::UNDECIDED
    };
    let of = |result: &ClaimResult| match result.is_as_claimed() {
        Some(true) => status::FINE,
        Some(false) => status::NOT,
        None => status::UNDECIDED,
    };
    let status = results.iter().map(of).fold(left, status::worse);
    status::worse(shell.status, status)
}

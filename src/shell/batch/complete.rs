//! One completion.

use super::{evidence_in, keep, open_quietly, unfinished};
use crate::shell::arguments::Options;
use crate::shell::desk::Shell;
use crate::shell::evidence::Folder;
use crate::shell::json::{self, Kept};
use crate::shell::layout::fold;
use crate::shell::{show, status};

/// Completes, and prints the rules where they are complete, or with `all`; gives the exit status.
pub fn complete(
    shell: &mut Shell,
    file: &str,
    all: bool,
    options: Options,
    folder: &mut Option<Folder>,
) -> u8 {
    if let Err(status) = open_quietly(shell, file, options) {
        return status;
    }
    let within = options.within.or(shell.session.budgets().complete);
    let done = shell.work(|session, control| session.complete(within, control));
    let done = match done {
        Ok(done) => done,
        Err(fault) => return unfinished(shell, file, options, fault),
    };
    let path = keep(shell, folder, (file, "complete"), done.evidence.as_ref());
    let text = if let Some(form) = options.json {
        let kept = Kept::new(form, done.evidence.as_ref(), path);
        format!("{}\n", json::complete(file, &shell.session, &done, kept))
    } else {
        let mut text = show::completion(&done, shell.look(), show::Place::Batch);
        if done.complete || all {
            for rule in shell.session.rules() {
                text += &format!("{}\n", rule.text);
            }
        } else if done.rules > 0 {
            text += &fold("--all prints the rules all the same", shell.look().width, 4);
        }
        text + &evidence_in(path)
    };
    shell.out(&text);
    if let Some((fault, evidence)) = &done.fault {
        shell.report_fault(fault, evidence);
        return shell.status;
    }
    let status = if done.complete {
        status::FINE
    } else {
        status::UNDECIDED
    };
    status::worse(shell.status, status)
}

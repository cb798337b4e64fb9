//! One normal form.

use super::{about, open_quietly, question, refuse, unfinished};
use crate::language::Question;
use crate::shell::arguments::Options;
use crate::shell::desk::Shell;
use crate::shell::{json, status};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, mpsc};
use std::time::Duration;

/// Rewrites a term; gives the exit status.
pub fn normal(shell: &mut Shell, file: &str, text: &str, options: Options) -> u8 {
    if let Err(status) = open_quietly(shell, file, options) {
        return status;
    }
    let term = match question(shell, text) {
        Err(problem) => return refuse(shell, file, options, problem),
        Ok(Question::Term(term)) => term,
        Ok(_) => {
            let help = "write a term, or use ask for an equation";
            let problem = about(text, "this is an equation, not a term", help);
            return refuse(shell, file, options, problem);
        }
    };
    // The laws alone may not rewrite far; a short completion costs little beside a new process.
    let within = options.within.unwrap_or(shell.session.budgets().ask);
    if shell.session.status().rules == 0 {
        let done = shell.work(|session, control| session.complete(Some(within), control));
        if let Err(fault) = done {
            return unfinished(shell, file, options, fault);
        }
    }
    let timer = options
        .within
        .map(|within| Timer::start(within, shell.signals.stop()));
    let found = shell.work(|session, control| session.normal(term, control));
    drop(timer);
    let found = match found {
        Ok(found) => found,
        Err(fault) => return unfinished(shell, file, options, fault),
    };
    if options.json.is_some() {
        shell.out(&format!("{}\n", json::normal(file, &found)));
    } else {
        shell.out(&format!("{}\n", found.text));
    }
    if found.stopped.is_some() {
        shell.remark("Rewriting was stopped; this is how far it came.");
        return status::UNDECIDED;
    }
    if !found.complete && options.json.is_none() {
        shell.remark(
            "Note: the rules are not complete, so an equal term may have another normal form.",
        );
    }
    status::FINE
}

/// Sets a flag after a time, unless it is let go before.
struct Timer {
    _ends_when_dropped: mpsc::Sender<()>,
}

impl Timer {
    fn start(time: Duration, stop: Arc<AtomicBool>) -> Timer {
        let (sender, receiver) = mpsc::channel::<()>();
        std::thread::spawn(move || {
            if receiver.recv_timeout(time) == Err(mpsc::RecvTimeoutError::Timeout) {
                stop.store(true, Ordering::Relaxed);
            }
        });
        Timer {
            _ends_when_dropped: sender,
        }
    }
}

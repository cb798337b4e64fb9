//! `equable verify`: the checkers on files alone, without the engine.

use super::desk::Shell;
use super::problem::Problem;
use super::{places, quantity, status};
use crate::proof::{self, Evidence, Outcome, TermIndex, WorkLimit};
use crate::session::{Session, is_of_theory};
use crate::theory::Theory;
use serde_json::{Value, json};
use std::fs::File;
use std::io::Read;
use std::path::Path;
use std::sync::Arc;
use std::sync::atomic::AtomicBool;
use std::time::Instant;

/// Checks every file, each by itself, and gives the exit status: the worst of 0 accepted, 2 too
/// costly to check, 1 rejected, 3 unreadable.
pub fn run(shell: &mut Shell, files: &[String], theory: Option<&str>, as_json: bool) -> u8 {
    let theory = match theory.map(|name| places::open(name, shell.session.library().clone())) {
        None => None,
        Some(Ok(opened)) => Some(opened.session),
        Some(Err(fault)) => {
            shell.tell(Problem::open(fault));
            return shell.status;
        }
    };
    let theory = theory.as_ref().map(Session::theory);
    let mut worst = status::FINE;
    for (number, file) in files.iter().enumerate() {
        let begun = Instant::now();
        let checked = shell.work(|_, control| check(file, theory, &control.stop));
        if shell.interrupted {
            shell.remark(&format!(
                "Stopped by Ctrl-C: {} not checked.",
                quantity::count(files.len() - number, "file")
            ));
            return status::worse(worst, status::INTERRUPTED);
        }
        let checked = match checked {
            Ok(checked) => checked,
            Err(error) => {
                shell.tell(Problem::system("read", Path::new(file), &error));
                worst = status::worse(worst, status::INPUT);
                continue;
            }
        };
        worst = status::worse(worst, checked.status());
        let text = if as_json {
            format!("{}\n", checked.json(file, begun.elapsed().as_secs_f64()))
        } else {
            checked.text(file)
        };
        shell.out(&text);
        if shell.screen.broken().is_some() {
            break;
        }
    }
    worst
}

/// What became of a file.
struct Checked {
    outcome: Outcome,
    kind: Option<&'static str>,
    /// The sides of the claim.
    claim: Option<[String; 2]>,
}

fn check(file: &str, theory: Option<&Theory>, stop: &Arc<AtomicBool>) -> std::io::Result<Checked> {
    let limit = WorkLimit::default();
    let unread = |outcome| Checked {
        outcome,
        kind: None,
        claim: None,
    };
    let Some(bytes) = read(Path::new(file), limit.0)? else {
        return Ok(unread(Outcome::TooCostly));
    };
    let read = proof::read_json(&bytes, limit);
    // The checkers need the room.
    drop(bytes);
    let (evidence, left) = match read {
        Ok(read) => read,
        Err(outcome) => return Ok(unread(outcome)),
    };
    let terms = evidence.terms();
    let text = |term: TermIndex| terms.show(term);
    let claim = evidence.claim().map(|(s, t)| [text(s), text(t)]);
    let kind = Some(match evidence {
        Evidence::Proof(_) => "proof",
        Evidence::Algebra(_) => "algebra",
        Evidence::Complete(_) => "complete",
    });
    let outcome = match theory.map(|theory| is_of_theory(theory, &evidence)) {
        Some(Err(reason)) => Outcome::Rejected {
            place: "laws".to_owned(),
            reason: format!("this is not about the theory: {reason}"),
        },
        _ => proof::check_until(&evidence, left, Arc::clone(stop)),
    };
    Ok(Checked {
        outcome,
        kind,
        claim,
    })
}

/// The bytes of a file; nothing if there are more than `most`.
fn read(path: &Path, most: u64) -> std::io::Result<Option<Vec<u8>>> {
    let file = File::open(path)?;
    let known = file.metadata()?;
    if known.is_dir() {
        return Err(std::io::Error::from(std::io::ErrorKind::IsADirectory));
    }
    if known.len() > most {
        return Ok(None);
    }
    let mut bytes = Vec::with_capacity(known.len() as usize + 1);
    // What is no file has no length beforehand, and perhaps no end.
    file.take(most + 1).read_to_end(&mut bytes)?;
    Ok((bytes.len() as u64 <= most).then_some(bytes))
}

impl Checked {
    fn status(&self) -> u8 {
        match self.outcome {
            Outcome::Accepted => status::FINE,
            Outcome::Rejected { .. } => status::NOT,
            Outcome::TooCostly => status::UNDECIDED,
        }
    }

    /// One line.
    fn text(&self, file: &str) -> String {
        let text = match &self.outcome {
            Outcome::Accepted => match (self.kind, &self.claim) {
                (Some("proof"), Some([s, t])) => format!("accepted: proof of {s} = {t}"),
                (Some("algebra"), Some([s, t])) => format!("accepted: algebra with {s} != {t}"),
                (_, Some([s, t])) => format!("accepted: complete rules, {s} != {t}"),
                (_, None) => "accepted: complete rules".to_owned(),
            },
            Outcome::Rejected { place, reason } => {
                format!("rejected at {}: {}", shown(place), shown(reason))
            }
            Outcome::TooCostly => "too costly to check".to_owned(),
        };
        format!("{}: {text}\n", shown(file))
    }

    fn json(&self, file: &str, seconds: f64) -> Value {
        let (outcome, place, reason) = match &self.outcome {
            Outcome::Accepted => ("accepted", None, None),
            Outcome::Rejected { place, reason } => ("rejected", Some(place), Some(reason)),
            Outcome::TooCostly => ("too costly to check", None, None),
        };
        json!({
            "file": file,
            "outcome": outcome,
            "kind": self.kind,
            "claim": self.claim,
            "place": place.map(|place| shown(place)),
            "reason": reason.map(|reason| shown(reason)),
            "seconds": (seconds * 1e6).round() / 1e6,
        })
    }
}

/// Text from a file that nobody vouches for: nothing that moves the cursor, and cut when long.
fn shown(text: &str) -> String {
    const LONGEST: usize = 300;
    let mut made = String::new();
    for c in text.chars() {
        if made.len() > LONGEST {
            made.push('…');
            break;
        }
        if c.is_control() {
            made.extend(c.escape_default());
        } else {
            made.push(c);
        }
    }
    made
}

//! `equable verify`: the checkers on files alone, without the engine.

use super::desk::Shell;
use super::problem::Problem;
use super::{json, places, quantity, status};
use crate::proof::{self, Evidence, Name, Outcome, TermIndex, WorkLimit};
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
                let problem = Problem::system("read", Path::new(file), &error);
                if as_json {
                    shell.out(&format!("{}\n", json::refused(file, &problem)));
                }
                shell.tell(problem);
                worst = status::worse(worst, status::INPUT);
                continue;
            }
        };
        worst = status::worse(worst, checked.status());
        let text = if as_json {
            format!("{}\n", checked.json(file, begun.elapsed().as_secs_f64()))
        } else {
            checked.text(file, theory.is_some())
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
    /// The variables for all values of which the sides differ.
    unknowns: Vec<String>,
    /// The names of the laws in the file.
    laws: Vec<String>,
}

fn check(file: &str, theory: Option<&Theory>, stop: &Arc<AtomicBool>) -> std::io::Result<Checked> {
    let limit = WorkLimit::default();
    let unread = |outcome| Checked {
        outcome,
        kind: None,
        claim: None,
        unknowns: Vec::new(),
        laws: Vec::new(),
    };
    let Some(bytes) = read(file, limit.0)? else {
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
    let name = |name: &Name| terms.text(*name).to_owned();
    let unknowns = match &evidence {
        Evidence::Algebra(algebra) => algebra.claim.unknowns.iter().map(name).collect(),
        _ => Vec::new(),
    };
    let laws = evidence.laws().iter().map(|law| name(&law.name)).collect();
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
        unknowns,
        laws,
    })
}

/// The bytes of a file, or of standard input for `-`; nothing if there are more than `most`.
fn read(name: &str, most: u64) -> std::io::Result<Option<Vec<u8>>> {
    if name == "-" {
        let mut bytes = Vec::new();
        let input = std::io::stdin().lock();
        input.take(most + 1).read_to_end(&mut bytes)?;
        return Ok((bytes.len() as u64 <= most).then_some(bytes));
    }
    let file = File::open(name)?;
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
    fn text(&self, file: &str, is_compared: bool) -> String {
        let text = match &self.outcome {
            Outcome::Accepted => {
                let mut text = self.accepted();
                if !is_compared {
                    text += &self.resting();
                }
                text
            }
            Outcome::Rejected { place, reason } => {
                format!("rejected at {}: {}", self.place(place), shown(reason))
            }
            Outcome::TooCostly => "too costly to check".to_owned(),
        };
        format!("{}: {text}\n", shown(file))
    }

    /// What was accepted.
    fn accepted(&self) -> String {
        match (self.kind, &self.claim) {
            (Some("proof"), Some([s, t])) => format!("accepted: proof of {s} = {t}"),
            (Some("algebra"), Some([s, t])) if self.unknowns.is_empty() => {
                format!("accepted: algebra with {s} != {t}")
            }
            (Some("algebra"), Some([s, t])) => {
                let unknowns = shown(&self.unknowns.join(", "));
                format!("accepted: algebra with {s} != {t} for all {unknowns}")
            }
            (_, Some([s, t])) => format!("accepted: complete rules, {s} != {t}"),
            (_, None) => "accepted: complete rules".to_owned(),
        }
    }

    /// That the laws were not compared with those of anybody.
    fn resting(&self) -> String {
        match self.laws.len() {
            0 => " (without any law)".to_owned(),
            1 => " (by the 1 law in the file; --theory FILE compares it with a theory)".to_owned(),
            laws => format!(
                " (by the {} laws in the file; --theory FILE compares them with a theory)",
                quantity::number(laws as u128)
            ),
        }
    }

    /// A place in the file; a law has its name behind its number.
    fn place(&self, place: &str) -> String {
        let number = place.strip_prefix("laws[").and_then(|rest| {
            let (number, _) = rest.split_once(']')?;
            number.parse::<usize>().ok()
        });
        match number.and_then(|number| self.laws.get(number)) {
            Some(name) => shown(&format!("{place} ({name})")),
            None => shown(place),
        }
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
            "unknowns": self.unknowns,
            "laws": self.laws.len(),
            "place": place.map(|place| self.place(place)),
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

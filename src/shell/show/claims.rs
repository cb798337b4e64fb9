//! What became of the claims of a theory.

use super::Place;
use super::answer::ink;
use crate::language::quote_law;
use crate::session::{ClaimResult, Session, Verdict};
use crate::shell::layout::{columns, cut, fold, fold_hanging, pad};
use crate::shell::problem::stop_text;
use crate::shell::quantity::{count, number, show_duration};
use crate::shell::screen::{Ink, Look};

/// One line for each claim: whether it is as claimed, the answer, the claim, how long it took; and
/// why, where it is not as claimed. `file` is the theory's on the command line.
pub fn claims(
    results: &[ClaimResult],
    session: &Session,
    look: Look,
    file: Option<&str>,
) -> String {
    let place = match file {
        Some(_) => Place::Batch,
        None => Place::Shell,
    };
    let labels: Vec<String> = results.iter().map(label).collect();
    let most = look.width.saturating_sub(TEXT + 24);
    let fitting = labels
        .iter()
        .map(|label| columns(label))
        .filter(|width| *width <= most);
    let column = fitting.max().unwrap_or(0);
    let lines = results.iter().zip(&labels);
    lines
        .map(|(result, label)| {
            let mut text = line(result, label, column, look, place);
            if result.is_as_claimed() == Some(false) {
                text += &because(result, session, look, file);
            }
            text
        })
        .collect()
}

/// Why a claim is not as claimed, and what shows the whole evidence.
fn because(result: &ClaimResult, session: &Session, look: Look, file: Option<&str>) -> String {
    let answer = &result.answer;
    let reason = super::answer::reason(answer, session);
    let lead = TEXT.min(look.width / 4);
    let room = look.width.saturating_sub(lead).max(8);
    let indent = " ".repeat(lead);
    let mut text = reason.map_or_else(String::new, |reason| {
        format!("{indent}{}\n", cut(&reason, room))
    });
    match file {
        None => {
            text += &fold(
                &format!("proof {} shows more", answer.number),
                look.width,
                lead,
            )
        }
        // A line to be copied is not broken, and is left out where it would be too long for that.
        Some(file) if columns(&answer.question) <= LONGEST => {
            let (file, question) = (shell_word(file), shell_word(&answer.question));
            text += &format!("{indent}equable ask {file} {question}\n");
        }
        Some(_) => {}
    }
    text
}

/// A question with more columns is not put into a line to be copied.
const LONGEST: usize = 400;

/// A text as one word of a command line.
fn shell_word(text: &str) -> String {
    let is_harmless = |c: char| c.is_alphanumeric() || "_-./:+".contains(c);
    if !text.is_empty() && !text.starts_with('-') && text.chars().all(is_harmless) {
        return text.to_owned();
    }
    format!("'{}'", text.replace('\'', "'\\''"))
}

/// Where the text of a claim begins.
const TEXT: usize = 13;

fn line(result: &ClaimResult, label: &str, column: usize, look: Look, place: Place) -> String {
    let answer = &result.answer;
    let verdict = answer.verdict.text();
    let facts = facts(result, place);
    let gap = " ".repeat(TEXT - columns(verdict));
    let verdict = format!("{}{gap}", look.ink(ink(answer.verdict), verdict));
    let facts = if result.is_as_claimed() == Some(false) {
        look.ink(Ink::Other, &facts)
    } else {
        look.ink(Ink::Quiet, &facts)
    };
    if TEXT + column.max(columns(label)) + 3 + columns(&self::facts(result, place)) <= look.width {
        return format!("{verdict}{}   {facts}\n", pad(label, column));
    }
    let label = fold_hanging(label, look.width, TEXT, TEXT);
    let label = label.trim_start();
    let facts_text = fold(&self::facts(result, place), look.width, TEXT);
    format!("{verdict}{label}{facts_text}")
}

fn label(result: &ClaimResult) -> String {
    match &result.name {
        Some(name) => format!("{}: {}", quote_law(name), result.text),
        None => result.text.clone(),
    }
}

fn facts(result: &ClaimResult, place: Place) -> String {
    let mut facts = Vec::new();
    match result.is_as_claimed() {
        Some(true) => facts.push("as claimed".to_owned()),
        Some(false) => facts.push("NOT as claimed".to_owned()),
        None => {
            let stopped = result.answer.frontier.as_ref().and_then(|f| f.stopped);
            facts.extend(stopped.map(|stopped| stop_text(stopped).to_owned()));
        }
    }
    if place == Place::Shell {
        facts.push(format!("answer {}", number(result.answer.number)));
    }
    facts.push(show_duration(result.answer.elapsed));
    facts.join(" · ")
}

/// How many are as claimed.
pub fn claims_summary(results: &[ClaimResult], look: Look) -> String {
    let of = |wanted: Option<bool>| {
        let matching = results
            .iter()
            .filter(|result| result.is_as_claimed() == wanted);
        matching.count()
    };
    let (good, bad) = (of(Some(true)), of(Some(false)));
    let undecided = results
        .iter()
        .filter(|result| result.answer.verdict == Verdict::Undecided)
        .count();
    let mut parts = vec![format!(
        "{}: {} as claimed",
        count(results.len(), "claim"),
        number(good as u128)
    )];
    if bad > 0 {
        parts.push(format!("{} not as claimed", number(bad as u128)));
    }
    if undecided > 0 {
        parts.push(format!("{} undecided", number(undecided as u128)));
    }
    fold(&parts.join(", "), look.width, 0)
}

/// That some were not looked at, if that is so.
pub fn claims_left(done: usize, all: usize, look: Look) -> String {
    if done >= all {
        return String::new();
    }
    let text = format!(
        "stopped by Ctrl-C; {} not looked at",
        count(all - done, "claim")
    );
    fold(&text, look.width, 0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn words_of_a_command_line_are_quoted() {
        assert_eq!(shell_word("theories/group.theory"), "theories/group.theory");
        assert_eq!(shell_word("x * y = y"), "'x * y = y'");
        assert_eq!(shell_word("x' = x"), "'x'\\'' = x'");
        assert_eq!(shell_word("-x"), "'-x'");
        assert_eq!(shell_word(""), "''");
    }
}

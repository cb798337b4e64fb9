//! Answers and normal forms.

use super::proof::{LONGEST_CHAIN, chain};
use crate::session::{
    AlgebraText, Answer, By, FoundAlgebra, Frontier, NormalForm, ProgramFault, ProofHead, Session,
    Verdict,
};
use crate::shell::layout::{Breaker, columns, fold, fold_hanging, hang, heading};
use crate::shell::problem::{OWN_FAULT, stop_text};
use crate::shell::quantity::{count, number, show_duration};
use crate::shell::screen::{Ink, Look};
use std::path::Path;

/// Where an answer is shown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Place {
    /// In the shell, where it can be come back to by its number.
    Shell,
    /// For a batch command.
    Batch,
}

/// The colour of a verdict.
pub fn ink(verdict: Verdict) -> Ink {
    match verdict {
        Verdict::Equal => Ink::Good,
        Verdict::NotEqual => Ink::Other,
        Verdict::Undecided => Ink::Open,
    }
}

/// An answer with as much of its evidence as is quickly read.
pub fn answer(answer: &Answer, session: &Session, look: Look, place: Place) -> String {
    answer_again(answer, session, look, place, false)
}

/// The same, where the tables of its algebra may have been printed before.
pub fn answer_again(
    answer: &Answer,
    session: &Session,
    look: Look,
    place: Place,
    is_printed: bool,
) -> String {
    let mut facts = Vec::new();
    if place == Place::Shell {
        facts.push(format!("answer {}", number(answer.number)));
    }
    match answer.verdict {
        Verdict::Equal => facts.push("proof checked".to_owned()),
        Verdict::NotEqual => facts.push(match answer.algebra {
            None => "rules complete, checked".to_owned(),
            Some(FoundAlgebra { number, smallest }) => {
                let what = if smallest {
                    "smallest algebra"
                } else {
                    "algebra"
                };
                format!("{what} A{number}, checked")
            }
        }),
        Verdict::Undecided => {
            let stopped = answer.frontier.as_ref().and_then(|f| f.stopped);
            facts.extend(stopped.map(|stopped| stop_text(stopped).to_owned()));
        }
    }
    facts.push(show_duration(answer.elapsed));
    let mut text = heading(look, ink(answer.verdict), answer.verdict.text(), &facts);
    match answer.verdict {
        Verdict::Equal => {
            text += &values(answer, session, look);
            if let Some(proof) = session.proof_head(answer, LONGEST_CHAIN) {
                text += &short_proof(&proof, answer, session, look, place);
            }
        }
        Verdict::NotEqual => {
            if let Some(normal) = &answer.normal {
                text += &normal_forms(normal, session, look);
            }
            if let Some(found) = session.algebra_text(answer) {
                let number = answer.algebra.map_or(0, |algebra| algebra.number);
                text += &super::algebra::text(&found, number, is_printed, look);
                if place == Place::Shell {
                    text += &smaller(answer, &found, look);
                }
            }
        }
        Verdict::Undecided => {
            if let Some(frontier) = &answer.frontier {
                text += &self::frontier(frontier, look, place);
            }
            if place == Place::Batch {
                let longer = (answer.elapsed.as_secs() * 10).max(60);
                let next = format!("next: the same with --within {longer}s");
                text += &fold_hanging(&next, look.width, 4, 10);
            }
        }
    }
    text
}

/// An algebra that was there before the question need not be the smallest that does: how to look
/// for a smaller one.
fn smaller(answer: &Answer, found: &AlgebraText, look: Look) -> String {
    let is_smallest = answer.algebra.is_some_and(|algebra| algebra.smallest);
    let total: u32 = found.sizes.iter().map(|(_, size)| size).sum();
    let least = found.sizes.len() as u32;
    let is_long = columns(&answer.question) > 60;
    if is_smallest || answer.by != Some(By::KnownAlgebra) || total <= least + 1 {
        return String::new();
    }
    let mut text = fold("it was known before; a smaller one may do", look.width, 4);
    // With unknowns or a long question the line would not be typed.
    if !is_long && found.unknowns.is_empty() {
        let next = format!("next: separate {}, at most {}", answer.question, total - 1);
        text += &fold_hanging(&next, look.width, 4, 10);
    }
    text
}

/// Why an answer is as it is, in one line; nothing where there is nothing to say.
pub fn reason(answer: &Answer, session: &Session) -> Option<String> {
    if let Some(found) = session.algebra_text(answer) {
        let number = answer.algebra.map_or(0, |algebra| algebra.number);
        let total: u32 = found.sizes.iter().map(|(_, size)| size).sum();
        let elements = count(total as usize, "element");
        let deciding = super::algebra::deciding(&found);
        return Some(format!("{deciding} (A{number}, {elements})"));
    }
    if let Some([left, right]) = &answer.normal {
        return Some(format!("different normal forms {left} and {right}"));
    }
    let head = session.proof_head(answer, 1)?;
    let mut text = String::new();
    for (unknown, value) in &answer.values {
        text += &format!("{unknown} = {value}, ");
    }
    if head.more == 0 {
        return Some(text + "the two sides are the same term");
    }
    text += &format!("proved in {}", count(head.more, "step"));
    if head.lemmas > 0 {
        text += &format!(" by {}", count(head.lemmas, "lemma"));
    }
    Some(text)
}

/// The values that were found for unknowns, one line each.
fn values(answer: &Answer, session: &Session, look: Look) -> String {
    let breaker = Breaker::new(&session.theory().signature);
    let line = |(unknown, value): &(String, String)| {
        hang(&format!("    {unknown} = "), value, look.width, breaker)
    };
    answer.values.iter().map(line).collect()
}

fn short_proof(
    proof: &ProofHead,
    answer: &Answer,
    session: &Session,
    look: Look,
    place: Place,
) -> String {
    let breaker = Breaker::new(&session.theory().signature);
    let mut text = chain(&proof.lines, look, breaker);
    let all = match place {
        Place::Shell => format!("proof {} shows all", answer.number),
        Place::Batch => "the shell shows all".to_owned(),
    };
    if proof.more > 0 {
        let more = match proof.more {
            1 => format!("… 1 more step; {all}"),
            more => format!("… {} more steps; {all}", number(more as u128)),
        };
        text += &fold(&more, look.width, 4);
    }
    if proof.lemmas > 0 {
        let mut lemmas = format!(
            "resting on {} of {}",
            count(proof.lemmas, "lemma"),
            count(proof.lemma_steps, "step")
        );
        if proof.more == 0 {
            lemmas += &format!("; {all}");
        }
        text += &fold(&lemmas, look.width, 4);
    }
    text
}

/// The two normal forms that differ.
pub fn normal_forms(normal: &[String; 2], session: &Session, look: Look) -> String {
    let breaker = Breaker::new(&session.theory().signature);
    let mut text = fold("the two sides have different normal forms", look.width, 4);
    for (side, form) in ["left", "right"].iter().zip(normal) {
        text += &hang(&format!("    {side:<8}"), form, look.width, breaker);
    }
    text
}

fn frontier(frontier: &Frontier, look: Look, place: Place) -> String {
    let mut text = String::new();
    if frontier.orders > 0 {
        text += &fold(&searched(frontier), look.width, 4);
    }
    if let Some(ruled_out) = frontier.ruled_out {
        let mut none = match ruled_out {
            0 => "no algebra found yet, and no size ruled out".to_owned(),
            1 => "no algebra with 1 element tells the sides apart".to_owned(),
            most => format!("no algebra with up to {most} elements tells the sides apart"),
        };
        if frontier.given_up {
            none += "; some larger sizes need too much memory";
        }
        text += &fold(&none, look.width, 4);
    }
    if let Some(remark) = &frontier.remark {
        text += &fold(remark, look.width, 4);
    }
    if place == Place::Shell && !frontier.next.is_empty() {
        let next = format!("next: {}", frontier.next.join(", or "));
        text += &fold_hanging(&next, look.width, 4, 10);
    }
    text
}

/// How far the search for a proof came.
fn searched(frontier: &Frontier) -> String {
    let mut done = format!(
        "{} from {}",
        count(frontier.rules, "rule"),
        count(
            usize::try_from(frontier.pairs).unwrap_or(usize::MAX),
            "pair"
        )
    );
    if frontier.orders > 1 {
        done += &format!(", the best of {} orders", number(frontier.orders as u128));
    }
    done += &match frontier.waiting {
        0 => "; no pair waits".to_owned(),
        1 => "; 1 pair waits".to_owned(),
        waiting => format!("; {} pairs wait", number(waiting as u128)),
    };
    done
}

/// A normal form, with how it came about beside it where there is room.
pub fn normal(found: &NormalForm, session: &Session, look: Look) -> String {
    let mut facts = Vec::new();
    if let Some(steps) = found.steps {
        let checked = if found.checked && steps > 0 {
            ", checked"
        } else {
            ""
        };
        facts.push(count(steps, "step") + checked);
    }
    facts.push(match (found.stopped, found.complete) {
        (Some(stopped), _) => stop_text(stopped).to_owned(),
        (None, true) => "rules complete".to_owned(),
        (None, false) => "rules not complete".to_owned(),
    });
    facts.push(show_duration(found.elapsed));
    let facts = facts.join(" · ");
    let breaker = Breaker::new(&session.theory().signature);
    let pieces = breaker.pieces(&found.text, look.width, look.width.saturating_sub(2));
    let mut text = String::with_capacity(found.text.len() + 80);
    let mut last = 0;
    for (place, piece) in pieces.into_iter().enumerate() {
        if place > 0 {
            text += "\n  ";
        }
        last = columns(&found.text[piece.clone()]) + if place > 0 { 2 } else { 0 };
        text += &found.text[piece];
    }
    if last + 8 + columns(&facts) <= look.width {
        text += &format!("        {}\n", look.ink(Ink::Quiet, &facts));
    } else {
        text.push('\n');
        for line in fold(&facts, look.width, 4).lines() {
            text += &format!("{}\n", look.ink(Ink::Quiet, line));
        }
    }
    if found.stopped.is_some() {
        text += &fold("the term stands as it was typed", look.width, 4);
    }
    text
}

/// Evidence of this program that its own checker rejected.
pub fn program_fault(fault: &ProgramFault, kept: Option<&Path>, look: Look) -> String {
    let mut text = fold(OWN_FAULT, look.width, 0);
    let what = format!(
        "The checker rejected the evidence: {}, at {}. So nothing was answered from it.",
        fault.reason, fault.place
    );
    text += &fold(&what, look.width, 0);
    text += &match kept {
        Some(path) => fold(
            &format!("The evidence is kept in {}", path.display()),
            look.width,
            0,
        ),
        None => fold(
            "The evidence could not be kept in a temporary file.",
            look.width,
            0,
        ),
    };
    text
}

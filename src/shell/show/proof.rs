//! Chains of equalities and proofs.

use crate::session::{LemmaText, ProofLine, ProofText};
use crate::shell::layout::{Breaker, columns, cut, fold};
use crate::shell::quantity::count;
use crate::shell::screen::{Ink, Look};
use std::ops::Range;

/// A chain of more lines than this is cut where an answer is shown.
pub const LONGEST_CHAIN: usize = 13;

/// How many steps a chain has.
pub fn steps(lines: &[ProofLine]) -> usize {
    lines.len().saturating_sub(1)
}

/// A chain: the terms below each other, with what each step cites in a column of its own if there
/// is room.
pub fn chain(lines: &[ProofLine], look: Look, breaker: Breaker<'_>) -> String {
    let cites: Vec<String> = lines.iter().map(cite).collect();
    let widest_cite = cites.iter().map(|cite| columns(cite)).max().unwrap_or(0);
    let room = look.width.saturating_sub(LEAD + GAP + widest_cite);
    let fitting = lines.iter().skip(1).map(|line| columns(&line.text));
    let column = fitting.filter(|width| *width <= room).max().unwrap_or(0);
    let mut text = String::new();
    for (place, (line, cite)) in lines.iter().zip(&cites).enumerate() {
        let lead = if place == 0 { "    " } else { "  = " };
        let width = columns(&line.text);
        let in_column = width <= column && LEAD + column + GAP + columns(cite) <= look.width;
        let (gap, cite) = if cite.is_empty() || in_column {
            (column.saturating_sub(width) + GAP, cite.clone())
        } else {
            // Outside of the column a name could be taken for a part of the term.
            (2, format!("by {cite}"))
        };
        text += lead;
        let last = put_term(&mut text, line, look, breaker);
        if cite.is_empty() {
            text.push('\n');
        } else if last + gap + columns(&cite) <= look.width {
            text += &format!("{}{}\n", " ".repeat(gap), look.ink(Ink::Quiet, &cite));
        } else {
            text.push('\n');
            for line in fold(&cite, look.width, 8).lines() {
                text += &format!("{}\n", look.ink(Ink::Quiet, line));
            }
        }
    }
    text
}

/// How far terms are indented.
const LEAD: usize = 4;
/// Between the terms and the column of what they cite.
const GAP: usize = 8;

/// Writes the term in lines that fit; gives the column behind it.
fn put_term(text: &mut String, line: &ProofLine, look: Look, breaker: Breaker<'_>) -> usize {
    let room = look.width.saturating_sub(LEAD);
    let mut last = LEAD;
    let pieces = breaker.pieces(&line.text, room, room.saturating_sub(2));
    for (place, piece) in pieces.into_iter().enumerate() {
        let indent = if place == 0 { 0 } else { LEAD + 2 };
        if place > 0 {
            text.push('\n');
            *text += &" ".repeat(indent);
        }
        last = indent.max(LEAD) + columns(&line.text[piece.clone()]);
        *text += &marked(&line.text, piece, line.changed.clone(), look);
    }
    last
}

/// A piece of a text, with the part of it that a step has changed marked.
fn marked(text: &str, piece: Range<usize>, changed: Option<Range<usize>>, look: Look) -> String {
    let Some(changed) = changed.filter(|_| look.color) else {
        return text[piece].to_owned();
    };
    let start = changed.start.clamp(piece.start, piece.end);
    let end = changed.end.clamp(start, piece.end);
    format!(
        "{}{}{}",
        &text[piece.start..start],
        look.ink(Ink::Changed, &text[start..end]),
        &text[end..piece.end]
    )
}

/// `base, right to left, at 1`
fn cite(line: &ProofLine) -> String {
    let mut cite = line.by.clone();
    if cite.is_empty() {
        return cite;
    }
    if line.backward {
        cite += ", right to left";
    }
    if !line.at.is_empty() {
        let place: Vec<String> = line.at.iter().map(u32::to_string).collect();
        cite += &format!(", at {}", place.join("."));
    }
    cite
}

/// A whole proof: every lemma with its chain, then the chain of what was asked.
pub fn proof(proof: &ProofText, question: &str, look: Look, breaker: Breaker<'_>) -> String {
    let mut text = String::new();
    for lemma in &proof.lemmas {
        text += &head(lemma, look, breaker);
        text += &chain(&lemma.lines, look, breaker);
        text.push('\n');
    }
    text += &look.ink(Ink::Strong, &broken(question, look, breaker));
    text.push('\n');
    text + &chain(&proof.lines, look, breaker)
}

/// The lemmas without their chains, and how long everything is: one line each.
pub fn proof_short(proof: &ProofText, question: &str, look: Look) -> String {
    let line = |name: &str, equation: &str, lines: &[ProofLine]| {
        let length = format!("   ({})", count(steps(lines), "step"));
        let room = look.width.saturating_sub(columns(name) + columns(&length));
        format!("{name}{}{length}\n", cut_equation(equation, room.max(12)))
    };
    let mut text = String::new();
    for lemma in &proof.lemmas {
        text += &line(&format!("{}: ", lemma.name), &lemma.equation, &lemma.lines);
    }
    text + &line("", question, &proof.lines)
}

/// An equation in so many columns: where it is longer, a side that needs more than half is cut.
fn cut_equation(equation: &str, room: usize) -> String {
    if columns(equation) <= room {
        return equation.to_owned();
    }
    let Some((left, right)) = equation.split_once(" = ") else {
        return cut(equation, room);
    };
    let room = room.saturating_sub(3);
    let half = room / 2;
    let first = room.saturating_sub(columns(right).min(half));
    let left = cut(left, first);
    let right = cut(right, room.saturating_sub(columns(&left)));
    format!("{left} = {right}")
}

fn head(lemma: &LemmaText, look: Look, breaker: Breaker<'_>) -> String {
    let line = format!("{}: {}", lemma.name, lemma.equation);
    format!("{}\n", look.ink(Ink::Strong, &broken(&line, look, breaker)))
}

/// An equation with what is said about it, in lines that fit, broken behind operators.
fn broken(text: &str, look: Look, breaker: Breaker<'_>) -> String {
    const INDENT: usize = 4;
    let pieces = breaker.pieces(text, look.width, look.width.saturating_sub(INDENT));
    let lines: Vec<&str> = pieces.into_iter().map(|piece| &text[piece]).collect();
    lines.join(&format!("\n{}", " ".repeat(INDENT)))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::theory::Signature;

    fn line(text: &str, by: &str, backward: bool, at: &[u32]) -> ProofLine {
        ProofLine {
            text: text.to_owned(),
            changed: Some(0..1),
            by: by.to_owned(),
            backward,
            at: at.to_vec(),
        }
    }

    #[test]
    fn laws_stand_in_a_column() {
        let signature = Signature::default();
        let lines = [
            line("x ▷ x", "", false, &[]),
            line("(factory ▷ x) ▷ x", "base", true, &[1]),
            line("x", "once", false, &[]),
        ];
        let shown = |width| {
            chain(
                &lines,
                Look {
                    color: false,
                    width,
                },
                Breaker::new(&signature),
            )
        };
        assert_eq!(
            shown(80),
            "    x ▷ x
  = (factory ▷ x) ▷ x        base, right to left, at 1
  = x                        once
"
        );
        assert_eq!(
            shown(30),
            "    x ▷ x
  = (factory ▷ x) ▷ x
        by base, right to
        left, at 1
  = x  by once
"
        );
        for width in 1..60 {
            shown(width);
        }
        let color = Look {
            color: true,
            width: 80,
        };
        let text = chain(&lines, color, Breaker::new(&signature));
        assert!(text.contains("\x1b[4mx\x1b[0m"), "{text:?}");
    }
    #[test]
    fn lemmas_in_short_take_one_line_each() {
        let lemma = |name: &str, equation: &str| LemmaText {
            name: name.to_owned(),
            equation: equation.to_owned(),
            lines: vec![line("x", "", false, &[]), line("x", "once", false, &[])],
        };
        let long = "f(x, y) ▷ ".repeat(300);
        let proof = ProofText {
            lemmas: vec![
                lemma("lemma 1", "x ▷ x = x"),
                lemma("lemma 2", &format!("{long}x = x")),
                lemma("lemma 3", &format!("x = {long}x")),
                lemma("lemma 4", &format!("{long}x = {long}y")),
            ],
            lines: vec![line("x", "", false, &[])],
        };
        let look = Look {
            color: false,
            width: 50,
        };
        let text = proof_short(&proof, "x = x", look);
        assert_eq!(
            text,
            "lemma 1: x ▷ x = x   (1 step)
lemma 2: f(x, y) ▷ f(x, y) ▷ f(x, … = x   (1 step)
lemma 3: x = f(x, y) ▷ f(x, y) ▷ f(x, …   (1 step)
lemma 4: f(x, y) ▷ f(x… = f(x, y) ▷ f(…   (1 step)
x = x   (0 steps)
"
        );
    }
}

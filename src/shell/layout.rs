//! Text in columns and lines. Widths are those of a terminal, not of bytes.

use super::screen::{Ink, Look};
use crate::language::visible;
use crate::theory::{Fixity, Signature};
use std::ops::Range;
use unicode_width::{UnicodeWidthChar, UnicodeWidthStr};

/// How many columns a text takes.
pub fn columns(text: &str) -> usize {
    text.width()
}

/// The text with blanks behind it up to so many columns.
pub fn pad(text: &str, width: usize) -> String {
    let missing = width.saturating_sub(columns(text));
    format!("{text}{}", " ".repeat(missing))
}

/// The text, cut to so many columns with `…` at the end if it is longer.
pub fn cut(text: &str, width: usize) -> String {
    if columns(text) <= width {
        return text.to_owned();
    }
    let mut kept = String::new();
    let mut used = 1;
    for c in text.chars() {
        used += c.width().unwrap_or(0);
        if used > width {
            break;
        }
        kept.push(c);
    }
    if width > 0 {
        kept.push('…');
    }
    kept
}

/// Prose in lines of `width`, each with the indent before it and a line end behind it.
pub fn fold(text: &str, width: usize, indent: usize) -> String {
    fold_hanging(text, width, indent, indent)
}

/// Prose in lines of `width`, the first with another indent than the rest.
pub fn fold_hanging(text: &str, width: usize, first: usize, rest: usize) -> String {
    let mut folded = String::new();
    for paragraph in text.lines() {
        let mut column = first.min(width / 2);
        folded += &" ".repeat(column);
        let start = folded.len();
        for word in words(paragraph) {
            let word = visible(word);
            let length = columns(&word);
            if folded.len() > start && column + 1 + length > width {
                folded.push('\n');
                column = rest.min(width / 2);
                folded += &" ".repeat(column);
            } else if folded.len() > start {
                folded.push(' ');
                column += 1;
            }
            folded += &word;
            column += length;
        }
        folded.push('\n');
    }
    folded
}

/// The words of a text; a number stays with the unit of time behind it.
fn words(text: &str) -> impl Iterator<Item = &str> {
    let mut rest = Some(text);
    std::iter::from_fn(move || {
        let text = rest?;
        let mut end = text.find(' ');
        if let Some(at) = end
            && text[..at].ends_with(|c: char| c.is_ascii_digit())
        {
            let next = &text[at + 1..];
            let length = next.find(' ').unwrap_or(next.len());
            let unit = next[..length].trim_end_matches([',', '.', ';', ')']);
            if matches!(unit, "ms" | "s" | "min" | "h") {
                end = (length < next.len()).then_some(at + 1 + length);
            }
        }
        rest = end.map(|at| &text[at + 1..]);
        Some(end.map_or(text, |at| &text[..at]))
    })
}

/// A term or an equation behind a lead, in lines that fit as far as there are places to break it;
/// the further lines are indented by as many columns as the lead takes.
pub fn hang(lead: &str, text: &str, width: usize, breaker: Breaker<'_>) -> String {
    let room = width.saturating_sub(columns(lead));
    let indent = " ".repeat(columns(lead));
    let mut made = String::new();
    for (place, piece) in breaker.pieces(text, room, room).into_iter().enumerate() {
        let before = if place == 0 { lead } else { &indent };
        made += &format!("{before}{}\n", &text[piece]);
    }
    made
}

/// Where the facts beside a verdict begin.
const FACTS: usize = 13;

/// A verdict or the like with facts beside it: on one line if that fits, else below each other.
pub fn heading(look: Look, ink: Ink, word: &str, facts: &[String]) -> String {
    let line = facts.join(" · ");
    let column = FACTS.max(columns(word) + 2);
    if line.is_empty() {
        return format!("{}\n", look.ink(ink, word));
    }
    if column + columns(&line) <= look.width {
        let gap = " ".repeat(column - columns(word));
        return format!(
            "{}{gap}{}\n",
            look.ink(ink, word),
            look.ink(Ink::Quiet, &line)
        );
    }
    let mut text = format!("{}\n", look.ink(ink, word));
    for line in fold(&line, look.width, 4).lines() {
        text += &format!("{}\n", look.ink(Ink::Quiet, line));
    }
    text
}

/// Rows of columns: every column but the last is as wide as its widest cell, as far as that leaves
/// room; where it does not, the last cell goes to a line of its own.
pub fn table(rows: &[Vec<String>], look: Look) -> String {
    let count = rows.iter().map(Vec::len).max().unwrap_or(0);
    let most = look.width / 2;
    let mut widths = vec![0; count];
    for row in rows {
        for (place, cell) in row.iter().enumerate().take(row.len().saturating_sub(1)) {
            let width = columns(cell);
            if width <= most {
                widths[place] = widths[place].max(width);
            }
        }
    }
    let mut text = String::new();
    for row in rows {
        let mut line = String::new();
        for (place, cell) in row.iter().enumerate() {
            let is_last = place + 1 == row.len();
            if place > 0 && is_last && columns(&line) + columns(cell) > look.width {
                text += line.trim_end();
                text.push('\n');
                text += &fold(cell, look.width, 8);
                line.clear();
                break;
            }
            line += &if is_last {
                cell.clone()
            } else {
                pad(cell, widths[place]) + "   "
            };
        }
        if !line.is_empty() {
            text += line.trim_end();
            text.push('\n');
        }
    }
    text
}

/// Finds where terms of a theory may be broken.
#[derive(Clone, Copy)]
pub struct Breaker<'s> {
    signature: &'s Signature,
}

/// A blank behind a comma or an infix operator, and in how many brackets it stands.
struct Blank {
    at: usize,
    depth: usize,
    /// The columns up to it.
    column: usize,
}

impl<'s> Breaker<'s> {
    /// For terms with the operators of this signature.
    pub fn new(signature: &'s Signature) -> Self {
        Breaker { signature }
    }

    /// The text in pieces of at most `first` columns, then `rest`, as far as there are places to
    /// break it, the outermost first. Costs time linear in the text.
    pub fn pieces(self, text: &str, first: usize, rest: usize) -> Vec<Range<usize>> {
        let mut pieces = Vec::new();
        let mut blanks: Vec<Blank> = Vec::new();
        let (mut start, mut start_column, mut room) = (0, 0, first.max(1));
        let (mut depth, mut column, mut word) = (0usize, 0, 0);
        let mut quoted = false;
        for (at, c) in text.char_indices() {
            match c {
                '"' => quoted = !quoted,
                _ if quoted => {}
                '(' => depth += 1,
                ')' => depth = depth.saturating_sub(1),
                ' ' => {
                    if self.breaks_behind(&text[word..at]) {
                        blanks.push(Blank { at, depth, column });
                    }
                    word = at + 1;
                }
                _ => {}
            }
            if matches!(c, '(' | ')') && !quoted {
                word = at + 1;
            }
            column += c.width().unwrap_or(0);
            while column - start_column > room && !blanks.is_empty() {
                let fits = |blank: &&Blank| blank.column - start_column <= room;
                let best = blanks.iter().filter(fits).enumerate();
                let best = best.min_by_key(|(_, b)| (b.depth, std::cmp::Reverse(b.at)));
                let place = best.map_or(0, |(place, _)| place);
                let blank = &blanks[place];
                pieces.push(start..blank.at);
                (start, start_column) = (blank.at + 1, blank.column + 1);
                blanks.drain(..=place);
                room = rest.max(1);
            }
        }
        pieces.push(start..text.len());
        pieces
    }

    fn breaks_behind(self, word: &str) -> bool {
        if word.ends_with(',') || word == "=" || word == "!=" || word == "->" {
            return true;
        }
        let name = word.trim_matches('"');
        let meaning = self.signature.meaning(name);
        meaning
            .and_then(|meaning| meaning.symbol)
            .is_some_and(|symbol| {
                let fixity = self.signature.symbol(symbol).map(|known| known.fixity);
                matches!(fixity, Some(Fixity::Infix { .. }))
            })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::language::{NoLoader, read_theory};

    #[test]
    fn terms_break_behind_operators_at_the_outermost_place() {
        let text = "infix * 40 left\nconstant a\nvariable x y\nfunction f 2\n";
        let theory = read_theory("t", text, &NoLoader).ok().unwrap();
        let breaker = Breaker::new(&theory.signature);
        let broken = |text: &'static str, width| -> Vec<&str> {
            let pieces = breaker.pieces(text, width, width);
            pieces.into_iter().map(|piece| &text[piece]).collect()
        };
        assert_eq!(broken("x * y", 10), ["x * y"]);
        assert_eq!(broken("x * (y * a) * x", 8), ["x *", "(y *", "a) * x"]);
        assert_eq!(broken("f(x, y) * f(y, x)", 10), ["f(x, y) *", "f(y, x)"]);
        assert_eq!(broken("f(f(f(f(x))))", 4), ["f(f(f(f(x))))"]);
    }

    #[test]
    fn prose_is_folded_and_cut() {
        assert_eq!(fold("one two three", 9, 2), "  one two\n  three\n");
        assert_eq!(fold("30 ms · 2 s", 5, 0), "30 ms\n· 2 s\n");
        assert_eq!(fold("in 12 min, or", 4, 0), "in\n12 min,\nor\n");
        assert_eq!(fold("a  b ", 9, 0), "a  b \n");
        assert_eq!(cut("abcdef", 4), "abc…");
        assert_eq!(cut("日本語", 4), "日…");
        assert_eq!(cut("abc", 0), "");
        assert_eq!(pad("日", 4), "日  ");
    }

    #[test]
    fn headings_fit_any_width() {
        let facts = [
            "answer 3".to_owned(),
            "proof checked".to_owned(),
            "0.4 ms".to_owned(),
        ];
        let shown = |width| {
            heading(
                Look {
                    color: false,
                    width,
                },
                Ink::Good,
                "equal",
                &facts,
            )
        };
        assert_eq!(
            shown(80),
            "equal        answer 3 · proof checked · 0.4 ms\n"
        );
        for line in shown(20).lines() {
            assert!(columns(line) <= 20, "{line}");
        }
        shown(1);
    }
}

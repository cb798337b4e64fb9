//! What was typed, word by word, for commands whose arguments are not terms.

use super::problem::Problem;
use super::quantity;
use crate::language::{Diagnostic, Fault, Source};
use std::ops::Range;
use std::time::Duration;

/// How typed text is called where it has no better name.
pub const TYPED: &str = "typed";

/// A statement with a place in it: what stands before has been read.
#[derive(Clone, Copy, Debug)]
pub struct Line<'t> {
    /// The whole statement.
    pub text: &'t str,
    /// The place.
    pub at: usize,
    /// May a `#` start a remark?
    remarks: bool,
}

impl<'t> Line<'t> {
    /// A statement, nothing of which has been read. `remarks` is false where some sign of the
    /// theory holds a `#`.
    pub fn new(text: &'t str, at: usize, remarks: bool) -> Self {
        Line { text, at, remarks }
    }

    /// The same statement at another place.
    pub fn from(self, at: usize) -> Self {
        Line { at, ..self }
    }

    /// The next word, which may be in quotes; the quotes belong to it.
    pub fn peek(&self) -> Option<(&'t str, Range<usize>)> {
        let rest = &self.text[self.at..];
        let start = self.at + (rest.len() - rest.trim_start().len());
        let rest = &self.text[start..];
        if rest.is_empty() || (self.remarks && rest.starts_with('#')) {
            return None;
        }
        let mut quoted = false;
        let ends = |c: char| {
            quoted ^= c == '"';
            c.is_whitespace() && !quoted
        };
        let length = rest.find(ends).unwrap_or(rest.len());
        Some((&rest[..length], start..start + length))
    }

    /// Reads the next word; the quotes around it are taken away.
    pub fn word(&mut self) -> Option<(&'t str, Range<usize>)> {
        let (word, range) = self.peek()?;
        self.at = range.end;
        let bare = word
            .strip_prefix('"')
            .and_then(|word| word.strip_suffix('"'));
        Some((bare.unwrap_or(word), range))
    }

    /// Reads the next word if it is this one.
    pub fn keyword(&mut self, keyword: &str) -> bool {
        match self.peek() {
            Some((word, range)) if word == keyword => {
                self.at = range.end;
                true
            }
            _ => false,
        }
    }

    /// The words that are left, as they are typed, without a remark.
    pub fn rest(&self) -> &'t str {
        let mut line = *self;
        let mut end = self.at;
        let start = line.peek().map_or(self.at, |(_, range)| range.start);
        while let Some((_, range)) = line.word() {
            end = range.end;
        }
        &self.text[start..end.max(start)]
    }

    /// The place of what is left, for messages.
    pub fn rest_range(&self) -> Range<usize> {
        let rest = self.rest();
        let start = self
            .peek()
            .map_or(self.text.trim_end().len(), |(_, r)| r.start);
        start..start + rest.len()
    }

    /// The place of the first word, for messages about the whole command.
    pub fn command(&self) -> Range<usize> {
        let (_, range) = self.from(0).peek().unwrap_or(("", 0..0));
        range
    }

    /// Reads `within TIME`, if it is there, and the end of the line.
    pub fn within(&mut self) -> Result<Option<Duration>, Problem> {
        let mut time = None;
        if self.keyword("within") {
            time = Some(self.duration("within 60s")?);
        }
        self.end()?;
        Ok(time)
    }

    /// Reads a time.
    pub fn duration(&mut self, example: &str) -> Result<Duration, Problem> {
        let Some((word, range)) = self.word() else {
            let fault = Fault::new(self.rest_range(), "a time is missing");
            return Err(self.problem(fault.help(format!("write a number and a unit: {example}"))));
        };
        quantity::parse_duration(word).ok_or_else(|| {
            self.problem(
                Fault::new(range, "this is not a time")
                    .label("a number and a unit are expected")
                    .help(format!("write {example}; the units are ms, s, m and h")),
            )
        })
    }

    /// Checks that nothing is left.
    pub fn end(&self) -> Result<(), Problem> {
        match self.peek() {
            None => Ok(()),
            Some(_) => Err(self.problem(
                Fault::new(self.rest_range(), "the line should end here")
                    .label("this is more than expected")
                    .help("help with the first word of the line shows what can follow it"),
            )),
        }
    }

    /// The problem with this line that a fault is.
    pub fn problem(&self, fault: Fault) -> Problem {
        let source = Source {
            name: TYPED,
            text: self.text,
        };
        Problem::Text(vec![Diagnostic::new(source, fault)])
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn words_may_be_in_quotes_and_remarks_end_the_line() {
        let mut line = Line::new("open \"a b\" c # d", 4, true);
        assert_eq!(line.rest(), "\"a b\" c");
        assert_eq!(line.word().unwrap().0, "a b");
        assert_eq!(line.word().unwrap().0, "c");
        assert_eq!(line.word(), None);
        let mut line = Line::new("open # d", 4, false);
        assert_eq!(line.word().unwrap().0, "#");
        assert_eq!(line.rest(), "d");
    }

    #[test]
    fn an_open_quote_takes_the_rest() {
        let mut line = Line::new("open \"a b", 4, true);
        assert_eq!(line.word().unwrap().0, "\"a b");
        assert!(line.end().is_ok());
    }
}

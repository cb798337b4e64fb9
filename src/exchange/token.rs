//! Clause syntax to tokens.

use crate::language::Fault;
use nom::branch::alt;
use nom::bytes::complete::{tag, take_while};
use nom::character::complete::satisfy;
use nom::combinator::{opt, recognize};
use nom::multi::many0_count;
use nom::sequence::{delimited, pair, preceded};
use nom::{IResult, Parser};
use std::borrow::Cow;
use std::ops::Range;

/// What a token is.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum Kind<'t> {
    /// A word that begins with a small letter, or anything in single quotes, without them.
    Word(Cow<'t, str>),
    /// A word that begins with a capital: a variable.
    Variable(&'t str),
    /// A number.
    Number(&'t str),
    /// A word that begins with `$`.
    Dollar,
    /// Something in double quotes.
    Distinct,
    /// A connective, a bracket, or another sign.
    Sign(&'t str),
    /// The text is at its end.
    End,
}

/// A token with its place in the text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Token<'t> {
    /// What it is.
    pub kind: Kind<'t>,
    /// Where it is, in bytes.
    pub span: Range<usize>,
}

impl Token<'_> {
    /// Is it this sign?
    pub fn is(&self, sign: &str) -> bool {
        matches!(self.kind, Kind::Sign(known) if known == sign)
    }
}

/// Reads tokens one at a time. A copy is a bookmark.
#[derive(Clone, Copy)]
pub(super) struct Lexer<'t> {
    text: &'t str,
    at: usize,
    last: usize,
}

impl<'t> Lexer<'t> {
    /// A lexer for a whole text.
    pub fn new(text: &'t str) -> Self {
        Lexer {
            text,
            at: 0,
            last: 0,
        }
    }

    /// Where the token that was read last ends.
    pub fn last(&self) -> usize {
        self.last
    }

    /// The next token.
    ///
    /// # Errors
    ///
    /// A quotation or remark that is not closed, or a character that belongs nowhere.
    pub fn next(&mut self) -> Result<Token<'t>, Fault> {
        self.skip_blank()?;
        let start = self.at;
        let rest = &self.text[start..];
        let (kind, length) = match rest.chars().next() {
            None => {
                return Ok(Token {
                    kind: Kind::End,
                    span: self.last..self.last,
                });
            }
            Some('\'') => self.quoted(rest)?,
            Some('"') => (Kind::Distinct, self.distinct(rest)?),
            Some('$') => (Kind::Dollar, 1 + taken(take_while(is_alpha), &rest[1..])),
            Some(c) if c.is_ascii_lowercase() => {
                let length = taken(take_while(is_alpha), rest);
                (Kind::Word(Cow::Borrowed(&rest[..length])), length)
            }
            Some(c) if c.is_ascii_uppercase() => {
                let length = taken(take_while(is_alpha), rest);
                (Kind::Variable(&rest[..length]), length)
            }
            Some(c) => match taken(number, rest) {
                0 => match taken(sign, rest) {
                    0 => return Err(stray(c, start)),
                    length => (Kind::Sign(&rest[..length]), length),
                },
                length => (Kind::Number(&rest[..length]), length),
            },
        };
        self.at = start + length;
        self.last = self.at;
        Ok(Token {
            kind,
            span: start..self.at,
        })
    }

    /// The next token, without reading it.
    ///
    /// # Errors
    ///
    /// As [`Lexer::next`].
    pub fn peek(&self) -> Result<Token<'t>, Fault> {
        let mut copy = *self;
        copy.next()
    }

    fn skip_blank(&mut self) -> Result<(), Fault> {
        loop {
            let rest = &self.text[self.at..];
            self.at += taken(take_while(is_blank), rest);
            let rest = &self.text[self.at..];
            if rest.starts_with('%') {
                self.at += rest.find('\n').unwrap_or(rest.len());
            } else if let Some(inside) = rest.strip_prefix("/*") {
                let Some(length) = inside.find("*/") else {
                    return Err(Fault::new(self.at..self.at + 2, "a remark is not closed")
                        .label("it begins here")
                        .help("put */ where the remark ends"));
                };
                self.at += 2 + length + 2;
            } else {
                return Ok(());
            }
        }
    }

    /// A name in single quotes, in which `\'` and `\\` stand for a quote and a backslash.
    fn quoted(&self, rest: &'t str) -> Result<(Kind<'t>, usize), Fault> {
        let Ok((_, whole)) = in_quotes('\'', rest) else {
            return Err(self.open_quotation(rest, "'"));
        };
        let inside = &whole[1..whole.len() - 1];
        let span = self.at..self.at + whole.len();
        if inside.is_empty() || inside.chars().any(char::is_control) {
            return Err(
                Fault::new(span, "a name needs at least one character, all on one line")
                    .help("write the name between the quotation marks"),
            );
        }
        let name = if inside.contains('\\') {
            let mut name = String::with_capacity(inside.len());
            let mut chars = inside.chars();
            while let Some(c) = chars.next() {
                // The parser has seen to it that something follows a backslash.
                name.extend(if c == '\\' { chars.next() } else { Some(c) });
            }
            Cow::Owned(name)
        } else {
            Cow::Borrowed(inside)
        };
        Ok((Kind::Word(name), whole.len()))
    }

    fn distinct(&self, rest: &str) -> Result<usize, Fault> {
        match in_quotes('"', rest) {
            Ok((_, whole)) => Ok(whole.len()),
            Err(_) => Err(self.open_quotation(rest, "\"")),
        }
    }

    fn open_quotation(&self, rest: &str, mark: &str) -> Fault {
        let line = rest.lines().next().unwrap_or_default();
        Fault::new(
            self.at..self.at + line.trim_end().len(),
            "a quotation mark is not closed",
        )
        .help(format!("end the name with another {mark}"))
    }
}

fn is_blank(c: char) -> bool {
    c.is_whitespace() || c == '\u{feff}'
}

fn is_alpha(c: char) -> bool {
    c.is_ascii_alphanumeric() || c == '_'
}

/// The length of what a parser takes; 0 if it fails.
fn taken<'t>(
    mut parser: impl Parser<&'t str, Output = &'t str, Error = ()>,
    text: &'t str,
) -> usize {
    parser.parse(text).map_or(0, |(_, taken)| taken.len())
}

fn in_quotes(mark: char, input: &str) -> IResult<&str, &str, ()> {
    let plain = satisfy(move |c| c != mark && c != '\\' && c != '\n');
    let escaped = preceded(tag("\\"), satisfy(|c| c != '\n'));
    let inside = many0_count(alt((plain, escaped)));
    let end = satisfy(move |c| c == mark);
    let start = satisfy(move |c| c == mark);
    recognize(delimited(start, inside, end)).parse(input)
}

fn number(input: &str) -> IResult<&str, &str, ()> {
    let start = opt(alt((tag("+"), tag("-"))));
    let digit = satisfy(|c| c.is_ascii_digit());
    recognize((start, pair(digit, take_while(is_alpha)))).parse(input)
}

/// The signs, the longer ones first.
fn sign(input: &str) -> IResult<&str, &str, ()> {
    alt((
        alt((
            tag("<=>"),
            tag("<~>"),
            tag("=>"),
            tag("<="),
            tag("~|"),
            tag("~&"),
        )),
        alt((
            tag("!="),
            tag("="),
            tag("|"),
            tag("&"),
            tag("~"),
            tag("!"),
            tag("?"),
        )),
        alt((tag("("), tag(")"), tag("["), tag("]"), tag("{"), tag("}"))),
        alt((tag(":"), tag(","), tag("."))),
        recognize(satisfy(|c| c.is_ascii_punctuation())),
    ))
    .parse(input)
}

fn stray(c: char, at: usize) -> Fault {
    let shown = if c.is_control() {
        format!("the control character U+{:04X}", c as u32)
    } else {
        format!("`{c}` (U+{:04X})", c as u32)
    };
    Fault::new(
        at..at + c.len_utf8(),
        format!("{shown} has no meaning in clause syntax"),
    )
    .help("anything can be a name in 'single quotes'")
}

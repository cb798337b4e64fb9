//! Text to tokens.

use super::words::{is_mark, is_name_char, is_name_start, is_reserved, is_sign_char};
use crate::language::Fault;
use crate::theory::Signature;
use nom::bytes::complete::{take_till, take_while, take_while1};
use nom::character::complete::{char, satisfy};
use nom::combinator::recognize;
use nom::sequence::{delimited, pair};
use nom::{IResult, Parser};
use std::borrow::Cow;
use std::ops::Range;
use unicode_normalization::{IsNormalized, UnicodeNormalization, is_nfc_quick};

/// What a token is.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) enum Kind<'t> {
    /// A name that is not reserved.
    Name(Cow<'t, str>),
    /// A name in quotes, given without them.
    Quoted(Cow<'t, str>),
    /// A declared sign, or one of `;` and `/` where they are not part of a declared one.
    Sign(Cow<'t, str>),
    /// A sign that is not declared.
    Unknown(Cow<'t, str>),
    /// A reserved word.
    Reserved(&'t str),
    /// `(`
    Open,
    /// `)`
    Close,
    /// `,`
    Comma,
    /// `=`
    Equal,
    /// `!=`
    NotEqual,
    /// `:`
    Colon,
    /// `->`
    Arrow,
    /// The text is at its end.
    End,
}

/// A token with its place in the text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(crate) struct Token<'t> {
    /// What it is.
    pub kind: Kind<'t>,
    /// Where it is, in bytes.
    pub span: Range<usize>,
}

/// The longest name that can be declared, in bytes. Splitting a run of signs looks this far ahead.
pub(crate) const LONGEST_NAME: usize = 256;

/// Reads tokens one at a time, so that memory does not grow with the text. A copy is a bookmark.
#[derive(Clone, Copy)]
pub(crate) struct Lexer<'s, 't> {
    text: &'t str,
    at: usize,
    end: usize,
    /// Where the last token ended: the place of what is missing at the end of the text.
    last: usize,
    signature: &'s Signature,
}

impl<'s, 't> Lexer<'s, 't> {
    /// A lexer for the part of a text in `range`; spans count from the start of the whole text.
    pub fn new(text: &'t str, range: Range<usize>, signature: &'s Signature) -> Self {
        Lexer {
            text,
            at: range.start,
            end: range.end,
            last: range.start,
            signature,
        }
    }

    /// Where the next token, or the blank before it, begins.
    pub fn at(&self) -> usize {
        self.at
    }

    /// What the names mean.
    pub fn signature(&self) -> &'s Signature {
        self.signature
    }

    /// The text that has not been read.
    pub fn rest(&self) -> &'t str {
        &self.text[self.at..self.end]
    }

    /// The next token.
    pub fn next(&mut self) -> Result<Token<'t>, Fault> {
        self.skip_blank();
        let start = self.at;
        let Some(first) = self.rest().chars().next() else {
            return Ok(Token {
                kind: Kind::End,
                span: self.last..self.last,
            });
        };
        let kind = match first {
            '(' => self.punctuation(Kind::Open),
            ')' => self.punctuation(Kind::Close),
            ',' => self.punctuation(Kind::Comma),
            '"' => Kind::Quoted(self.quoted()?),
            c if is_name_start(c) => self.word(),
            c if is_sign_char(c) => self.sign(),
            c => return Err(self.stray(c)),
        };
        self.last = self.at;
        Ok(self.token(kind, start))
    }

    /// The next token, without reading it.
    pub fn peek(&self) -> Result<Token<'t>, Fault> {
        let mut copy = *self;
        copy.next()
    }

    /// A name that is being declared: a name, a name in quotes, or a whole run of signs. None,
    /// with nothing read, if something else comes.
    pub fn declared(&mut self) -> Result<Option<(String, Range<usize>)>, Fault> {
        self.skip_blank();
        let start = self.at;
        let rest = self.rest();
        let (name, length) = match rest.chars().next() {
            Some('"') => (self.quoted()?.into_owned(), self.at - start),
            Some(c) if is_name_start(c) => {
                let word = taken(name(rest));
                if is_reserved(word) {
                    return Ok(None);
                }
                (compose(word).into_owned(), word.len())
            }
            Some(c) if is_sign_char(c) => {
                let run = taken(sign_run(rest));
                if matches!(run, "=" | "!=" | ":" | "#" | "->") {
                    return Ok(None);
                }
                (compose(run).into_owned(), run.len())
            }
            _ => return Ok(None),
        };
        self.at = start + length;
        self.last = self.at;
        let span = start..self.at;
        if name.len() > LONGEST_NAME {
            return Err(
                Fault::new(span, format!("names are at most {LONGEST_NAME} bytes long"))
                    .help("choose a shorter name"),
            );
        }
        Ok(Some((name, span)))
    }

    /// The name of a law, claim or theory, or a name in quotes. None, with nothing read, if
    /// something else comes.
    pub fn law_name(&mut self) -> Result<Option<(String, Range<usize>)>, Fault> {
        self.skip_blank();
        let start = self.at;
        let rest = self.rest();
        let name = match rest.chars().next() {
            Some('"') => self.quoted()?.into_owned(),
            Some(c) if c.is_alphabetic() => {
                let length = law_name_length(rest);
                if is_reserved(&rest[..length]) {
                    return Ok(None);
                }
                self.at += length;
                compose(&rest[..length]).into_owned()
            }
            _ => return Ok(None),
        };
        self.last = self.at;
        Ok(Some((name, start..self.at)))
    }

    /// Everything up to the next blank, without remarks: a path.
    pub fn path(&mut self) -> (&'t str, Range<usize>) {
        self.skip_blank();
        let start = self.at;
        let path = taken(take_till::<_, &str, ()>(char::is_whitespace).parse(self.rest()));
        self.at += path.len();
        self.last = self.at;
        (path, start..self.at)
    }

    /// The rest of the text up to a remark, trimmed.
    pub fn remark_free_rest(&mut self) -> (&'t str, Range<usize>) {
        self.skip_blank();
        let rest = self.rest();
        let upto = rest.find('#').unwrap_or(rest.len());
        let text = rest[..upto].trim();
        let span = self.at..self.at + text.len();
        self.at = self.end;
        (text, span)
    }

    /// Moves to a token that was read before.
    pub fn back_to(&mut self, at: usize) {
        self.at = at;
        self.last = at;
    }

    fn token(&self, kind: Kind<'t>, start: usize) -> Token<'t> {
        Token {
            kind,
            span: start..self.at,
        }
    }

    fn punctuation(&mut self, kind: Kind<'t>) -> Kind<'t> {
        self.at += 1;
        kind
    }

    fn skip_blank(&mut self) {
        loop {
            let rest = self.rest();
            let blank = taken(take_while::<_, &str, ()>(is_blank).parse(rest));
            self.at += blank.len();
            if !self.rest().starts_with('#') || self.is_hash_sign() {
                return;
            }
            let remark = taken(take_till::<_, &str, ()>(|c| c == '\n').parse(self.rest()));
            self.at += remark.len();
        }
    }

    /// Does a declared sign that holds `#` begin here? Not at the start of a line.
    fn is_hash_sign(&self) -> bool {
        if !self.signature.has_hash() {
            return false;
        }
        let before = self.text[..self.at].trim_end_matches([' ', '\t', '\r', '\u{feff}']);
        !(before.is_empty() || before.ends_with('\n'))
            && self
                .longest_sign(self.at)
                .is_some_and(|(kind, _)| matches!(kind, Kind::Sign(_)))
    }

    fn word(&mut self) -> Kind<'t> {
        let word = taken(name(self.rest()));
        self.at += word.len();
        if is_reserved(word) {
            Kind::Reserved(word)
        } else {
            Kind::Name(compose(word))
        }
    }

    fn quoted(&mut self) -> Result<Cow<'t, str>, Fault> {
        let rest = self.rest();
        let Ok((after, inside)) = quoted(rest) else {
            let line = rest.lines().next().unwrap_or_default();
            return Err(Fault::new(
                self.at..self.at + line.trim_end().len(),
                "a quotation mark is not closed",
            )
            .help("a name in quotes ends on its own line with another \""));
        };
        let start = self.at;
        self.at = self.end - after.len();
        if inside.is_empty() || inside.chars().any(char::is_control) {
            return Err(Fault::new(
                start..self.at,
                "a name needs at least one character, and no control characters",
            )
            .help("write the name between the quotation marks"));
        }
        Ok(compose(inside))
    }

    fn sign(&mut self) -> Kind<'t> {
        let start = self.at;
        if let Some((kind, length)) = self.longest_sign(start) {
            self.at += length;
            return kind;
        }
        // Nothing begins here: the message shows what lies before the next sign that is known.
        let mut upto = start;
        for (length, _) in clusters(self.rest()).take(64) {
            if upto > start && self.longest_sign(upto).is_some() {
                break;
            }
            upto = start + length;
        }
        self.at = upto;
        Kind::Unknown(compose(&self.text[start..upto]))
    }

    /// The longest declared or barred sign that begins here, with its length in bytes.
    fn longest_sign(&self, at: usize) -> Option<(Kind<'t>, usize)> {
        let rest = &self.text[at..self.end];
        let limit = self.signature.longest_sign().max(2);
        let mut found = None;
        for (length, text) in prefixes(rest) {
            if text.len() > limit {
                break;
            }
            let kind = match &*text {
                "=" => Kind::Equal,
                "!=" => Kind::NotEqual,
                ":" => Kind::Colon,
                "->" => Kind::Arrow,
                _ if self.signature.meaning(&text).is_some() => Kind::Sign(text),
                ";" | "/" => Kind::Sign(text),
                _ => continue,
            };
            found = Some((kind, length));
        }
        found
    }

    fn stray(&self, c: char) -> Fault {
        let span = self.at..self.at + c.len_utf8();
        let shown = if c.is_control() {
            format!("the control character U+{:04X}", c as u32)
        } else {
            format!("`{c}` (U+{:04X})", c as u32)
        };
        Fault::new(
            span,
            format!("{shown} is neither part of a name nor of a sign"),
        )
        .help(
            "names are letters, digits and _; signs are punctuation and mathematical symbols; \
             anything else can be a name in \"quotes\"",
        )
    }
}

/// Blanks are white space and, as some editors write it first, the byte order mark.
fn is_blank(c: char) -> bool {
    c.is_whitespace() || c == '\u{feff}'
}

fn name(input: &str) -> IResult<&str, &str, ()> {
    recognize(pair(satisfy(is_name_start), take_while(is_name_char))).parse(input)
}

fn sign_run(input: &str) -> IResult<&str, &str, ()> {
    take_while1(|c| is_sign_char(c) || is_mark(c)).parse(input)
}

fn quoted(input: &str) -> IResult<&str, &str, ()> {
    delimited(char('"'), take_while(|c| c != '"' && c != '\n'), char('"')).parse(input)
}

/// What a parser took; nothing if it failed.
fn taken<'t>(result: IResult<&'t str, &'t str, ()>) -> &'t str {
    result.map_or("", |(_, taken)| taken)
}

/// The length of the law name that the text begins with: `-` only inside.
fn law_name_length(text: &str) -> usize {
    let run = text
        .find(|c| !is_name_char(c) && c != '-')
        .unwrap_or(text.len());
    text[..run].trim_end_matches('-').len()
}

/// The text in Unicode's composed normal form.
fn compose(text: &str) -> Cow<'_, str> {
    if is_nfc_quick(text.chars()) == IsNormalized::Yes {
        Cow::Borrowed(text)
    } else {
        Cow::Owned(text.nfc().collect())
    }
}

/// The lengths at which a sign that the text begins with could end: behind a sign character and
/// its marks.
fn clusters(text: &str) -> impl Iterator<Item = (usize, &str)> {
    let mut at = 0;
    std::iter::from_fn(move || {
        let rest = &text[at..];
        let first = rest.chars().next().filter(|c| is_sign_char(*c))?;
        let after = &rest[first.len_utf8()..];
        let marks = after.find(|c| !is_mark(c)).unwrap_or(after.len());
        at += first.len_utf8() + marks;
        Some((at, &text[..at]))
    })
}

/// The same with the composed text of each.
fn prefixes(text: &str) -> impl Iterator<Item = (usize, Cow<'_, str>)> {
    clusters(text).map(|(length, text)| (length, compose(text)))
}

//! What the line editor knows of the session: Tab, hints, and the bracket that belongs to another.

use crate::language::{DECLARATIONS, quote_law, quote_symbol};
use crate::session::{Library, Session};
use crate::shell::commands::{self, Operand};
use crate::shell::help;
use rustyline::completion::{Completer, FilenameCompleter, Pair};
use rustyline::highlight::{CmdKind, Highlighter, MatchingBracketHighlighter};
use rustyline::hint::{Hint, Hinter};
use rustyline::validate::Validator;
use rustyline::{Context, Result};
use std::borrow::Cow;

/// The words of the session as they are at the prompt.
pub struct Helper {
    library: Library,
    /// Symbols and variables, as they are typed.
    names: Vec<String>,
    /// Laws and claims, as they are typed.
    laws: Vec<String>,
    answers: usize,
    rules: Vec<u32>,
    files: FilenameCompleter,
    brackets: MatchingBracketHighlighter,
    /// Is something asked that is no statement?
    quiet: bool,
    /// Hints are dimmed; without colours they could not be told from what was typed.
    hints: bool,
}

impl Helper {
    /// A helper that knows the commands only.
    pub fn new(library: Library, hints: bool) -> Helper {
        Helper {
            library,
            names: Vec::new(),
            laws: Vec::new(),
            answers: 0,
            rules: Vec::new(),
            files: FilenameCompleter::new(),
            brackets: MatchingBracketHighlighter::new(),
            quiet: false,
            hints,
        }
    }

    /// Takes in the words of the session.
    pub fn learn(&mut self, session: &Session) {
        let theory = session.theory();
        self.names = theory.signature.names().map(quote_symbol).collect();
        if session.it().is_some() && theory.signature.meaning("it").is_none() {
            self.names.push("it".to_owned());
        }
        self.names.sort_unstable();
        let laws = theory.laws.iter().map(|law| typed_law(&law.name));
        let claims = theory
            .claims
            .iter()
            .filter_map(|claim| claim.name.as_deref());
        self.laws = laws.chain(claims.map(quote_law)).collect();
        self.laws.sort_unstable();
        self.answers = session.answers().len();
        self.rules = session.rules().iter().map(|rule| rule.number).collect();
    }

    /// Without Tab and hints for a while, or with them again.
    pub fn set_quiet(&mut self, quiet: bool) {
        self.quiet = quiet;
    }

    /// What may stand at the end of this text, with the place where it begins.
    fn candidates(&self, text: &str) -> (usize, Vec<String>) {
        let lead = text.len() - text.trim_start().len();
        let body = &text[lead..];
        let word_end = body.find(|c: char| !is_word(c)).unwrap_or(body.len());
        let first = &body[..word_end];
        if word_end == body.len() {
            let commands = commands::ALL.iter().map(|command| command.word);
            let words = commands
                .chain(DECLARATIONS.iter().copied())
                .map(str::to_owned);
            return (
                lead,
                starting(words.chain(self.names.iter().cloned()), first),
            );
        }
        let operand_start = text.len() - body[word_end..].trim_start().len();
        let operand = &text[operand_start..];
        let word_start = text.rfind(|c: char| !is_word(c)).map_or(0, |at| {
            at + text[at..].chars().next().map_or(1, char::len_utf8)
        });
        let last = &text[word_start..];
        let Some(command) = commands::named(first) else {
            return match first {
                "use" => (operand_start, starting(self.theories(), operand)),
                _ => (word_start, starting(self.names.iter().cloned(), last)),
            };
        };
        let keywords = keywords(command.forms);
        match command.operand {
            Operand::Words => (word_start, starting(keywords, last)),
            Operand::Terms => {
                let names = self.names.iter().cloned();
                (word_start, starting(names.chain(keywords), last))
            }
            Operand::Laws => (operand_start, starting(self.laws.iter().cloned(), operand)),
            Operand::Theories => (operand_start, starting(self.theories(), operand)),
            Operand::Files => (operand_start, Vec::new()),
            Operand::Answers => {
                let numbers = (1..=self.answers).rev().map(|number| number.to_string());
                (word_start, starting(numbers.chain(keywords), last))
            }
            Operand::Rules => {
                let numbers = self.rules.iter().map(u32::to_string);
                (operand_start, starting(numbers, operand))
            }
            Operand::Topics => {
                let words = help::all_words().into_iter().map(str::to_owned);
                (operand_start, starting(words, operand))
            }
        }
    }

    fn theories(&self) -> impl Iterator<Item = String> {
        self.library.list().into_iter().map(|theory| theory.name)
    }

    fn takes_files(text: &str) -> bool {
        let first = text.split_whitespace().next();
        let has_operand = text.trim_start().contains(char::is_whitespace);
        has_operand && matches!(first, Some("open" | "save" | "use" | "import"))
    }
}

/// A law's name as `drop` takes it: names made of a sign and a property need no quotes.
fn typed_law(name: &str) -> String {
    if name.contains(['"', '#', ',', ':']) {
        quote_law(name)
    } else {
        name.to_owned()
    }
}

fn is_word(c: char) -> bool {
    c.is_alphanumeric() || c == '_'
}

fn starting(words: impl Iterator<Item = String>, start: &str) -> Vec<String> {
    let mut found: Vec<String> = words.filter(|word| word.starts_with(start)).collect();
    found.dedup();
    found
}

/// The words that are typed as they stand in the forms of a command, but its own.
fn keywords(forms: &'static [(&'static str, &'static str)]) -> impl Iterator<Item = String> {
    let words = forms
        .iter()
        .flat_map(|(form, _)| form.split_whitespace().skip(1));
    let fixed = |word: &&str| word.len() > 2 && word.chars().all(|c| c.is_ascii_lowercase());
    let mut words: Vec<&str> = words.filter(fixed).collect();
    words.sort_unstable();
    words.dedup();
    words.into_iter().map(str::to_owned)
}

impl Completer for Helper {
    type Candidate = Pair;

    fn complete(&self, line: &str, at: usize, _: &Context<'_>) -> Result<(usize, Vec<Pair>)> {
        if self.quiet {
            return Ok((at, Vec::new()));
        }
        let (start, words) = self.candidates(&line[..at]);
        let pair = |word: String| Pair {
            display: word.clone(),
            replacement: word,
        };
        let mut pairs: Vec<Pair> = words.into_iter().map(pair).collect();
        if Helper::takes_files(&line[..at]) {
            let (file_start, files) = self.files.complete_path(line, at)?;
            if pairs.is_empty() {
                return Ok((file_start, files));
            }
            if file_start == start {
                let new = |file: &Pair| {
                    pairs
                        .iter()
                        .all(|pair| pair.replacement != file.replacement)
                };
                let files: Vec<Pair> = files.into_iter().filter(new).collect();
                pairs.extend(files);
            }
        }
        let leads = line[..start].trim().is_empty();
        if let ([only], true) = (&mut pairs[..], leads)
            && goes_on(&only.replacement)
        {
            only.replacement.push(' ');
        }
        Ok((start, pairs))
    }
}

/// Does something always follow this word at the start of a line?
fn goes_on(word: &str) -> bool {
    let needs_more = |(form, _): &(&str, &str)| form.contains(' ');
    DECLARATIONS.contains(&word)
        || commands::named(word).is_some_and(|command| command.forms.iter().all(needs_more))
}

/// What may follow; only the rest of a command's own word can be taken over.
pub struct Following {
    shown: String,
    taken: Option<String>,
}

impl Hint for Following {
    fn display(&self) -> &str {
        &self.shown
    }

    fn completion(&self) -> Option<&str> {
        self.taken.as_deref()
    }
}

impl Hinter for Helper {
    type Hint = Following;

    fn hint(&self, line: &str, at: usize, _: &Context<'_>) -> Option<Following> {
        if !self.hints || self.quiet || at < line.len() || line.len() < 3 || line.contains('\n') {
            return None;
        }
        if self.names.iter().any(|name| name == line) {
            return None;
        }
        let mut forms = help::all_forms().filter(|form| form.len() > line.len());
        let form = forms.find(|form| form.starts_with(line))?;
        let rest = &form[line.len()..];
        let word_end = form.find(' ').unwrap_or(form.len());
        let taken = form
            .get(line.len()..word_end)
            .filter(|rest| !rest.is_empty());
        Some(Following {
            shown: rest.to_owned(),
            taken: taken.map(str::to_owned),
        })
    }
}

impl Highlighter for Helper {
    fn highlight<'l>(&self, line: &'l str, at: usize) -> Cow<'l, str> {
        self.brackets.highlight(line, at)
    }

    fn highlight_prompt<'b, 's: 'b, 'p: 'b>(&'s self, prompt: &'p str, _: bool) -> Cow<'b, str> {
        Cow::Borrowed(prompt)
    }

    fn highlight_hint<'h>(&self, hint: &'h str) -> Cow<'h, str> {
        Cow::Owned(format!("\x1b[2m{hint}\x1b[0m"))
    }

    fn highlight_char(&self, line: &str, at: usize, kind: CmdKind) -> bool {
        self.brackets.highlight_char(line, at, kind)
    }
}

impl Validator for Helper {}

impl rustyline::Helper for Helper {}

//! Lines of derived rules: `derived 7: i(i(x)) -> x : overlap 5 with 3 backward at 0 1; left 2 at 1`.
//!
//! Behind the number may stand the sorts of variables that the theory does not declare:
//! `derived 7 (x1 x2 : Key): …`. Behind the second colon stands what the rule began as (`law NAME`,
//! `rule 4`, or an overlap of two rules, the second applied in the first at a place), then the
//! rewriting steps on the two sides, `swapped` if the sides were then exchanged, and `retired` if
//! the rule is kept only because others rest on it. Rules are used from left to right unless
//! `backward` says otherwise; places are argument numbers from 0, and without `at` the root.

use super::declare::{Change, Statement, end};
use super::diagnostic::{Diagnostic, Fault, Source};
use super::lexer::{Kind, Lexer};
use super::names::{RuleNames, TheoryNames};
use super::order::is_semicolon;
use super::printer::Printer;
use super::symbols::number;
use super::term::{Locals, TermReader, shown};
use super::words::{quote_law, quote_symbol};
use crate::term::{Bank, Sort};
use crate::theory::{Derived, LineId, Origin, Record, RecordStep, Refused, Signature, Theory, Use};

const EXAMPLE: &str =
    "derived 7: i(i(x)) -> x : overlap 5 with 3 backward at 0 1; left 2 at 1, 4; swapped; retired";

/// Reads a line of a derived rule. In a file, one that cannot be read does not keep the rest from
/// being read.
pub(crate) fn take(at: &mut Statement<'_, '_, '_>, rest: usize) -> Result<Vec<Change>, Fault> {
    let mark = at.theory.bank.mark();
    match read(at, rest) {
        Ok(rule) => {
            let number = rule.number;
            at.theory.derived.push(rule);
            Ok(vec![Change::Derived(number)])
        }
        Err(fault) if at.context.typed => Err(fault),
        Err(fault) => {
            at.theory.bank.rollback(mark);
            let fault = fault.help("take the line out; completing again derives the rule anew");
            let refused = refusal(at, &fault);
            at.theory.refused.push(refused);
            Ok(Vec::new())
        }
    }
}

/// What is wrong, with its place in the line alone: there may be many such lines, and counting
/// lines from the start of the text for each would take a time that grows with its square.
fn refusal(at: &Statement<'_, '_, '_>, fault: &Fault) -> Refused {
    let start = at.range.start;
    Refused {
        line: at.context.line,
        before: at.context.lines_before,
        span: fault.span.start.saturating_sub(start)..fault.span.end.saturating_sub(start),
        message: fault.message.clone(),
        label: fault.label.clone(),
        help: fault.help.clone(),
    }
}

fn read(at: &mut Statement<'_, '_, '_>, rest: usize) -> Result<Derived, Fault> {
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let first = lexer.peek()?;
    let rule = rule_number(&mut lexer)?;
    let known = &at.theory.derived;
    let is_next = known.last().is_none_or(|last| last.number < rule);
    if !is_next && known.iter().any(|other| other.number == rule) {
        return Err(Fault::new(
            first.span,
            format!("there is a derived rule {rule} already"),
        )
        .label("a second time")
        .help("give it another number, or take it out"));
    }
    let mut locals = Locals::default();
    if lexer.peek()?.kind == Kind::Open {
        lexer.next()?;
        locals.stated = stated_sorts(&mut lexer)?;
    }
    colon(&mut lexer)?;
    let start = lexer.at();
    let theory = &mut *at.theory;
    let lexer = Lexer::new(at.source.text, start..at.range.end, &theory.signature);
    let mut reader = TermReader::new(lexer, &theory.signature, &mut theory.bank);
    reader.locals = Some(locals);
    let left = reader.term(None)?;
    let sign = reader.lexer.next()?;
    let oriented = match sign.kind {
        Kind::Arrow => true,
        Kind::Equal => false,
        _ => return Err(expected(sign.span, "-> or =")),
    };
    let right = reader.other_side(&left)?;
    let mut lexer = reader.lexer;
    colon(&mut lexer)?;
    let (record, retired) = record(&mut lexer)?;
    Ok(Derived {
        number: rule,
        left: left.term,
        right: right.term,
        oriented,
        retired,
        record,
        line: at.context.line,
    })
}

fn expected(span: std::ops::Range<usize>, what: &str) -> Fault {
    Fault::new(span, format!("{what} is expected here")).help(format!("such a line is {EXAMPLE}"))
}

fn colon(lexer: &mut Lexer<'_, '_>) -> Result<(), Fault> {
    let token = lexer.next()?;
    match token.kind {
        Kind::Colon => Ok(()),
        _ => Err(expected(token.span, "a colon")),
    }
}

/// `x1 x2 : Key, x3 : Layer)`
fn stated_sorts(lexer: &mut Lexer<'_, '_>) -> Result<Vec<(String, Sort)>, Fault> {
    let signature = lexer.signature();
    let mut stated = Vec::new();
    let mut waiting: Vec<String> = Vec::new();
    loop {
        while let Some((name, _)) = lexer.declared()? {
            waiting.push(name);
        }
        colon(lexer)?;
        let sort = lexer.declared()?;
        let sort = sort.and_then(|(name, _)| signature.sort_named(&name));
        let token = lexer.next()?;
        let Some(sort) = sort else {
            return Err(expected(token.span, "a sort before this"));
        };
        stated.extend(waiting.drain(..).map(|name| (name, sort)));
        match token.kind {
            Kind::Comma => {}
            Kind::Close => return Ok(stated),
            _ => return Err(expected(token.span, "a comma or )")),
        }
    }
}

fn record(lexer: &mut Lexer<'_, '_>) -> Result<(Record, bool), Fault> {
    let token = lexer.next()?;
    let origin = match &token.kind {
        Kind::Reserved("law") => match lexer.law_name()? {
            Some((name, _)) => Origin::Law(name),
            None => return Err(expected(lexer.next()?.span, "the name of a law")),
        },
        Kind::Reserved("rule") => Origin::Rule(rule_number(lexer)?),
        Kind::Name(word) if word == "overlap" => {
            let outer = one_use(lexer)?;
            if !word_follows(lexer, "with")? {
                return Err(expected(lexer.next()?.span, "`with`"));
            }
            let inner = one_use(lexer)?;
            let at = place(lexer)?;
            Origin::Overlap { outer, at, inner }
        }
        _ => return Err(expected(token.span, "`law`, `rule` or `overlap`")),
    };
    let mut record = Record {
        origin,
        left: Vec::new(),
        right: Vec::new(),
        swapped: false,
    };
    let mut retired = false;
    while is_semicolon(&lexer.peek()?.kind) {
        lexer.next()?;
        let token = lexer.next()?;
        match &token.kind {
            Kind::Name(word) if word == "left" => steps(lexer, &mut record.left)?,
            Kind::Name(word) if word == "right" => steps(lexer, &mut record.right)?,
            Kind::Name(word) if word == "swapped" => record.swapped = true,
            Kind::Name(word) if word == "retired" => retired = true,
            _ => return Err(expected(token.span, "left, right, swapped or retired")),
        }
    }
    end(lexer)?;
    Ok((record, retired))
}

fn steps(lexer: &mut Lexer<'_, '_>, steps: &mut Vec<RecordStep>) -> Result<(), Fault> {
    loop {
        let by = one_use(lexer)?;
        let at = place(lexer)?;
        steps.push(RecordStep { by, at });
        if lexer.peek()?.kind != Kind::Comma {
            return Ok(());
        }
        lexer.next()?;
    }
}

/// `5`, `5 backward`
fn one_use(lexer: &mut Lexer<'_, '_>) -> Result<Use, Fault> {
    let rule = rule_number(lexer)?;
    let backward = word_follows(lexer, "backward")?;
    Ok(Use { rule, backward })
}

/// ` at 0 1`, or nothing for the root.
fn place(lexer: &mut Lexer<'_, '_>) -> Result<Vec<u32>, Fault> {
    let mut place = Vec::new();
    if !word_follows(lexer, "at")? {
        return Ok(place);
    }
    loop {
        place.push(rule_number(lexer)?);
        if !matches!(lexer.peek()?.kind, Kind::Name(_)) {
            return Ok(place);
        }
    }
}

fn word_follows(lexer: &mut Lexer<'_, '_>, word: &str) -> Result<bool, Fault> {
    let follows = matches!(lexer.peek()?.kind, Kind::Name(name) if name == word);
    if follows {
        lexer.next()?;
    }
    Ok(follows)
}

fn rule_number(lexer: &mut Lexer<'_, '_>) -> Result<u32, Fault> {
    let token = lexer.next()?;
    match &token.kind {
        Kind::Name(digits) => match number(digits, u32::MAX as usize) {
            Some(number) => Ok(number as u32),
            None => {
                let what = format!("a number in place of {}", shown(digits));
                Err(expected(token.span, &what))
            }
        },
        _ => Err(expected(token.span, "a number")),
    }
}

/// The line that states this rule; [`Derived::line`] does not matter.
pub fn print_derived(signature: &Signature, bank: &Bank, rule: &Derived) -> String {
    let base = TheoryNames(signature);
    let names = RuleNames::new(&base, signature, bank, &[rule.left, rule.right]);
    let printer = Printer::new(&names);
    let sign = if rule.oriented { "->" } else { "=" };
    let mut line = format!(
        "derived {}{}: {} {sign} {} : {}",
        rule.number,
        unstated_sorts(signature, bank, rule, &names),
        printer.term(bank, rule.left),
        printer.term(bank, rule.right),
        print_origin(&rule.record.origin)
    );
    for (word, steps) in [("left", &rule.record.left), ("right", &rule.record.right)] {
        if !steps.is_empty() {
            let steps = steps.iter();
            let steps: Vec<String> = steps
                .map(|s| print_use(s.by) + &print_place(&s.at))
                .collect();
            line += &format!("; {word} {}", steps.join(", "));
        }
    }
    if rule.record.swapped {
        line += "; swapped";
    }
    if rule.retired {
        line += "; retired";
    }
    line
}

/// The sorts of those variables that the reader could not know.
fn unstated_sorts(signature: &Signature, bank: &Bank, rule: &Derived, names: &RuleNames) -> String {
    if signature.sorts().len() == 1 {
        return String::new();
    }
    let mut stated: Vec<String> = Vec::new();
    let mut seen = Vec::new();
    for term in [rule.left, rule.right] {
        for variable in bank.variables(term) {
            let name = super::Names::variable(names, variable);
            let meaning = signature.meaning(&name).unwrap_or_default();
            if meaning.variable.is_none() && !seen.contains(&variable) {
                let sort = quote_symbol(signature.sort_name(variable.sort));
                stated.push(format!("{} : {sort}", quote_symbol(&name)));
            }
            seen.push(variable);
        }
    }
    if stated.is_empty() {
        String::new()
    } else {
        format!(" ({})", stated.join(", "))
    }
}

fn print_origin(origin: &Origin) -> String {
    match origin {
        Origin::Law(name) => format!("law {}", quote_law(name)),
        Origin::Rule(rule) => format!("rule {rule}"),
        Origin::Overlap { outer, at, inner } => {
            let (outer, inner) = (print_use(*outer), print_use(*inner));
            format!("overlap {outer} with {inner}{}", print_place(at))
        }
    }
}

fn print_use(by: Use) -> String {
    let backward = if by.backward { " backward" } else { "" };
    format!("{}{backward}", by.rule)
}

fn print_place(place: &[u32]) -> String {
    if place.is_empty() {
        return String::new();
    }
    let steps: Vec<String> = place.iter().map(u32::to_string).collect();
    format!(" at {}", steps.join(" "))
}

/// Replaces the derived rules, in the text as well; what [`Derived::line`] says does not matter.
/// If nothing changes, neither does the text.
pub fn set_derived(theory: &mut Theory, mut rules: Vec<Derived>) {
    let same = |(old, new): (&Derived, &Derived)| {
        Derived {
            line: old.line,
            ..new.clone()
        } == *old
    };
    let unchanged = rules.len() == theory.derived.len()
        && theory.refused.is_empty()
        && theory.derived.iter().zip(&rules).all(same);
    if unchanged {
        return;
    }
    let old: rustc_hash::FxHashSet<LineId> = (theory.derived.iter().map(|rule| rule.line))
        .chain(theory.refused.iter().map(|refused| refused.line))
        .collect();
    let lines = theory.document.lines();
    let first = lines.iter().position(|line| old.contains(&line.id));
    let before = first.and_then(|first| {
        let behind = lines[first..].iter().find(|line| !old.contains(&line.id));
        behind.map(|line| line.id)
    });
    theory.document.retain(|line| !old.contains(&line));
    let texts: Vec<String> = rules
        .iter()
        .map(|rule| print_derived(&theory.signature, &theory.bank, rule))
        .collect();
    let lines = theory
        .document
        .insert_all(texts.iter().map(String::as_str), before);
    for (rule, line) in rules.iter_mut().zip(lines) {
        rule.line = line;
    }
    theory.derived = rules;
    theory.refused.clear();
}

impl Theory {
    /// The messages about the lines of derived rules that could not be read.
    pub fn refusals(&self) -> Vec<Diagnostic> {
        let texts: rustc_hash::FxHashMap<LineId, &str> = self
            .document
            .lines()
            .iter()
            .map(|line| (line.id, line.text.as_str()))
            .collect();
        let message = |refused: &Refused| {
            let source = Source {
                name: &self.source,
                text: texts.get(&refused.line).copied().unwrap_or_default(),
            };
            let fault = Fault::new(refused.span.clone(), refused.message.as_str());
            let fault = fault.label(refused.label.as_str());
            let helped = refused
                .help
                .iter()
                .fold(fault, |f, help| f.help(help.as_str()));
            helped.at(source).further_down(refused.before)
        };
        self.refused.iter().map(message).collect()
    }

    /// A message about a line of the document, for what is found out after reading.
    pub fn diagnostic(&self, line: LineId, message: &str, help: &str) -> Diagnostic {
        let Some(found) = self.document.line(line) else {
            return Diagnostic::about(&self.source, message, help);
        };
        let text = found.text.trim_end();
        let start = text.len() - text.trim_start().len();
        let source = Source {
            name: &self.source,
            text,
        };
        Fault::new(start..text.len(), message)
            .label("this line")
            .help(help)
            .at(source)
            .further_down(self.document.number(line).unwrap_or(1) - 1)
    }
}

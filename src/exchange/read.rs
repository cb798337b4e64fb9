//! Statements, files, and what they are taken for.

use super::build::{self, Purpose, Statement};
use super::formula::{Formula, Terms, expect};
use super::token::{Kind, Lexer};
use crate::language::{Diagnostic, Fault, Source, decode, line_and_column};
use crate::session::{Library, OpenFault, Opened, Session};
use rustc_hash::FxHashSet;
use std::io::Read;
use std::ops::Range;
use std::path::{Path, PathBuf};

/// The words that begin a statement.
const WORDS: &[&str] = &["cnf", "fof", "include", "tff", "tcf", "thf", "tpi"];

/// The endings of files in clause syntax.
const ENDINGS: &[&str] = &["p", "ax"];

/// So much of a file is looked at to tell what it is.
const BEGINNING: u64 = 1 << 20;

/// Files that include files that include files, at most so deep.
const DEEPEST: usize = 64;

/// Is it a file in clause syntax, by its ending or by what it begins with?
pub fn is_clauses(path: &Path) -> bool {
    if !path.is_file() {
        return false;
    }
    let ending = path.extension().and_then(|ending| ending.to_str());
    if ending.is_some_and(|ending| ENDINGS.contains(&ending)) {
        return true;
    }
    let mut bytes = Vec::new();
    let read =
        std::fs::File::open(path).and_then(|file| file.take(BEGINNING).read_to_end(&mut bytes));
    read.is_ok() && begins_like_clauses(&String::from_utf8_lossy(&bytes))
}

fn begins_like_clauses(text: &str) -> bool {
    let mut lexer = Lexer::new(text);
    let word = lexer.next().map(|token| token.kind);
    matches!(word, Ok(Kind::Word(word)) if WORDS.contains(&&*word))
        && lexer.next().is_ok_and(|token| token.is("("))
}

/// Opens a file in clause syntax as a theory that has no file of its own.
///
/// Files that it includes are looked for in the folder of the library for them, or, where there is
/// none, in the folder of the file and those above it.
///
/// # Errors
///
/// What cannot be read, and everything that is no unit equation, with its place.
pub fn open(path: &Path, library: Library) -> Result<Opened, OpenFault> {
    if path.is_dir() {
        return Err(OpenFault::Folder(path.to_owned()));
    }
    let bytes = std::fs::read(path).map_err(|error| OpenFault::System(path.to_owned(), error))?;
    let mut reading = Reading {
        root: library.clauses.clone(),
        main: path.to_owned(),
        terms: Terms::default(),
        statements: Vec::new(),
        open: Vec::new(),
        whole: FxHashSet::default(),
        goal: None,
    };
    reading
        .file(path, bytes, None)
        .map_err(|fault| OpenFault::Text(vec![fault]))?;
    let title = path.file_stem().and_then(|stem| stem.to_str());
    let (text, notes) = build::text(
        title.unwrap_or_default(),
        &reading.terms,
        &reading.statements,
    );
    drop(reading);
    let mut opened =
        Session::read(&path.display().to_string(), &text, library).map_err(OpenFault::Text)?;
    opened.notes = notes;
    Ok(opened)
}

/// The names that an `include` selects, each with its place, and whether it was met.
struct Selection {
    names: Vec<(String, Range<usize>, bool)>,
}

impl Selection {
    fn takes(&mut self, name: &str) -> bool {
        let mut found = false;
        for (_, _, met) in self.names.iter_mut().filter(|(known, _, _)| known == name) {
            *met = true;
            found = true;
        }
        found
    }
}

struct Reading {
    root: Option<PathBuf>,
    main: PathBuf,
    terms: Terms,
    statements: Vec<Statement>,
    /// The files that are being read, the outermost first.
    open: Vec<PathBuf>,
    /// The files that were included as a whole.
    whole: FxHashSet<PathBuf>,
    /// The first goal.
    goal: Option<Goal>,
}

/// A goal that was read.
struct Goal {
    /// The file and the place of its role.
    source: String,
    place: Range<usize>,
    line: usize,
    /// Is it an inequation, which the laws are to contradict?
    is_inequation: bool,
}

impl Reading {
    fn file(
        &mut self,
        path: &Path,
        bytes: Vec<u8>,
        mut selection: Option<&mut Selection>,
    ) -> Result<(), Diagnostic> {
        let name = path.display().to_string();
        let text = decode(&name, bytes)?;
        let source = Source {
            name: &name,
            text: &text,
        };
        self.open.push(canonical(path));
        let mut lexer = Lexer::new(&text);
        while self.statement(&mut lexer, source, selection.as_deref_mut())? {}
        self.open.pop();
        Ok(())
    }

    /// Reads a statement; false at the end of the text.
    fn statement(
        &mut self,
        lexer: &mut Lexer<'_>,
        source: Source<'_>,
        selection: Option<&mut Selection>,
    ) -> Result<bool, Diagnostic> {
        let at = |fault: Fault| fault.at(source);
        let token = lexer.next().map_err(at)?;
        let word = match &token.kind {
            Kind::End => return Ok(false),
            Kind::Word(word) => word.as_ref(),
            _ => "",
        };
        let fault = match word {
            "cnf" | "fof" => {
                let read = self.formula(lexer, source, word == "cnf", selection);
                return read.map_err(at).map(|()| true);
            }
            "include" => return self.include(lexer, source, selection).map(|()| true),
            "tff" | "tcf" | "thf" | "tpi" => {
                Fault::new(token.span, format!("{word} statements are not supported"))
                    .label("typed or higher-order formulas")
                    .help("only cnf and fof statements of one equation can be imported")
            }
            _ => Fault::new(token.span, "no statement begins like this")
                .help("a statement is written cnf(name, axiom, s = t).")
                .help("a theory in the language of this program is opened with open"),
        };
        Err(at(fault))
    }

    /// `(name, role, formula).` or `(name, role, formula, annotations).`
    fn formula(
        &mut self,
        lexer: &mut Lexer<'_>,
        source: Source<'_>,
        is_clause: bool,
        selection: Option<&mut Selection>,
    ) -> Result<(), Fault> {
        let form = "a statement is written cnf(name, axiom, s = t).";
        expect(lexer, "(", form)?;
        let token = lexer.next()?;
        let name = match token.kind {
            Kind::Word(name) => name.into_owned(),
            Kind::Number(number) => number.to_owned(),
            _ => {
                return Err(
                    Fault::new(token.span, "the name of the statement is missing").help(form),
                );
            }
        };
        expect(lexer, ",", form)?;
        let role = lexer.next()?;
        let place = role.span.clone();
        let role = Role::new(&role.kind).ok_or_else(|| {
            Fault::new(place.clone(), "this role is not supported")
                .label("a role is expected here")
                .help("use axiom, hypothesis, definition, lemma, conjecture or negated_conjecture")
        })?;
        if let Kind::Sign("-") = lexer.peek()?.kind {
            // A subrole is a part of the role without a meaning of its own.
            lexer.next()?;
            lexer.next()?;
        }
        expect(lexer, ",", form)?;
        if selection.is_some_and(|selection| !selection.takes(&name)) {
            return end_of_statement(lexer);
        }
        let formula = self.terms.formula(lexer, is_clause)?;
        let next = lexer.peek()?;
        if !next.is(",") && !next.is(")") {
            return Err(Fault::new(next.span, "a comma or ) is expected here")
                .label("the formula should end before this")
                .help(form));
        }
        end_of_statement(lexer)?;
        self.take(name, role, formula, place, source)
    }

    /// Takes a formula for what it is by its role.
    fn take(
        &mut self,
        name: String,
        role: Role,
        formula: Formula,
        place: Range<usize>,
        source: Source<'_>,
    ) -> Result<(), Fault> {
        if role != Role::Conjecture && formula.positive {
            return self.law(name, formula);
        }
        let is_inequation = role != Role::Conjecture;
        if let Some(first) = &self.goal
            && (first.is_inequation || is_inequation)
        {
            return Err(first.beside(place, source));
        }
        if self.goal.is_none() {
            let (line, _) = line_and_column(source.text, place.start);
            self.goal = Some(Goal {
                source: source.name.to_owned(),
                place,
                line,
                is_inequation,
            });
        }
        let goal = if is_inequation {
            formula.negated()
        } else {
            formula
        };
        if !goal.positive {
            return Err(
                Fault::new(goal.span, "no equations imply that two things differ")
                    .label("an inequation as a conjecture")
                    .help("state the equation, and expect that it does not follow"),
            );
        }
        // Each value may depend on what is quantified outside of it.
        let some = goal.bound.iter().position(|bound| !bound.universal);
        let inner = some.map_or(&[][..], |some| &goal.bound[some..]);
        if inner.iter().any(|bound| bound.universal) {
            return Err(Fault::new(
                goal.span,
                "this asks for a value that suits all values of another variable",
            )
            .label("? stands before !")
            .help("put a new function of the variables before it in place of the inner variable, such as f(Y) for X in ?[Y]: ![X]:"));
        }
        let unknowns = inner.iter().map(|bound| bound.variable).collect();
        self.statements.push(Statement {
            name,
            purpose: Purpose::Claim(unknowns),
            left: goal.left,
            right: goal.right,
        });
        Ok(())
    }

    fn law(&mut self, name: String, formula: Formula) -> Result<(), Fault> {
        if formula.is_law() {
            self.statements.push(Statement {
                name,
                purpose: Purpose::Law,
                left: formula.left,
                right: formula.right,
            });
            return Ok(());
        }
        Err(Fault::new(
            formula.span,
            "only universally quantified equations can be laws",
        )
        .label("some variable is quantified existentially")
        .help("state the equation for a new constant, or for a function of the other variables"))
    }

    /// `include('path').` or `include('path', [name, …]).`
    fn include(
        &mut self,
        lexer: &mut Lexer<'_>,
        source: Source<'_>,
        outer: Option<&mut Selection>,
    ) -> Result<(), Diagnostic> {
        let at = |fault: Fault| fault.at(source);
        let (path, span, mut selection) = include(lexer).map_err(at)?;
        if outer.is_some() {
            // A selection reaches into the statements of a file only.
            let fault = Fault::new(
                span,
                "a file that is included in part includes another file",
            )
            .help("include that file where the first one is included");
            return Err(at(fault));
        }
        let found = self.find(&path, source.name);
        let found = found.map_err(|message| {
            let fault = Fault::new(span.clone(), message).label("not found");
            at(fault.help("name the folder that paths begin in with --library FOLDER or the environment variable EQUABLE_LIBRARY"))
        })?;
        let real = canonical(&found);
        if self.open.contains(&real) || self.open.len() >= DEEPEST {
            let fault = Fault::new(span, "these files include each other without end");
            return Err(at(fault.help("take this include out")));
        }
        if selection.is_none() && !self.whole.insert(real) {
            return Ok(());
        }
        let bytes = std::fs::read(&found).map_err(|error| {
            let message = format!("{} cannot be read: {error}", found.display());
            at(Fault::new(span, message).help("look at the file and its folder"))
        })?;
        self.file(&found, bytes, selection.as_mut())?;
        let missing = selection
            .as_ref()
            .and_then(|selection| selection.names.iter().find(|(_, _, met)| !met));
        match missing {
            None => Ok(()),
            Some((name, span, _)) => {
                let message = format!("{path} has no statement {name}");
                Err(at(
                    Fault::new(span.clone(), message).help("look at the spelling")
                ))
            }
        }
    }

    /// The file that a path in an `include` means.
    fn find(&self, path: &str, from: &str) -> Result<PathBuf, String> {
        if let Some(root) = &self.root {
            let found = root.join(path);
            return if found.is_file() {
                Ok(found)
            } else {
                Err(format!("there is no file {path} in {}", root.display()))
            };
        }
        let tried = |from: &Path| {
            let folder = std::path::absolute(from).unwrap_or_else(|_| from.to_owned());
            let mut paths = folder.ancestors().skip(1).map(|folder| folder.join(path));
            paths.find(|path| path.is_file())
        };
        tried(Path::new(from))
            .or_else(|| tried(&self.main))
            .ok_or_else(|| format!("there is no file {path} beside this file or above it"))
    }
}

fn canonical(path: &Path) -> PathBuf {
    path.canonicalize().unwrap_or_else(|_| path.to_owned())
}

impl Goal {
    /// What is said of a goal that cannot stand beside this one.
    fn beside(&self, place: Range<usize>, source: Source<'_>) -> Fault {
        let fault =
            Fault::new(place, "there is an inequation beside another goal").label("a second goal");
        let fault = if self.source == source.name {
            fault.also(self.place.clone(), "the first goal is here")
        } else {
            fault.help(format!(
                "the first goal is in {}, line {}",
                self.source, self.line
            ))
        };
        fault
            .help("an inequation is a goal whatever its role: it asks whether the laws contradict it")
            .help("together they ask whether one of several equations holds; keep one of them in a file")
            .help("several conjectures can be stated in fof: each becomes a claim")
    }
}

/// What a role makes of a formula.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Role {
    /// An axiom, or part of a negated conjecture: the equations among these are laws, and the
    /// clauses contradict each other if the laws contradict the inequation.
    Clause,
    Conjecture,
}

impl Role {
    fn new(kind: &Kind<'_>) -> Option<Role> {
        let Kind::Word(word) = kind else {
            return None;
        };
        match &**word {
            "axiom" | "hypothesis" | "definition" | "assumption" | "lemma" | "theorem"
            | "corollary" | "plain" | "negated_conjecture" => Some(Role::Clause),
            "conjecture" => Some(Role::Conjecture),
            _ => None,
        }
    }
}

/// The path of an `include`, its place, and the names that it selects.
fn include(lexer: &mut Lexer<'_>) -> Result<(String, Range<usize>, Option<Selection>), Fault> {
    let form = "write include('path'). or include('path', [name, name]).";
    expect(lexer, "(", form)?;
    let token = lexer.next()?;
    let Kind::Word(path) = token.kind else {
        return Err(Fault::new(token.span, "the path of a file is missing").help(form));
    };
    let mut selection = None;
    if lexer.peek()?.is(",") {
        lexer.next()?;
        expect(lexer, "[", form)?;
        let mut names = Vec::new();
        while !lexer.peek()?.is("]") {
            let token = lexer.next()?;
            let name = match token.kind {
                Kind::Word(name) => name.into_owned(),
                Kind::Number(number) => number.to_owned(),
                _ => return Err(Fault::new(token.span, "a name is expected here").help(form)),
            };
            names.push((name, token.span, false));
            if !lexer.peek()?.is("]") {
                expect(lexer, ",", form)?;
            }
        }
        lexer.next()?;
        selection = Some(Selection { names });
    }
    expect(lexer, ")", form)?;
    expect(lexer, ".", "a statement ends with a full stop")?;
    Ok((path.into_owned(), token.span, selection))
}

/// Reads past annotations to the end of a statement.
fn end_of_statement(lexer: &mut Lexer<'_>) -> Result<(), Fault> {
    let first = lexer.peek()?;
    let mut depth = 0_usize;
    loop {
        let token = lexer.next()?;
        match token.kind {
            Kind::Sign("(" | "[" | "{") => depth += 1,
            Kind::Sign(")") if depth == 0 => break,
            Kind::Sign(")" | "]" | "}") => depth = depth.saturating_sub(1),
            Kind::End => {
                return Err(Fault::new(first.span, "the statement does not end")
                    .help("a statement ends with ) and a full stop"));
            }
            _ => {}
        }
    }
    expect(lexer, ".", "a statement ends with a full stop")
}

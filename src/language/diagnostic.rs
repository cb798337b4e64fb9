//! Messages about text, with place and remedy.

use ariadne::{Color, Config, IndexType, Label, Report, ReportKind, Source as Page};
use std::ops::Range;
use unicode_width::{UnicodeWidthChar, UnicodeWidthStr};

/// A text with the name that messages give it: a file, or the prompt.
#[derive(Clone, Copy, Debug)]
pub struct Source<'t> {
    /// The name.
    pub name: &'t str,
    /// The whole text.
    pub text: &'t str,
}

/// What is wrong, without the text that it is about: see [`Fault::at`]. As small as a pointer, so
/// that results stay small.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fault(Box<FaultParts>);

/// What a [`Fault`] says.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FaultParts {
    /// Where, in bytes.
    pub span: Range<usize>,
    /// What is wrong.
    pub message: String,
    /// A few words for the place itself.
    pub label: String,
    /// What to do, one remedy each.
    pub help: Vec<String>,
    /// Another place that matters, and why.
    pub also: Option<(Range<usize>, String)>,
}

impl Fault {
    /// A fault at a place.
    pub fn new(span: Range<usize>, message: impl Into<String>) -> Self {
        Fault(Box::new(FaultParts {
            span,
            message: message.into(),
            label: "here".to_owned(),
            help: Vec::new(),
            also: None,
        }))
    }

    /// With words for the place.
    #[must_use]
    pub fn label(mut self, label: impl Into<String>) -> Self {
        self.label = label.into();
        self
    }

    /// With a remedy.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help.push(help.into());
        self
    }

    /// With another place that matters.
    #[must_use]
    pub fn also(mut self, span: Range<usize>, why: impl Into<String>) -> Self {
        self.also = Some((span, why.into()));
        self
    }

    /// The message about this text.
    pub fn at(self, source: Source<'_>) -> Diagnostic {
        Diagnostic::new(source, self)
    }
}

impl std::ops::Deref for Fault {
    type Target = FaultParts;

    fn deref(&self) -> &FaultParts {
        &self.0
    }
}

impl std::ops::DerefMut for Fault {
    fn deref_mut(&mut self) -> &mut FaultParts {
        &mut self.0
    }
}

/// How many characters of the line are kept on each side of the place.
const KEPT: usize = 300;

/// A message about text, with the part of the text that it is about. It stays small however long
/// the text and its lines are. As small as a pointer, so that results stay small.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic(Box<Message>);

/// What a [`Diagnostic`] says.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Message {
    /// The name of the text.
    pub source: String,
    /// The line, from 1.
    pub line: usize,
    /// The column in characters, from 1.
    pub column: usize,
    /// The place in the whole text, in bytes.
    pub span: Range<usize>,
    /// What is wrong.
    pub message: String,
    /// A few words for the place itself.
    pub label: String,
    /// What to do, one remedy each.
    pub help: Vec<String>,
    /// What else there is to know.
    pub notes: Vec<String>,
    /// Another place; the first of the notes is about it.
    also: Option<Also>,
    excerpt: Excerpt,
}

/// Another place that matters, and why.
#[derive(Clone, Debug, PartialEq, Eq)]
struct Also {
    why: String,
    line: usize,
    column: usize,
}

impl Also {
    fn note(&self) -> String {
        format!("{} (line {}, column {})", self.why, self.line, self.column)
    }
}

/// A part of one line: some characters before the place, the place, and some after it.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
struct Excerpt {
    before: Vec<char>,
    inside: Vec<char>,
    after: Vec<char>,
    /// Does the line begin before `before`?
    cut: bool,
}

impl Diagnostic {
    /// The message about this text.
    pub fn new(source: Source<'_>, fault: Fault) -> Self {
        let text = source.text;
        let fault = *fault.0;
        let start = floor(text, fault.span.start);
        let end = floor(text, fault.span.end).max(start);
        let (line, column) = line_and_column(text, start);
        let also = fault.also.map(|(span, why)| {
            let (line, column) = line_and_column(text, floor(text, span.start));
            Also { why, line, column }
        });
        Diagnostic(Box::new(Message {
            source: source.name.to_owned(),
            line,
            column,
            span: start..end,
            message: fault.message,
            label: fault.label,
            help: fault.help,
            notes: also.iter().map(Also::note).collect(),
            also,
            excerpt: Excerpt::new(text, start..end),
        }))
    }

    /// A message about a whole file, without a place in it.
    pub fn about(source: &str, message: impl Into<String>, help: impl Into<String>) -> Self {
        let text = "";
        let fault = Fault::new(0..0, message).help(help);
        let mut made = Diagnostic::new(Source { name: source, text }, fault);
        made.line = 0;
        made.column = 0;
        made
    }

    /// With something else to know.
    #[must_use]
    pub fn note(mut self, note: impl Into<String>) -> Self {
        self.notes.push(note.into());
        self
    }

    /// The same place, `lines` further down: for text that is a part of a file.
    #[must_use]
    pub fn further_down(mut self, lines: usize) -> Self {
        self.line += lines;
        if let Message {
            also: Some(also),
            notes,
            ..
        } = &mut *self.0
        {
            also.line += lines;
            if let Some(first) = notes.first_mut() {
                *first = also.note();
            }
        }
        self
    }

    /// The message in one line, with its place: `group.theory:3:5: …`.
    pub fn brief(&self) -> String {
        let message = self.message.replace('\n', " ");
        match self.line {
            0 => format!("{}: {message}", visible(&self.source)),
            line => format!(
                "{}:{line}:{}: {message}",
                visible(&self.source),
                self.column
            ),
        }
    }

    /// The message with the line that it is about, the place marked, and the remedies, for a
    /// terminal of `width` columns.
    pub fn render(&self, color: bool, width: usize) -> String {
        let width = width.clamp(16, 400);
        if self.line == 0 {
            return self.render_without_place(width);
        }
        let gutter = self.line.to_string().len() + 4;
        let room = width.saturating_sub(gutter).max(8);
        let (line, place) = self.excerpt.fit(room);
        let config = Config::new()
            .with_index_type(IndexType::Byte)
            .with_color(color)
            .with_compact(width < 40);
        let message = fold(&self.message, width, "Error: ".len(), 0);
        // Remedies are drawn behind `Help 1: `, and so are their further lines.
        let inner = room.saturating_sub("Help 1: ".len()).max(8);
        let mut report = Report::build(ReportKind::Error, ("@", place.clone()))
            .with_config(config)
            .with_message(message);
        let drawn = line[..place.end].width() + 6 + self.label.width();
        let mut label = Label::new(("@", place)).with_color(Color::Red);
        if drawn <= room {
            label = label.with_message(&self.label);
        } else {
            label = label.with_message("here");
        }
        report.add_label(label);
        if drawn > room && self.label != "here" {
            report.add_note(fold(&self.label, inner, 0, 0));
        }
        for note in &self.notes {
            report.add_note(fold(note, inner, 0, 0));
        }
        for help in &self.help {
            report.add_help(fold(help, inner, 0, 0));
        }
        let page = Page::from(line);
        let mut drawn = Vec::new();
        // Writing to memory does not fail, and the only source that is asked for is there.
        let _ = report.finish().write(("@", page), &mut drawn);
        self.put_place(String::from_utf8_lossy(&drawn).into_owned())
    }

    fn render_without_place(&self, width: usize) -> String {
        let mut text = format!(
            "Error: {}\n",
            fold(
                &format!("{}: {}", visible(&self.source), self.message),
                width,
                "Error: ".len(),
                0
            )
        );
        for note in &self.notes {
            text += &format!("  Note: {}\n", fold(note, width, 8, 8));
        }
        for help in &self.help {
            text += &format!("  Help: {}\n", fold(help, width, 8, 8));
        }
        text
    }

    /// Ariadne knows only the excerpt, as line 1 of a text: its place and its number are replaced by
    /// those in the whole text.
    fn put_place(&self, drawn: String) -> String {
        let number = self.line.to_string();
        let pad = number.len() - 1;
        let mut text = String::with_capacity(drawn.len() + 200);
        let (mut in_frame, mut numbered) = (false, false);
        for line in drawn.split_inclusive('\n') {
            if !in_frame && let Some(at) = line.find("@:1:") {
                in_frame = true;
                let digits = |c: char| c.is_ascii_digit();
                let rest = line[at + 4..].trim_start_matches(digits);
                let place = format!("{}:{number}:{}", visible(&self.source), self.column);
                text.extend(std::iter::repeat_n(' ', pad));
                text += &format!("{}{place}{rest}", &line[..at]);
            } else if !in_frame {
                text += line;
            } else if let (false, Some(at)) = (numbered, line.find("1 │")) {
                numbered = true;
                text += &format!("{}{number}{}", &line[..at], &line[at + 1..]);
            } else if let Some(at) = line.find("───╯") {
                text += &format!("{}{}{}", &line[..at], "─".repeat(pad), &line[at..]);
            } else {
                text.extend(std::iter::repeat_n(' ', pad));
                text += line;
            }
        }
        text
    }
}

impl std::ops::Deref for Diagnostic {
    type Target = Message;

    fn deref(&self) -> &Message {
        &self.0
    }
}

impl std::ops::DerefMut for Diagnostic {
    fn deref_mut(&mut self) -> &mut Message {
        &mut self.0
    }
}

impl std::fmt::Display for Diagnostic {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(&self.brief())
    }
}

impl Excerpt {
    fn new(text: &str, span: Range<usize>) -> Self {
        let ends_line = |c: &char| *c != '\n';
        let before: Vec<char> = text[..span.start]
            .chars()
            .rev()
            .take_while(ends_line)
            .take(KEPT + 1)
            .collect();
        let inside = text[span.clone()].chars().take_while(ends_line);
        let inside: Vec<char> = inside.take(KEPT).collect();
        let length: usize = inside.iter().map(|c| c.len_utf8()).sum();
        let after = text[span.start + length..].chars().take_while(ends_line);
        Excerpt {
            cut: before.len() > KEPT,
            before: before.into_iter().take(KEPT).rev().map(picture).collect(),
            inside: inside.into_iter().map(picture).collect(),
            after: after.take(KEPT).map(picture).collect(),
        }
    }

    /// The part of the line that fits, and the place in it, in bytes.
    fn fit(&self, room: usize) -> (String, Range<usize>) {
        let total: usize = [&self.before, &self.inside, &self.after]
            .iter()
            .flat_map(|part| part.iter())
            .map(|c| columns(*c))
            .sum();
        let fits = total <= room;
        let left = if fits { usize::MAX } else { room / 2 };
        let mut line = tail(&self.before, left, self.cut);
        let start = line.len();
        let right = if fits {
            usize::MAX
        } else {
            room - line.width()
        };
        let inside: Vec<char> = self.inside.clone();
        line += &head(&inside, right);
        let end = line.len();
        let left = if fits {
            usize::MAX
        } else {
            room.saturating_sub(line.width())
        };
        line += &head(&self.after, left);
        if line.trim().is_empty() {
            // Ariadne shows no label on an empty line.
            line.push(' ');
        }
        let end = if end > start {
            end
        } else {
            start + line[start..].chars().next().map_or(0, char::len_utf8)
        };
        (line, start..end)
    }
}

/// The last characters that fit.
fn tail(chars: &[char], room: usize, cut: bool) -> String {
    let mut width = 0;
    let mut from = chars.len();
    while from > 0 && width + columns(chars[from - 1]) < room {
        from -= 1;
        width += columns(chars[from]);
    }
    let mark = if from > 0 || cut { "…" } else { "" };
    mark.chars().chain(chars[from..].iter().copied()).collect()
}

/// The first characters that fit.
fn head(chars: &[char], room: usize) -> String {
    let mut text = String::new();
    let mut width = 0;
    for (place, &c) in chars.iter().enumerate() {
        let more = place + 1 < chars.len();
        if width + columns(c) + usize::from(more) > room {
            if room > width {
                text.push('…');
            }
            break;
        }
        width += columns(c);
        text.push(c);
    }
    text
}

fn columns(c: char) -> usize {
    c.width().unwrap_or(1)
}

/// A character that a terminal shows as one: control characters become their pictures.
fn picture(c: char) -> char {
    match c {
        '\r' | '\t' => ' ',
        '\0'..='\u{1f}' => char::from_u32(0x2400 + c as u32).unwrap_or('\u{fffd}'),
        '\u{7f}' => '\u{2421}',
        c if c.is_control() => '\u{fffd}',
        '\u{2028}' | '\u{2029}' | '\u{200b}'..='\u{200f}' | '\u{202a}'..='\u{202e}' => '\u{fffd}',
        '\u{2066}'..='\u{2069}' | '\u{feff}' => '\u{fffd}',
        c => c,
    }
}

/// A text that is shown as it stands, without control characters.
pub fn visible(text: &str) -> String {
    text.chars().map(picture).collect()
}

/// Breaks words onto lines of `width`, the first of which is `first` columns shorter and the
/// others of which are indented.
fn fold(text: &str, width: usize, first: usize, indent: usize) -> String {
    let mut folded = String::new();
    let mut column = first;
    for word in text.split_whitespace() {
        let word = visible(word);
        let length = word.width();
        if !folded.is_empty() {
            if column + 1 + length > width {
                folded.push('\n');
                folded.extend(std::iter::repeat_n(' ', indent));
                column = indent;
            } else {
                folded.push(' ');
                column += 1;
            }
        }
        folded += &word;
        column += length;
    }
    folded
}

fn floor(text: &str, mut at: usize) -> usize {
    at = at.min(text.len());
    while !text.is_char_boundary(at) {
        at -= 1;
    }
    at
}

/// The line and column of a place, from 1.
pub fn line_and_column(text: &str, at: usize) -> (usize, usize) {
    let before = &text[..at];
    let line = 1 + before.bytes().filter(|byte| *byte == b'\n').count();
    let start = before.rfind('\n').map_or(0, |end| end + 1);
    let column = 1 + before[start..].chars().filter(|c| *c != '\u{feff}').count();
    (line, column)
}

//! Reserved words, and which characters make up names and signs.

use unicode_properties::{GeneralCategory, UnicodeGeneralCategory};

/// The words that begin a declaration.
pub const DECLARATIONS: &[&str] = &[
    "theory", "note", "use", "sort", "constant", "function", "infix", "prefix", "postfix",
    "variable", "law", "rule", "define", "claim", "order", "derived",
];

/// All words that cannot be names without quotes.
pub const RESERVED: &[&str] = &[
    "theory", "note", "use", "sort", "constant", "function", "infix", "prefix", "postfix",
    "variable", "law", "rule", "define", "claim", "order", "derived", "given", "trace", "apply",
    "find", "prove", "separate", "closed", "proof", "why", "evaluate", "evidence", "complete",
    "budget", "simplify", "drop", "replace", "rename", "undo", "redo", "reload", "laws", "rules",
    "symbols", "claims", "answers", "algebras", "status", "check", "audit", "overlaps", "census",
    "discover", "compare", "atlas", "new", "open", "theories", "save", "import", "export",
    "journal", "help", "quit", "when", "and", "within", "most", "is", "over",
];

/// Is the word one that cannot be a name without quotes?
pub fn is_reserved(word: &str) -> bool {
    RESERVED.contains(&word)
}

/// Does the word begin a declaration? `order` does with something behind it, and is a command
/// without.
pub fn is_declaration(word: &str) -> bool {
    DECLARATIONS.contains(&word)
}

/// The word that a line begins with, whether reserved or not; none if it begins with a sign, a
/// bracket or quotes, or states nothing.
pub fn first_word(text: &str) -> Option<&str> {
    let text = text.trim_start_matches(['\u{feff}', ' ', '\t', '\r', '\n']);
    let end = text.find(|c: char| !is_name_char(c)).unwrap_or(text.len());
    (end > 0 && text.starts_with(is_name_start)).then(|| &text[..end])
}

/// Can a name begin with this character?
pub fn is_name_start(c: char) -> bool {
    c.is_alphanumeric() || c == '_'
}

/// Can a name go on with this character? Marks belong to the letter before them.
pub fn is_name_char(c: char) -> bool {
    is_name_start(c) || is_mark(c)
}

/// Is it a mark that combines with the character before it?
pub fn is_mark(c: char) -> bool {
    !c.is_ascii()
        && matches!(
            c.general_category(),
            GeneralCategory::NonspacingMark
                | GeneralCategory::SpacingMark
                | GeneralCategory::EnclosingMark
        )
}

/// Can the character be part of a sign?
pub fn is_sign_char(c: char) -> bool {
    if c.is_ascii() {
        return c.is_ascii_punctuation() && !matches!(c, '_' | '(' | ')' | ',' | '"');
    }
    matches!(
        c.general_category(),
        GeneralCategory::MathSymbol
            | GeneralCategory::OtherSymbol
            | GeneralCategory::ModifierSymbol
            | GeneralCategory::OtherPunctuation
            | GeneralCategory::DashPunctuation
    ) && !c.is_alphanumeric()
}

/// Is it a name that needs no quotes where symbols and variables stand?
pub fn is_plain_name(text: &str) -> bool {
    text.starts_with(is_name_start) && text.chars().all(is_name_char) && !is_reserved(text)
}

/// Is it a sign that needs no quotes?
pub fn is_plain_sign(text: &str) -> bool {
    !text.is_empty()
        && text.starts_with(is_sign_char)
        && text.chars().all(|c| is_sign_char(c) || is_mark(c))
        && !matches!(text, "=" | "!=" | ":" | "#" | "->")
}

/// Is it a name that needs no quotes where laws, claims and theories are named?
pub fn is_plain_law_name(text: &str) -> bool {
    text.starts_with(|c: char| c.is_alphabetic())
        && text.chars().all(|c| is_name_char(c) || c == '-')
        && !text.ends_with('-')
        && !is_reserved(text)
}

/// A symbol's or variable's name as it is typed.
pub fn quote_symbol(name: &str) -> String {
    if is_plain_name(name) || is_plain_sign(name) {
        name.to_owned()
    } else {
        format!("\"{name}\"")
    }
}

/// A law's, claim's or theory's name as it is typed.
pub fn quote_law(name: &str) -> String {
    if is_plain_law_name(name) {
        name.to_owned()
    } else {
        format!("\"{name}\"")
    }
}

/// The name of `names` that is most like a mistyped one, if one is like it at all.
pub fn nearest<'a>(typed: &str, names: impl Iterator<Item = &'a str>) -> Option<&'a str> {
    let typed: Vec<char> = typed.chars().take(40).collect();
    let allowed = match typed.len() {
        0 | 1 => return None,
        2..=4 => 1,
        _ => 2,
    };
    names
        .filter(|name| name.chars().count().abs_diff(typed.len()) <= allowed)
        .map(|name| (distance(&typed, &name.chars().collect::<Vec<_>>()), name))
        .filter(|(distance, _)| *distance <= allowed)
        .min()
        .map(|(_, name)| name)
}

/// How many insertions, deletions, changes and exchanges of neighbours lie between two words
/// (the restricted distance of Damerau 1964).
fn distance(a: &[char], b: &[char]) -> usize {
    let mut before: Vec<usize> = Vec::new();
    let mut last: Vec<usize> = (0..=b.len()).collect();
    for i in 1..=a.len() {
        let mut row = vec![i];
        for j in 1..=b.len() {
            let change = last[j - 1] + usize::from(a[i - 1] != b[j - 1]);
            let mut best = change.min(last[j] + 1).min(row[j - 1] + 1);
            if i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1] {
                best = best.min(before[j - 2] + 1);
            }
            row.push(best);
        }
        before = std::mem::replace(&mut last, row);
    }
    last[b.len()]
}

//! The floors of the program: who may import whom, and how long a file may be.

use std::collections::BTreeSet;
use std::path::{Path, PathBuf};

/// The modules from the ground up; those of one row are on the same floor.
const FLOORS: &[&[&str]] = &[
    &["term"],
    &["order", "proof"],
    &["rewrite"],
    &["engine", "algebra"],
    &["theory", "language"],
    &["session"],
    &["exchange"],
    &["shell"],
];

/// Text and the theories that it makes are on one floor, and only in this direction.
const SAME_FLOOR: &[(&str, &str)] = &[("language", "theory")];

const LONGEST: usize = 600;

fn source() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("src")
}

/// All Rust files below a folder.
fn files(folder: &Path) -> Vec<PathBuf> {
    let mut found = Vec::new();
    let mut folders = vec![folder.to_owned()];
    while let Some(folder) = folders.pop() {
        for entry in std::fs::read_dir(folder).expect("a folder") {
            let path = entry.expect("an entry").path();
            if path.is_dir() {
                folders.push(path);
            } else if path.extension().is_some_and(|ending| ending == "rs") {
                found.push(path);
            }
        }
    }
    found.sort();
    found
}

/// The module that a file belongs to: the first part of its path.
fn module(file: &Path) -> String {
    let inside = file.strip_prefix(source()).expect("a file of src");
    let first = inside.iter().next().expect("a name").to_string_lossy();
    first.trim_end_matches(".rs").to_owned()
}

/// A file without remarks: what stands in documentation is no import.
fn code(text: &str) -> String {
    let without = |line: &str| match line.find("//") {
        Some(at) => line[..at].to_owned() + "\n",
        None => line.to_owned() + "\n",
    };
    text.lines().map(without).collect()
}

/// The modules named in `crate::X`, `crate::{X, Y}` and, in the root's tests, `equable::X`.
fn imports(code: &str) -> BTreeSet<String> {
    let mut found = BTreeSet::new();
    for start in ["crate::", "equable::"] {
        for (at, _) in code.match_indices(start) {
            let rest = &code[at + start.len()..];
            if let Some(group) = rest.strip_prefix('{') {
                found.extend(heads(group));
            } else {
                found.extend(head(rest));
            }
        }
    }
    found
}

/// The first name of each path of a group, whose opening brace has been read.
fn heads(group: &str) -> Vec<String> {
    let (mut depth, mut start, mut found) = (0, 0, Vec::new());
    for (at, sign) in group.char_indices() {
        match sign {
            '{' => depth += 1,
            '}' | ',' if depth == 0 => {
                found.extend(head(group[start..at].trim()));
                start = at + 1;
                if sign == '}' {
                    return found;
                }
            }
            '}' => depth -= 1,
            _ => {}
        }
    }
    panic!("a group of imports has no end");
}

fn head(path: &str) -> Option<String> {
    let path = path.trim_start().trim_start_matches("r#");
    let end = path.find(|c: char| !(c.is_alphanumeric() || c == '_'));
    let name = &path[..end.unwrap_or(path.len())];
    (!name.is_empty()).then(|| name.to_owned())
}

fn floor(module: &str) -> Option<usize> {
    FLOORS.iter().position(|floor| floor.contains(&module))
}

fn may_import(from: &str, to: &str) -> bool {
    if from == to {
        return true;
    }
    let (Some(own), Some(other)) = (floor(from), floor(to)) else {
        return false;
    };
    match from {
        "proof" => false,
        _ => other < own || SAME_FLOOR.contains(&(from, to)),
    }
}

#[test]
fn every_module_is_on_a_floor() {
    for file in files(&source()) {
        let module = module(&file);
        let known = floor(&module).is_some() || module == "lib" || module == "main";
        assert!(known, "{}: on which floor is `{module}`?", file.display());
    }
}

#[test]
fn imports_go_downwards() {
    let mut wrong = Vec::new();
    let mut seen = 0;
    for file in files(&source()) {
        let from = module(&file);
        if from == "lib" || from == "main" {
            continue;
        }
        let text = std::fs::read_to_string(&file).expect("UTF-8");
        for to in imports(&code(&text)) {
            seen += 1;
            if !may_import(&from, &to) {
                wrong.push(format!("{}: {from} imports {to}", file.display()));
            }
        }
    }
    assert!(seen > 50, "imports are not found any more");
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn files_can_be_read_in_one_sitting() {
    let mut wrong = Vec::new();
    for file in files(&source()) {
        let lines = std::fs::read_to_string(&file)
            .expect("UTF-8")
            .lines()
            .count();
        if lines > LONGEST {
            wrong.push(format!("{}: {lines} lines", file.display()));
        }
    }
    assert!(wrong.is_empty(), "{}", wrong.join("\n"));
}

#[test]
fn imports_are_found() {
    let text = "use crate::order::{A, B};\nuse crate::{term::{Bank, Id}, proof, r#rewrite::X};\n\
                /// [`crate::shell`]\nfn f() { crate::engine::run(); } // crate::session";
    let found: Vec<String> = imports(&code(text)).into_iter().collect();
    assert_eq!(found, ["engine", "order", "proof", "rewrite", "term"]);
    assert!(may_import("language", "theory") && !may_import("theory", "language"));
    assert!(!may_import("proof", "term") && !may_import("order", "proof"));
    assert!(!may_import("term", "order") && may_import("shell", "session"));
}

//! The folder that `--evidence` names.

use super::problem::Problem;
use crate::proof::Evidence;
use crate::session::write_evidence;
use std::collections::HashSet;
use std::path::{Path, PathBuf};

/// A folder for evidence, one file for each settled answer.
pub struct Folder {
    path: PathBuf,
    /// The names that this run has given, in small letters: some systems do not tell apart the
    /// others.
    given: HashSet<String>,
    /// May a file of an earlier run be replaced?
    replaces: bool,
}

impl Folder {
    /// The folder, which is made if it is missing. With `replaces`, what an earlier run has
    /// written about the same claims is replaced.
    pub fn make(path: &Path, replaces: bool) -> Result<Folder, Problem> {
        match std::fs::create_dir_all(path) {
            Ok(()) => Ok(Folder {
                path: path.to_owned(),
                given: HashSet::new(),
                replaces,
            }),
            Err(_) if path.is_file() => Err(Problem::said(
                format!("{} is a file, not a folder", path.display()),
                "give another name after --evidence",
            )),
            Err(error) => Err(Problem::system("write", path, &error)),
        }
    }

    /// Writes evidence about something in a theory; gives the path.
    pub fn write(
        &mut self,
        theory: &str,
        about: &str,
        evidence: &Evidence,
    ) -> Result<String, Problem> {
        let name = self.name(theory, about);
        let path = self.path.join(name);
        write_evidence(&path, evidence).map_err(|error| Problem::system("write", &path, &error))?;
        Ok(path.display().to_string())
    }

    /// A file name that was not given before.
    fn name(&mut self, theory: &str, about: &str) -> String {
        let stem = Path::new(theory).file_stem();
        let stem = stem.map_or_else(|| theory.into(), |stem| stem.to_string_lossy());
        let base = format!("{}-{}", safe(&stem), safe(about));
        let names = std::iter::once(format!("{base}.json"))
            .chain((2_u64..).map(|number| format!("{base}-{number}.json")));
        let mut free = names.filter(|name| {
            let is_given = self.given.contains(&name.to_lowercase());
            !is_given && (self.replaces || !self.path.join(name).exists())
        });
        let name = free.next().unwrap_or(base);
        self.given.insert(name.to_lowercase());
        name
    }
}

/// A text as part of a file name: letters, digits, `_` and `-`, not too long.
fn safe(text: &str) -> String {
    const LONGEST: usize = 80;
    let mut made = String::new();
    for c in text.chars() {
        if made.len() >= LONGEST {
            break;
        }
        if c.is_alphanumeric() || c == '_' {
            made.push(c);
        } else if !made.is_empty() && !made.ends_with('-') {
            made.push('-');
        }
    }
    let made = made.trim_end_matches('-');
    if made.is_empty() { "unnamed" } else { made }.to_owned()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn file_names_are_safe_and_different() {
        let place = tempfile::tempdir().unwrap();
        let mut folder = Folder::make(&place.path().join("a/b"), true).unwrap();
        assert_eq!(folder.name("x/group.theory", "flip"), "group-flip.json");
        assert_eq!(folder.name("y/group.theory", "Flip"), "group-Flip-2.json");
        assert_eq!(folder.name("group", "../../etc"), "group-etc.json");
        assert_eq!(folder.name("+.theory", "∨ ∧"), "unnamed-unnamed.json");
        assert_eq!(folder.name("a-b.theory", "c"), "a-b-c.json");
        assert_eq!(folder.name("a.theory", "b-c"), "a-b-c-2.json");
        assert!(folder.name(&"ä".repeat(900), &"β".repeat(900)).len() < 200);
    }

    #[test]
    fn files_of_an_earlier_run_are_replaced_or_kept() {
        let place = tempfile::tempdir().unwrap();
        std::fs::write(place.path().join("group-1.json"), "").unwrap();
        let mut folder = Folder::make(place.path(), true).unwrap();
        assert_eq!(folder.name("group", "1"), "group-1.json");
        let mut folder = Folder::make(place.path(), false).unwrap();
        assert_eq!(folder.name("group", "1"), "group-1-2.json");
    }
}

//! `save`, `save FILE`

use super::{Command, Group, Operand};
use crate::session::Session;
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use std::path::Path;

/// The command.
pub const COMMAND: Command = Command {
    word: "save",
    group: Group::Keeping,
    forms: &[
        ("save", "write the theory to its file"),
        ("save FILE", "write it to this file, which is then its file"),
    ],
    page: "Writes the laws, the claims and the order as they were typed, with remarks and blank \
           lines where they were, and the derived rules with the record of how they were derived. \
           The file is written whole or not at all.",
    example: "new gauges\nconstant harbour\nsave gauges.theory",
    operand: Operand::Files,
    run,
};

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let rest = line.rest();
    let name = line.word().map(|(name, _)| name);
    // A path with blanks is understood without quotes too, since nothing else can follow.
    let name = if line.end().is_ok() { name } else { Some(rest) };
    let path = name.map(Session::save_path);
    let path = path.as_deref();
    if let Some(path) = path
        && !may_replace(shell, path)
    {
        if !shell.is_interactive() {
            let message = format!("there is another file {} already", path.display());
            return Err(Problem::said(
                message,
                "save under another name, or remove that file first",
            ));
        }
        shell.out("Nothing was written.\n");
        return Ok(());
    }
    let path = shell.session.save(path).map_err(Problem::save)?;
    shell.out(&format!("saved to {}\n", path.display()));
    Ok(())
}

/// The theory's own file is what `save` is for.
fn may_replace(shell: &mut Shell, path: &Path) -> bool {
    let same = |a: &Path, b: &Path| match (a.canonicalize(), b.canonicalize()) {
        (Ok(a), Ok(b)) => a == b,
        _ => false,
    };
    let own = shell.session.path().is_some_and(|own| same(own, path));
    own || shell.may_replace(path)
}

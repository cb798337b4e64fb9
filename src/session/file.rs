//! Writing files such that they are whole, old or new, whatever happens.

use crate::proof::{Evidence, to_json};
use std::io::{BufWriter, Write};
use std::path::Path;

/// Writes a file by way of a temporary file in the same folder, flushed and renamed. A device or
/// pipe is written to as it is.
///
/// # Errors
///
/// Those of the system, and those that `fill` gives; what was there before is then untouched.
pub fn write_atomically(
    path: &Path,
    fill: impl FnOnce(&mut dyn Write) -> std::io::Result<()>,
) -> std::io::Result<()> {
    // A link is followed, so that it stays one.
    let path = &path.canonicalize().unwrap_or_else(|_| path.to_owned());
    let known = std::fs::metadata(path);
    if known.as_ref().is_ok_and(|file| !file.is_file()) {
        let mut file = std::fs::OpenOptions::new().write(true).open(path)?;
        return buffered(&mut file, fill);
    }
    let folder = path
        .parent()
        .filter(|folder| !folder.as_os_str().is_empty());
    let folder = folder.unwrap_or(Path::new("."));
    let mut builder = tempfile::Builder::new();
    builder.prefix(".equable-");
    // A new file may be read by those who may read other new files.
    #[cfg(unix)]
    let rights = std::os::unix::fs::PermissionsExt::from_mode(0o666);
    #[cfg(unix)]
    builder.permissions(rights);
    let mut file = builder.tempfile_in(folder)?;
    buffered(&mut file, fill)?;
    if let Ok(known) = known {
        if known.permissions().readonly() {
            return Err(std::io::Error::from(std::io::ErrorKind::PermissionDenied));
        }
        file.as_file().set_permissions(known.permissions())?;
    }
    file.as_file().sync_all()?;
    file.persist(path).map_err(|error| error.error)?;
    // The name is safe once the folder is; where that cannot be asked for, it is left to the system.
    if let Ok(folder) = std::fs::File::open(folder) {
        let _ = folder.sync_all();
    }
    Ok(())
}

fn buffered(
    file: &mut dyn Write,
    fill: impl FnOnce(&mut dyn Write) -> std::io::Result<()>,
) -> std::io::Result<()> {
    let mut file = BufWriter::new(file);
    fill(&mut file)?;
    file.flush()
}

/// Writes evidence as one JSON object on one line.
///
/// # Errors
///
/// As [`write_atomically`].
pub fn write_evidence(path: &Path, evidence: &Evidence) -> std::io::Result<()> {
    write_atomically(path, |file| {
        serde_json::to_writer(&mut *file, &to_json(evidence))?;
        file.write_all(b"\n")
    })
}

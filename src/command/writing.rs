//! Writing files: whole or not at all. What is to be written goes to a new file in the
//! same folder first and takes its name once it is complete, so that a file that was
//! there stays as it was until then, and half a file never stands under the name.

use std::fs::{self, Permissions};
use std::io::{self, Write as _};
use std::path::Path;

use scalewright::diagnostic::Diagnostic;

/// Writes a file.
///
/// # Errors
/// Why it could not be written, as `cannot-write`.
pub(crate) fn whole(path: &Path, bytes: &[u8]) -> Result<(), Box<Diagnostic>> {
    write(path, bytes).map_err(|error| Box::new(cannot_write(path, &error)))
}

fn write(path: &Path, bytes: &[u8]) -> io::Result<()> {
    let Ok(present) = fs::metadata(path) else {
        return replace(path, bytes, None);
    };
    if present.is_dir() {
        return Err(io::ErrorKind::IsADirectory.into());
    }
    if !present.is_file() {
        // A pipe or a device takes the bytes as they come; it cannot be replaced.
        return fs::OpenOptions::new()
            .write(true)
            .open(path)?
            .write_all(bytes);
    }
    // A file that may not be written is not replaced either, and a link stays one.
    fs::OpenOptions::new().write(true).open(path)?;
    replace(&fs::canonicalize(path)?, bytes, Some(present.permissions()))
}

fn replace(path: &Path, bytes: &[u8], permissions: Option<Permissions>) -> io::Result<()> {
    let mut beside = new_file_in(folder(path))?;
    beside.write_all(bytes)?;
    // Only what has reached the disk takes the place of what was there.
    beside.as_file().sync_all()?;
    if let Some(permissions) = permissions {
        beside.as_file().set_permissions(permissions)?;
    }
    beside.persist(path).map_err(|error| error.error)?;
    Ok(())
}

#[cfg(unix)]
fn new_file_in(folder: &Path) -> io::Result<tempfile::NamedTempFile> {
    use std::os::unix::fs::PermissionsExt as _;
    // What every new file gets; the user's mask takes its part.
    tempfile::Builder::new()
        .permissions(Permissions::from_mode(0o666))
        .tempfile_in(folder)
}

#[cfg(not(unix))]
fn new_file_in(folder: &Path) -> io::Result<tempfile::NamedTempFile> {
    tempfile::NamedTempFile::new_in(folder)
}

fn folder(path: &Path) -> &Path {
    match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        Some(_) | None => Path::new("."),
    }
}

fn cannot_write(path: &Path, error: &io::Error) -> Diagnostic {
    let shown = path.display();
    let folder = folder(path);
    let (reason, help) = match error.kind() {
        io::ErrorKind::NotFound => (
            format!("there is no folder `{}`", folder.display()),
            "make the folder first",
        ),
        io::ErrorKind::PermissionDenied | io::ErrorKind::ReadOnlyFilesystem => (
            "writing there is not allowed".to_owned(),
            "name a place that may be written to",
        ),
        io::ErrorKind::StorageFull | io::ErrorKind::QuotaExceeded => (
            "there is no room left".to_owned(),
            "make room, or name another place",
        ),
        io::ErrorKind::IsADirectory => ("it is a folder".to_owned(), "name a file in it"),
        io::ErrorKind::NotADirectory => (
            format!("`{}` is no folder", folder.display()),
            "name a file in a folder",
        ),
        _ => (error.to_string(), "name another place"),
    };
    Diagnostic::without_place(
        "cannot-write",
        format!("`{shown}` is not written: {reason}"),
    )
    .with_help(help)
}

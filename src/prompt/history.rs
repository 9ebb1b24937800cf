//! Where the lines of earlier sessions are remembered: in the folder that the platform
//! keeps for such things, never in the working folder.

use std::ffi::OsString;
use std::path::{Path, PathBuf};

/// The systems that keep their state in different places.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Platform {
    /// Windows.
    Windows,
    /// macOS.
    Mac,
    /// Linux and its like.
    Other,
}

impl Platform {
    /// That on which the program runs.
    pub fn here() -> Platform {
        if cfg!(windows) {
            Platform::Windows
        } else if cfg!(target_os = "macos") {
            Platform::Mac
        } else {
            Platform::Other
        }
    }
}

/// The file of the history; `None` where the system names no place for it. `variable`
/// looks up a variable of the environment.
pub fn file(platform: Platform, variable: impl Fn(&str) -> Option<OsString>) -> Option<PathBuf> {
    // A relative path would lie in the working folder; it counts as none.
    let folder = |name: &str| {
        let path = variable(name).map(PathBuf::from)?;
        path.is_absolute().then_some(path)
    };
    let state = match platform {
        Platform::Windows => windows_folder(&variable),
        Platform::Mac => folder("XDG_STATE_HOME")
            .or_else(|| folder("HOME").map(|home| home.join("Library/Application Support"))),
        Platform::Other => folder("XDG_STATE_HOME")
            .or_else(|| folder("HOME").map(|home| home.join(".local/state"))),
    };
    Some(state?.join("scalewright").join("history"))
}

/// `%LOCALAPPDATA%`, whose form is told by its text, since this may run elsewhere.
fn windows_folder(variable: &impl Fn(&str) -> Option<OsString>) -> Option<PathBuf> {
    let path = variable("LOCALAPPDATA")?;
    let is_absolute = path.to_str().is_some_and(|text| {
        text.starts_with(r"\\")
            || text
                .get(1..3)
                .is_some_and(|root| root == r":\" || root == ":/")
    });
    is_absolute.then(|| PathBuf::from(path))
}

/// Makes the folder of a file, readable by its owner alone.
///
/// # Errors
/// What the system says.
pub fn prepare(file: &Path) -> std::io::Result<()> {
    let Some(folder) = file.parent() else {
        return Ok(());
    };
    if folder.is_dir() {
        return Ok(());
    }
    let mut builder = std::fs::DirBuilder::new();
    builder.recursive(true);
    #[cfg(unix)]
    std::os::unix::fs::DirBuilderExt::mode(&mut builder, 0o700);
    builder.create(folder)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn at(platform: Platform, variables: &[(&str, &str)]) -> Option<String> {
        let found = file(platform, |name| {
            let found = variables.iter().find(|(known, _)| *known == name);
            found.map(|(_, value)| OsString::from(value))
        });
        found.map(|path| path.to_string_lossy().replace('\\', "/"))
    }

    #[test]
    fn the_history_lies_where_the_platform_keeps_state() {
        let home = [("HOME", "/home/varn")];
        let expected = "/home/varn/.local/state/scalewright/history";
        assert_eq!(at(Platform::Other, &home).as_deref(), Some(expected));
        let own = [("HOME", "/home/varn"), ("XDG_STATE_HOME", "/state")];
        let expected = "/state/scalewright/history";
        assert_eq!(at(Platform::Other, &own).as_deref(), Some(expected));
        let expected = "/home/varn/Library/Application Support/scalewright/history";
        assert_eq!(at(Platform::Mac, &home).as_deref(), Some(expected));
        let local = [("LOCALAPPDATA", r"C:\Users\varn\AppData\Local")];
        let expected = "C:/Users/varn/AppData/Local/scalewright/history";
        assert_eq!(at(Platform::Windows, &local).as_deref(), Some(expected));
    }

    #[test]
    fn it_never_lies_in_the_working_folder() {
        assert_eq!(at(Platform::Other, &[]), None);
        assert_eq!(at(Platform::Other, &[("XDG_STATE_HOME", "state")]), None);
        assert_eq!(at(Platform::Windows, &[("LOCALAPPDATA", "local")]), None);
    }
}

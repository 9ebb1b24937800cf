//! `reduce ... save`: makes the module and settles where it goes. Whoever runs the session
//! decides whether it is written.

use std::path::{Path, PathBuf};

use crate::diagnostic::Diagnostic;
use crate::model::errors::ModelError;
use crate::model::modules::{Files, plain};
use crate::report::module::{self, Origin};
use crate::session::{Outcome, Saved};
use crate::source::Sources;
use crate::syntax::ast;

/// Writes what an outcome asks for; what cannot be written is among its errors.
pub(crate) fn write(files: &dyn Files, outcome: &mut Outcome) {
    for saved in std::mem::take(&mut outcome.saved) {
        if let Err(fault) = files.write(&saved.path, &saved.text) {
            outcome.diagnostics.push(Diagnostic {
                span: Some(saved.span),
                ..*fault
            });
        }
    }
}

/// Where a script may write.
pub(crate) struct Folders<'a> {
    pub(crate) files: &'a dyn Files,
    /// The folder of the script.
    pub(crate) folder: &'a Path,
    /// The folder that nothing may leave.
    pub(crate) root: &'a Path,
    /// The script itself, where it is a file.
    pub(crate) script: Option<&'a Path>,
}

/// Makes the module of a reduced system.
pub(crate) fn saved(
    origin: &Origin<'_>,
    save: &ast::Text,
    folders: &Folders<'_>,
    before: &[Saved],
) -> Result<Saved, Diagnostic> {
    let path = folders.path(save)?;
    let refused = |reason: &str| {
        let message = format!("`{}` is not written: {reason}", save.text);
        Err(Diagnostic::error("cannot-write", save.span, message).with_help("name another file"))
    };
    if before.iter().any(|saved| saved.path == path) {
        return refused("another `save` of this script writes it");
    }
    if folders.is_read(&path, origin.sources) {
        return refused("this script is made of it");
    }
    let Some(text) = module::module(origin) else {
        let message =
            "no reduced equation is left with two terms, so that there is nothing to save";
        return Err(Diagnostic::error("one-term", save.span, message)
            .with_help("the warnings of the reduced system say which scales restore a balance"));
    };
    Ok(Saved {
        path,
        text,
        span: save.span,
    })
}

impl Folders<'_> {
    /// The path of a file inside the root.
    fn path(&self, save: &ast::Text) -> Result<PathBuf, Diagnostic> {
        let outside = || {
            ModelError::OutsideFolder {
                path: save.text.clone(),
                span: save.span,
            }
            .diagnostic()
        };
        let path = plain(&self.folder.join(&save.text));
        let root = plain(self.root);
        let is_inside = match root.as_os_str().is_empty() {
            true => path.is_relative() && !path.starts_with(".."),
            false => path.starts_with(&root),
        };
        if !is_inside {
            return Err(outside());
        }
        // Links may lead out; a folder that is missing is found out when it is written.
        let folder = path.parent().unwrap_or(Path::new(""));
        let found = (self.files.canonical(folder), self.files.canonical(&root));
        if let (Ok(folder), Ok(root)) = found
            && !folder.starts_with(root)
        {
            return Err(outside());
        }
        if let (Ok(file), Ok(root)) = (self.files.canonical(&path), self.files.canonical(&root))
            && !file.starts_with(root)
        {
            return Err(outside());
        }
        Ok(path)
    }

    /// Whether a file is the script or one that it uses.
    fn is_read(&self, path: &Path, sources: &Sources) -> bool {
        let Ok(path) = self.files.canonical(path) else {
            return false;
        };
        let own = self.script.map(Path::to_owned);
        let used = sources
            .iter()
            .map(|(_, source)| self.folder.join(&source.name));
        own.into_iter()
            .chain(used)
            .any(|read| self.files.canonical(&read).is_ok_and(|read| read == path))
    }
}

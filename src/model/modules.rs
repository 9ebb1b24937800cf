//! Brings in what a script uses: bundled modules and files, each once, before whatever
//! uses it. Reading and writing are left to a [`Files`].

use std::path::{Component, Path, PathBuf};

use crate::diagnostic::Diagnostic;
use crate::limits;
use crate::model::errors::ModelError;
use crate::model::{Level, library, names};
use crate::source::{FileId, Sources, Span};
use crate::syntax::ast::{self, StatementKind};
use crate::syntax::parser;

/// Where scripts read the files that they use, and where what they save is written.
pub trait Files: Sync {
    /// The one spelling of a path, links followed.
    ///
    /// # Errors
    /// Why it cannot be found.
    fn canonical(&self, path: &Path) -> Result<PathBuf, String>;
    /// The contents of a file.
    ///
    /// # Errors
    /// Why it cannot be read.
    fn read(&self, path: &Path) -> Result<Vec<u8>, String>;
    /// Writes a file, whole or not at all.
    ///
    /// # Errors
    /// Why it cannot be written, and what to do about it.
    fn write(&self, path: &Path, _text: &str) -> Result<(), Box<Diagnostic>> {
        let reason = "files cannot be written here";
        let message = format!("`{}` is not written: {reason}", path.display());
        Err(Box::new(Diagnostic::without_place("cannot-write", message)))
    }
}

/// No files: only bundled modules can be used.
#[derive(Debug, Clone, Copy, Default)]
pub struct NoFiles;

impl Files for NoFiles {
    fn canonical(&self, _: &Path) -> Result<PathBuf, String> {
        Err("files cannot be used here".to_owned())
    }

    fn read(&self, _: &Path) -> Result<Vec<u8>, String> {
        Err("files cannot be used here".to_owned())
    }
}

/// The script that is run.
#[derive(Debug, Clone)]
pub struct Main {
    /// Its name in messages.
    pub name: String,
    /// Its text.
    pub text: String,
    /// Its own path, where it is a file.
    pub path: Option<PathBuf>,
    /// The folder from which relative files are found.
    pub folder: PathBuf,
    /// The folder that files must not leave.
    pub root: PathBuf,
}

/// Reads a script and everything it uses: modules first, the script last.
pub fn load(
    main: &Main,
    files: &dyn Files,
    sources: &mut Sources,
) -> (Vec<(Level, ast::Script)>, Vec<Diagnostic>) {
    load_with(main, &[], files, sources)
}

/// The same for a script with further texts behind it, each under a name of its own.
pub fn load_with(
    main: &Main,
    behind: &[(&str, &str)],
    files: &dyn Files,
    sources: &mut Sources,
) -> (Vec<(Level, ast::Script)>, Vec<Diagnostic>) {
    let mut loader = Loader {
        main,
        files,
        sources,
        scripts: Vec::new(),
        errors: Vec::new(),
        open: Vec::new(),
        done: Vec::new(),
    };
    let identity = match &main.path {
        Some(path) => Identity::File(files.canonical(path).unwrap_or_else(|_| path.clone())),
        None => Identity::Module(main.name.clone()),
    };
    let file = loader.sources.add(main.name.clone(), main.text.clone());
    loader
        .open
        .push((identity, Span::new(file, 0, 0), main.name.clone()));
    loader.script(file, &main.text, &main.folder, Level::Script);
    for (name, text) in behind {
        let file = loader.sources.add(*name, *text);
        loader.script(file, text, &main.folder, Level::Script);
    }
    (loader.scripts, loader.errors)
}

/// What makes a module the same one.
#[derive(Debug, Clone, PartialEq, Eq)]
enum Identity {
    Module(String),
    File(PathBuf),
}

struct Loader<'a> {
    main: &'a Main,
    files: &'a dyn Files,
    sources: &'a mut Sources,
    scripts: Vec<(Level, ast::Script)>,
    errors: Vec<Diagnostic>,
    /// What is being read, with the `use` that asked for it.
    open: Vec<(Identity, Span, String)>,
    done: Vec<Identity>,
}

impl Loader<'_> {
    fn fault(&mut self, error: &ModelError) {
        self.errors.push(error.diagnostic());
    }

    fn script(&mut self, file: FileId, text: &str, folder: &Path, level: Level) {
        let (script, errors) = parser::parse(text, file);
        self.errors
            .extend(errors.iter().map(|error| error.diagnostic()));
        for statement in &script.statements {
            if let StatementKind::Use(used) = &statement.kind {
                match used {
                    ast::Use::Module(name) => self.module(name),
                    ast::Use::File(path) => self.file(path, folder),
                }
            }
        }
        self.scripts.push((level, script));
    }

    fn module(&mut self, name: &ast::Name) {
        let Some(module) = library::find(&name.text) else {
            let known = library::MODULES.iter().map(|module| module.name);
            self.fault(&ModelError::UnknownModule {
                name: name.text.clone(),
                span: Some(name.span),
                nearest: names::nearest(&name.text, known),
            });
            return;
        };
        let identity = Identity::Module(module.name.to_owned());
        if self.begin(identity, name.span, module.name) {
            let file = self.sources.add(module.name, module.text);
            self.script(file, module.text, Path::new(""), Level::Module);
            self.end();
        }
    }

    fn file(&mut self, path: &ast::Text, folder: &Path) {
        let folder = self
            .files
            .canonical(folder)
            .unwrap_or_else(|_| folder.to_owned());
        let wanted = plain(&folder.join(&path.text));
        let unreadable = |reason: String| ModelError::UnreadableFile {
            path: path.text.clone(),
            reason,
            span: Some(path.span),
        };
        let outside = || ModelError::OutsideFolder {
            path: path.text.clone(),
            span: path.span,
        };
        let root = self
            .files
            .canonical(&self.main.root)
            .unwrap_or_else(|_| self.main.root.clone());
        // A path that climbs out is refused before anything is looked for.
        if !wanted.starts_with(&root) {
            self.fault(&outside());
            return;
        }
        let found = match self.files.canonical(&wanted) {
            Ok(found) if found.starts_with(&root) => found,
            Ok(_) => return self.fault(&outside()),
            Err(reason) => return self.fault(&unreadable(reason)),
        };
        if !self.begin(Identity::File(found.clone()), path.span, &path.text) {
            return;
        }
        match self.files.read(&found) {
            Ok(bytes) => match String::from_utf8(bytes) {
                Ok(text) => {
                    let folder = found.parent().unwrap_or(Path::new("")).to_owned();
                    let file = self.sources.add(path.text.clone(), text.clone());
                    self.script(file, &text, &folder, Level::Module);
                }
                Err(error) => self.fault(&ModelError::NotUtf8 {
                    path: path.text.clone(),
                    offset: error.utf8_error().valid_up_to(),
                    span: Some(path.span),
                }),
            },
            Err(reason) => self.fault(&unreadable(reason)),
        }
        self.end();
    }

    /// Whether a module is to be read now: not yet done, and not being read.
    fn begin(&mut self, identity: Identity, span: Span, name: &str) -> bool {
        if self.done.contains(&identity) {
            return false;
        }
        if let Some(start) = self.open.iter().position(|(found, ..)| *found == identity) {
            let ring = &self.open[start..];
            let names = ring.iter().map(|(_, _, name)| name.clone()).collect();
            let inner = ring.iter().skip(1).map(|(_, span, _)| *span);
            let spans = std::iter::once(span).chain(inner).collect();
            self.fault(&ModelError::UseCycle { names, spans });
            return false;
        }
        if self.open.len() + self.done.len() > limits::MODULES {
            self.fault(&ModelError::TooManyModules { span });
            return false;
        }
        self.open.push((identity, span, name.to_owned()));
        true
    }

    fn end(&mut self) {
        if let Some((identity, ..)) = self.open.pop() {
            self.done.push(identity);
        }
    }
}

/// A path with its `.` and `..` worked out by their spelling.
pub(crate) fn plain(path: &Path) -> PathBuf {
    let mut plain = PathBuf::new();
    for part in path.components() {
        match part {
            Component::CurDir => {}
            Component::ParentDir if plain.file_name().is_some() => {
                plain.pop();
            }
            Component::ParentDir
            | Component::Prefix(_)
            | Component::RootDir
            | Component::Normal(_) => {
                plain.push(part);
            }
        }
    }
    plain
}

//! The bundled modules that a saved module can go on using: those that declare no equation
//! (so that they bring in none beside the reduced ones) and whose values stand as they are.

use std::collections::BTreeSet;

use crate::algebra::monomial::SymbolId;
use crate::model::{Level, is_given, library};
use crate::report::module::{Origin, overrides};
use crate::source::FileId;
use crate::syntax::ast::{self, StatementKind};
use crate::syntax::parser;

/// The modules in use.
pub(super) struct Shelves {
    /// Their names as `use` takes them, in order.
    pub(super) used: Vec<String>,
    files: BTreeSet<FileId>,
}

impl Shelves {
    /// Whether a declaration in this file comes with one of them.
    pub(super) fn hold(&self, file: FileId) -> bool {
        self.files.contains(&file)
    }

    /// Finds them among what a script has read.
    pub(super) fn of(origin: &Origin<'_>) -> Shelves {
        let files: Vec<File> = origin
            .sources
            .iter()
            .map(|(id, source)| File::of(id, &source.name, &source.text))
            .collect();
        let overridden = overridden(origin);
        let mut shelves: BTreeSet<FileId> = files
            .iter()
            .filter(|file| file.name != origin.script)
            .filter(|file| file.is_bundled && !file.has_equations)
            .map(|file| file.id)
            .filter(|id| !overridden.contains(id))
            .collect();
        // One that uses a module that is no shelf is none either.
        loop {
            let named = |name: &str| files.iter().find(|file| file.name == name);
            let fallen: Vec<FileId> = files
                .iter()
                .filter(|file| shelves.contains(&file.id))
                .filter(|file| {
                    let mut uses = file.uses.iter();
                    !uses.all(|name| named(name).is_some_and(|used| shelves.contains(&used.id)))
                })
                .map(|file| file.id)
                .collect();
            if fallen.is_empty() {
                break;
            }
            shelves.retain(|id| !fallen.contains(id));
        }
        let mut used: Vec<String> = Vec::new();
        for file in files.iter().filter(|file| !shelves.contains(&file.id)) {
            for name in &file.uses {
                let found = files.iter().find(|file| file.name == *name);
                let is_shelf = found.is_some_and(|file| shelves.contains(&file.id));
                if is_shelf && !used.contains(name) {
                    used.push(name.clone());
                }
            }
        }
        Shelves {
            used,
            files: shelves,
        }
    }
}

struct File {
    id: FileId,
    name: String,
    /// The bundled modules that it uses.
    uses: Vec<String>,
    is_bundled: bool,
    has_equations: bool,
}

impl File {
    fn of(id: FileId, name: &str, text: &str) -> File {
        let (script, _) = parser::parse(text, id);
        let mut file = File {
            id,
            name: name.to_owned(),
            uses: Vec::new(),
            is_bundled: library::find(name).is_some_and(|module| module.text == text),
            has_equations: false,
        };
        for statement in script.statements {
            match statement.kind {
                StatementKind::Use(ast::Use::Module(module)) => file.uses.push(module.text),
                StatementKind::Equation(_) => file.has_equations = true,
                _ => {}
            }
        }
        file
    }
}

/// The files with a value that the script or the phenomenon replaces: at the level of
/// modules two values would clash.
fn overridden(origin: &Origin<'_>) -> BTreeSet<FileId> {
    let phenomenon = origin.case.setting.phenomenon;
    let mut files = BTreeSet::new();
    for (idx, info) in origin.model.symbols.iter().enumerate() {
        if !overrides(origin.model, SymbolId(idx as u32), phenomenon) {
            continue;
        }
        let of_modules = info
            .entries
            .iter()
            .filter(|(level, entry)| *level == Level::Module && is_given(entry));
        files.extend(of_modules.map(|(_, entry)| entry.name.span.file));
    }
    files
}

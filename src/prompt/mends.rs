//! Mends that only a prompt can offer: for a lone word that is nearly a keyword or a word
//! of the prompt, and for a value without its keyword.

use crate::diagnostic::Diagnostic;
use crate::model::Meaning;
use crate::model::names::nearest;
use crate::prompt::entry::OWN_WORDS;
use crate::session::incremental::Page;
use crate::source::FileId;
use crate::syntax::ast::ValueKind;
use crate::syntax::token::{self, Kind, RESERVED, Token};

/// Offers a mend for what was typed, where one comes to mind.
pub(super) fn mend(faults: &mut [Diagnostic], text: &str, page: &Page<'_>) {
    let tokens = token::read(text, FileId::default()).tokens;
    let help = match tokens.as_slice() {
        [word] if word.kind == Kind::Name => lone_word(word, page),
        [name, equals, ..] if name.kind == Kind::Name && equals.kind == Kind::Equals => {
            Some(value(name, page))
        }
        _ => None,
    };
    if let (Some(help), [fault]) = (help, faults)
        && fault.is_error()
    {
        fault.help = Some(help);
    }
}

fn lone_word(word: &Token<'_>, page: &Page<'_>) -> Option<String> {
    if matches!(word.text, "quit" | "exit" | "bye") {
        return Some("write `leave` to end the session".to_owned());
    }
    let keywords = RESERVED.iter().filter(|(kind, _)| kind.begins_statement());
    let known = keywords
        .map(|(_, word)| *word)
        .chain(OWN_WORDS.iter().map(|own| own.word))
        .chain(page.model().visible_names(None));
    let near = nearest(word.text, known)?;
    Some(format!("did you mean `{near}`?"))
}

fn value(name: &Token<'_>, page: &Page<'_>) -> String {
    let model = page.model();
    let kind = match model.meaning(name.text, None) {
        Some(Meaning::Symbol(id)) => Some(model.symbols[id.idx()].kind),
        Some(
            Meaning::Coordinate(_) | Meaning::Field(_) | Meaning::Group(_) | Meaning::Vector(_),
        )
        | None => None,
    };
    match kind {
        Some(ValueKind::Scale) => format!("write `scale {} = ...`", name.text),
        Some(ValueKind::Constant) => format!("write `constant {} = ...`", name.text),
        None => format!(
            "write `scale {name} = ...` or `constant {name} = ...`",
            name = name.text
        ),
    }
}

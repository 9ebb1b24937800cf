//! What the program has to say about a script: errors, warnings and notes.
//!
//! A stage has an error type of its own, without prose; one `match` a stage turns it
//! into a [`Diagnostic`]. The drawing, with ariadne, happens here and nowhere else.

pub mod codes;

use crate::source::{Sources, Span};

/// How much a diagnostic weighs.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Severity {
    /// The script, or one request of it, is invalid.
    Error,
    /// The answer stands, but rests on something a reader should look at.
    Warning,
    /// Something worth knowing that changes nothing.
    Note,
}

impl Severity {
    /// The word that reports use.
    pub fn word(self) -> &'static str {
        match self {
            Severity::Error => "error",
            Severity::Warning => "warning",
            Severity::Note => "note",
        }
    }
}

/// A second place that a diagnostic points at.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Related {
    /// What is there.
    pub message: String,
    /// Where.
    pub span: Span,
}

/// One thing said about a script.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Diagnostic {
    /// The short hyphenated word that names this kind of fault, as `unknown-unit`.
    pub code: &'static str,
    /// How much it weighs.
    pub severity: Severity,
    /// What is wrong, in one sentence without a final dot.
    pub message: String,
    /// The place it points at; `None` where no text is at fault (a missing file).
    pub span: Option<Span>,
    /// What stands at that place, in a few words; empty repeats nothing.
    pub label: String,
    /// Further places, each with what is there.
    pub related: Vec<Related>,
    /// What to do about it.
    pub help: Option<String>,
}

impl Diagnostic {
    /// An error at a place.
    pub fn error(code: &'static str, span: Span, message: impl Into<String>) -> Diagnostic {
        Diagnostic {
            code,
            severity: Severity::Error,
            message: message.into(),
            span: Some(span),
            label: String::new(),
            related: Vec::new(),
            help: None,
        }
    }

    /// A warning at a place.
    pub fn warning(code: &'static str, span: Span, message: impl Into<String>) -> Diagnostic {
        Diagnostic {
            severity: Severity::Warning,
            ..Diagnostic::error(code, span, message)
        }
    }

    /// A note at a place.
    pub fn note(code: &'static str, span: Span, message: impl Into<String>) -> Diagnostic {
        Diagnostic {
            severity: Severity::Note,
            ..Diagnostic::error(code, span, message)
        }
    }

    /// An error that points at no text.
    pub fn without_place(code: &'static str, message: impl Into<String>) -> Diagnostic {
        Diagnostic {
            span: None,
            ..Diagnostic::error(code, Span::default(), message)
        }
    }

    /// Says what stands at the place.
    #[must_use]
    pub fn with_label(mut self, label: impl Into<String>) -> Diagnostic {
        self.label = label.into();
        self
    }

    /// Points at a second place.
    #[must_use]
    pub fn with_related(mut self, span: Span, message: impl Into<String>) -> Diagnostic {
        self.related.push(Related {
            message: message.into(),
            span,
        });
        self
    }

    /// Offers a mend.
    #[must_use]
    pub fn with_help(mut self, help: impl Into<String>) -> Diagnostic {
        self.help = Some(help.into());
        self
    }

    /// Whether it makes the script invalid.
    pub fn is_error(&self) -> bool {
        self.severity == Severity::Error
    }
}

/// Sorts by file and place, keeping the order of those at one place, and drops exact
/// repeats.
pub fn sort(diagnostics: &mut Vec<Diagnostic>) {
    diagnostics.sort_by_key(|found| found.span);
    diagnostics.dedup();
}

/// Longest line of source text that is drawn whole, in characters; around a fault in a
/// longer one an excerpt of about this length is shown.
const LINE_DRAWN: usize = 160;

/// Most diagnostics that are drawn; a count stands for the rest.
const DRAWN: usize = 60;

/// Draws diagnostics against their sources, each with its lines of text underneath.
///
/// `colour` decides whether escape sequences are written; the caller knows the terminal.
pub fn draw(diagnostics: &[Diagnostic], sources: &Sources, colour: bool) -> String {
    let mut cache = ariadne::sources(
        sources
            .iter()
            .map(|(_, source)| (source.name.clone(), printable(&source.text))),
    );
    let mut out = Vec::new();
    for found in diagnostics.iter().take(DRAWN) {
        let fits = spans(found).all(|span| line_length(span, sources) <= LINE_DRAWN);
        if found.span.is_some() && fits {
            let report = report(found, sources, colour);
            // Writing into memory cannot fail; a report that could would be left out.
            let _ = report.write(&mut cache, &mut out);
        } else {
            out.extend_from_slice(plain(found, sources).as_bytes());
        }
    }
    if diagnostics.len() > DRAWN {
        let rest = diagnostics.len() - DRAWN;
        out.extend_from_slice(format!("and {rest} more\n").as_bytes());
    }
    let text = String::from_utf8_lossy(&out);
    // The word for a note is coloured whatever is asked for.
    let text = match colour {
        true => text,
        false => anstream::adapter::strip_str(&text).to_string().into(),
    };
    let lines: Vec<&str> = text.lines().map(str::trim_end).collect();
    if lines.is_empty() {
        String::new()
    } else {
        lines.join("\n") + "\n"
    }
}

type NamedSpan = (String, std::ops::Range<usize>);

fn report(
    found: &Diagnostic,
    sources: &Sources,
    colour: bool,
) -> ariadne::Report<'static, NamedSpan> {
    use ariadne::{Color, Config, IndexType, Label, Report, ReportKind};
    let (kind, tint) = match found.severity {
        Severity::Error => (ReportKind::Error, Color::Red),
        Severity::Warning => (ReportKind::Warning, Color::Yellow),
        Severity::Note => (ReportKind::Custom("Note", Color::Blue), Color::Blue),
    };
    let span = named(found.span.unwrap_or_default(), sources);
    let config = Config::default()
        .with_index_type(IndexType::Byte)
        .with_color(colour);
    let label = match found.label.as_str() {
        "" => "here",
        label => label,
    };
    let own = Label::new(span.clone())
        .with_message(cleaned(label))
        .with_color(tint);
    let mut labels: Vec<(Option<Span>, Label<NamedSpan>)> = vec![(found.span, own)];
    labels.extend(found.related.iter().map(|related| {
        let label = Label::new(named(related.span, sources))
            .with_message(cleaned(&related.message))
            .with_color(Color::Blue);
        (Some(related.span), label)
    }));
    // In order of place: a label before the first one would open a second frame.
    labels.sort_by_key(|(place, _)| *place);
    let mut builder = Report::build(kind, span)
        .with_config(config)
        .with_code(found.code)
        .with_message(cleaned(&found.message))
        .with_labels(labels.into_iter().map(|(_, label)| label));
    if let Some(help) = &found.help {
        builder = builder.with_help(cleaned(help));
    }
    builder.finish()
}

/// A diagnostic in words alone: without a place, or in a line too long to draw.
fn plain(found: &Diagnostic, sources: &Sources) -> String {
    let mut out = format!(
        "[{}] {}: {}\n",
        found.code,
        capital(found.severity.word()),
        cleaned(&found.message)
    );
    if let Some(span) = found.span {
        out.push_str(&format!("  at {}\n", place(span, sources)));
        let excerpt: String = sources.slice(span).chars().take(LINE_DRAWN / 2).collect();
        out.push_str(&format!("  > {}\n", cleaned(&excerpt)));
    }
    for related in &found.related {
        let at = place(related.span, sources);
        out.push_str(&format!("  {}, at {at}\n", cleaned(&related.message)));
    }
    if let Some(help) = &found.help {
        out.push_str(&format!("  Help: {}\n", cleaned(help)));
    }
    out
}

fn capital(word: &str) -> String {
    let mut chars = word.chars();
    chars
        .next()
        .map(|first| first.to_uppercase().chain(chars).collect())
        .unwrap_or_default()
}

fn place(span: Span, sources: &Sources) -> String {
    let at = sources.position(span.file, span.start);
    format!("{}:{}:{}", sources.get(span.file).name, at.line, at.column)
}

fn spans(found: &Diagnostic) -> impl Iterator<Item = Span> {
    found
        .span
        .into_iter()
        .chain(found.related.iter().map(|related| related.span))
}

/// The length in bytes of the line in which a span begins.
fn line_length(span: Span, sources: &Sources) -> usize {
    let text = &sources.get(span.file).text;
    let (start, _) = clamped(span, text);
    let before = text[..start].rfind('\n').map_or(0, |at| at + 1);
    let after = text[start..].find('\n').map_or(text.len(), |at| start + at);
    after - before
}

/// The span as ariadne takes it: inside the text, on whole characters, one byte at least.
fn named(span: Span, sources: &Sources) -> NamedSpan {
    let source = sources.get(span.file);
    let (start, end) = clamped(span, &source.text);
    (source.name.clone(), start..end)
}

fn clamped(span: Span, text: &str) -> (usize, usize) {
    let mut start = (span.start as usize).min(text.len());
    while !text.is_char_boundary(start) {
        start -= 1;
    }
    let mut end = (span.end as usize).clamp(start, text.len());
    while !text.is_char_boundary(end) {
        end += 1;
    }
    (start, end)
}

/// The text with control characters made harmless, byte for byte as long as before.
fn printable(text: &str) -> String {
    text.chars()
        .map(|c| match c {
            '\n' | '\t' => c,
            '\r' => ' ',
            c if c.is_ascii_control() => '?',
            c => c,
        })
        .collect()
}

/// A message with what it quotes from the script made harmless.
fn cleaned(text: &str) -> String {
    text.chars()
        .map(|c| if c.is_control() && c != '\n' { '?' } else { c })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_mark_stands_under_greek_letters() {
        let mut sources = Sources::default();
        let file = sources.add("shelf.scl", "scale ρ_0 = 10 m/ß\n");
        let found = Diagnostic::error("unknown-unit", Span::new(file, 16, 18), "unknown unit `ß`")
            .with_help("write `m/s`");
        let text = draw(&[found], &sources, false);
        assert!(
            text.contains("[unknown-unit] Error: unknown unit `ß`"),
            "{text}"
        );
        assert!(text.contains("shelf.scl:1:16"), "{text}");
        let lines: Vec<&str> = text.lines().collect();
        let column = |line: &str, c: char| line.chars().position(|found| found == c);
        let above = lines.iter().find(|line| line.contains("scale")).unwrap();
        let below = lines
            .iter()
            .find(|line| line.contains('┬') || line.contains('─') && line.contains("here"))
            .unwrap();
        assert!(column(above, 'ß').is_some() && !below.is_empty());
    }

    #[test]
    fn spans_outside_the_text_and_long_lines_do_no_harm() {
        let mut sources = Sources::default();
        let file = sources.add("long", format!("show {}\u{1b}[31m", "é".repeat(100_000)));
        for span in [Span::new(file, 6, 7), Span::new(file, 1 << 30, 1 << 30)] {
            let text = draw(
                &[Diagnostic::error("too-long", span, "x\u{1b}y")],
                &sources,
                false,
            );
            assert!(
                text.len() < 2_000 && !text.contains('\u{1b}'),
                "{}",
                text.len()
            );
        }
    }
}

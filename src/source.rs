//! Where things stand in the text: files, spans, lines and columns.
//!
//! Every node of the syntax tree carries a [`Span`]; [`Sources`] turns it into a file
//! name with lines and columns. Offsets are bytes; lines and columns count from 1, and
//! columns count characters.

/// A file known to [`Sources`].
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Default)]
pub struct FileId(pub u32);

/// A stretch of one file, in bytes; `end` is exclusive.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash, Default)]
pub struct Span {
    /// The file it lies in.
    pub file: FileId,
    /// First byte.
    pub start: u32,
    /// One past the last byte.
    pub end: u32,
}

impl Span {
    /// A span from byte offsets.
    pub fn new(file: FileId, start: usize, end: usize) -> Span {
        Span {
            file,
            start: start as u32,
            end: end.max(start) as u32,
        }
    }

    /// The smallest span that holds both; both must lie in one file.
    pub fn to(self, other: Span) -> Span {
        Span {
            file: self.file,
            start: self.start.min(other.start),
            end: self.end.max(other.end),
        }
    }
}

/// A place in a file as people count: from 1, columns in characters.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub struct Position {
    /// The line.
    pub line: usize,
    /// The character in the line.
    pub column: usize,
}

/// One text with its name.
#[derive(Debug, Clone)]
pub struct Source {
    /// The name shown to people: a path as it was given, or a module's name.
    pub name: String,
    /// The whole text.
    pub text: String,
    line_starts: Vec<usize>,
}

/// All texts that a session has read.
#[derive(Debug, Clone, Default)]
pub struct Sources {
    files: Vec<Source>,
}

impl Sources {
    /// Takes a text in and gives the id that its spans carry.
    pub fn add(&mut self, name: impl Into<String>, text: impl Into<String>) -> FileId {
        let text = text.into();
        let line_starts = std::iter::once(0)
            .chain(text.match_indices('\n').map(|(at, _)| at + 1))
            .collect();
        self.files.push(Source {
            name: name.into(),
            text,
            line_starts,
        });
        FileId((self.files.len() - 1) as u32)
    }

    /// The file of an id that [`Sources::add`] gave.
    pub fn get(&self, file: FileId) -> &Source {
        &self.files[file.0 as usize]
    }

    /// The files in the order in which they came, with their ids.
    pub fn iter(&self) -> impl Iterator<Item = (FileId, &Source)> {
        self.files
            .iter()
            .enumerate()
            .map(|(idx, source)| (FileId(idx as u32), source))
    }

    /// The text under a span.
    pub fn slice(&self, span: Span) -> &str {
        let text = &self.get(span.file).text;
        text.get(span.start as usize..(span.end as usize).min(text.len()))
            .unwrap_or("")
    }

    /// Line and column of a byte offset.
    pub fn position(&self, file: FileId, offset: u32) -> Position {
        let source = self.get(file);
        let offset = (offset as usize).min(source.text.len());
        let line = source.line_starts.partition_point(|&start| start <= offset);
        let start = source.line_starts[line - 1];
        let column = source.text[start..]
            .char_indices()
            .take_while(|(at, _)| start + at < offset)
            .count();
        Position {
            line,
            column: column + 1,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_count_characters_from_one() {
        let mut sources = Sources::default();
        let file = sources.add("a", "ρ = 1\nβy\n");
        let at = sources.position(file, 3);
        assert_eq!((at.line, at.column), (1, 3));
        let at = sources.position(file, 9);
        assert_eq!((at.line, at.column), (2, 2));
        let end = sources.position(file, 1000);
        assert_eq!((end.line, end.column), (3, 1));
    }
}

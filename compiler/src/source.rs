//! The files of a compilation, and the one door through which they are read.

use pintle_syntax::ast::SourceFile;
use pintle_text::{FileId, ItemId, LineIndex, Place, Span};
use std::sync::Arc;

/// The only door to files. Tests and editors bring their own.
pub trait Files {
    /// The bytes of the file at `path`, or why they cannot be read.
    fn read(&self, path: &str) -> Result<Vec<u8>, String>;

    /// Text and syntax of the file at `path`, where they are known already.
    fn parsed(&self, _path: &str) -> Option<(Arc<str>, Arc<SourceFile>)> {
        None
    }
}

/// Files of the disk.
#[derive(Clone, Copy, Debug, Default)]
pub struct Disk;

impl Files for Disk {
    fn read(&self, path: &str) -> Result<Vec<u8>, String> {
        std::fs::read(path).map_err(|error| error.to_string())
    }
}

/// Where a file comes from.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Origin {
    /// The sheet itself.
    Sheet,
    /// A file that the sheet uses.
    Used,
    /// The standard library inside the program.
    Standard,
}

/// One file.
#[derive(Clone, Debug)]
pub struct Source {
    /// Its path as the user gave it, or `std/shapes.pintle`.
    pub path: String,
    /// Where it comes from.
    pub origin: Origin,
    /// Its text.
    pub text: Arc<str>,
    /// Its lines.
    pub lines: Arc<LineIndex>,
    /// Its syntax.
    pub syntax: Arc<SourceFile>,
}

/// A place as a person reads it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Location<'a> {
    /// The file.
    pub source: &'a str,
    /// Bytes in the file.
    pub span: Span,
    /// Line from 1.
    pub line: usize,
    /// Column in characters, from 1.
    pub column: usize,
}

/// All files of a compilation; the sheet is the first.
#[derive(Clone, Debug, Default)]
pub struct Sources {
    files: Vec<Source>,
}

impl Sources {
    /// Adds a file.
    pub fn add(&mut self, source: Source) -> FileId {
        self.files.push(source);
        FileId(self.files.len() as u32 - 1)
    }

    /// The files in order.
    pub fn files(&self) -> &[Source] {
        &self.files
    }

    /// One file.
    pub fn file(&self, file: FileId) -> Option<&Source> {
        self.files.get(file.0 as usize)
    }

    /// Bytes of a place in its file, kept inside the text and on character boundaries.
    pub fn span(&self, place: Place) -> Span {
        let Some(source) = self.file(place.item.file) else { return Span::default() };
        let offset = source.syntax.items.get(place.item.index as usize).map_or(0, |item| item.offset);
        let clamp = |at: u32| {
            let mut at = (at as usize).min(source.text.len());
            while !source.text.is_char_boundary(at) {
                at -= 1;
            }
            at as u32
        };
        let start = clamp(place.span.start.saturating_add(offset));
        Span { start, end: clamp(place.span.end.saturating_add(offset)).max(start) }
    }

    /// A place as file, line and column.
    pub fn location(&self, place: Place) -> Location<'_> {
        let span = self.span(place);
        match self.file(place.item.file) {
            Some(source) => {
                let (line, column) = source.lines.line_column(&source.text, span.start);
                Location { source: &source.path, span, line, column }
            }
            None => Location { source: "", span, line: 1, column: 1 },
        }
    }

    /// The text at a place.
    pub fn text(&self, place: Place) -> &str {
        let span = self.span(place);
        self.file(place.item.file).and_then(|source| source.text.get(span.range())).unwrap_or("")
    }

    /// The whole of an item.
    pub fn item_place(&self, item: ItemId) -> Place {
        let len = self
            .file(item.file)
            .and_then(|source| source.syntax.items.get(item.index as usize))
            .map_or(0, |item| item.len);
        Place { item, span: Span::new(0, len) }
    }
}

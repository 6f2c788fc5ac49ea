//! The one door between the protocol's positions and byte offsets.

use crate::lsp::{Position, PositionEncodingKind, Range};

/// How the client counts columns.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Encoding {
    /// Bytes.
    Utf8,
    /// UTF-16 units, the protocol's default.
    Utf16,
}

impl Encoding {
    /// UTF-8 where the client offers it.
    pub fn negotiate(offered: Option<&[PositionEncodingKind]>) -> Encoding {
        match offered {
            Some(kinds) if kinds.contains(&PositionEncodingKind::UTF8) => Encoding::Utf8,
            _ => Encoding::Utf16,
        }
    }

    /// The protocol's name for it.
    pub fn kind(self) -> PositionEncodingKind {
        match self {
            Encoding::Utf8 => PositionEncodingKind::UTF8,
            Encoding::Utf16 => PositionEncodingKind::UTF16,
        }
    }

    fn units(self, c: char) -> u32 {
        match self {
            Encoding::Utf8 => c.len_utf8() as u32,
            Encoding::Utf16 => c.len_utf16() as u32,
        }
    }
}

/// Positions of one text.
pub struct Positions<'t> {
    text: &'t str,
    lines: pintle_text::LineIndex,
    encoding: Encoding,
}

impl<'t> Positions<'t> {
    /// Reads the lines of `text`.
    pub fn new(text: &'t str, encoding: Encoding) -> Positions<'t> {
        Positions { text, lines: pintle_text::LineIndex::new(text), encoding }
    }

    /// Whether the text has that line; an empty line follows the last line end.
    pub fn has_line(&self, line: u32) -> bool {
        (line as usize) < self.lines.n_lines()
    }

    /// Byte offset of a position; a column past the line's end is the end, a
    /// line past the last is the end of the text.
    pub fn offset(&self, position: Position) -> usize {
        let line = position.line as usize;
        if line >= self.lines.n_lines() {
            return self.text.len();
        }
        let start = self.lines.start(line) as usize;
        let end = self.lines.start(line + 1) as usize;
        let mut column = 0;
        for (at, c) in self.text.get(start..end).unwrap_or("").char_indices() {
            if column >= position.character || c == '\n' || c == '\r' {
                return start + at;
            }
            column += self.encoding.units(c);
        }
        end
    }

    /// Position of a byte offset.
    pub fn position(&self, offset: u32) -> Position {
        let mut offset = (offset as usize).min(self.text.len());
        while !self.text.is_char_boundary(offset) {
            offset -= 1;
        }
        let line = self.lines.line(offset as u32);
        let start = self.lines.start(line) as usize;
        let character = self.text.get(start..offset).unwrap_or("").chars().map(|c| self.encoding.units(c)).sum();
        Position { line: line as u32, character }
    }

    /// Range of two byte offsets.
    pub fn range(&self, start: u32, end: u32) -> Range {
        Range { start: self.position(start), end: self.position(end) }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(text: &str, encoding: Encoding, line: u32, character: u32, offset: usize) {
        let positions = Positions::new(text, encoding);
        assert_eq!(positions.offset(Position { line, character }), offset);
    }

    #[test]
    fn columns_count_in_the_clients_units() {
        let text = "µ = 🙂 x\r\nkg·m²";
        check(text, Encoding::Utf16, 0, 6, "µ = 🙂".len());
        check(text, Encoding::Utf8, 0, 9, "µ = 🙂".len());
        check(text, Encoding::Utf16, 1, 3, "µ = 🙂 x\r\nkg·".len());
        for (offset, _) in text.char_indices() {
            let positions = Positions::new(text, Encoding::Utf16);
            if text.as_bytes()[offset] != b'\n' {
                assert_eq!(positions.offset(positions.position(offset as u32)), offset);
            }
        }
    }

    #[test]
    fn positions_past_the_end_are_clamped() {
        check("ab\ncd", Encoding::Utf16, 0, 99, 2);
        check("ab\ncd", Encoding::Utf16, 9, 0, 5);
    }
}

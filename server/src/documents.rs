//! Open documents: their texts, and edits applied to them.

use crate::lsp::{Range, TextDocumentContentChangeEvent};
use crate::position::{Encoding, Positions};

/// One open document.
#[derive(Debug)]
pub(crate) struct Document {
    pub text: String,
    pub version: i32,
    /// What the client shows is not known any more, until it sends the whole text.
    pub lost: bool,
}

/// Why an edit was not applied.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum EditFault {
    /// The version is not newer than what is known.
    NotNewer,
    /// The document was lost before.
    Lost,
    /// The range does not lie in the text, so the texts differ from now on.
    OutOfText,
}

impl Document {
    pub fn new(text: String, version: i32) -> Document {
        Document { text, version, lost: false }
    }

    /// Applies the edits of one change in order, or none that would be a guess.
    pub fn apply(
        &mut self,
        version: i32,
        changes: Vec<TextDocumentContentChangeEvent>,
        encoding: Encoding,
    ) -> Result<(), EditFault> {
        if version <= self.version {
            return Err(EditFault::NotNewer);
        }
        self.version = version;
        for change in changes {
            match change.range {
                None => {
                    self.text = change.text;
                    self.lost = false;
                }
                Some(_) if self.lost => {}
                Some(range) => self.replace(range, &change.text, encoding)?,
            }
        }
        if self.lost { Err(EditFault::Lost) } else { Ok(()) }
    }

    fn replace(&mut self, range: Range, text: &str, encoding: Encoding) -> Result<(), EditFault> {
        let positions = Positions::new(&self.text, encoding);
        let (start, end) = (positions.offset(range.start), positions.offset(range.end));
        // A column past its line is clamped; a line past the text means that the texts differ.
        if start > end || !positions.has_line(range.start.line) {
            self.lost = true;
            return Err(EditFault::OutOfText);
        }
        self.text.replace_range(start..end, text);
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::lsp::Position;
    use EditFault::{Lost, NotNewer, OutOfText};

    fn edit(from: (u32, u32), to: (u32, u32), text: &str) -> TextDocumentContentChangeEvent {
        let position = |(line, character)| Position { line, character };
        let range = Some(Range { start: position(from), end: position(to) });
        TextDocumentContentChangeEvent { range, range_length: None, text: text.into() }
    }

    fn whole(text: &str) -> TextDocumentContentChangeEvent {
        TextDocumentContentChangeEvent { range: None, range_length: None, text: text.into() }
    }

    #[track_caller]
    fn check(text: &str, changes: Vec<TextDocumentContentChangeEvent>, expected: &str) {
        let mut document = Document::new(text.into(), 1);
        assert_eq!(document.apply(2, changes, Encoding::Utf16), Ok(()));
        assert_eq!(document.text, expected);
    }

    #[track_caller]
    fn check_fault(document: &mut Document, version: i32, change: TextDocumentContentChangeEvent, fault: EditFault) {
        let before = document.text.clone();
        assert_eq!(document.apply(version, vec![change], Encoding::Utf16), Err(fault));
        assert_eq!(document.text, before);
    }

    #[test]
    fn edits_count_in_the_clients_units() {
        check("µ🙂x\n", vec![edit((0, 3), (0, 4), "y")], "µ🙂y\n");
        check("a\r\nµb\r\n", vec![edit((1, 1), (1, 2), "c"), edit((1, 2), (1, 2), "d")], "a\r\nµcd\r\n");
    }

    #[test]
    fn columns_past_the_line_end_are_clamped() {
        check("ab\ncd", vec![edit((0, 99), (0, 99), "!")], "ab!\ncd");
        check("ab\r\ncd", vec![edit((0, 99), (1, 0), " ")], "ab cd");
        check("ab", vec![edit((0, 0), (9, 0), "x")], "x");
        check("ab\n", vec![edit((1, 0), (1, 0), "cd")], "ab\ncd");
    }

    #[test]
    fn older_versions_are_refused() {
        let mut document = Document::new("a".into(), 5);
        check_fault(&mut document, 5, whole("b"), NotNewer);
        check_fault(&mut document, 4, whole("b"), NotNewer);
    }

    #[test]
    fn a_range_outside_the_text_loses_the_document_until_it_is_sent_whole() {
        let mut document = Document::new("ab\ncd".into(), 1);
        check_fault(&mut document, 2, edit((5, 0), (5, 1), "x"), OutOfText);
        check_fault(&mut document, 3, edit((0, 0), (0, 1), "x"), Lost);
        assert_eq!(document.apply(4, vec![whole("new")], Encoding::Utf16), Ok(()));
        check_fault(&mut document, 5, edit((0, 2), (0, 1), "x"), OutOfText);
    }
}

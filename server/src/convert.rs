//! From the compiler's plain data to the protocol's.

use crate::lsp::{
    Diagnostic, DiagnosticRelatedInformation, DiagnosticSeverity, Hover, HoverContents, Location, MarkupContent,
    MarkupKind, NumberOrString, Range, Url,
};
use crate::position::{Encoding, Positions};
use pintle::Compilation;
use pintle::analysis::{self, FileDiagnostic};
use pintle::source::Origin;
use pintle_text::Severity;

/// More than this in one file helps nobody and chokes editors.
const MOST: usize = 500;

/// A name for files that the compiler reads: the path of the file, or the address itself.
pub(crate) fn path_of(uri: &Url) -> String {
    uri.to_file_path().ok().and_then(|path| path.to_str().map(String::from)).unwrap_or_else(|| uri.to_string())
}

/// Diagnostics of one text.
pub(crate) struct Page<'t> {
    pub uri: &'t Url,
    pub text: &'t str,
    pub encoding: Encoding,
    /// The other files of the sheet, where known.
    pub compilation: Option<&'t Compilation>,
}

impl Page<'_> {
    /// The whole list, shortened where it is endless.
    pub fn diagnostics(&self, found: &[FileDiagnostic]) -> Vec<Diagnostic> {
        let positions = Positions::new(self.text, self.encoding);
        let mut list: Vec<Diagnostic> =
            found.iter().take(MOST).map(|diagnostic| self.diagnostic(&positions, diagnostic)).collect();
        if found.len() > MOST {
            let words = format!("{} more diagnostics are not shown", found.len() - MOST);
            list.push(note(DiagnosticSeverity::INFORMATION, "more", words));
        }
        list
    }

    fn diagnostic(&self, positions: &Positions, found: &FileDiagnostic) -> Diagnostic {
        let mut message = found.message.clone();
        let mut related = Vec::new();
        for (path, start, end, words) in &found.related {
            match self.location(positions, path, *start, *end) {
                Some(location) => related.push(DiagnosticRelatedInformation { location, message: words.clone() }),
                // In the library inside the program, where no editor can go.
                None => message.push_str(&format!("\n{path}: {words}")),
            }
        }
        if let Some(help) = &found.help {
            message.push_str(&format!("\nhelp: {help}"));
        }
        Diagnostic {
            range: positions.range(found.start, found.end),
            severity: Some(match found.severity {
                Severity::Error => DiagnosticSeverity::ERROR,
                Severity::Warning => DiagnosticSeverity::WARNING,
                Severity::Hint => DiagnosticSeverity::HINT,
            }),
            code: Some(NumberOrString::String(found.code.into())),
            source: Some("pintle".into()),
            message,
            related_information: (!related.is_empty()).then_some(related),
            ..Diagnostic::default()
        }
    }

    fn location(&self, positions: &Positions, path: &str, start: u32, end: u32) -> Option<Location> {
        if path == path_of(self.uri) {
            return Some(Location { uri: self.uri.clone(), range: positions.range(start, end) });
        }
        let files = self.compilation?.sources.files();
        let file = files.iter().find(|file| file.path == path && file.origin != Origin::Standard)?;
        let range = Positions::new(&file.text, self.encoding).range(start, end);
        Some(Location { uri: Url::from_file_path(path).ok()?, range })
    }
}

/// Said instead of results where the compiler panicked.
pub(crate) fn internal_fault() -> Diagnostic {
    let words = "internal fault while computing this sheet; please report it with the sheet".to_string();
    note(DiagnosticSeverity::ERROR, "internal-fault", words)
}

/// A word on the document as a whole, shown at its start.
fn note(severity: DiagnosticSeverity, code: &str, message: String) -> Diagnostic {
    Diagnostic {
        range: Range::default(),
        severity: Some(severity),
        code: Some(NumberOrString::String(code.into())),
        source: Some("pintle".into()),
        message,
        ..Diagnostic::default()
    }
}

/// Whether a hover's numbers belong to the text that is shown.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(crate) enum Age {
    /// They do.
    Current,
    /// They are of an earlier text.
    Earlier,
}

pub(crate) fn hover(found: analysis::Hover, positions: &Positions, age: Age) -> Hover {
    let value = match age {
        Age::Current => found.markdown,
        Age::Earlier => format!("{}\n\n*Computed before the last edit.*", found.markdown),
    };
    Hover {
        contents: HoverContents::Markup(MarkupContent { kind: MarkupKind::Markdown, value }),
        range: Some(positions.range(found.range.0, found.range.1)),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn found(start: u32, end: u32) -> FileDiagnostic {
        FileDiagnostic {
            code: "unit-mismatch",
            severity: Severity::Warning,
            message: "m".into(),
            start,
            end,
            related: vec![("std/shapes.pintle".into(), 0, 1, "declared here".into())],
            help: Some("h".into()),
        }
    }

    fn page(text: &str, n: usize) -> Vec<Diagnostic> {
        let uri = Url::parse("file:///a.pintle").expect("an address");
        let page = Page { uri: &uri, text, encoding: Encoding::Utf16, compilation: None };
        page.diagnostics(&vec![found(5, 6); n])
    }

    #[test]
    fn places_that_no_editor_can_reach_go_into_the_message() {
        let list = page("µ🙂x", 1);
        assert_eq!(list[0].message, "m\nstd/shapes.pintle: declared here\nhelp: h");
        assert_eq!(list[0].related_information, None);
        assert_eq!((list[0].range.start.character, list[0].severity), (1, Some(DiagnosticSeverity::WARNING)));
    }

    #[test]
    fn endless_lists_are_cut() {
        let list = page("", 502);
        assert_eq!(list.len(), 501);
        assert_eq!(list[500].message, "2 more diagnostics are not shown");
    }
}

//! What is said about a place: an error, a warning, a hint, with its fix.

use crate::{ItemId, Place, Span};

/// How grave a diagnostic is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Severity {
    /// The sheet is wrong; exit code 2.
    Error,
    /// The sheet is probably not what its author means.
    Warning,
    /// Worth knowing; never changes an exit code.
    Hint,
}

impl Severity {
    /// The word used in output and JSON.
    pub fn word(self) -> &'static str {
        match self {
            Severity::Error => "error",
            Severity::Warning => "warning",
            Severity::Hint => "hint",
        }
    }
}

/// A kind of diagnostic, declared once beside the stage that reports it.
///
/// The name states the fault in kebab case: `unit-mismatch`, `unknown-name`.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Code {
    /// Kebab-case name, stable.
    pub name: &'static str,
    /// Severity with which it is reported.
    pub severity: Severity,
    /// One line: what the fault is.
    pub summary: &'static str,
}

/// A second place that matters to a diagnostic, with what it has to do with it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Label<P = Place> {
    /// Where.
    pub place: P,
    /// What stands there, as a short phrase.
    pub message: String,
}

/// One replacement of text; an empty place inserts.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Edit<P = Place> {
    /// What is replaced.
    pub place: P,
    /// By what.
    pub text: String,
}

/// A change of the text that mends the fault.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Fix<P = Place> {
    /// What the change does, in the imperative.
    pub title: String,
    /// The change.
    pub edits: Vec<Edit<P>>,
}

/// One diagnostic. Generic over places: the syntax stage counts spans from the
/// start of an item (`Diagnostic<Span>`), later stages name the item too.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic<P = Place> {
    /// Its kind.
    pub code: Code,
    /// The headline; stands alone, names both sides of a mismatch.
    pub message: String,
    /// Where.
    pub place: P,
    /// A word or two at the place itself; may be empty.
    pub note: String,
    /// Where else.
    pub labels: Vec<Label<P>>,
    /// What to do next.
    pub help: Option<String>,
    /// Edits on offer.
    pub fixes: Vec<Fix<P>>,
}

impl<P> Diagnostic<P> {
    /// A diagnostic with a headline and nothing else yet.
    pub fn new(code: Code, place: P, message: impl Into<String>) -> Self {
        Diagnostic {
            code,
            message: message.into(),
            place,
            note: String::new(),
            labels: Vec::new(),
            help: None,
            fixes: Vec::new(),
        }
    }

    /// Adds a short note at the place itself.
    pub fn with_note(mut self, note: impl Into<String>) -> Self {
        self.note = note.into();
        self
    }

    /// Adds a second place.
    pub fn with_label(mut self, place: P, message: impl Into<String>) -> Self {
        self.labels.push(Label { place, message: message.into() });
        self
    }

    /// Says what to do next.
    pub fn with_help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// Offers one edit.
    pub fn with_fix(mut self, title: impl Into<String>, place: P, text: impl Into<String>) -> Self {
        self.fixes.push(Fix { title: title.into(), edits: vec![Edit { place, text: text.into() }] });
        self
    }

    /// The severity of its code.
    pub fn severity(&self) -> Severity {
        self.code.severity
    }

    fn map<Q>(self, f: impl Fn(P) -> Q) -> Diagnostic<Q> {
        Diagnostic {
            code: self.code,
            message: self.message,
            place: f(self.place),
            note: self.note,
            labels: self.labels.into_iter().map(|it| Label { place: f(it.place), message: it.message }).collect(),
            help: self.help,
            fixes: self
                .fixes
                .into_iter()
                .map(|it| Fix {
                    title: it.title,
                    edits: it.edits.into_iter().map(|e| Edit { place: f(e.place), text: e.text }).collect(),
                })
                .collect(),
        }
    }
}

impl Diagnostic<Span> {
    /// The same diagnostic with its spans placed in `item`.
    pub fn in_item(self, item: ItemId) -> Diagnostic<Place> {
        self.map(|span| Place { item, span })
    }
}

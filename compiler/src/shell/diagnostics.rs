//! Diagnostics for a terminal, by ariadne.

use ariadne::{Cache, Color, Config, IndexType, Label, Report, ReportKind, Source};
use pintle::Compilation;
use pintle_text::{Place, Severity};
use std::collections::BTreeMap;
use std::fmt::{Debug, Display};

type Span = (String, std::ops::Range<usize>);

/// One source a file, made when first needed.
struct Files {
    sources: BTreeMap<String, Source>,
    empty: Source,
}

impl Cache<String> for Files {
    type Storage = String;

    fn fetch(&mut self, id: &String) -> Result<&Source, impl Debug> {
        Ok::<_, String>(self.sources.get(id).unwrap_or(&self.empty))
    }

    fn display<'a>(&self, id: &'a String) -> Option<impl Display + 'a> {
        Some(id.clone())
    }
}

/// All diagnostics, in order.
pub fn render(compilation: &Compilation, colour: bool) -> String {
    let sources = &compilation.sources;
    let mut files = Files { sources: BTreeMap::new(), empty: Source::from(String::new()) };
    if !compilation.diagnostics.is_empty() {
        for file in sources.files() {
            files.sources.insert(file.path.clone(), Source::from(file.text.to_string()));
        }
    }
    let span = |place: Place| -> Span {
        let span = sources.span(place);
        (sources.location(place).source.to_string(), span.range())
    };
    let mut out = String::new();
    for diagnostic in &compilation.diagnostics {
        let (kind, paint) = match diagnostic.severity() {
            Severity::Error => (ReportKind::Error, Color::Red),
            Severity::Warning => (ReportKind::Warning, Color::Yellow),
            Severity::Hint => (ReportKind::Advice, Color::Cyan),
        };
        let note = if diagnostic.note.is_empty() { diagnostic.code.summary } else { diagnostic.note.as_str() };
        let mut report = Report::build(kind, span(diagnostic.place))
            // Spans are bytes; the default counts characters.
            .with_config(Config::default().with_index_type(IndexType::Byte).with_color(colour))
            .with_code(diagnostic.code.name)
            .with_message(&diagnostic.message)
            .with_label(Label::new(span(diagnostic.place)).with_message(note).with_color(paint));
        for label in &diagnostic.labels {
            report =
                report.with_label(Label::new(span(label.place)).with_message(&label.message).with_color(Color::Blue));
        }
        if let Some(help) = &diagnostic.help {
            report = report.with_help(help);
        }
        let mut bytes = Vec::new();
        match report.finish().write(&mut files, &mut bytes) {
            Ok(()) => out.push_str(&String::from_utf8_lossy(&bytes)),
            Err(_) => {
                let place = sources.location(diagnostic.place);
                out.push_str(&format!("{}:{}:{}: {}\n", place.source, place.line, place.column, diagnostic.message));
            }
        }
        out.push('\n');
    }
    out
}

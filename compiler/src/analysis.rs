//! What an editor asks, answered in byte offsets and plain data.
//!
//! A [`Host`] holds the newest texts; a [`Snapshot`] is a cheap copy of them
//! that other threads can work on. Nothing here knows a protocol.

use crate::source::{Disk, Files};
use crate::{Compilation, Options, compile_unless};
use pintle_graph::formula;
use pintle_syntax::ast::SourceFile;
use pintle_text::{Diagnostic, FileId, ItemId, Severity};
use std::collections::BTreeMap;
use std::sync::{Arc, OnceLock};

/// The text of an open file; whoever first needs its syntax parses it, once.
#[derive(Debug)]
struct Text {
    text: Arc<str>,
    syntax: OnceLock<Arc<SourceFile>>,
}

impl Text {
    fn syntax(&self) -> &Arc<SourceFile> {
        self.syntax.get_or_init(|| Arc::new(pintle_syntax::parse(&self.text)))
    }
}

/// Texts of open files; the disk for all others.
#[derive(Clone, Debug, Default)]
struct Texts {
    open: Arc<BTreeMap<String, Arc<Text>>>,
}

impl Files for Texts {
    fn read(&self, path: &str) -> Result<Vec<u8>, String> {
        match self.open.get(path) {
            Some(open) => Ok(open.text.as_bytes().to_vec()),
            None => Disk.read(path),
        }
    }

    fn parsed(&self, path: &str) -> Option<(Arc<str>, Arc<SourceFile>)> {
        let open = self.open.get(path)?;
        Some((open.text.clone(), open.syntax().clone()))
    }
}

/// The one writer: owns the texts of open files.
#[derive(Debug, Default)]
pub struct Host {
    texts: Texts,
}

impl Host {
    /// Without open files.
    pub fn new() -> Host {
        Host::default()
    }

    /// Opens a file or replaces its text.
    pub fn set_text(&mut self, path: &str, text: &str) {
        // The same text again keeps its syntax.
        if self.texts.open.get(path).is_none_or(|open| *open.text != *text) {
            let text = Text { text: text.into(), syntax: OnceLock::new() };
            Arc::make_mut(&mut self.texts.open).insert(path.into(), Arc::new(text));
        }
    }

    /// Closes a file; the disk holds its text from now on.
    pub fn close(&mut self, path: &str) {
        Arc::make_mut(&mut self.texts.open).remove(path);
    }

    /// The texts as they are now.
    pub fn snapshot(&self) -> Snapshot {
        Snapshot { texts: self.texts.clone() }
    }
}

/// The texts of one moment.
#[derive(Clone, Debug, Default)]
pub struct Snapshot {
    texts: Texts,
}

/// A diagnostic of one file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct FileDiagnostic {
    /// Kebab-case name of its kind.
    pub code: &'static str,
    /// How grave.
    pub severity: Severity,
    /// The headline.
    pub message: String,
    /// First byte in the file.
    pub start: u32,
    /// One past the last byte.
    pub end: u32,
    /// Other places: path, first byte, end, words.
    pub related: Vec<(String, u32, u32, String)>,
    /// What to do.
    pub help: Option<String>,
}

/// What a name is, with its place.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Hover {
    /// Markdown.
    pub markdown: String,
    /// First byte and end of the name.
    pub range: (u32, u32),
}

impl Snapshot {
    /// The text of an open file.
    pub fn text(&self, path: &str) -> Option<&str> {
        self.texts.open.get(path).map(|open| &*open.text)
    }

    /// Faults of the text alone, at once.
    pub fn syntax_diagnostics(&self, path: &str) -> Vec<FileDiagnostic> {
        let Some(open) = self.texts.open.get(path) else { return Vec::new() };
        let mut result = Vec::new();
        for (index, item) in open.syntax().items.iter().enumerate() {
            let mut found = Vec::new();
            crate::syntax_errors(ItemId { file: FileId(0), index: index as u32 }, item, 0, &mut found);
            // Places count from the item's start.
            result.extend(found.into_iter().map(|diagnostic| {
                let place = |place: pintle_text::Place| (place.span.start + item.offset, place.span.end + item.offset);
                let (start, end) = place(diagnostic.place);
                let related = diagnostic.labels.iter().map(|label| {
                    let (start, end) = place(label.place);
                    (path.to_string(), start, end, label.message.clone())
                });
                FileDiagnostic {
                    code: diagnostic.code.name,
                    severity: diagnostic.severity(),
                    message: message(&diagnostic),
                    start,
                    end,
                    related: related.collect(),
                    help: diagnostic.help.clone(),
                }
            }));
        }
        result.sort_by_key(|it| it.start);
        result
    }

    /// The sheet at `path` through all stages; nothing where it is not open, or
    /// where `cancel` said so on the way.
    pub fn compile(&self, path: &str, cancel: &(dyn Fn() -> bool + Sync)) -> Option<Compilation> {
        compile_unless(path, self.text(path)?, &self.texts, &Options::default(), cancel)
    }

    /// All diagnostics of the file itself.
    pub fn diagnostics(path: &str, compilation: &Compilation) -> Vec<FileDiagnostic> {
        let sources = &compilation.sources;
        let mut result = Vec::new();
        for diagnostic in &compilation.diagnostics {
            if sources.location(diagnostic.place).source != path {
                continue;
            }
            let span = sources.span(diagnostic.place);
            let related = diagnostic
                .labels
                .iter()
                .map(|label| {
                    let span = sources.span(label.place);
                    (sources.location(label.place).source.to_string(), span.start, span.end, label.message.clone())
                })
                .collect();
            result.push(FileDiagnostic {
                code: diagnostic.code.name,
                severity: diagnostic.severity(),
                message: message(diagnostic),
                start: span.start,
                end: span.end,
                related,
                help: diagnostic.help.clone(),
            });
        }
        result
    }

    /// Value, kind, unit, formula and source of the name at `offset`.
    pub fn hover(text: &str, compilation: &Compilation, offset: u32) -> Option<Hover> {
        let (start, end) = path_at(text, offset as usize)?;
        let path = text.get(start..end)?;
        let results = &compilation.results.base;
        let model = compilation.models.first()?;
        let source = compilation.sources.files().first()?;
        // The text may be newer than its results: items are looked for where they are now.
        let syntax = if *source.text == *text { source.syntax.clone() } else { Arc::new(pintle_syntax::parse(text)) };
        // Inside a problem a state is written without its prefix: try the item's name in front.
        let owner = syntax
            .items
            .iter()
            .find(|item| item.offset as usize <= start && start <= (item.offset + item.len) as usize)
            .and_then(|item| item.name())
            .map(|name| name.text.to_string());
        let prefixed = owner.map(|owner| format!("{owner}.{path}"));
        let quantity =
            prefixed.as_deref().and_then(|name| results.quantity(name)).or_else(|| results.quantity(path))?;
        let mut markdown = format!("**{}**", quantity.name);
        match quantity.si {
            Some(si) => markdown.push_str(&format!(
                " = {} {}",
                crate::number::engineering(quantity.unit.from_si(si)),
                quantity.unit.text
            )),
            None => markdown.push_str(&format!(": {}", quantity.status.word())),
        }
        markdown.push_str(&format!("\n\n{}, {}", quantity.kind_words(), quantity.status.word()));
        if let Some((role, place)) = model.roles.get(&quantity.id) {
            let line = compilation.sources.location(*place).line;
            markdown.push_str(&format!(", used as a {} (line {line})", role.words()));
        }
        let node = model.quantity(quantity.id).node;
        let formula = formula(&model.graph, node).text(&|id| model.quantity(id).name.to_string(), &|input| {
            model.inputs.get(input as usize).map_or(String::new(), |input| input.text.to_string())
        });
        markdown.push_str(&format!("\n\n`{} = {formula}`", quantity.name));
        if !quantity.source.is_empty() {
            markdown.push_str(&format!("\n\nSource: {}", quantity.source));
        }
        Some(Hover { markdown, range: (start as u32, end as u32) })
    }
}

/// The headline, with its note.
fn message(diagnostic: &Diagnostic) -> String {
    match diagnostic.note.as_str() {
        "" => diagnostic.message.clone(),
        note => format!("{} ({note})", diagnostic.message),
    }
}

/// The dotted path that holds `offset`, up to the word under it.
fn path_at(text: &str, offset: usize) -> Option<(usize, usize)> {
    let mut offset = offset.min(text.len());
    while !text.is_char_boundary(offset) {
        offset -= 1;
    }
    let word = |c: char| c.is_alphanumeric() || c == '_';
    let mut end = offset;
    for c in text[offset..].chars().take_while(|c| word(*c)) {
        end += c.len_utf8();
    }
    let mut start = offset;
    for c in text[..offset].chars().rev().take_while(|c| word(*c) || *c == '.') {
        start -= c.len_utf8();
    }
    (start < end).then_some((start, end))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check_hover(marked: &str, expected: &[&str]) {
        let offset = marked.find("<|>").expect("a cursor");
        let text = marked.replace("<|>", "");
        let mut host = Host::new();
        host.set_text("t.pintle", &text);
        let compilation = host.snapshot().compile("t.pintle", &|| false).expect("an open file");
        let hover = Snapshot::hover(&text, &compilation, offset as u32).expect("a hover");
        for part in expected {
            assert!(hover.markdown.contains(part), "{part:?} is not in {:?}", hover.markdown);
        }
    }

    #[test]
    fn hover_shows_value_kind_and_formula() {
        check_hover(
            "given m : mass = 4 kg\ngiven v : speed = 3 m/s\nE<|>kin = 1/2 * m * v^2",
            &["Ekin", "18", "J", "energy", "1 / 2 * m * v^2"],
        );
    }

    #[test]
    fn hover_reaches_through_wide_characters() {
        check_hover(
            "# µ ² · 慣性\ngiven ω_max : angular_velocity = 900 rpm\nx = 2 * ω<|>_max",
            &["ω_max", "900", "rpm"],
        );
    }
}

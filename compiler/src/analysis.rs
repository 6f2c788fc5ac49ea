//! What an editor asks, answered in byte offsets and plain data.
//!
//! A [`Host`] holds the newest texts; a [`Snapshot`] is a cheap copy of them
//! that other threads can work on. Nothing here knows a protocol.

use crate::model::{InputValue, Model};
use crate::number::shown;
use crate::results::Verdict;
use crate::source::{Disk, Files};
use crate::{Compilation, Options, compile_unless};
use pintle_graph::{InputId, Op, QuantityId, formula};
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

/// Code of the diagnostic for a limit that is not met. To the compiler it is a
/// verdict, not a fault; in an editor it stands beside the faults.
pub const LIMIT_NOT_MET: &str = "limit-not-met";

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

    /// All diagnostics of the file itself, and its limits that are not met, in order of the text.
    pub fn diagnostics(path: &str, compilation: &Compilation) -> Vec<FileDiagnostic> {
        let sources = &compilation.sources;
        let mut result = broken_limits(path, compilation);
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
        result.sort_by_key(|it| it.start);
        result
    }

    /// Value, kind, unit, formula and source of the name at `offset`.
    pub fn hover(text: &str, compilation: &Compilation, offset: u32) -> Option<Hover> {
        let (start, end) = path_at(text, offset as usize)?;
        let path = text.get(start..end)?;
        let model = compilation.models.first()?;
        let source = compilation.sources.files().first()?;
        // The text may be newer than its results: items are looked for where they are now.
        let syntax = if *source.text == *text { source.syntax.clone() } else { Arc::new(pintle_syntax::parse(text)) };
        // Inside a problem a state is written without its prefix: try the item's name in front.
        let owner = syntax
            .items
            .iter()
            .find(|item| item.offset as usize <= start && start <= (item.offset + item.len) as usize)
            .and_then(|item| item.name());
        let prefixed = owner.and_then(|owner| model.named(&format!("{}.{path}", owner.text)));
        let markdown = describe(compilation, model, prefixed.or_else(|| model.named(path))?)?;
        Some(Hover { markdown, range: (start as u32, end as u32) })
    }
}

/// Markdown on one quantity.
fn describe(compilation: &Compilation, model: &Model, id: QuantityId) -> Option<String> {
    let quantity = model.quantities.get(id.0 as usize)?;
    let name = &quantity.name;
    // Constants of the library have no result of their own.
    let result = compilation.results.base.quantity(name);
    let (value, status) = match result {
        Some(result) => (result.si, result.status.word()),
        None => (model.value(quantity.node), "from the library".to_string()),
    };
    let mut markdown = match value {
        Some(si) => format!("**{name}** = {}", shown(si, &quantity.unit)),
        None => format!("**{name}**: {status}"),
    };
    let kind = quantity.ty.kind.map_or_else(|| quantity.ty.words(), |kind| kind.words().to_string());
    markdown.push_str(&format!("\n\n{kind}, {status}"));
    if let Some((role, place)) = model.roles.get(&id) {
        let line = compilation.sources.location(*place).line;
        markdown.push_str(&format!(", used as a {} (line {line})", role.words()));
    }
    let inner = match model.graph.op(quantity.node) {
        Op::Quantity(_, inner) => model.graph.op(inner),
        other => other,
    };
    let unknown = match inner {
        Op::Input(InputId(input)) => {
            model.inputs.get(input as usize).filter(|it| matches!(it.value, InputValue::Wanted { .. }))
        }
        _ => None,
    };
    match unknown.map(|input| &input.value) {
        // It has no formula: equations fix it.
        Some(InputValue::Wanted { low, high, .. }) => {
            let (low, high) = (shown(*low, &quantity.unit), shown(*high, &quantity.unit));
            markdown.push_str(&format!("\n\nsearched within {low} .. {high}"));
        }
        _ => {
            let formula = formula(&model.graph, quantity.node).text(
                &|id| model.quantities.get(id.0 as usize).map_or(String::new(), |it| it.name.to_string()),
                &|input| model.inputs.get(input as usize).map_or(String::new(), |input| input.text.to_string()),
            );
            markdown.push_str(&format!("\n\n`{name} = {formula}`"));
        }
    }
    if !quantity.source.is_empty() {
        markdown.push_str(&format!("\n\nSource: {}", quantity.source));
    }
    Some(markdown)
}

/// Limits of the file itself that do not hold, each once, with the cases in which it fails.
fn broken_limits(path: &str, compilation: &Compilation) -> Vec<FileDiagnostic> {
    let mut found: Vec<FileDiagnostic> = Vec::new();
    let results = &compilation.results;
    for case in std::iter::once(&results.base).chain(&results.cases) {
        for limit in case.limits.iter().filter(|it| it.verdict == Verdict::NotMet) {
            if compilation.sources.location(limit.place).source != path {
                continue;
            }
            let value = limit.value.map_or("?".to_string(), |si| shown(si, &limit.unit));
            let governing = limit.governing.as_ref().map_or(String::new(), |name| format!(", governed by `{name}`"));
            let under = case.case.as_ref().map_or(String::new(), |case| format!(" in case {case}"));
            let words = format!("{value}{under}{governing}");
            let span = compilation.sources.span(limit.place);
            match found.iter_mut().find(|it| (it.start, it.end) == (span.start, span.end)) {
                Some(earlier) => earlier.message.push_str(&format!("; {words}")),
                None => found.push(FileDiagnostic {
                    code: LIMIT_NOT_MET,
                    severity: Severity::Warning,
                    message: format!("limit not met: {}, but it is {words}", limit.text),
                    start: span.start,
                    end: span.end,
                    related: Vec::new(),
                    help: None,
                }),
            }
        }
    }
    found
}

/// The headline, with its note.
fn message(diagnostic: &Diagnostic) -> String {
    match diagnostic.note.as_str() {
        "" => diagnostic.message.clone(),
        note => format!("{} ({note})", diagnostic.message),
    }
}

/// The dotted path that holds `offset`, up to the word under it; nothing where
/// the word is part of a unit, a text, a comment or prose.
fn path_at(text: &str, offset: usize) -> Option<(usize, usize)> {
    let mut offset = offset.min(text.len());
    while !text.is_char_boundary(offset) {
        offset -= 1;
    }
    let (before, behind) = text.split_at_checked(offset)?;
    let word = |c: char| c.is_alphanumeric() || c == '_';
    let length = |chars: &mut dyn Iterator<Item = char>| chars.map(char::len_utf8).sum::<usize>();
    let end = offset + length(&mut behind.chars().take_while(|c| word(*c)));
    let mut start = offset - length(&mut before.chars().rev().take_while(|c| word(*c) || *c == '.'));
    // Two dots are a range, and what stands before them another name.
    if let Some(at) = text.get(start..end)?.rfind("..") {
        start += at + 2;
    }
    let line_start = before.rfind(['\n', '\r']).map_or(0, |at| at + 1);
    (start < end && is_name_place(text.get(line_start..start)?)).then_some((start, end))
}

/// Whether a name can stand behind `before`, the beginning of its line.
fn is_name_place(before: &str) -> bool {
    if before.trim_start().starts_with('|') {
        return false;
    }
    let (mut in_text, mut escaped) = (false, false);
    for c in before.chars() {
        match c {
            '#' if !in_text => return false,
            '"' if !escaped => in_text = !in_text,
            _ => {}
        }
        escaped = in_text && c == '\\' && !escaped;
    }
    if in_text {
        return false;
    }
    // A unit is one piece without blanks, one blank behind a number or the word `as`.
    let piece = before.rfind(|c: char| c.is_whitespace() || "[]{},;:=<>".contains(c)).map_or(0, |at| at + 1);
    let Some(front) = before.get(..piece).and_then(|front| front.strip_suffix(' ')) else { return true };
    let last = front.rsplit(|c: char| !(c.is_alphanumeric() || c == '_')).next().unwrap_or("");
    last != "as" && !last.starts_with(|c: char| c.is_ascii_digit())
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

    #[track_caller]
    fn check_no_hover(marked: &str) {
        let offset = marked.find("<|>").expect("a cursor");
        let text = marked.replace("<|>", "");
        let compilation = crate::compile_text("t.pintle", &text, &Disk, &Options::default());
        assert_eq!(Snapshot::hover(&text, &compilation, offset as u32), None);
    }

    #[test]
    fn units_texts_comments_and_prose_hold_no_names() {
        check_no_hover("m = 4 kg\nx = 3 <|>m");
        check_no_hover("m = 4 kg\nx = 3 kg*<|>m/s");
        check_no_hover("m = 4 kg\nx = 3 km as <|>m");
        check_no_hover("m = 4 kg\ngiven x = 3 kg cite \"the \\\" <|>m of it\"");
        check_no_hover("m = 4 kg # <|>m is a mass");
        check_no_hover("m = 4 kg\n| <|>m is a mass");
        check_hover("m = 4 kg\nx = 3 * <|>m", &["**m** = 4 kg"]);
        check_hover("m = 4 kg\nx = m + 3 kg + <|>m # \"", &["**m** = 4 kg"]);
        check_hover("alias = 4 kg\nx = alias + 1 kg - alias*<|>alias/alias", &["**alias** = 4 kg"]);
    }

    #[test]
    fn hover_reaches_constants_of_the_library() {
        check_hover("w = 3 kg * g<|>_n", &["**g_n** = 9.80665 m/s^2", "from the library"]);
    }

    #[test]
    fn hover_shows_numbers_without_a_unit_and_unknowns_without_a_formula() {
        check_hover("r<|>atio = 3 kg / 2 kg", &["**ratio** = 1.5\n"]);
        check_hover(
            "wanted t<|> : time within 0 s .. 9 s where 2 m/s * t == 8 m",
            &["**t** = 4 s", "within 0 s .. 9 s"],
        );
    }

    fn diagnostics(text: &str) -> Vec<FileDiagnostic> {
        let compilation = crate::compile_text("t.pintle", text, &Disk, &Options::default());
        Snapshot::diagnostics("t.pintle", &compilation)
    }

    #[test]
    fn limits_that_are_not_met_are_warnings_with_their_cases() {
        let text =
            "given m = 4 kg\nlimit m <= 9 kg\nlimit m <= 3 kg\ncase light { m = 2 kg }\ncase heavy { m = 12 kg }\n";
        let found = diagnostics(text);
        let messages: Vec<&str> = found.iter().map(|it| it.message.as_str()).collect();
        assert_eq!(
            messages,
            [
                "limit not met: m <= 9 kg, but it is 12 kg in case heavy",
                "limit not met: m <= 3 kg, but it is 4 kg; 12 kg in case heavy"
            ]
        );
        assert!(found.iter().all(|it| it.code == LIMIT_NOT_MET && it.severity == Severity::Warning));
        assert!(text.get(found[1].start as usize..).is_some_and(|rest| rest.starts_with("m <= 3")), "{found:?}");
    }

    #[test]
    fn syntax_faults_alone_are_those_of_the_whole_compilation() {
        let text = "a = (\ncomponent c { x : length } { y = x + }\n b = = 2\n";
        let mut host = Host::new();
        host.set_text("t.pintle", text);
        let alone = host.snapshot().syntax_diagnostics("t.pintle");
        assert!(!alone.is_empty());
        let all = diagnostics(text);
        for fault in &alone {
            assert!(all.contains(fault), "{fault:?} is not in {all:?}");
        }
    }

    #[test]
    fn each_text_is_parsed_once() {
        let mut host = Host::new();
        host.set_text("t.pintle", "a = 1\n");
        let early = host.snapshot();
        early.syntax_diagnostics("t.pintle");
        host.set_text("t.pintle", "a = 1\n");
        let compilation = host.snapshot().compile("t.pintle", &|| false).expect("an open file");
        let (_, syntax) = early.texts.parsed("t.pintle").expect("an open file");
        assert!(Arc::ptr_eq(&syntax, &compilation.sources.files()[0].syntax));
    }

    #[test]
    fn a_cancelled_compilation_gives_nothing() {
        let mut host = Host::new();
        host.set_text("t.pintle", "a = 1\n");
        assert!(host.snapshot().compile("t.pintle", &|| true).is_none());
    }
}

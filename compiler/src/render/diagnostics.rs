//! Diagnostics for a terminal: with the lines that they are about, or one line each.
//!
//! ariadne draws; this module gives it what it takes without a fault: ordered
//! spans on character boundaries, and text whose lines it counts as we do.

use super::page::{self, Colour, Paint, painted, printable};
use crate::source::Sources;
use ariadne::{Cache, Color, Config, IndexType, Label, Report, ReportKind, Source};
use pintle_text::{Diagnostic, Edit, FileId, Place, Severity};
use std::ops::Range;

/// More diagnostics than this are counted, not printed.
const MOST: usize = 100;

/// All diagnostics, each with its lines of source.
pub fn full(diagnostics: &[Diagnostic], sources: &Sources, colour: Colour) -> String {
    let mut cache = Texts::new(sources);
    let mut out = String::new();
    for diagnostic in diagnostics.iter().take(MOST) {
        report(diagnostic, sources, &mut cache, colour, &mut out);
    }
    out.push_str(&more(diagnostics.len()));
    out
}

/// All diagnostics, one line each: `winch.pintle:3:12: error[unknown-name]: ...`.
pub fn concise(diagnostics: &[Diagnostic], sources: &Sources, colour: Colour) -> String {
    let mut out = String::new();
    for diagnostic in diagnostics.iter().take(MOST) {
        let at = sources.location(diagnostic.place);
        let kind = format!("{}[{}]", diagnostic.severity().word(), diagnostic.code.name);
        let kind = painted(&kind, paint(diagnostic.severity()), colour);
        let message = printable(&diagnostic.message);
        out.push_str(&format!("{}:{}:{}: {kind}: {message}\n", printable(at.source), at.line, at.column));
    }
    out.push_str(&more(diagnostics.len()));
    out
}

fn more(n: usize) -> String {
    match n.saturating_sub(MOST) {
        0 => String::new(),
        rest => format!("{rest} more; `--json` lists all of them\n"),
    }
}

fn paint(severity: Severity) -> Paint {
    match severity {
        Severity::Error => Paint::Bad,
        Severity::Warning => Paint::Doubt,
        Severity::Hint => Paint::Heading,
    }
}

/// The texts of all files, each split into lines once, when first needed.
struct Texts<'s> {
    sources: &'s Sources,
    split: Vec<Option<Source<String>>>,
    nothing: Source<String>,
}

impl<'s> Texts<'s> {
    fn new(sources: &'s Sources) -> Texts<'s> {
        let split = sources.files().iter().map(|_| None).collect();
        Texts { sources, split, nothing: Source::from(String::new()) }
    }
}

impl Cache<FileId> for Texts<'_> {
    type Storage = String;

    fn fetch(&mut self, id: &FileId) -> Result<&Source<String>, impl std::fmt::Debug> {
        let slot = self.split.get_mut(id.0 as usize);
        let text = self.sources.file(*id).map(|source| &source.text);
        Ok::<_, String>(match (slot, text) {
            (Some(slot), Some(text)) => slot.get_or_insert_with(|| Source::from(harmless(text))),
            _ => &self.nothing,
        })
    }

    fn display<'a>(&self, id: &'a FileId) -> Option<impl std::fmt::Display + 'a> {
        Some(self.sources.file(*id).map_or(String::new(), |source| printable(&source.path)))
    }
}

/// The text with characters replaced, byte for byte of equal length, that would
/// break lines elsewhere than editors do, or steer the terminal.
fn harmless(text: &str) -> String {
    let replaced = |c: char| match (c, c.len_utf8()) {
        ('\n' | '\r' | '\t', _) => c,
        ('\u{2028}' | '\u{2029}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}', _) => '\u{fffd}',
        (_, 1) if c.is_control() => '?',
        (_, 2) if c.is_control() => '\u{b7}',
        _ => c,
    };
    text.chars().map(replaced).collect()
}

type Spot = (FileId, Range<usize>);

fn spot(place: Place, sources: &Sources) -> Spot {
    let span = sources.span(place).range();
    (place.item.file, span)
}

fn report(diagnostic: &Diagnostic, sources: &Sources, cache: &mut Texts<'_>, colour: Colour, out: &mut String) {
    let severity = diagnostic.severity();
    let tint = match severity {
        Severity::Error => Color::Red,
        Severity::Warning => Color::Yellow,
        Severity::Hint => Color::Cyan,
    };
    let kind = format!("{}[{}]", severity.word(), diagnostic.code.name);
    let config = Config::new().with_index_type(IndexType::Byte).with_color(colour == Colour::On);
    let primary = spot(diagnostic.place, sources);
    let note = match diagnostic.note.as_str() {
        // A label over several lines is not drawn at all without words.
        "" if spans_lines(diagnostic.place, sources) => "here".into(),
        note => printable(note),
    };
    let mut label = Label::new(primary.clone()).with_color(tint);
    if !note.is_empty() {
        label = label.with_message(note);
    }
    let mut builder = Report::build(ReportKind::Custom(&kind, tint), primary)
        .with_config(config)
        .with_message(printable(&diagnostic.message))
        .with_label(label);
    for (at, second) in diagnostic.labels.iter().enumerate() {
        let label = Label::new(spot(second.place, sources))
            .with_color(Color::Blue)
            .with_order(at as i32 + 1)
            .with_message(printable(&second.message));
        builder = builder.with_label(label);
    }
    if let Some(help) = &diagnostic.help {
        builder = builder.with_help(printable(help));
    }
    for fix in &diagnostic.fixes {
        builder = builder.with_note(format!("fix: {}{}", printable(&fix.title), edits(&fix.edits, sources)));
    }
    let mut bytes = Vec::new();
    match builder.finish().write(&mut *cache, &mut bytes) {
        // The drawing pads lines; nobody needs blanks at line ends.
        Ok(()) => {
            for line in String::from_utf8_lossy(&bytes).lines() {
                out.push_str(line.trim_end());
                out.push('\n');
            }
        }
        Err(_) => out.push_str(&concise(std::slice::from_ref(diagnostic), sources, colour)),
    }
}

fn spans_lines(place: Place, sources: &Sources) -> bool {
    sources.text(place).contains(['\n', '\r'])
}

/// What a fix writes, where that fits on a line.
fn edits(edits: &[Edit], sources: &Sources) -> String {
    match edits {
        [one] if !one.text.contains(['\n', '\r']) && page::width(&one.text) <= 60 => {
            let old = sources.text(one.place);
            let new = printable(&one.text);
            match old {
                "" => format!(", insert `{new}`"),
                _ if new.is_empty() => String::new(),
                _ => format!(", write `{new}`"),
            }
        }
        _ => String::new(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::render::fixture::source;
    use pintle_text::{Code, ItemId, Span};

    const MISMATCH: Code = Code { name: "unit-mismatch", severity: Severity::Error, summary: "sides differ" };
    const SUSPECT: Code = Code { name: "suspect-factor", severity: Severity::Warning, summary: "a factor" };

    fn files(texts: &[(&str, &str)]) -> Sources {
        let mut sources = Sources::default();
        for (path, text) in texts {
            sources.add(source(path, text));
        }
        sources
    }

    /// The place of `part` in file number `file`, through the item that holds it.
    fn find(sources: &Sources, file: u32, part: &str) -> Place {
        let source = &sources.files()[file as usize];
        let start = source.text.find(part).unwrap() as u32;
        let index = source.syntax.items.iter().rposition(|item| item.offset <= start).unwrap();
        let from = start - source.syntax.items[index].offset;
        let item = ItemId { file: FileId(file), index: index as u32 };
        Place { item, span: Span::new(from, from + part.len() as u32) }
    }

    #[track_caller]
    fn check_full(sources: &Sources, diagnostic: Diagnostic, expected: &str) {
        let found = full(&[diagnostic], sources, Colour::Off);
        assert_eq!(found.trim_end(), expected.trim_matches('\n'), "\n{found}");
    }

    #[test]
    fn a_mismatch_shows_both_sides_help_and_fix() {
        let sources = files(&[("winch.pintle", "given m = 3 kg\ngiven x = 12 µm\nsum = m + x # 3 kg·m²\n")]);
        let place = find(&sources, 0, "m + x");
        let x = find(&sources, 0, "x # ");
        let diagnostic = Diagnostic::new(MISMATCH, place, "cannot add mass (kg) and length (m)")
            .with_note("these differ")
            .with_label(find(&sources, 0, "12 µm"), "this is a length")
            .with_help("both sides of a sum have one dimension")
            .with_fix("write the mass", Place { span: Span::new(x.span.start, x.span.start + 1), ..x }, "m_x");
        check_full(
            &sources,
            diagnostic,
            "
error[unit-mismatch]: cannot add mass (kg) and length (m)
   ╭─[ winch.pintle:3:7 ]
   │
 2 │ given x = 12 µm
   │           ──┬──
   │             ╰──── this is a length
 3 │ sum = m + x # 3 kg·m²
   │       ──┬──
   │         ╰──── these differ
   │
   │ Help: both sides of a sum have one dimension
   │
   │ Note: fix: write the mass, write `m_x`
───╯",
        );
    }

    #[test]
    fn a_label_in_another_file_is_drawn_there() {
        let sources = files(&[("a.pintle", "use ./b\nm = 3 * q\n"), ("b.pintle", "q = 2\r\nr = 4 kg\r\n")]);
        let diagnostic = Diagnostic::new(SUSPECT, find(&sources, 0, "q"), "the factor is counted twice")
            .with_label(find(&sources, 1, "4 kg"), "once here");
        check_full(
            &sources,
            diagnostic,
            "
warning[suspect-factor]: the factor is counted twice
   ╭─[ a.pintle:2:9 ]
   │
 2 │ m = 3 * q
   │         ─
   │
   ├─[ b.pintle:2:5 ]
   │
 2 │ r = 4 kg
   │     ──┬─
   │       ╰─── once here
───╯",
        );
    }

    #[test]
    fn marks_stand_under_wide_characters_and_tabs() {
        let sources = files(&[("重.pintle", "name = \"重い荷\" + wrong\n\ttab = wrongly\n")]);
        let first = Diagnostic::new(MISMATCH, find(&sources, 0, "wrong"), "a text and a number").with_note("here");
        check_full(
            &sources,
            first,
            "
error[unit-mismatch]: a text and a number
   ╭─[ 重.pintle:1:16 ]
   │
 1 │ name = \"重い荷\" + wrong
   │                   ──┬──
   │                     ╰──── here
───╯",
        );
        let second = Diagnostic::new(MISMATCH, find(&sources, 0, "wrongly"), "unknown");
        check_full(
            &sources,
            second,
            "
error[unit-mismatch]: unknown
   ╭─[ 重.pintle:2:8 ]
   │
 2 │     tab = wrongly
   │           ───────
───╯",
        );
    }

    #[test]
    fn a_span_at_the_end_of_the_file_is_drawn() {
        let sources = files(&[("a.pintle", "m = ")]);
        let item = ItemId { file: FileId(0), index: 0 };
        let end = Diagnostic::new(MISMATCH, Place { item, span: Span::at(4) }, "a value is missing");
        let found = full(&[end], &sources, Colour::Off);
        assert!(found.contains("a.pintle:1:5") && found.contains("m ="), "{found}");
    }

    #[test]
    fn spans_that_lie_outside_or_inside_a_character_are_mended() {
        let sources = files(&[("a.pintle", "µ = 12 µm\n"), ("empty.pintle", "")]);
        for (file, index) in [(0, 0), (0, 7), (1, 0), (9, 9)] {
            for (start, end) in [(0, 1), (1, 1), (8, 3), (5, 4_000_000_000), (4_000_000_000, 4_000_000_000)] {
                let place = Place { item: ItemId { file: FileId(file), index }, span: Span { start, end } };
                let diagnostic = Diagnostic::new(MISMATCH, place, "message").with_label(place, "label");
                assert!(full(std::slice::from_ref(&diagnostic), &sources, Colour::Off).contains("message"));
                assert!(concise(&[diagnostic], &sources, Colour::Off).contains("error[unit-mismatch]: message"));
            }
        }
    }

    #[test]
    fn lines_are_counted_as_editors_count_them() {
        let sources = files(&[("a.pintle", "# a\u{2028}b\u{85}c\u{b}d\u{c}e\nx = wrong\n")]);
        let found = full(&[Diagnostic::new(MISMATCH, find(&sources, 0, "wrong"), "unknown")], &sources, Colour::Off);
        assert!(found.contains("a.pintle:2:5"), "{found}");
    }

    #[test]
    fn a_span_over_several_lines_is_drawn_without_a_note() {
        let text = "body b = tube {\n  length = 3 mm\n}\n";
        let sources = files(&[("a.pintle", text)]);
        let found = full(&[Diagnostic::new(MISMATCH, find(&sources, 0, text.trim_end()), "whole")], &sources, Colour::Off);
        assert!(found.contains("body b = tube") && found.contains("here"), "{found}");
    }

    #[test]
    fn escape_sequences_of_a_sheet_do_not_reach_the_terminal() {
        let sources = files(&[("a.pintle", "x = \"\u{1b}[31m\" + wrong\n")]);
        let diagnostic = Diagnostic::new(MISMATCH, find(&sources, 0, "wrong"), "found \u{1b}[31m");
        let found = full(std::slice::from_ref(&diagnostic), &sources, Colour::Off) + &concise(&[diagnostic], &sources, Colour::Off);
        assert!(!found.contains('\u{1b}'), "{found:?}");
    }

    #[test]
    fn one_line_each() {
        let sources = files(&[("dir/a.pintle", "µ = 12 µm\nb = wrong\n")]);
        let one = Diagnostic::new(MISMATCH, find(&sources, 0, "wrong"), "expected torque, found power");
        let two = Diagnostic::new(SUSPECT, find(&sources, 0, "12 µm"), "counted twice");
        assert_eq!(
            concise(&[one.clone(), two], &sources, Colour::Off),
            "dir/a.pintle:2:5: error[unit-mismatch]: expected torque, found power\n\
             dir/a.pintle:1:5: warning[suspect-factor]: counted twice\n"
        );
        let many = vec![one; 103];
        assert!(concise(&many, &sources, Colour::Off).ends_with("3 more; `--json` lists all of them\n"));
    }
}

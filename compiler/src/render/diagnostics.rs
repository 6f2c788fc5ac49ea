//! Diagnostics for a terminal: with the lines that they are about, or one line each.
//!
//! ariadne draws; this module gives it what it takes without a fault: spans in
//! characters (counted in bytes it looks for the first label of a second file at
//! a wrong place, even inside a character), labels in the order of lines, words
//! for each of them (without words it draws none), and text whose lines it counts
//! as editors do. The headline is our own.

use super::page::{self, Colour, Paint, painted, printable};
use crate::source::Sources;
use ariadne::{Cache, Color, Config, IndexType, Label, Report, ReportKind, Source};
use pintle_text::{Diagnostic, FileId, Fix, Place, Severity};
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
    let mut text: String = text.chars().map(replaced).collect();
    // Behind the last line end there is an empty line for us and for editors, but none for ariadne.
    if text.is_empty() || text.ends_with(['\n', '\r']) {
        text.push(' ');
    }
    text
}

type Spot = (FileId, Range<usize>);

/// A place in characters, as ariadne counts.
fn spot(place: Place, sources: &Sources) -> Spot {
    let span = sources.span(place);
    let text = sources.file(place.item.file).map_or("", |source| &source.text);
    let n_chars = |to: u32| {
        let before = text.as_bytes().get(..to as usize).unwrap_or_default();
        before.iter().filter(|&&byte| byte & 0xC0 != 0x80).count()
    };
    let start = n_chars(span.start);
    let inside = text.get(span.range()).unwrap_or("");
    (place.item.file, start..start + inside.chars().count())
}

fn report(diagnostic: &Diagnostic, sources: &Sources, cache: &mut Texts<'_>, colour: Colour, out: &mut String) {
    let severity = diagnostic.severity();
    let tint = match severity {
        Severity::Error => Color::Red,
        Severity::Warning => Color::Yellow,
        Severity::Hint => Color::Cyan,
    };
    let kind = format!("{}[{}]", severity.word(), diagnostic.code.name);
    out.push_str(&format!("{}: {}\n", painted(&kind, paint(severity), colour), printable(&diagnostic.message)));

    let primary = spot(diagnostic.place, sources);
    let mut labels = Vec::new();
    if !diagnostic.note.is_empty() || !sides_say_it(diagnostic, sources) {
        let note = if diagnostic.note.is_empty() { "here" } else { &diagnostic.note };
        labels.push((primary.clone(), tint, printable(note)));
    }
    labels.extend(diagnostic.labels.iter().map(|it| {
        let message = if it.message.is_empty() { "here" } else { &it.message };
        (spot(it.place, sources), Color::Blue, printable(message))
    }));
    // The file of the diagnostic first; inside a file from top to bottom.
    labels.sort_by_key(|((file, range), _, _)| (*file != primary.0, *file, range.start));

    let config = Config::new().with_index_type(IndexType::Char).with_color(colour == Colour::On);
    let mut builder = Report::build(ReportKind::Custom("", tint), primary).with_config(config);
    for (at, (spot, tint, message)) in labels.into_iter().enumerate() {
        builder.add_label(Label::new(spot).with_color(tint).with_order(at as i32).with_message(message));
    }
    if let Some(help) = &diagnostic.help {
        builder = builder.with_help(wrapped(help));
    }
    for fix in &diagnostic.fixes {
        let text = printable(&format!("{}{}", fix.title, edits(fix, sources)));
        // What the help says in words already is not said again.
        let said = text
            .strip_prefix("write ")
            .is_some_and(|what| diagnostic.help.as_ref().is_some_and(|help| help.contains(what)));
        if !said {
            builder = builder.with_note(wrapped(&format!("fix: {text}")));
        }
    }
    let mut bytes = Vec::new();
    match builder.finish().write(&mut *cache, &mut bytes) {
        // The first line is a headline; the drawing pads lines, and nobody needs blanks at their ends.
        Ok(()) => {
            for line in String::from_utf8_lossy(&bytes).lines().skip(1) {
                out.push_str(line.trim_end());
                out.push('\n');
            }
        }
        Err(_) => {
            let at = sources.location(diagnostic.place);
            out.push_str(&format!("   {}:{}:{}\n", printable(at.source), at.line, at.column));
        }
    }
}

/// Help and notes, broken so that they end before the page does.
fn wrapped(text: &str) -> String {
    page::wrap(&printable(text), page::WIDTH - 14).join("\n")
}

/// Whether the labels of both sides on the diagnostic's own line leave nothing
/// to be said at the place itself, such as the sign between two summands.
fn sides_say_it(diagnostic: &Diagnostic, sources: &Sources) -> bool {
    let line = |place: Place| (place.item.file, sources.location(place).line);
    let here = line(diagnostic.place);
    diagnostic.labels.len() >= 2 && diagnostic.labels.iter().all(|label| line(label.place) == here)
}

/// What a fix writes, where its title does not say it and it fits on a line.
fn edits(fix: &Fix, sources: &Sources) -> String {
    let [one] = fix.edits.as_slice() else { return String::new() };
    let new = one.text.trim();
    if new.is_empty() || fix.title.contains(new) || new.contains(['\n', '\r']) || page::width(new) > 60 {
        return String::new();
    }
    match sources.text(one.place) {
        "" => format!(", insert `{new}`"),
        _ => format!(", write `{new}`"),
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
    fn two_labelled_sides_need_no_mark_between_them() {
        let sources = files(&[("a.pintle", "x = m + 2 s\n")]);
        let diagnostic = Diagnostic::new(MISMATCH, find(&sources, 0, "+"), "a mass and a time cannot be added")
            .with_label(find(&sources, 0, "m"), "mass")
            .with_label(find(&sources, 0, "2 s"), "time")
            .with_help("write `2 kg`")
            .with_fix("write `2 kg`", find(&sources, 0, "2 s"), "2 kg");
        check_full(
            &sources,
            diagnostic,
            "
error[unit-mismatch]: a mass and a time cannot be added
   ╭─[ a.pintle:1:7 ]
   │
 1 │ x = m + 2 s
   │     ┬   ─┬─
   │     ╰──────── mass
   │          │
   │          ╰─── time
   │
   │ Help: write `2 kg`
───╯",
        );
    }

    #[test]
    fn a_label_in_another_file_is_drawn_there() {
        let sources = files(&[("a.pintle", "use ./b\nm = 3 * q\n"), ("b.pintle", "# µµµ²²²\r\nq = 2\r\nr = 4 kg\r\n")]);
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
   │         ┬
   │         ╰── here
   │
   ├─[ b.pintle:3:5 ]
   │
 3 │ r = 4 kg
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
        let second = Diagnostic::new(MISMATCH, find(&sources, 0, "wrongly"), "unknown").with_note("here");
        check_full(
            &sources,
            second,
            "
error[unit-mismatch]: unknown
   ╭─[ 重.pintle:2:8 ]
   │
 2 │     tab = wrongly
   │           ───┬───
   │              ╰───── here
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
        let found =
            full(&[Diagnostic::new(MISMATCH, find(&sources, 0, text.trim_end()), "whole")], &sources, Colour::Off);
        assert!(found.contains("body b = tube") && found.contains("here"), "{found}");
    }

    #[test]
    fn escape_sequences_of_a_sheet_do_not_reach_the_terminal() {
        let sources = files(&[("a.pintle", "x = \"\u{1b}[31m\" + wrong\n")]);
        let diagnostic = Diagnostic::new(MISMATCH, find(&sources, 0, "wrong"), "found \u{1b}[31m");
        let found = full(std::slice::from_ref(&diagnostic), &sources, Colour::Off)
            + &concise(&[diagnostic], &sources, Colour::Off);
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

    proptest::proptest! {
        #[test]
        fn any_text_and_any_places_are_drawn(
            text in "(a|µ|²|重|\t|\r\n|\n|\r| |\u{2028}|\u{85}|\u{301}|= 3 kg){0,40}",
            spans in proptest::collection::vec((0u32..2, 0u32..3, 0u32..60, 0u32..60), 1..5),
        ) {
            let sources = files(&[("a.pintle", &text), ("b.pintle", "m = µ\n\nk = 2")]);
            let place = |&(file, index, start, end): &(u32, u32, u32, u32)| {
                Place { item: ItemId { file: FileId(file), index }, span: Span { start, end } }
            };
            let mut diagnostic = Diagnostic::new(MISMATCH, place(&spans[0]), "message");
            for (at, span) in spans.iter().enumerate().skip(1) {
                diagnostic = diagnostic.with_label(place(span), format!("label {at}"));
            }
            let found = full(std::slice::from_ref(&diagnostic), &sources, Colour::Off);
            proptest::prop_assert!(found.starts_with("error[unit-mismatch]: message\n"));
            for at in 1..spans.len() {
                proptest::prop_assert!(found.contains(&format!("label {at}")), "{}", found);
            }
            let at = sources.location(diagnostic.place);
            let header = format!("[ {}:{}:{} ]", at.source, at.line, at.column);
            proptest::prop_assert!(found.contains(&header), "{} lacks {}", found, header);
        }
    }
}

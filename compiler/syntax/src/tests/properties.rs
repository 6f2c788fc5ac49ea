//! Promises that hold for any text.

use proptest::prelude::*;

use super::items::WINCH;
use crate::ast::{Item, ItemKind};
use crate::{format, parse};

/// Items with their places left out.
fn unplaced(items: &[Item]) -> Vec<Item> {
    items.iter().cloned().map(|item| Item { offset: 0, ..item }).collect()
}

#[test]
fn a_remark_above_changes_nothing_but_offsets() {
    let above = format!("# a remark\n\n{WINCH}");
    let (before, after) = (parse(WINCH), parse(&above));
    assert_eq!(unplaced(&before.items), unplaced(&after.items));
    let moved: Vec<u32> = before.items.iter().zip(&after.items).map(|(a, b)| b.offset - a.offset).collect();
    assert!(moved.iter().all(|by| *by == 12), "{moved:?}");
}

#[test]
fn items_lie_inside_the_text_in_order() {
    let mut end = 0;
    for item in parse(WINCH).items {
        assert!(item.offset >= end);
        end = item.offset + item.len;
    }
    assert!(end as usize <= WINCH.len());
}

/// Names of items that cannot depend on what stands `lines` apart from them.
fn names(text: &str) -> Vec<String> {
    parse(text).items.iter().filter_map(|item| item.name()).map(|name| name.text.to_string()).collect()
}

#[test]
fn every_prefix_is_read_and_keeps_the_items_before_it() {
    let all = parse(WINCH);
    for (end, _) in WINCH.char_indices() {
        let file = parse(&WINCH[..end]);
        // Comparing costs more than reading; once a line is enough.
        if !WINCH[..end].ends_with('\n') {
            continue;
        }
        let whole = all.items.iter().filter(|item| ((item.offset + item.len) as usize) < end.saturating_sub(200));
        for (n, item) in whole.enumerate() {
            assert_eq!(file.items.get(n).map(|found| &found.kind), Some(&item.kind), "prefix of {end} bytes");
        }
    }
}

#[track_caller]
fn check_sound(text: &str) {
    let file = parse(text);
    fn visit(items: &[Item], origin: u32, text: &str) {
        let mut end = 0;
        for item in items {
            assert!(item.offset >= end, "items overlap in {text:?}");
            end = item.offset + item.len;
            let start = origin + item.offset;
            assert!(
                text.get(start as usize..(start + item.len) as usize).is_some(),
                "item off the characters in {text:?}"
            );
            for fault in &item.errors {
                let place = fault.place.shifted(start);
                assert!(text.get(place.range()).is_some(), "{fault:?} off the characters in {text:?}");
                for label in &fault.labels {
                    assert!(text.get(label.place.shifted(start).range()).is_some(), "{fault:?} in {text:?}");
                }
            }
            if let ItemKind::Component { items, .. } = &item.kind {
                visit(items, start, text);
            }
        }
    }
    visit(&file.items, 0, text);
    let once = format(text);
    assert_eq!(format(&once), once, "formatting twice changes {text:?}");
}

fn tokens(text: &str) -> Vec<&str> {
    pintle_lexer::lex(text).into_iter().map(|(_, span)| &text[span.range()]).collect()
}

/// Failing cases are printed whole, so none is written beside the source.
fn config(cases: u32) -> ProptestConfig {
    ProptestConfig { failure_persistence: None, ..ProptestConfig::with_cases(cases) }
}

proptest! {
    #![proptest_config(config(200))]

    #[test]
    fn no_text_is_too_strange(text in "\\PC{0,80}") {
        check_sound(&text);
    }

    #[test]
    fn no_mixture_of_marks_is_too_strange(
        text in "(given |body |rotor |ledger |train |component |choose |a |b |= |: |\\{|\\}|\\(|\\)|\\[|\\]|, |\n|\n  |3 |kg|\\.|\\.\\.|\\+ |-|\\* |\\^|± |cite |\"x\" |\"|# r\n|\\| p\n|when |otherwise |for k from 1 to 3 |within |wanted |\r\n|²|; ){0,60}"
    ) {
        check_sound(&text);
    }

    #[test]
    fn deleting_a_token_costs_at_most_the_items_around_it(at in 0usize..2_000, len in 1usize..4) {
        let spans: Vec<_> = pintle_lexer::lex(WINCH).into_iter().map(|(_, span)| span).collect();
        let at = at % (spans.len() - len);
        let (from, to) = (spans[at].start as usize, spans[at + len - 1].end as usize);
        let text = format!("{}{}", &WINCH[..from], &WINCH[to..]);
        check_sound(&text);
        check_others_survive(&text, from, to);
    }

    #[test]
    fn inserting_a_token_costs_at_most_the_items_around_it(at in 0usize..2_000, which in 0usize..16) {
        const MARKS: [&str; 16] =
            ["{", "}", "(", ")", "[", "]", "=", ",", ".", "3", "given", "x", "\"", ":", "\n", "+"];
        let spans: Vec<_> = pintle_lexer::lex(WINCH).into_iter().map(|(_, span)| span).collect();
        let from = spans[at % spans.len()].start as usize;
        let text = format!("{} {} {}", &WINCH[..from], MARKS[which], &WINCH[from..]);
        check_sound(&text);
        check_others_survive(&text, from, from);
    }
}

/// Every item two items away from a change is still there, and unchanged.
#[track_caller]
fn check_others_survive(text: &str, from: usize, to: usize) {
    let before = parse(WINCH);
    let changed: Vec<usize> = before
        .items
        .iter()
        .enumerate()
        .filter(|(_, item)| item.offset as usize <= to && from <= (item.offset + item.len) as usize + 2)
        .map(|(at, _)| at)
        .collect();
    let (first, last) = match (changed.first(), changed.last()) {
        (Some(first), Some(last)) => (first.saturating_sub(1), last + 1),
        _ => return,
    };
    let now = unplaced(&parse(text).items);
    for (at, item) in unplaced(&before.items).into_iter().enumerate() {
        if at < first || at > last {
            assert!(now.contains(&item), "{:?} is lost in\n{text}", item.name());
        }
    }
}

/// What a text says, its places left out.
fn meaning(text: &str) -> String {
    let printed = format!("{:?}", parse(text).items);
    let mut kept = String::new();
    let mut rest = printed.as_str();
    while let Some(at) =
        ["start: ", "end: ", "offset: ", "len: "].iter().filter_map(|key| Some(rest.find(key)? + key.len())).min()
    {
        kept.push_str(&rest[..at]);
        rest = rest[at..].trim_start_matches(|c: char| c.is_ascii_digit());
    }
    kept + rest
}

#[track_caller]
fn check_format_keeps(text: &str) {
    let formatted = format(text);
    let kept = |text: &str| {
        tokens(text)
            .into_iter()
            .map(|token| token.trim_end().to_owned())
            .filter(|token| !token.is_empty())
            .collect::<Vec<_>>()
    };
    assert_eq!(kept(&formatted), kept(text), "tokens of {text:?}");
    assert_eq!(format(&formatted), formatted, "second pass of {text:?}");
    assert_eq!(meaning(&formatted), meaning(text), "meaning of {text:?} and {formatted:?}");
}

#[test]
fn formatting_keeps_tokens_and_meaning() {
    check_format_keeps(WINCH);
    assert_eq!(names(&format(WINCH)), names(WINCH));
}

/// Every sheet of a folder of the workspace and the folders in it, with its path.
fn sheets(folder: &str) -> Vec<(std::path::PathBuf, String)> {
    let mut folders = vec![std::path::PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("../..").join(folder)];
    let mut sheets = Vec::new();
    while let Some(folder) = folders.pop() {
        let entries = std::fs::read_dir(&folder).unwrap_or_else(|fault| panic!("{}: {fault}", folder.display()));
        for path in entries.flatten().map(|entry| entry.path()) {
            if path.is_dir() {
                folders.push(path);
            } else if path.extension().is_some_and(|extension| extension == "pintle") {
                let text = std::fs::read_to_string(&path).unwrap_or_else(|fault| panic!("{}: {fault}", path.display()));
                sheets.push((path, text));
            }
        }
    }
    assert!(!sheets.is_empty(), "no sheets in {folder}");
    sheets
}

#[test]
fn our_own_sheets_are_in_canonical_layout() {
    for (path, text) in ["stdlib", "tests/scenarios", "compiler/src/commands"].into_iter().flat_map(sheets) {
        assert_eq!(format(&text), text, "{}", path.display());
    }
}

#[test]
fn formatting_keeps_sheets_of_every_sort() {
    for (_, text) in ["stdlib", "tests"].into_iter().flat_map(sheets) {
        check_format_keeps(&text);
    }
}

proptest! {
    #![proptest_config(config(400))]

    #[test]
    fn formatting_does_not_change_what_an_expression_says(
        text in "a ?= ?-?((x|3 kg|3|7kg\\*m|f\\(x, ?y\\)|f \\( x\\)|\\(-? ?x\\)|90 ?°|2 m²|x²|- ?x|a\\.b|4 %|24 1/min|k\\[2\\])( ?[-+*/^·] ?| < | and |  <=)){0,5}(x|3 kg|2 m|3)( as  kN·m| cite  demo)?"
    ) {
        check_format_keeps(&text);
    }

    #[test]
    fn formatting_does_not_depend_on_blanks_between_tokens(seed in any::<u64>()) {
        let mut random = seed;
        let mut spread = String::new();
        let mut end = 0;
        for (_, span) in pintle_lexer::lex(WINCH) {
            let between = &WINCH[end..span.range().start];
            random = random.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
            let line_start = end == 0 || WINCH[..end].ends_with('\n');
            let choice = random >> 61;
            match (line_start, between.is_empty()) {
                (true, _) => spread.push_str(&"    "[..(choice % 5) as usize]),
                (false, true) => {}
                (false, false) => spread.push_str(&"         "[..(1 + choice) as usize]),
            }
            spread.push_str(&WINCH[span.range()]);
            end = span.range().end;
        }
        assert_eq!(format(&spread), format(WINCH));
    }
}

//! Items as data: what lines become.

use crate::ast::{AssumeStatus, Cite, Definition, Item, ItemKind, LedgerLineKind, LoadPath, StateSpec};
use crate::parse;

/// A sheet that uses every item of the language.
pub(super) const WINCH: &str = include_str!("winch.pintle");

#[track_caller]
fn check_item(text: &str, check: impl Fn(&ItemKind) -> bool) -> Item {
    let file = parse(text);
    let item = file.items.first().cloned().unwrap_or_else(|| panic!("no item in {text}"));
    assert!(item.errors.is_empty(), "{text}: {:?}", item.errors);
    assert_eq!(file.items.len(), 1, "{text}");
    assert!(check(&item.kind), "{text}: {:?}", item.kind);
    item
}

#[test]
fn the_whole_language_is_read_without_error() {
    let file = parse(WINCH);
    let printed = format!("{file:#?}");
    let faults: Vec<_> = file.items.iter().flat_map(|item| &item.errors).collect();
    assert!(faults.is_empty(), "{faults:#?}");
    assert!(!printed.contains("Diagnostic"), "faults inside a component");
    assert!(!printed.contains("Missing") && !printed.contains("Broken"));
    assert_eq!(file.items.len(), 52);
    let keywords: std::collections::BTreeSet<&str> = file.items.iter().map(Item::keyword).collect();
    let missing: Vec<&&str> =
        crate::words::ITEMS.iter().filter(|word| !keywords.contains(**word) && **word != "library").collect();
    assert!(missing.is_empty(), "{missing:?}");
}

#[test]
fn consecutive_lines_of_prose_are_one_item() {
    check_item(
        "| one\n|two\n  | three  ",
        |kind| matches!(kind, ItemKind::Prose { text } if text == "one\ntwo\nthree"),
    );
    assert_eq!(parse("| one\n\n| two\n# remark\n| three").items.len(), 3);
}

#[test]
fn keywords_are_names_where_a_definition_stands() {
    check_item("load = 3 kg", |kind| matches!(kind, ItemKind::Derived { name, .. } if name.text == "load"));
    check_item("use : mass = 3 kg", |kind| matches!(kind, ItemKind::Derived { name, .. } if name.text == "use"));
    check_item(
        "given given = when + places",
        |kind| matches!(kind, ItemKind::Given { name, .. } if name.text == "given"),
    );
}

#[test]
fn lines_go_on_behind_and_before_an_operator() {
    check_item("a = b +\n  # remark\n  c", |kind| format!("{kind:?}").contains("Add"));
    check_item("a = b\n  + c\n  cite \"x\"\n  because \"y\"", |kind| format!("{kind:?}").contains("Add"));
    let item = check_item("a = b\n# remark\ncite \"x\"", |_| true);
    assert!(matches!(item.clauses.cite, Some(Cite::Source(text)) if text.text == "x"));
    assert_eq!(parse("a = b\n\ncite \"x\"").items.len(), 2, "a blank line ends a statement");
}

#[test]
fn a_clause_behind_the_brace_belongs_to_the_item() {
    let item = check_item(
        "body a = b { c = 1, d = 2 cite demo } cite \"x\" because \"y \\\"z\\\"\"",
        |kind| matches!(kind, ItemKind::Body { fields, .. } if fields.len() == 2 && matches!(&fields[1].clauses.cite, Some(Cite::Word(word)) if word.text == "demo")),
    );
    assert_eq!(item.clauses.because.map(|text| text.text).as_deref(), Some("y \"z\""));
}

#[test]
fn commas_and_line_ends_separate_fields() {
    check_item(
        "body a = b { c = 1, d = 2\n e = f(1,\n 2)\n\n, g = 3, }",
        |kind| matches!(kind, ItemKind::Body { fields, .. } if fields.len() == 4),
    );
}

#[test]
fn names_behind_offers_are_not_split() {
    check_item(
        "component a(b) { offers c, d, body c = e { f = b } }",
        |kind| matches!(kind, ItemKind::Component { offers, items, .. } if offers.len() == 2 && items.len() == 1),
    );
}

#[test]
fn items_of_a_component_count_from_themselves() {
    let text = "x = 1\ncomponent a(b) {\n  offers c\n  body c = e { f = b }\n}";
    let file = parse(text);
    let Some(Item { offset, kind: ItemKind::Component { items, .. }, .. }) = file.items.get(1) else {
        panic!("{file:?}")
    };
    let inner = items.first().map(|item| (item.offset, item.len, item.name().map(|name| name.span.range())));
    let Some((inner, len, Some(name))) = inner else { panic!("{items:?}") };
    let start = (offset + inner) as usize;
    assert_eq!(&text[start..start + len as usize], "body c = e { f = b }");
    assert_eq!(&text[start..][name], "c");
}

#[test]
fn choose_has_an_arm_a_line() {
    check_item("a : ratio = choose {\n  -1 when v < 2 m/s\n  -2 when w\n  3 otherwise } cite \"x\"", |kind| {
        matches!(kind, ItemKind::Derived { value: Definition::Choose(choose), .. }
            if choose.arms.len() == 3 && choose.arms[0].condition.is_some() && choose.arms[2].condition.is_none())
    });
    check_item(
        "body a = b { c = choose { 1 when d, 2 otherwise } }",
        |kind| matches!(kind, ItemKind::Body { fields, .. } if matches!(&fields[0].value, Some(Definition::Choose(choose)) if choose.arms.len() == 2)),
    );
}

#[test]
fn ledger_lines_are_told_apart() {
    check_item(
        "ledger a of b under c + d {\n start from e.end\n end at rest\n travel f down_path\n gain g at h = 3\n lose : energy = 3\n i = 4\n wanted j within 1 .. 2 where k == 1 and l == 2, m == 3\n}",
        |kind| {
            let ItemKind::Ledger { under, lines, .. } = kind else { return false };
            let kinds: Vec<&LedgerLineKind> = lines.iter().map(|line| &line.kind).collect();
            under.len() == 1
                && under[0].len() == 2
                && matches!(
                    kinds.as_slice(),
                    [
                        LedgerLineKind::Start(StateSpec::From(_)),
                        LedgerLineKind::End(StateSpec::AtRest(_)),
                        LedgerLineKind::Travel { direction: Some(_), .. },
                        LedgerLineKind::Gain(entry),
                        LedgerLineKind::Local(_),
                        LedgerLineKind::Local(_),
                        LedgerLineKind::Wanted(wanted)
                    ] if wanted.equations.len() == 3 && entry.at.is_some()
                )
        },
    );
}

#[test]
fn assumptions_and_load_paths() {
    check_item("assume \"a\" confirmed \"b\" cite \"c\"", |kind| {
        matches!(kind, ItemKind::Assume { status: AssumeStatus::Confirmed(Some(_)), .. })
    });
    check_item("assume \"a\"", |kind| matches!(kind, ItemKind::Assume { status: AssumeStatus::Unstated, .. }));
    check_item(
        "load a { mass = 3 kg, path = vertical }",
        |kind| matches!(kind, ItemKind::Load { fields, path: Some(LoadPath::Vertical(_)), .. } if fields.len() == 1),
    );
    check_item("load a { path = incline (b + 2 deg) }", |kind| {
        matches!(kind, ItemKind::Load { path: Some(LoadPath::Incline(_)), .. })
    });
}

#[test]
fn placements_keep_their_repetition() {
    check_item(
        "rotor a about b {\n less c at 0 mm { d = 30 deg * (k - 1) } for k from 5 to 12\n}",
        |kind| matches!(kind, ItemKind::Rotor { placements, .. } if placements[0].less && placements[0].clauses.repeat.is_some()),
    );
}

#[test]
fn use_keeps_its_path_as_written() {
    for path in ["std.materials", "./parts/rope_drum", "../x/y-2"] {
        check_item(
            &format!("use {path} # remark"),
            |kind| matches!(kind, ItemKind::Use { path: read } if read.text == path),
        );
    }
}

#[test]
fn wanted_and_vary_may_hold_commas() {
    check_item(
        "wanted a : length within 1 mm .. 2 mm where b == 3, c == 4",
        |kind| matches!(kind, ItemKind::Wanted(wanted) if wanted.equations.len() == 2 && wanted.range.is_some()),
    );
    check_item(
        "vary d over 1 mm .. 2 mm, 13 steps { show a.b, c.d }",
        |kind| matches!(kind, ItemKind::Later(later) if later.lines.len() == 2 && later.lines[1].expressions.len() == 2),
    );
}

/// A long text is read by two threads: wherever it is cut, the items are those of its lines read one by one.
#[test]
fn a_long_text_has_the_items_of_its_lines() {
    for prose_every in [2, 3, 7, 1000] {
        for shift in 0..4 {
            let block = |at: usize| match (at + shift) % prose_every {
                0 => format!("| prose {at}\n| goes on\n| and ends\n"),
                1 => format!("body b{at} = disc {{\n  diameter = {at} mm\n}}\n"),
                _ => format!("given x{at} = {at} mm cite \"list {at}\"\n"),
            };
            let blocks: Vec<String> = (1..=700).map(block).collect();
            let whole = parse(&blocks.concat());
            let mut offset = 0;
            let mut items = whole.items.iter();
            for block in &blocks {
                let alone = parse(block);
                let [own] = alone.items.as_slice() else { panic!("{block}") };
                let item = items.next().unwrap_or_else(|| panic!("no item for {block}"));
                assert_eq!(item.offset, offset, "{block}");
                assert!(Item { offset: 0, ..item.clone() } == *own, "{block}: {item:?}");
                offset += block.len() as u32;
            }
            assert!(items.next().is_none());
        }
    }
}

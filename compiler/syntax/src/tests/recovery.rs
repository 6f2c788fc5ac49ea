//! Half-typed text: what is lost, what survives, where the report points.

use crate::ast::{Item, ItemKind};
use crate::parse;

fn all_items(items: &[Item], origin: u32, acc: &mut Vec<(Item, u32)>) {
    for item in items {
        acc.push((item.clone(), origin + item.offset));
        if let ItemKind::Component { items, .. } = &item.kind {
            all_items(items, origin + item.offset, acc);
        }
    }
}

/// `expected` holds one `message @ text before the report` a fault.
#[track_caller]
fn check_faults(text: &str, expected: &[(&str, &str)]) {
    let mut items = Vec::new();
    all_items(&parse(text).items, 0, &mut items);
    let faults: Vec<(String, String)> = items
        .iter()
        .flat_map(|(item, origin)| item.errors.iter().map(move |fault| (fault, *origin)))
        .map(|(fault, origin)| {
            let place = fault.place.shifted(origin);
            let shown = if place.is_empty() {
                format!("{}|", last_word(text, place.start))
            } else {
                text[place.range()].to_owned()
            };
            (fault.message.clone(), shown)
        })
        .collect();
    let faults: Vec<(&str, &str)> = faults.iter().map(|(a, b)| (a.as_str(), b.as_str())).collect();
    assert_eq!(faults, expected, "{text}");
}

/// The text before a place, back to the last blank.
fn last_word(text: &str, at: u32) -> &str {
    text[..at as usize].rsplit([' ', '\n']).next().unwrap_or("")
}

#[track_caller]
fn check_survives(text: &str, expected: &[&str]) {
    let printed = format!("{:?}", parse(text));
    for name in expected {
        assert!(printed.contains(&format!("text: {name:?}")), "{name} is lost in {text}");
    }
    let n_faults = printed.matches("Diagnostic {").count();
    assert_eq!(n_faults, 1, "{n_faults} faults in {text}");
}

#[test]
fn a_missing_value_is_reported_behind_the_sign() {
    check_faults("given a : mass =\ngiven b = 3 kg", &[("expected a value after `=`", "=|")]);
    check_faults("a =   # remark\nb = 3", &[("expected a value after `=`", "=|")]);
    check_faults("body a = b { m =\n  r = 3 mm\n}", &[("expected a value after `=`", "=|")]);
}

#[test]
fn a_half_typed_line_costs_that_line_alone_in_every_block() {
    check_survives("body a = tube {\n  x =\n  after = 3 mm\n}\nlast = 1", &["after", "last"]);
    check_survives("body a = tube {\n  x = 3 +\n  after = 3 mm\n}\nlast = 1", &["after", "last"]);
    check_survives("body a = tube {\n  x = f(3,\n  after = 3 mm\n}\nlast = 1", &["after", "last"]);
    check_survives("body a = tube {\n  x\n  after = 3 mm\n}\nlast = 1", &["after", "last"]);
    check_survives("rotor a about x {\n  barrel at\n  after at 3 mm\n}\nlast = 1", &["after", "last"]);
    check_survives("rotor a about x {\n  less\n  barrel from\n after at 3 mm\n}\nlast = 1", &["after", "last"]);
    check_survives("train a {\n  gear b =\n  rope after = c -> d { falls = 2 }\n}\nlast = 1", &["after", "last"]);
    check_survives("train a {\n  gear b = c ->\n  rope after = c -> d\n}\nlast = 1", &["after", "last"]);
    check_survives("ledger a of b {\n  lose x =\n  travel after 3 m\n}\nlast = 1", &["after", "last"]);
    check_survives("ledger a of b {\n  start\n  lose after = 3 J\n}\nlast = 1", &["after", "last"]);
    check_survives("load a {\n  path =\n  after = 3 kg\n}\nlast = 1", &["after", "last"]);
    check_survives("case a {\n  b.c =\n  after.d = 3 kg\n}\nlast = 1", &["after", "last"]);
    check_survives("shape a(b : length) {\n  require\n  after = 3 kg\n}\nlast = 1", &["after", "last"]);
    check_survives("formula a(b : length) {\n  c = b *\n  after = 3 kg\n}\nlast = 1", &["after", "last"]);
    check_survives(
        "component a(b : length) {\n  body c =\n  body after = tube { d = b }\n}\nlast = 1",
        &["after", "last"],
    );
    check_survives("a = choose {\n  3 when\n  after otherwise\n}\nlast = 1", &["after", "last"]);
    check_survives("material a { density = , after = 3 }\nlast = 1", &["after", "last"]);
}

#[test]
fn a_half_typed_item_costs_that_item_alone() {
    for half in [
        "given",
        "given a",
        "given a :",
        "given a =",
        "body",
        "body a",
        "body a =",
        "rotor",
        "load",
        "axis a",
        "axis a =",
        "axis a = through",
        "unit a",
        "unit a =",
        "clutch a = b",
        "clutch a = b ->",
        "wanted",
        "limit",
        "confirm a",
        "confirm a agrees",
        "formula a(b)",
        "use",
        "assume",
        "sheet",
        "x",
        "x = (3 +",
        "x = [1, 2",
        "x = a +",
        "x = \"abc",
        "given x = 3 +",
        "given x = 3 ±",
        "given x = 3 within",
        "given x = 3 within 2 ..",
        "wanted a within",
        "foo bar",
        "limit a <",
        "run",
        "x = a and",
        "ledger a of",
        "brake a on",
        "given a = 3 cite",
        "given a = 3 as",
        "part a =",
    ] {
        check_survives(&format!("before = 1\n{half}\nafter = 2\ngiven last = 3"), &["before", "after", "last"]);
        check_survives(&format!("before = 1\n{half}\ngiven after = 2\nlast = 3"), &["before", "after", "last"]);
    }
}

#[test]
fn an_unclosed_brace_ends_before_the_next_item() {
    let message = "this `{` is not closed";
    check_faults("body a = tube {\n  b = 3 mm\ngiven c = 3\nd = 4", &[(message, "{")]);
    check_faults("body a = tube {\n  b = 3 mm\nc = 3\nd = 4", &[(message, "{")]);
    check_faults("body a = tube {\ngiven c = 3", &[(message, "{")]);
    check_faults("component a(b : length) {\n  body c = tube { d = b }\nc = 3\ngiven e = 3", &[(message, "{")]);
    check_faults(
        "component a(b : length) {\n  body c = tube {\n    d = b\n  body e = tube { d = b }\n}\nf = 3",
        &[(message, "{")],
    );
    check_faults("rotor a {\n  b at 3 mm { c = 2\n  d at 3 mm\n}\nf = 3", &[(message, "{")]);
    check_faults("rotor a {\n  b at 3 mm {\n    c = 2\n}\nf = 3", &[(message, "{")]);
    check_faults("ledger a of b {\n  start at rest\n  wanted c within 1 .. 2\nbody d = e {}", &[(message, "{")]);
    check_faults("body a = tube {\n  b = 3 mm", &[(message, "{")]);
    check_survives("a = 3 {\nafter = 2\nlast = 3", &["after", "last"]);
    check_faults("x = 1 }\ny = 2", &[("nothing opens this `}`", "}")]);
}

#[test]
fn an_unclosed_bracket_ends_with_its_line() {
    check_faults("x = (3 + 4\ny = f(2)\n", &[("this `(` is not closed", "(")]);
    check_faults("x = f(3, [4, 5)\ny = 2", &[("this `[` is not closed", "[")]);
    check_faults("body a = t { p = [(1 mm, 2 mm), (3 mm\n  m = 3 }\ny = 2", &[("this `(` is not closed", "(")]);
    check_faults("x = 3)\ny = 2", &[("nothing opens this `)`", ")")]);
    check_faults("rotor a about (x {\n  b at 3 mm\n}", &[("this `(` is not closed", "(")]);
}

#[test]
fn braces_that_match_are_never_doubted() {
    check_faults("body a = tube {\nb = 3 mm\n  c = 4 mm\n}\nrotor d {\n    a at 3 mm {\nnamed = e\n}\n}", &[]);
    check_faults("component a(b : length) {\nbody c = tube { d = b }\ne = 3\n}", &[]);
    check_faults("body a = t { load = 3 kg\n unit = mm\n case = 3 }", &[]);
    check_faults("rotor a {\n  load at 3 mm\n  case from load\n  unit\n}", &[]);
}

#[test]
fn places_are_right_among_wide_characters_and_crlf() {
    check_faults("a = 3 kg·m² # µ 漢字 🙂\r\nω = µ_1² + \r\nb = 2\r\n", &[("expected a value after `+`", "+|")]);
    check_faults("| prose µ 漢\r\n\r\nb = \"漢\" 4\r\n", &[("did not expect `4` after `\"漢\"`", "4")]);
    check_faults("a = 3 漢; b", &[("the character `;` has no meaning here", ";")]);
    check_faults("\u{FEFF}x = ", &[("expected a value after `=`", "=|")]);
    check_faults("a = 1\u{2028}b = 2", &[("the character U+2028 looks like a line end but is none here", "\u{2028}")]);
}

#[test]
fn look_alikes_are_read_as_what_they_stand_for() {
    check_faults("x = 3 × y", &[("the character `×` has no meaning here", "×")]);
    assert!(format!("{:?}", parse("x = 3 × y")).contains("Multiply"));
}

#[test]
fn misspelt_words_offer_the_nearest() {
    check_faults("marterial steel { density = 3 }", &[("no item begins with `marterial`", "marterial")]);
    check_faults("find x", &[("`find` is written `wanted`", "find")]);
    check_faults("train a { geer b = c -> d }", &[("`geer` is no kind of link", "geer")]);
    check_faults("ledger a of b { strat at rest }", &[("no line of a ledger begins with `strat`", "strat")]);
    check_faults(
        "a = 3 cite common_practise",
        &[(
            "`common_practise` is no source; quote the source, or write one of common_practice, from_memory, demo",
            "common_practise",
        )],
    );
}

#[test]
fn blocks_where_none_belong_and_prose_inside_are_named() {
    check_faults("a = 3 { b = 2 }", &[("no `{ ... }` can stand here", "{")]);
    check_faults("limit a < b { c = 2 }", &[("no `{ ... }` can stand here", "{")]);
    check_faults(
        "body a = b {\n  | words\n  c = 2\n}",
        &[("prose stands between items, not inside a block", "| words")],
    );
    check_faults("{ a = 2 }", &[("a block needs an item before its `{`", "{")]);
    check_faults("a = 3 cite \"x\" cite \"y\"", &[("this clause stands here for the second time", "cite")]);
}

#[track_caller]
fn check_fix(text: &str, expected: &str) {
    let file = parse(text);
    let Some((item, fault)) = file.items.iter().find_map(|item| Some((item, item.errors.first()?))) else {
        panic!("no fault in {text}")
    };
    let edit = fault.fixes.first().and_then(|fix| fix.edits.first()).unwrap_or_else(|| panic!("no fix for {fault:?}"));
    let place = edit.place.shifted(item.offset).range();
    let fixed = format!("{}{}{}", &text[..place.start], edit.text, &text[place.end..]);
    assert_eq!(fixed, expected);
    let left: Vec<_> = parse(&fixed).items.into_iter().flat_map(|item| item.errors).collect();
    assert!(left.is_empty(), "{left:?} after the fix of {text}");
}

#[test]
fn offered_fixes_mend_the_fault() {
    check_fix("b = 1\na = .5 mm", "b = 1\na = 0.5 mm");
    check_fix("a = 5. mm", "a = 5 mm");
    check_fix("limit a = b", "limit a == b");
    check_fix("wanted w in 3 mm .. 4 mm", "wanted w within 3 mm .. 4 mm");
    check_fix("a = 5 mm in 3 mm .. 4 mm", "a = 5 mm within 3 mm .. 4 mm");
    check_fix("a = 5 mm ~ 1 mm", "a = 5 mm ± 1 mm");
    check_fix("a = 5 mm +0.2/-0.1 mm", "a = 5 mm ± (+0.2, -0.1) mm");
    check_fix("a = 3 × b", "a = 3 * b");
    check_fix("a = \"b", "a = \"b\"");
    check_fix("a = f(b, [c", "a = f(b, [c])");
    check_fix("a = b)", "a = b");
    check_fix("a = 1 }\n", "a = 1 \n");
    check_fix("a = 1\u{2028}b = 2", "a = 1\nb = 2");
    check_fix("find a", "wanted a");
    check_fix("marterial a { density = 3 }", "material a { density = 3 }");
    check_fix("train a { geer b = c -> d }", "train a { gear b = c -> d }");
    check_fix("a = 3 cite common_practise", "a = 3 cite common_practice");
}

#[test]
fn a_placement_has_one_place() {
    check_faults("rotor a { b at 3 mm from c from d }", &[("a placement has one `at` and one `from`", "from")]);
}

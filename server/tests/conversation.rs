//! Conversations with the real program: documents, diagnostics, hovers.

mod common;

use common::{Client, SHEET, at, edit};
use serde_json::{Value, json};

/// Position of the first mark, counted in UTF-16.
fn place(text: &str, mark: &str) -> (u32, u32) {
    let before = &text[..text.find(mark).expect("the mark")];
    let line = before.matches('\n').count();
    let column = before.rsplit('\n').next().unwrap_or("").encode_utf16().count();
    (line as u32, column as u32)
}

#[track_caller]
fn check_hover(text: &str, mark: &str, expected: &[&str]) {
    let mut client = Client::start();
    client.open(text);
    let (line, character) = place(text, mark);
    let hover = client.hover(line, character);
    for words in expected {
        assert!(hover.contains(words), "{words:?} is not in {hover:?}");
    }
    assert_eq!(client.leave(), 0);
}

#[test]
fn hover_shows_value_kind_unit_and_formula() {
    check_hover(
        "# µ 🙂\r\ngiven J : moment_of_inertia = 3.2 kg·m²\r\ngiven w : angular_velocity = 900 rpm\r\nE = 1/2 * J * w^2\r\n",
        "E =",
        &["**E** = 14212.2 J", "energy", "1 / 2 * J * w^2"],
    );
}

#[test]
fn hover_shows_the_source_of_a_given() {
    check_hover(
        "🙂 = 1\ngiven load_mass = 6.4 t cite \"weighbridge ticket\"\n",
        "mass",
        &["**load_mass** = 6.4", "t", "mass", "weighbridge ticket"],
    );
}

#[test]
fn diagnostics_mark_the_words_they_mean() {
    let text = "# 🙂🙂\r\nω = 3 kg # µ\r\nb = ω + 2 m\r\n";
    let range =
        |from: u32, to: u32| json!({"start": {"line": 2, "character": from}, "end": {"line": 2, "character": to}});
    let offer = json!({"general": {"positionEncodings": ["utf-8", "utf-16"]}});
    // ω takes two bytes, but one UTF-16 unit.
    for (capabilities, encoding, width) in [(json!({}), "utf-16", 1), (offer, "utf-8", 2)] {
        let mut client = Client::bare(&[]);
        let answer = client.initialize(capabilities);
        assert_eq!(answer["capabilities"]["positionEncoding"], encoding);
        client.open(text);
        let message = client.until(|it| it["method"] == "textDocument/publishDiagnostics");
        let diagnostic = &message["params"]["diagnostics"][0];
        assert_eq!(diagnostic["range"], range(5 + width, 6 + width), "{encoding}: the plus sign of {message}");
        let related = &diagnostic["relatedInformation"];
        assert_eq!(related[0]["location"]["range"], range(4, 4 + width), "{encoding}: {message}");
        assert_eq!(related[1]["location"]["range"], range(7 + width, 10 + width), "{encoding}: {message}");
        assert_eq!(client.leave(), 0);
    }
}

#[test]
fn diagnostics_come_and_go_and_come_back() {
    let mut client = Client::start();
    client.open("a = 3 kg + 2 m\n");
    assert_eq!(client.published(1, |_| true), ["unit-mismatch"]);
    client.change(2, json!([{"text": "a = 3 kg + 2 kg\n"}]));
    assert!(client.published(2, |_| true).is_empty());
    client.change(3, json!([edit(0, 13, 15, "m")]));
    assert_eq!(client.published(3, |_| true), ["unit-mismatch"], "undone");
    client.change(4, json!([edit(0, 13, 14, "kg")]));
    assert!(client.published(4, |_| true).is_empty(), "and done again");
    assert_eq!(client.leave(), 0);
}

#[test]
fn a_broken_line_leaves_the_rest_alive() {
    let mut client = Client::start();
    client.open("a = 3 kg\nb = \nc = 2 * a\n");
    assert_eq!(client.published(1, |codes| !codes.is_empty()).len(), 1);
    assert!(client.hover(2, 0).contains("6 kg"));
    assert_eq!(client.leave(), 0);
}

#[test]
fn closing_sends_the_empty_list_and_nothing_after_it() {
    let mut client = Client::start();
    client.open("a = 3 kg + 2 m\n");
    client.published(1, |codes| !codes.is_empty());
    // Closed while the last edit is being computed.
    client.change(2, json!([edit(0, 4, 5, "5")]));
    client.notify("textDocument/didClose", json!({"textDocument": {"uri": SHEET}}));
    assert!(client.published_at(SHEET, None, |_| true).is_empty());
    assert_eq!(client.hover(0, 0), "");
    client.notify(
        "textDocument/didChange",
        json!({"textDocument": {"uri": SHEET, "version": 3}, "contentChanges": [{"text": "x = ("}]}),
    );
    let id = client.ask("shutdown", Value::Null);
    while let Some(message) = client.next() {
        assert_ne!(message["method"], "textDocument/publishDiagnostics", "{message}");
        if message["id"] == json!(id) {
            break;
        }
    }
    assert_eq!(client.exit(), 0);
}

#[test]
fn a_document_may_be_opened_again() {
    let mut client = Client::start();
    for _ in 0..3 {
        client.open("a = 3 kg + 2 m\n");
        assert_eq!(client.published(1, |_| true), ["unit-mismatch"]);
        client.notify("textDocument/didClose", json!({"textDocument": {"uri": SHEET}}));
        assert!(client.published_at(SHEET, None, |_| true).is_empty());
    }
    assert_eq!(client.leave(), 0);
}

#[test]
fn a_burst_of_edits_leaves_the_right_text() {
    const LINES: u32 = 8;
    let mut client = Client::start();
    let mut numbers = [0_u32; LINES as usize];
    let text: String = (0..LINES).map(|line| format!("/* µ🙂 */ = 1\r\nn{line} = 000 # ² 🙂\r\n")).collect();
    client.open(&text);
    let (mut asked, mut cancelled) = (Vec::new(), Vec::new());
    let mut seed = 12345_u32;
    for version in 2..=201_u64 {
        // Each edit replaces one digit of one number; every fifth one line's head with its wide characters.
        seed = seed.wrapping_mul(1_103_515_245).wrapping_add(12345);
        let (line, digit, at_digit) = (seed >> 16 & 7, seed >> 20 & 7, (seed >> 24) % 3);
        let weight = 10_u32.pow(2 - at_digit);
        let number = &mut numbers[line as usize];
        *number = *number - *number / weight % 10 * weight + digit * weight;
        let mut changes = vec![edit(2 * line + 1, 5 + at_digit, 6 + at_digit, &digit.to_string())];
        if version % 5 == 0 {
            // Two edits in one change, the second counts on the first; the column is past the end.
            changes.insert(0, edit(2 * line, 0, 99, "# 🙂µ"));
            changes.insert(1, edit(2 * line, 4, 5, "²"));
        }
        client.change(version, json!(changes));
        if version % 5 == 1 {
            let id = client.ask("textDocument/hover", at(1, 0));
            asked.push(id);
            if version % 2 == 0 {
                client.notify("$/cancelRequest", json!({"id": id}));
                cancelled.push(id);
            }
        }
    }
    let (mut answered, mut last, mut n_cancelled) = (Vec::new(), 0, 0);
    while answered.len() < asked.len() || last < 201 {
        let message = client.next().expect("a message");
        if message["method"] == "textDocument/publishDiagnostics" {
            last = message["params"]["version"].as_u64().expect("a version");
        } else if let Some(id) = message["id"].as_u64() {
            answered.push(id);
            n_cancelled += u32::from(cancelled.contains(&id) && message["error"]["code"] == -32800);
        }
    }
    answered.sort_unstable();
    assert_eq!(answered, asked, "each question has one answer");
    assert!(n_cancelled > 0, "no cancel came in time");
    for (line, number) in numbers.iter().enumerate() {
        let hover = client.hover(2 * line as u32 + 1, 0);
        assert!(hover.starts_with(&format!("**n{line}** = {number}\n")), "{hover}, expected {number}");
    }
    assert_eq!(client.leave(), 0);
}

#[test]
fn positions_past_the_end_are_no_faults() {
    let mut client = Client::start();
    client.open("abc = 7 kg");
    assert!(client.hover(0, 2).contains("7 kg"));
    assert!(client.hover(0, 4000).is_empty() || client.hover(0, 4000).contains("abc"));
    assert_eq!(client.hover(99, 0), "");
    client.change(2, json!([edit(0, 400, 400, "\nd = 2 * abc")]));
    assert!(client.hover(1, 0).contains("14 kg"));
    assert_eq!(client.leave(), 0);
}

#[test]
fn an_edit_that_does_not_fit_is_not_guessed_at() {
    let mut client = Client::start();
    client.open("a = 3 kg + 2 m\n");
    client.published(1, |codes| !codes.is_empty());
    client.change(2, json!([edit(50, 0, 1, "x")]));
    assert!(client.published(2, |_| true).is_empty());
    let message = client.until(|it| it["method"] == "window/showMessage");
    assert!(message["params"]["message"].as_str().expect("words").contains("open it again"), "{message}");
    assert_eq!(client.hover(0, 0), "");
    client.change(3, json!([{"text": "a = 4 kg\n"}]));
    assert!(client.hover(0, 0).contains("4 kg"));
    assert_eq!(client.leave(), 0);
}

#[test]
fn an_older_version_is_refused() {
    let mut client = Client::start();
    client.open("a = 1\n");
    client.change(7, json!([{"text": "a = 7\n"}]));
    client.change(6, json!([{"text": "a = 6\n"}]));
    client.change(7, json!([{"text": "a = 8\n"}]));
    assert!(client.hover(0, 0).starts_with("**a** = 7\n"));
    assert_eq!(client.leave(), 0);
}

#[test]
fn deep_nesting_is_survived() {
    let mut client = Client::start();
    let deep = "(".repeat(60_000);
    client.open(&format!("a = {deep}\nb = 2 kg\n"));
    assert!(!client.published(1, |codes| !codes.is_empty()).is_empty());
    client.change(2, json!([{"text": format!("a = {}1\nb = 2 kg\n", "-".repeat(60_000))}]));
    client.change(3, json!([{"text": "a = 3 kg\n"}]));
    assert!(client.published(3, |_| true).is_empty());
    assert_eq!(client.leave(), 0);
}

#[test]
fn a_sheet_follows_the_file_it_uses() {
    let folder = std::env::temp_dir().join(format!("pintle-server-test-{}", std::process::id()));
    std::fs::create_dir_all(&folder).expect("a folder");
    let address = |name: &str| format!("file://{}", folder.join(name).display());
    let (sheet, part) = (address("sheet.pintle"), address("part.pintle"));
    std::fs::write(folder.join("part.pintle"), "drum_mass = 5 kg\n").expect("a file");
    let mut client = Client::start();
    client.open_at(&sheet, "use ./part\nweight = drum_mass * g_n\nwrong = drum_mass + 2 m\n");
    assert_eq!(client.published_at(&sheet, Some(1), |_| true), ["unit-mismatch"]);
    // The open text holds, not the disk's.
    client.open_at(&part, "drum_mass = 5 m\n");
    assert!(client.published_at(&sheet, Some(1), <[String]>::is_empty).is_empty());
    client.notify("textDocument/didClose", json!({"textDocument": {"uri": part}}));
    assert_eq!(client.published_at(&sheet, Some(1), |codes| !codes.is_empty()), ["unit-mismatch"]);
    // Changed on the disk by someone else.
    std::fs::write(folder.join("part.pintle"), "drum_mass = 5 m\n").expect("a file");
    client.notify("workspace/didChangeWatchedFiles", json!({"changes": [{"uri": part, "type": 2}]}));
    assert!(client.published_at(&sheet, Some(1), <[String]>::is_empty).is_empty());
    std::fs::remove_dir_all(&folder).expect("a folder to remove");
    assert_eq!(client.leave(), 0);
}

#[test]
fn limits_that_are_not_met_are_shown_until_they_are() {
    let mut client = Client::start();
    client.open("given m = 4 kg\nlimit m <= 3 kg because \"µ\"\n");
    assert_eq!(client.published(1, |_| true), ["limit-not-met"]);
    client.change(2, json!([edit(0, 10, 11, "2")]));
    assert!(client.published(2, |_| true).is_empty());
    assert_eq!(client.leave(), 0);
}

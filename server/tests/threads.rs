//! What the server does while its compiler is slow or faulty: served in this
//! process, with a compiler of our own.

mod common;

use common::{Client, SHEET, at, edit};
use pintle::Compilation;
use pintle::analysis::Snapshot;
use serde_json::{Value, json};
use std::time::{Duration, Instant};

/// Panics at a text that holds `boom`, takes a while where it holds `slow`, and
/// does not end before it is cancelled where it holds `endless`.
fn faulty(snapshot: &Snapshot, path: &str, cancel: &(dyn Fn() -> bool + Sync)) -> Option<Compilation> {
    let text = snapshot.text(path)?;
    assert!(!text.contains("boom"), "as the text says");
    if text.contains("slow") {
        std::thread::sleep(Duration::from_secs(3));
    }
    while text.contains("endless") {
        std::thread::sleep(Duration::from_millis(5));
        if cancel() {
            return None;
        }
    }
    snapshot.compile(path, &|| false)
}

#[test]
fn a_panic_in_the_analysis_is_said_and_survived() {
    let mut client = Client::in_process(faulty);
    client.open("a = 1 # boom\n");
    assert_eq!(client.published(1, |_| true), ["internal-fault"]);
    client.change(2, json!([edit(0, 8, 12, "fine")]));
    assert!(client.published(2, |_| true).is_empty());
    assert!(client.hover(0, 0).contains("**a** = 1"));
    client.change(3, json!([{"text": "a = 2 boom\nb = (\n"}]));
    let codes = client.published(3, |codes| codes.last().is_some_and(|it| it == "internal-fault"));
    assert!(codes.len() > 1, "what the text alone says stays: {codes:?}");
    assert_eq!(client.leave(), 0);
}

#[test]
fn a_slow_analysis_holds_up_no_question_and_no_syntax_fault() {
    let mut client = Client::in_process(faulty);
    client.open("a = 1 kg\n");
    client.published(1, |_| true);
    client.change(2, json!([{"text": "# slow\na = 2 kg\nb = (\n"}]));
    let start = Instant::now();
    assert!(!client.published(2, |_| true).is_empty());
    let hover = client.hover(1, 0);
    assert!(hover.contains("**a** = 1 kg") && hover.contains("before the last edit"), "{hover}");
    assert!(start.elapsed() < Duration::from_secs(2), "{:?}", start.elapsed());
    assert_eq!(client.leave(), 0);
}

#[test]
fn an_overtaken_outcome_is_not_published() {
    let mut client = Client::in_process(faulty);
    client.open("a = 3 kg + 2 m # slow\n");
    // While the first text is being computed.
    std::thread::sleep(Duration::from_millis(500));
    client.change(2, json!([edit(0, 17, 21, "")]));
    let message = client.until(|it| it["method"] == "textDocument/publishDiagnostics");
    assert_eq!(message["params"]["version"], 2);
    assert_eq!(client.leave(), 0);
}

#[test]
fn a_question_is_answered_from_the_text_it_was_asked_about() {
    let mut client = Client::in_process(faulty);
    client.open("a = 1 kg\nb = 2 kg # slow\n");
    let first = client.ask("textDocument/hover", at(1, 0));
    client.change(2, json!([{"text": "a = 1 kg\n# moved\nb = 2 kg\n"}]));
    let second = client.ask("textDocument/hover", at(2, 0));
    let mut answers: Vec<Value> = Vec::new();
    while answers.len() < 2 {
        let message = client.next().expect("a message");
        if message["id"] == json!(first) || message["id"] == json!(second) {
            answers.push(message);
        }
    }
    assert!(answers.iter().all(|it| it["error"].is_null()), "{answers:?}");
    assert_eq!(client.leave(), 0);
}

#[test]
fn a_cancelled_question_is_answered_at_once() {
    let mut client = Client::in_process(faulty);
    client.open("a = 1 kg # slow\n");
    let id = client.ask("textDocument/hover", at(0, 0));
    client.notify("$/cancelRequest", json!({"id": id}));
    let answer = client.until(|it| it["id"] == json!(id));
    assert_eq!(answer["error"]["code"], -32800);
    assert_eq!(client.leave(), 0);
}

#[test]
fn closing_during_the_analysis_leaves_no_diagnostics_behind() {
    let mut client = Client::in_process(faulty);
    client.open("a = 3 kg + 2 m # slow\n");
    client.notify("textDocument/didClose", json!({"textDocument": {"uri": SHEET}}));
    assert!(client.published_at(SHEET, None, |_| true).is_empty());
    std::thread::sleep(Duration::from_secs(4));
    let id = client.ask("shutdown", Value::Null);
    let message = client.next().expect("an answer");
    assert_eq!(message["id"], json!(id), "{message}");
    assert_eq!(client.exit(), 0);
}

#[test]
fn an_edit_stops_the_analysis_under_way() {
    let mut client = Client::in_process(faulty);
    client.open("a = 3 kg + 2 m # endless\n");
    std::thread::sleep(Duration::from_millis(300));
    client.change(2, json!([edit(0, 17, 24, "")]));
    assert_eq!(client.published(2, |_| true), ["unit-mismatch"]);
    assert_eq!(client.leave(), 0);
}

#[test]
fn an_edit_of_another_sheet_is_not_held_up_and_the_first_comes_after_it() {
    const OTHER: &str = "file:///nowhere/other.pintle";
    let mut client = Client::in_process(faulty);
    client.open("a = 3 kg + 2 m # slow\n");
    std::thread::sleep(Duration::from_millis(300));
    client.open_at(OTHER, "b = 3 kg + 2 s # endless\n");
    std::thread::sleep(Duration::from_millis(300));
    // The endless one is stopped for this and waits again; closed, it is forgotten.
    client.change(2, json!([edit(0, 4, 5, "4")]));
    assert_eq!(client.published(2, |_| true), ["unit-mismatch"]);
    client.notify("textDocument/didClose", json!({"textDocument": {"uri": OTHER}}));
    client.change(3, json!([edit(0, 0, 21, "a = 4 kg")]));
    assert!(client.published(3, |_| true).is_empty());
    assert_eq!(client.leave(), 0);
}

#[test]
fn closing_stops_the_analysis_under_way() {
    let mut client = Client::in_process(faulty);
    client.open("a = 3 kg # endless\n");
    std::thread::sleep(Duration::from_millis(300));
    client.notify("textDocument/didClose", json!({"textDocument": {"uri": SHEET}}));
    client.open("a = 3 kg + 2 m\n");
    assert_eq!(client.published(1, |codes| !codes.is_empty()), ["unit-mismatch"]);
    assert_eq!(client.leave(), 0);
}

#[test]
fn a_file_edited_during_the_first_analysis_of_its_user_is_seen() {
    let mut client = Client::in_process(faulty);
    let part = "file:///nowhere/part.pintle";
    client.open_at(part, "drum_mass = 5 kg\n");
    assert!(client.published_at(part, Some(1), |_| true).is_empty());
    client.open("use ./part\nx = drum_mass + 2 m # slow\n");
    std::thread::sleep(Duration::from_millis(500));
    let document = json!({"uri": part, "version": 2});
    client.notify(
        "textDocument/didChange",
        json!({"textDocument": document, "contentChanges": [{"text": "drum_mass = 5 m\n"}]}),
    );
    assert!(client.published_at(part, Some(2), |_| true).is_empty());
    assert!(client.published(1, |_| true).is_empty(), "the text it used was replaced in the meantime");
    assert_eq!(client.leave(), 0);
}

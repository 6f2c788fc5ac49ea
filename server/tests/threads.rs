//! What the server does while its compiler is slow or faulty: served in this
//! process, with a compiler of our own.

mod common;

use common::{Client, SHEET, at, edit};
use pintle::Compilation;
use pintle::analysis::Snapshot;
use serde_json::{Value, json};
use std::time::{Duration, Instant};

/// Panics at a text that holds `boom`, and takes a while where it holds `slow`.
fn faulty(snapshot: &Snapshot, path: &str) -> Option<Compilation> {
    let text = snapshot.text(path)?;
    assert!(!text.contains("boom"), "as the text says");
    if text.contains("slow") {
        std::thread::sleep(Duration::from_secs(3));
    }
    snapshot.compile(path)
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

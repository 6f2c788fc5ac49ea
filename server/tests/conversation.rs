//! Conversations with the real server over its standard input and output.

use serde_json::{Value, json};
use std::io::{BufRead, BufReader, Read, Write};
use std::process::{Child, ChildStdin, Command, Stdio};
use std::sync::mpsc;
use std::time::Duration;

struct Client {
    child: Child,
    stdin: Option<ChildStdin>,
    messages: mpsc::Receiver<Value>,
}

const SHEET: &str = "file:///nowhere/sheet.pintle";

impl Client {
    fn start() -> Client {
        let mut child = Command::new(env!("CARGO_BIN_EXE_pintle-server"))
            .arg("--stdio")
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::null())
            .spawn()
            .expect("a server");
        let mut stdout = BufReader::new(child.stdout.take().expect("output"));
        let (sender, messages) = mpsc::channel();
        std::thread::spawn(move || {
            loop {
                let mut length = 0;
                loop {
                    let mut line = String::new();
                    if stdout.read_line(&mut line).unwrap_or(0) == 0 {
                        return;
                    }
                    if line.trim().is_empty() {
                        break;
                    }
                    if let Some(value) = line.strip_prefix("Content-Length: ") {
                        length = value.trim().parse().expect("a length");
                    }
                }
                let mut body = vec![0; length];
                if stdout.read_exact(&mut body).is_err() {
                    return;
                }
                if sender.send(serde_json::from_slice(&body).expect("JSON")).is_err() {
                    return;
                }
            }
        });
        let stdin = child.stdin.take();
        let mut client = Client { child, stdin, messages };
        client.send(json!({"jsonrpc": "2.0", "id": 1, "method": "initialize", "params": {"capabilities": {}}}));
        client.answer(1);
        client.send(json!({"jsonrpc": "2.0", "method": "initialized", "params": {}}));
        client
    }

    fn send(&mut self, message: Value) {
        let body = message.to_string();
        let stdin = self.stdin.as_mut().expect("an open pipe");
        write!(stdin, "Content-Length: {}\r\n\r\n{body}", body.len()).expect("a listening server");
        stdin.flush().expect("a listening server");
    }

    fn next(&self) -> Value {
        self.messages.recv_timeout(Duration::from_secs(20)).expect("a message in time")
    }

    fn answer(&self, id: u64) -> Value {
        loop {
            let message = self.next();
            if message["id"] == json!(id) {
                return message;
            }
        }
    }

    fn open(&mut self, text: &str) {
        self.send(json!({"jsonrpc": "2.0", "method": "textDocument/didOpen",
            "params": {"textDocument": {"uri": SHEET, "languageId": "pintle", "version": 1, "text": text}}}));
    }

    fn change(&mut self, version: u64, changes: Value) {
        self.send(json!({"jsonrpc": "2.0", "method": "textDocument/didChange",
            "params": {"textDocument": {"uri": SHEET, "version": version}, "contentChanges": changes}}));
    }

    /// Codes of the newest publication of that version.
    #[track_caller]
    fn published(&self, version: u64, until: impl Fn(&[String]) -> bool) -> Vec<String> {
        let mut last = 0;
        loop {
            let message = self.next();
            if message["method"] != "textDocument/publishDiagnostics" {
                continue;
            }
            let found = message["params"]["version"].as_u64().unwrap_or(0);
            assert!(found >= last, "version {found} after {last}");
            last = found;
            let codes: Vec<String> = message["params"]["diagnostics"]
                .as_array()
                .expect("a list")
                .iter()
                .map(|it| it["code"].as_str().unwrap_or("").to_string())
                .collect();
            if found == version && until(&codes) {
                return codes;
            }
        }
    }

    fn hover(&mut self, id: u64, line: u32, character: u32) -> Value {
        self.send(json!({"jsonrpc": "2.0", "id": id, "method": "textDocument/hover",
            "params": {"textDocument": {"uri": SHEET}, "position": {"line": line, "character": character}}}));
        self.answer(id)["result"].clone()
    }

    fn end(mut self, messages: &[&str]) -> Option<i32> {
        for (at, method) in messages.iter().enumerate() {
            let mut message = json!({"jsonrpc": "2.0", "method": method});
            if *method == "shutdown" {
                message["id"] = json!(9000 + at);
            }
            self.send(message);
            if *method == "shutdown" {
                self.answer(9000 + at as u64);
            }
        }
        self.child.wait().expect("an end").code()
    }
}

#[test]
fn hover_shows_value_kind_and_unit() {
    let mut client = Client::start();
    client.open("# µ 🙂\r\ngiven J : moment_of_inertia = 3.2 kg·m²\r\ngiven w : angular_velocity = 900 rpm\r\nE = 1/2 * J * w^2\r\n");
    client.published(1, |_| true);
    let hover = client.hover(2, 3, 0);
    let text = hover["contents"]["value"].as_str().expect("markdown");
    assert!(text.contains("14.212") && text.contains("kJ") || text.contains("14212"), "{text}");
    assert!(text.contains("energy"), "{text}");
    // Past the line's end is the line's end, past the text nothing.
    assert!(client.hover(3, 99, 99).is_null());
    assert_eq!(client.end(&["shutdown", "exit"]), Some(0));
}

#[test]
fn diagnostics_come_go_and_come_back() {
    let mut client = Client::start();
    client.open("a = 3 kg + 2 m\n");
    assert_eq!(client.published(1, |_| true), ["unit-mismatch"]);
    let edit = |text: &str| json!([{"range": {"start": {"line": 0, "character": 13}, "end": {"line": 0, "character": 14}}, "text": text}]);
    client.change(2, json!([{"text": "a = 3 kg + 2 kg\n"}]));
    assert!(client.published(2, <[String]>::is_empty).is_empty());
    client.change(3, json!([{"text": "a = 3 kg + 2 m\n"}]));
    assert_eq!(client.published(3, |codes| !codes.is_empty()), ["unit-mismatch"]);
    client.change(4, edit("kg"));
    assert!(client.published(4, <[String]>::is_empty).is_empty());
    client
        .send(json!({"jsonrpc": "2.0", "method": "textDocument/didClose", "params": {"textDocument": {"uri": SHEET}}}));
    loop {
        let message = client.next();
        if message["method"] == "textDocument/publishDiagnostics"
            && message["params"].get("version").is_none_or(Value::is_null)
        {
            assert_eq!(message["params"]["diagnostics"], json!([]));
            break;
        }
    }
    assert_eq!(client.end(&["shutdown", "exit"]), Some(0));
}

#[test]
fn a_burst_of_edits_leaves_the_right_text() {
    let mut client = Client::start();
    client.open("n = 0\n");
    for version in 2..=201_u64 {
        // Each edit writes one digit in front of the last.
        let digit = version % 10;
        client.change(version, json!([{"range": {"start": {"line": 0, "character": 4}, "end": {"line": 0, "character": 5}}, "text": digit.to_string()}]));
        if version % 5 == 0 {
            let id = 1000 + version;
            client.send(json!({"jsonrpc": "2.0", "id": id, "method": "textDocument/hover",
                "params": {"textDocument": {"uri": SHEET}, "position": {"line": 0, "character": 0}}}));
            client.send(json!({"jsonrpc": "2.0", "method": "$/cancelRequest", "params": {"id": id}}));
        }
    }
    client.published(201, |_| true);
    let hover = client.hover(5000, 0, 0);
    assert!(hover["contents"]["value"].as_str().is_some_and(|text| text.starts_with("**n** = 1 ")), "{hover}");
    assert_eq!(client.end(&["shutdown", "exit"]), Some(0));
}

#[test]
fn exit_without_shutdown_is_a_failure() {
    assert_eq!(Client::start().end(&["exit"]), Some(1));
}

#[test]
fn the_server_ends_when_its_parent_closes_the_pipe() {
    let mut client = Client::start();
    client.stdin = None;
    assert!(client.child.wait().expect("an end").success());
}

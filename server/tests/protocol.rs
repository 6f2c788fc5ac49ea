//! The frame of a conversation: start, end, faults of the client.

mod common;

use common::{Client, at};
use serde_json::{Value, json};
use std::process::Command;

#[track_caller]
fn check_error(client: &mut Client, method: &str, params: Value, code: i64) {
    let answer = client.request(method, params);
    assert_eq!(answer["error"]["code"], code, "{answer}");
}

#[test]
fn exit_after_shutdown_is_a_success() {
    assert_eq!(Client::start().leave(), 0);
}

#[test]
fn null_parameters_are_no_parameters() {
    let mut client = Client::start();
    client.send_body(r#"{"jsonrpc": "2.0", "id": 90, "method": "shutdown", "params": null}"#);
    let answer = client.until(|it| it["id"] == 90);
    assert_eq!((&answer["result"], &answer["error"]), (&Value::Null, &Value::Null), "{answer}");
    client.send_body(r#"{"jsonrpc": "2.0", "method": "exit", "params": null}"#);
    assert_eq!(client.end(), 0);
}

#[test]
fn exit_without_shutdown_is_a_failure() {
    assert_eq!(Client::start().exit(), 1);
    assert_eq!(Client::bare(&[]).exit(), 1);
}

#[test]
fn the_server_ends_when_the_client_closes_the_pipe() {
    assert_eq!(Client::start().hang_up(), 0);
    assert_eq!(Client::bare(&[]).hang_up(), 0);
    let mut client = Client::bare(&[]);
    client.send_raw(b"Content-Length: 1000\r\n\r\n{");
    assert_eq!(client.hang_up(), 0);
}

#[test]
fn requests_before_initialize_are_refused() {
    let mut client = Client::bare(&[]);
    check_error(&mut client, "textDocument/hover", at(0, 0), -32002);
    check_error(&mut client, "shutdown", Value::Null, -32002);
    assert!(client.initialize(json!({}))["capabilities"].is_object());
    check_error(&mut client, "initialize", json!({"capabilities": {}}), -32600);
}

#[test]
fn requests_after_shutdown_are_refused() {
    let mut client = Client::start();
    client.open("a = 1\n");
    assert!(client.request("shutdown", Value::Null)["error"].is_null());
    check_error(&mut client, "textDocument/hover", at(0, 0), -32600);
    check_error(&mut client, "shutdown", Value::Null, -32600);
    assert_eq!(client.exit(), 0);
}

#[test]
fn faulty_requests_get_the_errors_of_the_protocol() {
    let mut client = Client::start();
    check_error(&mut client, "textDocument/nonsense", json!({}), -32601);
    check_error(&mut client, "$/nonsense", json!({}), -32601);
    check_error(&mut client, "textDocument/hover", json!({"textDocument": 3}), -32602);
    client.notify("$/nonsense", json!({}));
    client.notify("$/setTrace", json!({"value": "verbose"}));
    client.notify("textDocument/didChange", json!({"textDocument": []}));
    client.notify("$/cancelRequest", json!({"id": 4711}));
    client.open("a = 1\n");
    assert!(client.hover(0, 0).contains("**a** = 1"));
    assert_eq!(client.leave(), 0);
}

#[track_caller]
fn check_survives(bytes: &[u8], codes: &[i64]) {
    let mut client = Client::start();
    client.open("a = 1\n");
    client.send_raw(bytes);
    let id = client.ask("textDocument/hover", at(0, 0));
    let mut refused = Vec::new();
    let answer = loop {
        let message = client.next().expect("an answer");
        if message["id"] == json!(id) {
            break message;
        }
        if message["method"].is_null() {
            assert_eq!(message["id"], Value::Null, "{message}");
            refused.extend(message["error"]["code"].as_i64());
        }
    };
    assert_eq!(refused, codes);
    assert!(answer["result"]["contents"]["value"].as_str().is_some_and(|it| it.contains("**a** = 1")), "{answer}");
    assert_eq!(client.leave(), 0);
}

#[test]
fn a_malformed_body_costs_itself_alone() {
    check_survives(b"Content-Length: 9\r\n\r\n{\"jsonrpc", &[-32700]);
    check_survives(b"Content-Length: 4\r\n\r\n\"\xff\xfe\"", &[-32700]);
    check_survives(b"Content-Length: 0\r\n\r\n", &[-32700]);
}

#[test]
fn json_that_is_no_message_costs_itself_alone() {
    check_survives(b"Content-Length: 2\r\n\r\n[]Content-Length: 2\r\n\r\n42", &[-32600, -32600]);
}

#[test]
fn bytes_between_messages_cost_themselves_alone() {
    check_survives(b"what is this\r\n", &[-32700]);
    check_survives(b"Content-Length: many\r\n\r\n", &[-32700]);
    // A length that is too short, and what is left of the body.
    check_survives(b"Content-Length: 5\r\n\r\n{\"jsonrpc\": \"2.0\"}\r\n", &[-32700, -32700]);
}

#[test]
fn an_answer_for_nobody_is_survived() {
    let mut client = Client::start();
    client.send_body(r#"{"jsonrpc": "2.0", "id": 99, "result": null}"#);
    client.send_body(r#"{"jsonrpc": "2.0", "id": "x", "error": {"code": 1, "message": "m"}}"#);
    client.open("a = 1\n");
    assert!(client.hover(0, 0).contains("**a** = 1"));
    assert_eq!(client.leave(), 0);
}

#[test]
fn files_are_watched_where_the_client_can() {
    let mut client = Client::bare(&[]);
    client.initialize(json!({"workspace": {"didChangeWatchedFiles": {"dynamicRegistration": true}}}));
    let request = client.until(|it| it["method"] == "client/registerCapability");
    assert_eq!(request["params"]["registrations"][0]["method"], "workspace/didChangeWatchedFiles");
    // Not answered for a while: nothing may wait for it.
    client.open("a = 1\n");
    assert!(client.hover(0, 0).contains("**a** = 1"));
    client.send_body(&json!({"jsonrpc": "2.0", "id": request["id"], "result": null}).to_string());
    assert_eq!(client.leave(), 0);
}

#[track_caller]
fn check_command(arguments: &[&str], code: i32, out: &str, err: &str) {
    let output = Command::new(env!("CARGO_BIN_EXE_pintle-server")).args(arguments).output().expect("a server");
    assert_eq!(output.status.code(), Some(code));
    assert!(String::from_utf8_lossy(&output.stdout).contains(out), "{output:?}");
    assert!(String::from_utf8_lossy(&output.stderr).contains(err), "{output:?}");
    assert!(out.is_empty() == output.stdout.is_empty(), "{output:?}");
}

#[test]
fn the_command_line_is_checked() {
    check_command(&["--version"], 0, concat!("pintle-server ", env!("CARGO_PKG_VERSION"), "\n"), "");
    check_command(&["--help"], 0, "--log FILE", "");
    check_command(&["--port", "9"], 64, "", "unknown argument `--port`");
    check_command(&["--log"], 64, "", "`--log` needs a file");
    check_command(&["--log", "/nowhere/at/all"], 73, "", "cannot write the log");
}

#[test]
fn the_log_tells_what_happened() {
    let path = std::env::temp_dir().join(format!("pintle-server-test-{}.log", std::process::id()));
    let mut client = Client::bare(&["--log", path.to_str().expect("a path")]);
    client.initialize(json!({}));
    client.open("a = 1\n");
    client.published(1, |_| true);
    client.send_body("nonsense");
    assert_eq!(client.leave(), 0);
    let log = std::fs::read_to_string(&path).expect("a log");
    for words in ["compiled /nowhere/sheet.pintle", "not a message", "end: Orderly"] {
        assert!(log.contains(words), "{words:?} is not in {log}");
    }
    std::fs::remove_file(&path).expect("a file to remove");
}

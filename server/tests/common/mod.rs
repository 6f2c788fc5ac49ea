//! A scripted client: raw frames over pipes, to the real program or to a
//! server in this process.
#![allow(dead_code)]

use serde_json::{Value, json};
use std::io::{BufRead, BufReader, Read, Write};
use std::process::{Child, Command, Stdio};
use std::sync::mpsc;
use std::thread::JoinHandle;
use std::time::Duration;

/// Where the sheet seems to be.
pub const SHEET: &str = "file:///nowhere/sheet.pintle";
/// Longer than any answer takes on a busy machine.
const PATIENCE: Duration = Duration::from_secs(60);

/// What serves.
enum Server {
    Program(Child),
    Thread(JoinHandle<std::io::Result<pintle_server::End>>),
}

/// One client.
pub struct Client {
    server: Server,
    input: Option<Box<dyn Write>>,
    messages: mpsc::Receiver<Value>,
    last_id: u64,
    /// Version of the last list published for each address: it must never go back.
    versions: std::collections::BTreeMap<String, u64>,
}

impl Client {
    /// The real program, initialized, without any offer.
    pub fn start() -> Client {
        let mut client = Client::bare(&["--stdio"]);
        client.initialize(json!({}));
        client
    }

    /// The real program, before `initialize`.
    pub fn bare(arguments: &[&str]) -> Client {
        let mut child = Command::new(env!("CARGO_BIN_EXE_pintle-server"))
            .args(arguments)
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::null())
            .spawn()
            .expect("a server");
        let (input, output) = (child.stdin.take().expect("input"), child.stdout.take().expect("output"));
        Client::over(Server::Program(child), input, output)
    }

    /// A server in this process whose compiler is `compile`, initialized.
    pub fn in_process(compile: pintle_server::Compile) -> Client {
        let (for_server, input) = std::io::pipe().expect("a pipe");
        let (output, from_server) = std::io::pipe().expect("a pipe");
        let serve = move || pintle_server::serve(for_server, from_server, compile, pintle_server::Log::nowhere());
        let mut client = Client::over(Server::Thread(std::thread::spawn(serve)), input, output);
        client.initialize(json!({}));
        client
    }

    fn over(server: Server, input: impl Write + 'static, output: impl Read + Send + 'static) -> Client {
        let (sender, messages) = mpsc::channel();
        std::thread::spawn(move || {
            let mut output = BufReader::new(output);
            while let Some(message) = read_message(&mut output) {
                if sender.send(message).is_err() {
                    return;
                }
            }
        });
        Client { server, input: Some(Box::new(input)), messages, last_id: 0, versions: Default::default() }
    }

    pub fn initialize(&mut self, capabilities: Value) -> Value {
        let answer = self.request("initialize", json!({"capabilities": capabilities}));
        self.notify("initialized", json!({}));
        answer["result"].clone()
    }

    /// Any bytes.
    pub fn send_raw(&mut self, bytes: &[u8]) {
        let input = self.input.as_mut().expect("an open pipe");
        input.write_all(bytes).expect("a listening server");
        input.flush().expect("a listening server");
    }

    /// A well-formed frame with any body.
    pub fn send_body(&mut self, body: &str) {
        self.send_raw(format!("Content-Length: {}\r\n\r\n{body}", body.len()).as_bytes());
    }

    pub fn notify(&mut self, method: &str, params: Value) {
        self.send_body(&json!({"jsonrpc": "2.0", "method": method, "params": params}).to_string());
    }

    /// Sends a request and gives its id.
    pub fn ask(&mut self, method: &str, params: Value) -> u64 {
        self.last_id += 1;
        let mut message = json!({"jsonrpc": "2.0", "id": self.last_id, "method": method});
        if !params.is_null() {
            message["params"] = params;
        }
        self.send_body(&message.to_string());
        self.last_id
    }

    /// Sends a request and waits for its answer.
    pub fn request(&mut self, method: &str, params: Value) -> Value {
        let id = self.ask(method, params);
        self.until(|message| message["id"] == json!(id) && message["method"].is_null())
    }

    /// The next message; nothing when the server has ended.
    #[track_caller]
    pub fn next(&mut self) -> Option<Value> {
        let message = match self.messages.recv_timeout(PATIENCE) {
            Ok(message) => message,
            Err(mpsc::RecvTimeoutError::Disconnected) => return None,
            Err(mpsc::RecvTimeoutError::Timeout) => panic!("no message in time"),
        };
        if message["method"] == "textDocument/publishDiagnostics" {
            let (uri, version) = (message["params"]["uri"].to_string(), &message["params"]["version"]);
            match version.as_u64() {
                Some(version) => {
                    let last = self.versions.insert(uri, version).unwrap_or(0);
                    assert!(version >= last, "version {version} was published after {last}");
                }
                None => drop(self.versions.remove(&uri)),
            }
        }
        Some(message)
    }

    /// The first message of that sort.
    #[track_caller]
    pub fn until(&mut self, wanted: impl Fn(&Value) -> bool) -> Value {
        loop {
            let message = self.next().expect("a message before the end");
            if wanted(&message) {
                return message;
            }
        }
    }

    pub fn open_at(&mut self, uri: &str, text: &str) {
        let document = json!({"uri": uri, "languageId": "pintle", "version": 1, "text": text});
        self.notify("textDocument/didOpen", json!({"textDocument": document}));
    }

    pub fn open(&mut self, text: &str) {
        self.open_at(SHEET, text);
    }

    pub fn change(&mut self, version: u64, changes: Value) {
        let params = json!({"textDocument": {"uri": SHEET, "version": version}, "contentChanges": changes});
        self.notify("textDocument/didChange", params);
    }

    /// Codes of the first list for that version that fits.
    #[track_caller]
    pub fn published(&mut self, version: u64, wanted: impl Fn(&[String]) -> bool) -> Vec<String> {
        self.published_at(SHEET, Some(version), wanted)
    }

    #[track_caller]
    pub fn published_at(&mut self, uri: &str, version: Option<u64>, wanted: impl Fn(&[String]) -> bool) -> Vec<String> {
        let message = self.until(|message| {
            message["method"] == "textDocument/publishDiagnostics"
                && message["params"]["uri"] == uri
                && message["params"]["version"].as_u64() == version
                && wanted(&codes(message))
        });
        codes(&message)
    }

    /// What a hover says; empty where there is none.
    #[track_caller]
    pub fn hover(&mut self, line: u32, character: u32) -> String {
        let answer = self.request("textDocument/hover", at(line, character));
        assert!(answer["error"].is_null(), "{answer}");
        answer["result"]["contents"]["value"].as_str().unwrap_or("").to_string()
    }

    /// Closes the input and gives the exit code.
    pub fn hang_up(mut self) -> u8 {
        self.input = None;
        self.end()
    }

    /// `shutdown`, `exit`, and the exit code.
    pub fn leave(mut self) -> u8 {
        assert!(self.request("shutdown", Value::Null)["error"].is_null());
        self.exit()
    }

    /// `exit`, and the exit code; the input stays open.
    pub fn exit(mut self) -> u8 {
        self.send_body(r#"{"jsonrpc": "2.0", "method": "exit"}"#);
        self.end()
    }

    /// Waits for the end; the input stays open.
    pub fn end(self) -> u8 {
        match self.server {
            Server::Program(mut child) => child.wait().expect("an end").code().expect("an exit code") as u8,
            Server::Thread(thread) => thread.join().expect("no panic").expect("a start").code(),
        }
    }
}

/// Position in the sheet as parameters.
pub fn at(line: u32, character: u32) -> Value {
    json!({"textDocument": {"uri": SHEET}, "position": {"line": line, "character": character}})
}

/// One edit within a line.
pub fn edit(line: u32, from: u32, to: u32, text: &str) -> Value {
    json!({"range": {"start": {"line": line, "character": from}, "end": {"line": line, "character": to}}, "text": text})
}

pub fn codes(message: &Value) -> Vec<String> {
    let list = message["params"]["diagnostics"].as_array().expect("a list");
    list.iter().map(|it| it["code"].as_str().unwrap_or("").to_string()).collect()
}

/// Strict: anything on the output that is not a frame is a fault of the server.
fn read_message(output: &mut impl BufRead) -> Option<Value> {
    let mut header = String::new();
    if output.read_line(&mut header).expect("text") == 0 {
        return None;
    }
    let length = header.strip_prefix("Content-Length: ").expect("a header").trim_end().parse().expect("a length");
    let mut empty = String::new();
    output.read_line(&mut empty).expect("text");
    assert_eq!(empty, "\r\n");
    let mut body = vec![0; length];
    output.read_exact(&mut body).expect("a whole body");
    Some(serde_json::from_slice(&body).expect("JSON"))
}

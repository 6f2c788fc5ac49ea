//! The one way out: messages in the order in which they were sent, written by
//! a thread of its own, so that a slow reader stops nobody.

use crate::frames::write_frame;
use crate::log::Log;
use crate::lsp::notification::Notification;
use serde::Serialize;
use serde_json::{Value, json};
use std::io::Write;
use std::sync::mpsc;
use std::time::Duration;

/// Sends messages to the client. Cheap to clone.
#[derive(Clone)]
pub(crate) struct Outbox {
    sender: mpsc::Sender<Parcel>,
}

enum Parcel {
    Message(Vec<u8>),
    /// Tells when all before it is written.
    Mark(mpsc::Sender<()>),
}

impl Outbox {
    /// Starts the writer.
    pub fn start(output: impl Write + Send + 'static, log: Log) -> std::io::Result<Outbox> {
        let (sender, receiver) = mpsc::channel();
        std::thread::Builder::new().name("writer".into()).spawn(move || write_all(output, &receiver, &log))?;
        Ok(Outbox { sender })
    }

    /// Sends what has the form of a message.
    pub fn send(&self, message: &impl Serialize) {
        if let Ok(body) = serde_json::to_vec(message) {
            // Fails only where the writer is gone, and then nobody listens.
            let _ = self.sender.send(Parcel::Message(body));
        }
    }

    /// Sends a notification.
    pub fn notify<N: Notification>(&self, params: N::Params) {
        let params = serde_json::to_value(params).unwrap_or(Value::Null);
        self.send(&json!({"jsonrpc": "2.0", "method": N::METHOD, "params": params}));
    }

    /// Waits until all is written, but not for a reader that stands still.
    pub fn flush(&self) {
        let (sender, receiver) = mpsc::channel();
        if self.sender.send(Parcel::Mark(sender)).is_ok() {
            let _ = receiver.recv_timeout(Duration::from_secs(2));
        }
    }
}

fn write_all(mut output: impl Write, receiver: &mpsc::Receiver<Parcel>, log: &Log) {
    for parcel in receiver {
        match parcel {
            Parcel::Message(body) => {
                if let Err(error) = write_frame(&mut output, &body) {
                    log.line(format_args!("the client does not read any more: {error}"));
                    return;
                }
            }
            Parcel::Mark(sender) => {
                let _ = sender.send(());
            }
        }
    }
}

//! From a body to what it is: a request or notification, an answer of the
//! client, or neither.

use crate::frames::Frame;
use serde_json::Value;
use tower_lsp::jsonrpc::{Error, Id, Request, Response};

/// One message from the client.
#[derive(Debug)]
pub(crate) enum Incoming {
    /// A request or a notification.
    Request(Request),
    /// The answer to a request of ours.
    Response(Response),
    /// No message; what to answer.
    Refused(Response),
}

impl Incoming {
    pub fn read(frame: Frame) -> Incoming {
        let body = match frame {
            Frame::Body(body) => body,
            Frame::Garbage => return refused(Id::Null, Error::parse_error()),
        };
        // Depth is bounded by the JSON crate, so that no body overflows the stack.
        let Ok(mut value) = serde_json::from_slice::<Value>(&body) else {
            return refused(Id::Null, Error::parse_error());
        };
        drop_empty_params(&mut value);
        let id = match value.get("id") {
            Some(Value::Number(number)) => number.as_i64().map_or(Id::Null, Id::Number),
            Some(Value::String(text)) => Id::String(text.clone()),
            _ => Id::Null,
        };
        if value.get("method").is_some() {
            match serde_json::from_value(value) {
                Ok(request) => Incoming::Request(request),
                Err(_) => refused(id, Error::invalid_request()),
            }
        } else {
            match serde_json::from_value(value) {
                Ok(response) => Incoming::Response(response),
                Err(_) => refused(id, Error::invalid_request()),
            }
        }
    }
}

/// Clients write "no parameters" in several ways; the protocol crate knows one.
fn drop_empty_params(message: &mut Value) {
    let takes_none = matches!(message.get("method").and_then(Value::as_str), Some("shutdown" | "exit"));
    if let Some(message) = message.as_object_mut()
        && (takes_none || message.get("params").is_some_and(Value::is_null))
    {
        message.remove("params");
    }
}

fn refused(id: Id, error: Error) -> Incoming {
    Incoming::Refused(Response::from_error(id, error))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check_refused(body: &[u8], code: i64) {
        match Incoming::read(Frame::Body(body.to_vec())) {
            Incoming::Refused(response) => {
                assert_eq!(response.error().map(|error| error.code.code()), Some(code));
            }
            other => panic!("{other:?}"),
        }
    }

    #[test]
    fn bodies_that_are_no_json_are_parse_errors() {
        check_refused(b"{", -32700);
        check_refused(b"", -32700);
        check_refused(b"\"\xff\"", -32700);
        check_refused("[".repeat(60_000).as_bytes(), -32700);
    }

    #[test]
    fn json_that_is_no_message_is_an_invalid_request() {
        check_refused(b"[]", -32600);
        check_refused(b"{}", -32600);
        check_refused(b"7", -32600);
        check_refused(br#"{"jsonrpc": "2.0", "method": 3}"#, -32600);
        check_refused(br#"{"jsonrpc": "1.0", "method": "exit"}"#, -32600);
    }

    #[test]
    fn no_parameters_are_written_in_several_ways() {
        for params in ["null", "{}", "[]"] {
            let body = format!(r#"{{"jsonrpc": "2.0", "id": 1, "method": "shutdown", "params": {params}}}"#);
            match Incoming::read(Frame::Body(body.into())) {
                Incoming::Request(request) => assert_eq!(request.params(), None, "{params}"),
                other => panic!("{other:?}"),
            }
        }
    }

    #[test]
    fn messages_are_told_apart() {
        let read = |body: &str| Incoming::read(Frame::Body(body.into()));
        assert!(matches!(read(r#"{"jsonrpc": "2.0", "method": "exit"}"#), Incoming::Request(_)));
        assert!(matches!(read(r#"{"jsonrpc": "2.0", "id": "a", "method": "shutdown"}"#), Incoming::Request(_)));
        assert!(matches!(read(r#"{"jsonrpc": "2.0", "id": 1, "result": null}"#), Incoming::Response(_)));
    }
}

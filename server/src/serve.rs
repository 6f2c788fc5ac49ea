//! The loop between the wire and the handlers.
//!
//! The protocol crate's own loop is not used: it ends at the first malformed
//! body, takes at most a hundred waiting messages and then stands still, and
//! does not end at `exit`. Here every message is handed over at once, in the
//! order of arrival; handlers only wait on channels, so any number of them may
//! be under way, and a cancel or an edit waits for none of them.

use crate::analyst::Compile;
use crate::frames::Frames;
use crate::guard::Guard;
use crate::handlers::Backend;
use crate::incoming::Incoming;
use crate::log::Log;
use crate::outbox::Outbox;
use futures::stream::FuturesUnordered;
use futures::{FutureExt, SinkExt, StreamExt};
use std::io::{BufReader, Read, Write};
use std::panic::AssertUnwindSafe;
use std::task::Poll;
use tokio::sync::mpsc::{UnboundedReceiver, UnboundedSender, unbounded_channel};
use tower::Service;
use tower_lsp::jsonrpc::{Error, Request, Response};
use tower_lsp::{ClientSocket, LspService};

/// How a conversation ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum End {
    /// `exit` after `shutdown`.
    Orderly,
    /// `exit` alone.
    WithoutShutdown,
    /// The client closed its end.
    InputClosed,
}

impl End {
    /// Exit code of the process.
    pub fn code(self) -> u8 {
        match self {
            End::Orderly | End::InputClosed => 0,
            End::WithoutShutdown => 1,
        }
    }
}

/// Serves one client until it leaves; `compile` is what the analysis calls.
pub fn serve(
    input: impl Read + Send + 'static,
    output: impl Write + Send + 'static,
    compile: Compile,
    log: Log,
) -> std::io::Result<End> {
    let outbox = Outbox::start(output, log.clone())?;
    let (sender, inbox) = unbounded_channel();
    let for_reader = log.clone();
    std::thread::Builder::new().name("reader".into()).spawn(move || read_all(input, &sender, &for_reader))?;
    let mut started = Ok(());
    let (service, socket) = LspService::new(|client| {
        let (backend, state) = Backend::start(client, outbox.clone(), compile, log.clone());
        started = state;
        backend
    });
    started?;
    let runtime = tokio::runtime::Builder::new_current_thread().build()?;
    let end = runtime.block_on(converse(Guard::new(service), socket, inbox, &outbox, &log));
    outbox.flush();
    log.line(format_args!("end: {end:?}"));
    Ok(end)
}

fn read_all(input: impl Read, sender: &UnboundedSender<Incoming>, log: &Log) {
    let mut frames = Frames::new(BufReader::with_capacity(1 << 16, input));
    loop {
        match frames.next() {
            Ok(Some(frame)) => {
                if sender.send(Incoming::read(frame)).is_err() {
                    return;
                }
            }
            Ok(None) => return,
            Err(error) => return log.line(format_args!("the input cannot be read: {error}")),
        }
    }
}

async fn converse(
    mut service: Guard<LspService<Backend>>,
    socket: ClientSocket,
    mut inbox: UnboundedReceiver<Incoming>,
    outbox: &Outbox,
    log: &Log,
) -> End {
    let (mut requests, mut answers) = socket.split();
    let mut running = FuturesUnordered::new();
    let mut shut_down = false;
    loop {
        tokio::select! {
            incoming = inbox.recv() => match incoming {
                None => return End::InputClosed,
                Some(Incoming::Request(request)) => {
                    match request.method() {
                        "exit" if shut_down => return End::Orderly,
                        "exit" => return End::WithoutShutdown,
                        "shutdown" if request.id().is_some() => shut_down = true,
                        _ => {}
                    }
                    if let Some(refusal) = refuse_unknown(&request) {
                        outbox.send(&refusal);
                        continue;
                    }
                    // What a handler sends on before it first waits leaves in the client's order.
                    let mut answer = service.call(request);
                    match futures::poll!(&mut answer) {
                        Poll::Ready(answer) => send(answer, outbox, log),
                        Poll::Pending => running.push(answer),
                    }
                }
                Some(Incoming::Response(answer)) => {
                    // The protocol crate panics at an answer that nobody waits for any more.
                    if AssertUnwindSafe(answers.send(answer)).catch_unwind().await.is_err() {
                        log.line(format_args!("an answer came for nobody"));
                    }
                }
                Some(Incoming::Refused(refusal)) => {
                    log.line(format_args!("not a message: answered {:?}", refusal.error()));
                    outbox.send(&refusal);
                }
            },
            Some(answer) = running.next() => send(answer, outbox, log),
            Some(request) = requests.next() => outbox.send(&request),
        }
    }
}

/// Notifications that begin with `$/` may be ignored, requests may not: the
/// protocol crate does both.
fn refuse_unknown(request: &Request) -> Option<Response> {
    let id = request.id().filter(|_| request.method().starts_with("$/"))?;
    Some(Response::from_error(id.clone(), Error::method_not_found()))
}

fn send<E: std::fmt::Display>(answer: Result<Option<Response>, E>, outbox: &Outbox, log: &Log) {
    match answer {
        Ok(Some(response)) => outbox.send(&response),
        Ok(None) => {}
        Err(error) => log.line(format_args!("no answer: {error}")),
    }
}

//! Handlers: parameters to a message, and the answer back. Nothing is awaited
//! before the message is sent, so messages keep the client's order.

use crate::analyst::Compile;
use crate::log::Log;
use crate::lsp::notification::{DidChangeWatchedFiles, Notification};
use crate::lsp::*;
use crate::outbox::Outbox;
use crate::position::Encoding;
use crate::state::{self, Message};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{Sender, channel};
use tokio::sync::oneshot;
use tower_lsp::jsonrpc::{Error, Result};
use tower_lsp::{Client, LanguageServer};

/// Files whose change may change a result.
const WATCHED: [&str; 3] = ["**/*.pintle", "**/*.stl", "**/*.csv"];

/// One client's server.
pub struct Backend {
    client: Client,
    sender: Sender<Message>,
    log: Log,
    watches: AtomicBool,
}

impl Backend {
    /// Starts the threads behind the handlers; without them nothing is answered.
    pub(crate) fn start(client: Client, outbox: Outbox, compile: Compile, log: Log) -> (Backend, std::io::Result<()>) {
        let (sender, started) = match state::start(outbox, compile, log.clone()) {
            Ok(sender) => (sender, Ok(())),
            Err(error) => (channel().0, Err(error)),
        };
        (Backend { client, sender, log, watches: AtomicBool::new(false) }, started)
    }

    fn send(&self, message: Message) {
        // Fails only while the process ends.
        let _ = self.sender.send(message);
    }

    /// Asks the state thread and waits. A reply that is dropped was a panic.
    async fn ask<T>(&self, message: impl FnOnce(oneshot::Sender<T>) -> Message) -> Result<T> {
        let (reply, answer) = oneshot::channel();
        self.send(message(reply));
        answer.await.map_err(|_| Error::internal_error())
    }
}

impl Drop for Backend {
    fn drop(&mut self) {
        self.send(Message::Stop);
    }
}

#[tower_lsp::async_trait]
impl LanguageServer for Backend {
    async fn initialize(&self, params: InitializeParams) -> Result<InitializeResult> {
        let capabilities = params.capabilities;
        let offered = capabilities.general.as_ref().and_then(|general| general.position_encodings.as_deref());
        let encoding = Encoding::negotiate(offered);
        self.send(Message::Encoding(encoding));
        let watched = capabilities.workspace.and_then(|workspace| workspace.did_change_watched_files);
        self.watches.store(watched.and_then(|it| it.dynamic_registration) == Some(true), Ordering::Relaxed);
        if let Some(client) = params.client_info {
            let version = client.version.unwrap_or_default();
            self.log.line(format_args!("client {} {version}, {encoding:?}", client.name));
        }
        Ok(InitializeResult {
            capabilities: ServerCapabilities {
                position_encoding: Some(encoding.kind()),
                text_document_sync: Some(TextDocumentSyncCapability::Options(TextDocumentSyncOptions {
                    open_close: Some(true),
                    change: Some(TextDocumentSyncKind::INCREMENTAL),
                    save: Some(TextDocumentSyncSaveOptions::Supported(true)),
                    ..TextDocumentSyncOptions::default()
                })),
                hover_provider: Some(HoverProviderCapability::Simple(true)),
                ..ServerCapabilities::default()
            },
            server_info: Some(ServerInfo {
                name: "pintle-server".into(),
                version: Some(env!("CARGO_PKG_VERSION").into()),
            }),
        })
    }

    async fn initialized(&self, _: InitializedParams) {
        if !self.watches.load(Ordering::Relaxed) {
            return;
        }
        let watchers =
            WATCHED.map(|glob| FileSystemWatcher { glob_pattern: GlobPattern::String(glob.into()), kind: None });
        let options = DidChangeWatchedFilesRegistrationOptions { watchers: watchers.into() };
        let registration = Registration {
            id: "files".into(),
            method: DidChangeWatchedFiles::METHOD.into(),
            register_options: serde_json::to_value(options).ok(),
        };
        let (client, log) = (self.client.clone(), self.log.clone());
        // Never awaited in a handler: a client that does not answer would hold it for ever.
        tokio::spawn(async move {
            if let Err(error) = client.register_capability(vec![registration]).await {
                log.line(format_args!("the client does not watch files: {error}"));
            }
        });
    }

    async fn shutdown(&self) -> Result<()> {
        Ok(())
    }

    async fn did_open(&self, params: DidOpenTextDocumentParams) {
        let document = params.text_document;
        self.send(Message::Open { uri: document.uri, version: document.version, text: document.text });
    }

    async fn did_change(&self, params: DidChangeTextDocumentParams) {
        let document = params.text_document;
        self.send(Message::Change { uri: document.uri, version: document.version, changes: params.content_changes });
    }

    async fn did_save(&self, _: DidSaveTextDocumentParams) {
        self.send(Message::DiskChanged);
    }

    async fn did_change_watched_files(&self, _: DidChangeWatchedFilesParams) {
        self.send(Message::DiskChanged);
    }

    async fn did_close(&self, params: DidCloseTextDocumentParams) {
        self.send(Message::Close { uri: params.text_document.uri });
    }

    async fn hover(&self, params: HoverParams) -> Result<Option<Hover>> {
        let at = params.text_document_position_params;
        let (uri, position) = (at.text_document.uri, at.position);
        self.ask(|reply| Message::Hover { uri, position, reply }).await
    }
}

//! Handlers: parameters to a message, and the answer back. Nothing is awaited
//! before the message is sent, so messages keep the client's order.

use crate::position::Encoding;
use crate::state::{self, Message, Publish};
use std::sync::mpsc;
use tokio::sync::oneshot;
use tower_lsp::jsonrpc::Result;
use tower_lsp::lsp_types::*;
use tower_lsp::{Client, LanguageServer};

/// One client's server.
pub struct Backend {
    sender: mpsc::Sender<Message>,
}

impl Backend {
    /// Starts the threads behind the handlers.
    pub fn new(client: Client) -> Backend {
        let (outbox, mut inbox) = tokio::sync::mpsc::unbounded_channel::<Publish>();
        // One task publishes, so that versions leave in order.
        tokio::spawn(async move {
            while let Some(publish) = inbox.recv().await {
                client.publish_diagnostics(publish.uri, publish.diagnostics, publish.version).await;
            }
        });
        let sender = state::start(move |publish| {
            let _ = outbox.send(publish);
        });
        Backend { sender }
    }

    fn send(&self, message: Message) {
        // Only fails while the process ends.
        let _ = self.sender.send(message);
    }
}

#[tower_lsp::async_trait]
impl LanguageServer for Backend {
    async fn initialize(&self, params: InitializeParams) -> Result<InitializeResult> {
        let offered = params.capabilities.general.as_ref().and_then(|general| general.position_encodings.as_deref());
        let encoding = Encoding::negotiate(offered);
        self.send(Message::Encoding(encoding));
        Ok(InitializeResult {
            capabilities: ServerCapabilities {
                position_encoding: Some(encoding.kind()),
                text_document_sync: Some(TextDocumentSyncCapability::Kind(TextDocumentSyncKind::INCREMENTAL)),
                hover_provider: Some(HoverProviderCapability::Simple(true)),
                ..ServerCapabilities::default()
            },
            server_info: Some(ServerInfo {
                name: "pintle-server".into(),
                version: Some(env!("CARGO_PKG_VERSION").into()),
            }),
        })
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

    async fn did_close(&self, params: DidCloseTextDocumentParams) {
        self.send(Message::Close { uri: params.text_document.uri });
    }

    async fn hover(&self, params: HoverParams) -> Result<Option<Hover>> {
        let at = params.text_document_position_params;
        let (reply, answer) = oneshot::channel();
        self.send(Message::Hover { uri: at.text_document.uri, position: at.position, reply });
        Ok(answer.await.unwrap_or(None))
    }
}

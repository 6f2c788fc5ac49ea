//! The language server: the protocol, and nothing else.
//!
//! Handlers turn parameters into messages and wait for an answer. One thread
//! owns the documents and answers from the newest text; one thread analyses,
//! newest text first, and publishes only what still belongs to it. All that is
//! known about sheets comes from `pintle::analysis`, in byte offsets.

mod guard;
mod handlers;
mod position;
mod state;

pub use guard::Guard;
pub use handlers::Backend;
pub use position::{Encoding, Positions};

/// Serves one client over standard input and output until it leaves.
pub async fn serve() {
    let (service, socket) = tower_lsp::LspService::new(Backend::new);
    // Handlers only wait on channels, so many at once cost nothing, and a
    // cancel or an edit never waits behind a slow request.
    tower_lsp::Server::new(tokio::io::stdin(), tokio::io::stdout(), socket)
        .concurrency_level(256)
        .serve(Guard::new(service))
        .await;
}

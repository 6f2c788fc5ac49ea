//! The language server: the protocol, and nothing else.
//!
//! A reader thread cuts the input into messages; one loop hands them to the
//! handlers and collects the answers; handlers turn parameters into messages
//! for the state thread and wait. The state thread owns the documents, answers
//! questions and decides what is published; the analysis thread compiles, the
//! newest text first. All that is known about sheets comes from
//! `pintle::analysis`, in byte offsets; it must never know a unit or a law.
//!
//! ```text
//! input -> frames -> incoming -> serve -> handlers -> state <-> analyst
//!                                  |                    |
//! output <------------------- outbox <------------------+
//! ```

#![deny(clippy::print_stdout, clippy::print_stderr)]

mod analyst;
mod convert;
mod documents;
mod frames;
mod guard;
mod handlers;
mod incoming;
mod log;
mod lsp;
mod outbox;
mod position;
mod serve;
mod state;

pub use analyst::Compile;
pub use guard::Guard;
pub use log::Log;
pub use position::{Encoding, Positions};
pub use serve::{End, serve};

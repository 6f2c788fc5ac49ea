//! The state thread and the analysis thread.

use crate::position::{Encoding, Positions};
use pintle::Compilation;
use pintle::analysis::{FileDiagnostic, Host, Snapshot};
use std::collections::BTreeMap;
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::{Arc, Condvar, Mutex, mpsc};
use tokio::sync::oneshot;
use tower_lsp::lsp_types::{
    Diagnostic, DiagnosticRelatedInformation, DiagnosticSeverity, Hover, HoverContents, Location, MarkupContent,
    MarkupKind, NumberOrString, Position, TextDocumentContentChangeEvent, Url,
};

/// What handlers say to the state thread.
pub enum Message {
    /// How the client counts columns.
    Encoding(Encoding),
    /// A document is open.
    Open { uri: Url, version: i32, text: String },
    /// A document changed.
    Change { uri: Url, version: i32, changes: Vec<TextDocumentContentChangeEvent> },
    /// A document is closed.
    Close { uri: Url },
    /// What is under the cursor?
    Hover { uri: Url, position: Position, reply: oneshot::Sender<Option<Hover>> },
}

/// Diagnostics on their way to the client.
pub struct Publish {
    /// Of which document.
    pub uri: Url,
    /// The full list; empty clears.
    pub diagnostics: Vec<Diagnostic>,
    /// The version that it belongs to.
    pub version: Option<i32>,
}

struct Document {
    text: String,
    version: i32,
}

/// Newest work for the analysis thread; older work is overwritten.
#[derive(Default)]
struct Mailbox {
    jobs: Mutex<BTreeMap<Url, Job>>,
    wake: Condvar,
}

struct Job {
    snapshot: Snapshot,
    path: String,
    version: i32,
    generation: u64,
    encoding: Encoding,
}

struct Shared {
    mailbox: Mailbox,
    generation: AtomicU64,
    /// Last results of each document, for hovers.
    results: Mutex<BTreeMap<Url, (i32, Arc<Compilation>)>>,
}

/// Starts both threads.
pub fn start(publish: impl Fn(Publish) + Send + Sync + 'static) -> mpsc::Sender<Message> {
    let (sender, receiver) = mpsc::channel();
    let publish: Arc<dyn Fn(Publish) + Send + Sync> = Arc::new(publish);
    let shared =
        Arc::new(Shared { mailbox: Mailbox::default(), generation: AtomicU64::new(0), results: Mutex::default() });
    let (for_analysis, shown) = (shared.clone(), publish.clone());
    std::thread::spawn(move || analyse(&for_analysis, &*shown));
    std::thread::spawn(move || own(&receiver, &shared, &*publish));
    sender
}

/// A name for files that the compiler reads: the path of the file, or the address itself.
fn path_of(uri: &Url) -> String {
    uri.to_file_path().ok().and_then(|path| path.to_str().map(String::from)).unwrap_or_else(|| uri.to_string())
}

fn own(receiver: &mpsc::Receiver<Message>, shared: &Shared, publish: &dyn Fn(Publish)) {
    let mut host = Host::new();
    let mut documents: BTreeMap<Url, Document> = BTreeMap::new();
    let mut encoding = Encoding::Utf16;
    while let Ok(first) = receiver.recv() {
        // Everything that waits is taken before any work begins.
        let mut waiting = vec![first];
        waiting.extend(receiver.try_iter());
        let mut changed: Vec<Url> = Vec::new();
        for message in waiting {
            match message {
                Message::Encoding(chosen) => encoding = chosen,
                Message::Open { uri, version, text } => {
                    host.set_text(&path_of(&uri), &text);
                    documents.insert(uri.clone(), Document { text, version });
                    changed.push(uri);
                }
                Message::Change { uri, version, changes } => {
                    // An edit of an unknown or newer document is never guessed at.
                    let Some(document) = documents.get_mut(&uri).filter(|document| document.version < version) else {
                        continue;
                    };
                    for change in changes {
                        match change.range {
                            None => document.text = change.text,
                            Some(range) => {
                                let positions = Positions::new(&document.text, encoding);
                                let (start, end) = (positions.offset(range.start), positions.offset(range.end));
                                if start <= end {
                                    document.text.replace_range(start..end, &change.text);
                                }
                            }
                        }
                    }
                    document.version = version;
                    host.set_text(&path_of(&uri), &document.text);
                    changed.push(uri);
                }
                Message::Close { uri } => {
                    host.close(&path_of(&uri));
                    documents.remove(&uri);
                    changed.retain(|it| *it != uri);
                    lock(&shared.mailbox.jobs).remove(&uri);
                    lock(&shared.results).remove(&uri);
                    shared.generation.fetch_add(1, Ordering::SeqCst);
                    publish(Publish { uri, diagnostics: Vec::new(), version: None });
                }
                Message::Hover { uri, position, reply } => {
                    // A closed reply is a cancelled request.
                    if !reply.is_closed() {
                        let hover = documents
                            .get(&uri)
                            .and_then(|document| hover(shared, &host, &uri, document, position, encoding));
                        let _ = reply.send(hover);
                    }
                }
            }
        }
        if changed.is_empty() {
            continue;
        }
        let generation = shared.generation.fetch_add(1, Ordering::SeqCst) + 1;
        changed.sort();
        changed.dedup();
        for uri in changed {
            let Some(document) = documents.get(&uri) else { continue };
            let (snapshot, path) = (host.snapshot(), path_of(&uri));
            // Syntax at once; a clean text waits for the full list.
            let syntax = snapshot.syntax_diagnostics(&path);
            if !syntax.is_empty() {
                let diagnostics = to_lsp(&uri, &document.text, &syntax, encoding);
                publish(Publish { uri: uri.clone(), diagnostics, version: Some(document.version) });
            }
            let job = Job { snapshot, path, version: document.version, generation, encoding };
            lock(&shared.mailbox.jobs).insert(uri, job);
        }
        shared.mailbox.wake.notify_one();
    }
}

fn lock<T>(mutex: &Mutex<T>) -> std::sync::MutexGuard<'_, T> {
    mutex.lock().unwrap_or_else(std::sync::PoisonError::into_inner)
}

fn analyse(shared: &Shared, publish: &dyn Fn(Publish)) {
    loop {
        let mut jobs = lock(&shared.mailbox.jobs);
        while jobs.is_empty() {
            jobs = shared.mailbox.wake.wait(jobs).unwrap_or_else(std::sync::PoisonError::into_inner);
        }
        let Some((uri, job)) = jobs.pop_first() else { continue };
        drop(jobs);
        let text = job.snapshot.text(&job.path).unwrap_or("").to_string();
        let compiled = std::panic::catch_unwind(std::panic::AssertUnwindSafe(|| job.snapshot.compile(&job.path)));
        let diagnostics = match &compiled {
            Ok(Some(compilation)) => to_lsp(&uri, &text, &Snapshot::diagnostics(&job.path, compilation), job.encoding),
            Ok(None) => continue,
            Err(_) => vec![Diagnostic {
                severity: Some(DiagnosticSeverity::ERROR),
                code: Some(NumberOrString::String("internal-fault".into())),
                source: Some("pintle".into()),
                message: "internal fault while reading this sheet; please report it".into(),
                ..Diagnostic::default()
            }],
        };
        // Overtaken by a newer edit of this document: say nothing.
        if lock(&shared.mailbox.jobs).contains_key(&uri) {
            continue;
        }
        let newest = shared.generation.load(Ordering::SeqCst);
        if let Ok(Some(compilation)) = compiled {
            lock(&shared.results).insert(uri.clone(), (job.version, Arc::new(compilation)));
        }
        if job.generation <= newest {
            publish(Publish { uri, diagnostics, version: Some(job.version) });
        }
    }
}

fn hover(
    shared: &Shared,
    host: &Host,
    uri: &Url,
    document: &Document,
    position: Position,
    encoding: Encoding,
) -> Option<Hover> {
    let positions = Positions::new(&document.text, encoding);
    let offset = positions.offset(position) as u32;
    let known = lock(&shared.results).get(uri).cloned();
    let (version, compilation) = match known {
        Some(known) => known,
        // The first hover may come before the first analysis.
        None => (document.version, Arc::new(host.snapshot().compile(&path_of(uri))?)),
    };
    let hover = Snapshot::hover(&document.text, &compilation, offset)?;
    let value = if version == document.version {
        hover.markdown
    } else {
        format!("{}\n\n(of the text before the last edit)", hover.markdown)
    };
    Some(Hover {
        contents: HoverContents::Markup(MarkupContent { kind: MarkupKind::Markdown, value }),
        range: Some(positions.range(hover.range.0, hover.range.1)),
    })
}

fn to_lsp(uri: &Url, text: &str, found: &[FileDiagnostic], encoding: Encoding) -> Vec<Diagnostic> {
    let positions = Positions::new(text, encoding);
    let own = path_of(uri);
    found
        .iter()
        .map(|it| {
            let related: Vec<DiagnosticRelatedInformation> = it
                .related
                .iter()
                // Places in other files need their text; the words are in the message's help.
                .filter(|(path, ..)| *path == own)
                .map(|(_, start, end, words)| DiagnosticRelatedInformation {
                    location: Location { uri: uri.clone(), range: positions.range(*start, *end) },
                    message: words.clone(),
                })
                .collect();
            let message = match &it.help {
                Some(help) => format!("{}\n{help}", it.message),
                None => it.message.clone(),
            };
            Diagnostic {
                range: positions.range(it.start, it.end),
                severity: Some(match it.severity {
                    pintle_text::Severity::Error => DiagnosticSeverity::ERROR,
                    pintle_text::Severity::Warning => DiagnosticSeverity::WARNING,
                    pintle_text::Severity::Hint => DiagnosticSeverity::HINT,
                }),
                code: Some(NumberOrString::String(it.code.into())),
                source: Some("pintle".into()),
                message,
                related_information: (!related.is_empty()).then_some(related),
                ..Diagnostic::default()
            }
        })
        .collect()
}

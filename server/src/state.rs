//! The state thread: the one owner of the documents.
//!
//! It applies edits in the order of arrival, answers questions from the newest
//! results, and is the only one that publishes. An outcome of the analysis is
//! shown only if no text that it depends on has changed since, so that what a
//! client sees never goes back.

use crate::analyst::{self, Analysed, Compile, Job, Mailbox};
use crate::convert::{self, Age, Page, path_of};
use crate::documents::{Document, EditFault};
use crate::guard::panic_words;
use crate::log::Log;
use crate::lsp::notification::{PublishDiagnostics, ShowMessage};
use crate::lsp::{
    Diagnostic, Hover, MessageType, Position, PublishDiagnosticsParams, ShowMessageParams,
    TextDocumentContentChangeEvent, Url,
};
use crate::outbox::Outbox;
use crate::position::{Encoding, Positions};
use pintle::Compilation;
use pintle::analysis::{FileDiagnostic, Host, Snapshot};
use pintle::source::Origin;
use std::collections::{BTreeMap, BTreeSet};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::Arc;
use std::sync::mpsc::{Receiver, RecvTimeoutError, Sender, channel};
use std::time::{Duration, Instant};
use tokio::sync::oneshot;

/// How long a question waits for the results of the newest text.
const PATIENCE: Duration = Duration::from_millis(200);
/// Sheets nest to a bounded depth, but each level of it costs stack.
const STACK: usize = 64 << 20;

/// What the state thread is told.
pub(crate) enum Message {
    /// How the client counts columns.
    Encoding(Encoding),
    /// A document is open.
    Open { uri: Url, version: i32, text: String },
    /// A document changed.
    Change { uri: Url, version: i32, changes: Vec<TextDocumentContentChangeEvent> },
    /// A document is closed.
    Close { uri: Url },
    /// Files on the disk may have changed.
    DiskChanged,
    /// What is under the cursor?
    Hover { uri: Url, position: Position, reply: oneshot::Sender<Option<Hover>> },
    /// The analysis of one document is done.
    Analysed(Analysed),
    /// The client has left.
    Stop,
}

/// Starts both threads.
pub(crate) fn start(outbox: Outbox, compile: Compile, log: Log) -> std::io::Result<Sender<Message>> {
    let (sender, receiver) = channel();
    let mailbox = Arc::new(Mailbox::default());
    let (for_analysis, report, log_there) = (mailbox.clone(), sender.clone(), log.clone());
    std::thread::Builder::new().name("analysis".into()).stack_size(STACK).spawn(move || {
        let report = |analysed| {
            // Fails only when the server ends.
            let _ = report.send(Message::Analysed(analysed));
        };
        analyst::work(&for_analysis, compile, report, &log_there);
    })?;
    let state = State {
        host: Host::new(),
        open: BTreeMap::new(),
        touched: BTreeSet::new(),
        encoding: Encoding::Utf16,
        generation: 0,
        waiting: Vec::new(),
        mailbox,
        outbox,
        log,
    };
    std::thread::Builder::new().name("state".into()).stack_size(STACK).spawn(move || state.run(&receiver))?;
    Ok(sender)
}

struct State {
    host: Host,
    open: BTreeMap<Url, Open>,
    /// Documents whose text changed since the last look at them.
    touched: BTreeSet<Url>,
    encoding: Encoding,
    /// Number of the present state of all texts.
    generation: u64,
    waiting: Vec<Waiting>,
    mailbox: Arc<Mailbox>,
    outbox: Outbox,
    log: Log,
}

/// An open document with what is known of it.
struct Open {
    path: String,
    document: Document,
    /// The state of all texts that the newest job is for.
    wanted: u64,
    /// Faults of the text alone.
    syntax: Vec<FileDiagnostic>,
    /// The newest outcome, and the state that it belongs to.
    results: Option<(u64, Arc<Compilation>)>,
}

/// A question that waits for the results of its text.
struct Waiting {
    uri: Url,
    text: String,
    position: Position,
    deadline: Instant,
    reply: oneshot::Sender<Option<Hover>>,
}

impl State {
    fn run(mut self, receiver: &Receiver<Message>) {
        loop {
            let first = match self.waiting.iter().map(|it| it.deadline).min() {
                None => receiver.recv().map_err(|_| RecvTimeoutError::Disconnected),
                Some(deadline) => receiver.recv_timeout(deadline.saturating_duration_since(Instant::now())),
            };
            if matches!(first, Err(RecvTimeoutError::Disconnected)) {
                break;
            }
            // Everything that waits is taken before any work begins.
            for message in first.into_iter().chain(receiver.try_iter()) {
                if matches!(message, Message::Stop) {
                    return self.mailbox.close();
                }
                self.take(message);
            }
            self.look_at_touched();
            self.answer_overdue();
        }
        self.mailbox.close();
    }

    /// A message that panics costs itself, and its document if it was an edit.
    fn take(&mut self, message: Message) {
        let edited = match &message {
            Message::Open { uri, .. } | Message::Change { uri, .. } => Some(uri.clone()),
            _ => None,
        };
        if let Err(panic) = catch_unwind(AssertUnwindSafe(|| self.handle(message))) {
            self.log.line(format_args!("panic in the state thread: {}", panic_words(&*panic)));
            if let Some(uri) = edited {
                self.lose(&uri);
            }
        }
    }

    fn handle(&mut self, message: Message) {
        match message {
            Message::Encoding(encoding) => self.encoding = encoding,
            Message::Open { uri, version, text } => {
                self.answer_all(&uri);
                let document = Document::new(text, version);
                let open = Open { path: path_of(&uri), document, wanted: 0, syntax: Vec::new(), results: None };
                self.open.insert(uri.clone(), open);
                self.touched.insert(uri);
            }
            Message::Change { uri, version, changes } => self.change(uri, version, changes),
            Message::Close { uri } => self.close(&uri),
            Message::DiskChanged => self.touched.extend(self.open.keys().cloned()),
            Message::Hover { uri, position, reply } => self.hover(uri, position, reply),
            Message::Analysed(analysed) => self.analysed(analysed),
            Message::Stop => {}
        }
    }

    fn change(&mut self, uri: Url, version: i32, changes: Vec<TextDocumentContentChangeEvent>) {
        // Questions asked before the edit are answered from what was known then.
        self.answer_all(&uri);
        let Some(open) = self.open.get_mut(&uri) else {
            return self.log.line(format_args!("an edit of {uri}, which is not open"));
        };
        match open.document.apply(version, changes, self.encoding) {
            Ok(()) => {
                self.touched.insert(uri);
            }
            Err(EditFault::Lost) => {}
            Err(EditFault::NotNewer) => self.log.line(format_args!("{uri}: version {version} is not newer")),
            Err(EditFault::OutOfText) => self.lose(&uri),
        }
    }

    /// The text in the editor is not known any more. Nothing is guessed: no
    /// diagnostics, no answers, until the client sends the whole text.
    fn lose(&mut self, uri: &Url) {
        let Some(open) = self.open.get_mut(uri) else { return };
        open.document.lost = true;
        open.results = None;
        let (path, version) = (open.path.clone(), open.document.version);
        self.log.line(format_args!("{uri}: edit {version} does not fit the text"));
        self.mailbox.withdraw(uri);
        self.touched.remove(uri);
        self.publish(uri, Vec::new(), Some(version));
        let message = format!("Pintle has lost track of {path}: please close it and open it again.");
        self.outbox.notify::<ShowMessage>(ShowMessageParams { typ: MessageType::ERROR, message });
    }

    fn close(&mut self, uri: &Url) {
        self.answer_all(uri);
        let Some(open) = self.open.remove(uri) else { return };
        self.host.close(&open.path);
        self.mailbox.withdraw(uri);
        self.touched.remove(uri);
        self.publish(uri, Vec::new(), None);
        // Whoever uses it reads it from the disk from now on.
        let users = self.users_of(&open.path);
        self.touched.extend(users);
    }

    fn analysed(&mut self, analysed: Analysed) {
        let Analysed { uri, generation, compilation } = analysed;
        let Some(open) = self.open.get_mut(&uri).filter(|open| !open.document.lost) else { return };
        // To be dropped when all is said: a large outcome takes a while to take apart.
        let mut _displaced = None;
        if let Some(compilation) = &compilation {
            _displaced = open.results.replace((generation, compilation.clone()));
        }
        // Overtaken: good enough for a hover, not for a list that stands until the next one.
        // An edit taken since has changed the text already, though not yet what is wanted.
        if open.wanted != generation || self.touched.contains(&uri) {
            return;
        }
        let Some(open) = self.open.get(&uri) else { return };
        let page =
            Page { uri: &uri, text: &open.document.text, encoding: self.encoding, compilation: compilation.as_deref() };
        let diagnostics = match &compilation {
            Some(compilation) => page.diagnostics(&Snapshot::diagnostics(&open.path, compilation)),
            None => {
                let mut list = page.diagnostics(&open.syntax);
                list.push(convert::internal_fault());
                list
            }
        };
        self.publish(&uri, diagnostics, Some(open.document.version));
        self.answer_all(&uri);
    }

    /// Hands changed texts on, says at once what is wrong with the text alone,
    /// and has the rest computed.
    fn look_at_touched(&mut self) {
        if self.touched.is_empty() {
            return;
        }
        let touched = std::mem::take(&mut self.touched);
        self.generation += 1;
        let mut users = BTreeSet::new();
        for uri in &touched {
            let Some(open) = self.open.get(uri) else { continue };
            self.host.set_text(&open.path, &open.document.text);
            users.extend(self.users_of(&open.path));
        }
        let snapshot = self.host.snapshot();
        for uri in &touched {
            self.look_at_syntax(uri, &snapshot);
        }
        // The edited ones last, so that they are computed first.
        for uri in users.difference(&touched).chain(&touched) {
            let Some(open) = self.open.get_mut(uri).filter(|open| !open.document.lost) else { continue };
            open.wanted = self.generation;
            let (uri, path) = (uri.clone(), open.path.clone());
            self.mailbox.put(Job { uri, path, snapshot: snapshot.clone(), generation: self.generation });
        }
    }

    fn look_at_syntax(&mut self, uri: &Url, snapshot: &Snapshot) {
        let Some(open) = self.open.get_mut(uri).filter(|open| !open.document.lost) else { return };
        let found = catch_unwind(AssertUnwindSafe(|| snapshot.syntax_diagnostics(&open.path)));
        // A panic comes again in the analysis, which says so.
        let found = found.unwrap_or_default();
        // Published now, a list hides all that only the analysis knows: so only when it says something new.
        let words = |list: &[FileDiagnostic]| list.iter().map(|it| (it.code, it.message.clone())).collect::<Vec<_>>();
        let is_new = !found.is_empty() && words(&found) != words(&open.syntax);
        open.syntax = found;
        if is_new && let Some(open) = self.open.get(uri) {
            let page = Page { uri, text: &open.document.text, encoding: self.encoding, compilation: None };
            self.publish(uri, page.diagnostics(&open.syntax), Some(open.document.version));
        }
    }

    /// Other open documents whose last outcome used the file, or missed one.
    /// While an outcome is still awaited, nobody knows what it will have used.
    fn users_of(&self, path: &str) -> Vec<Url> {
        let uses = |open: &Open| {
            open.results.as_ref().is_none_or(|(generation, compilation)| {
                if *generation != open.wanted {
                    return true;
                }
                let files = compilation.sources.files();
                files.iter().any(|file| file.origin == Origin::Used && file.path == path)
                    || compilation.diagnostics.iter().any(|it| it.code == pintle::codes::UNREADABLE_FILE)
            })
        };
        self.open.iter().filter(|(_, open)| open.path != path && uses(open)).map(|(uri, _)| uri.clone()).collect()
    }

    fn publish(&self, uri: &Url, diagnostics: Vec<Diagnostic>, version: Option<i32>) {
        let params = PublishDiagnosticsParams { uri: uri.clone(), diagnostics, version };
        self.outbox.notify::<PublishDiagnostics>(params);
    }

    fn hover(&mut self, uri: Url, position: Position, reply: oneshot::Sender<Option<Hover>>) {
        // A closed reply is a cancelled request.
        if reply.is_closed() {
            return;
        }
        let Some(open) = self.open.get(&uri).filter(|open| !open.document.lost) else {
            let _ = reply.send(None);
            return;
        };
        let current = !self.touched.contains(&uri)
            && open.results.as_ref().is_some_and(|(generation, _)| *generation == open.wanted);
        let text = open.document.text.clone();
        let waiting = Waiting { uri, text, position, deadline: Instant::now() + PATIENCE, reply };
        if current { self.answer(waiting) } else { self.waiting.push(waiting) }
    }

    fn answer(&self, waiting: Waiting) {
        let Waiting { uri, text, position, reply, .. } = waiting;
        if reply.is_closed() {
            return;
        }
        let hover = self.open.get(&uri).and_then(|open| {
            let (generation, compilation) = open.results.as_ref()?;
            let current = *generation == open.wanted && !self.touched.contains(&uri);
            let age = if current { Age::Current } else { Age::Earlier };
            let positions = Positions::new(&text, self.encoding);
            let found = Snapshot::hover(&text, compilation, positions.offset(position) as u32)?;
            Some(convert::hover(found, &positions, age))
        });
        // Cancelled in the meantime, perhaps.
        let _ = reply.send(hover);
    }

    fn answer_all(&mut self, uri: &Url) {
        self.answer_where(|waiting| waiting.uri == *uri);
    }

    fn answer_overdue(&mut self) {
        let now = Instant::now();
        self.answer_where(|waiting| waiting.deadline <= now || waiting.reply.is_closed());
    }

    fn answer_where(&mut self, due: impl Fn(&Waiting) -> bool) {
        for waiting in self.waiting.extract_if(.., |waiting| due(waiting)).collect::<Vec<_>>() {
            // A panic drops the reply, and the handler answers with an error.
            if let Err(panic) = catch_unwind(AssertUnwindSafe(|| self.answer(waiting))) {
                self.log.line(format_args!("panic in an answer: {}", panic_words(&*panic)));
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A state without threads behind it; what it publishes comes out of the pipe.
    fn state() -> (State, std::io::PipeReader) {
        let (reader, writer) = std::io::pipe().expect("a pipe");
        let outbox = Outbox::start(writer, Log::nowhere()).expect("a thread");
        let state = State {
            host: Host::new(),
            open: BTreeMap::new(),
            touched: BTreeSet::new(),
            encoding: Encoding::Utf16,
            generation: 0,
            waiting: Vec::new(),
            mailbox: Arc::default(),
            outbox,
            log: Log::nowhere(),
        };
        (state, reader)
    }

    fn outcome(state: &State, uri: &Url) -> Message {
        let open = &state.open[uri];
        let compilation = state.host.snapshot().compile(&open.path, &|| false).expect("an open file");
        Message::Analysed(Analysed {
            uri: uri.clone(),
            generation: open.wanted,
            compilation: Some(Arc::new(compilation)),
        })
    }

    /// All that was written until the state was dropped.
    fn written((state, mut reader): (State, std::io::PipeReader)) -> String {
        drop(state);
        let mut words = String::new();
        std::io::Read::read_to_string(&mut reader, &mut words).expect("text");
        words
    }

    fn change(uri: &Url, text: &str) -> Message {
        let change = TextDocumentContentChangeEvent { range: None, range_length: None, text: text.into() };
        Message::Change { uri: uri.clone(), version: 2, changes: vec![change] }
    }

    /// The outcome of the first text arrives before or behind an edit that nobody has looked at yet.
    #[track_caller]
    fn check_outcome_and_edit(edit_first: bool, published: usize) {
        let uri = Url::parse("file:///nowhere/sheet.pintle").expect("an address");
        let (mut state, reader) = state();
        state.take(Message::Open { uri: uri.clone(), version: 1, text: "a = 3 kg + 2 m\n".into() });
        state.look_at_touched();
        let (outcome, edit) = (outcome(&state, &uri), change(&uri, "\n\na = 3 kg\n"));
        for message in if edit_first { [edit, outcome] } else { [outcome, edit] } {
            state.take(message);
        }
        let words = written((state, reader));
        assert_eq!(words.matches("unit-mismatch").count(), published, "{words}");
        assert!(!words.contains("\"version\":2"), "{words}");
    }

    #[test]
    fn an_outcome_behind_an_edit_in_one_batch_is_not_published_for_the_newer_text() {
        check_outcome_and_edit(false, 1);
        check_outcome_and_edit(true, 0);
    }
}

//! The one thread that owns what is known: open texts, files, and the snapshot made of them.
//!
//! Handlers only push events, before their first wait, so events arrive here in the client's order. The owner takes all
//! that have arrived, works the changes in, makes one snapshot for the newest state, hands questions with that snapshot to a
//! pool, and publishes findings. Nobody else publishes, and what has been overtaken by a newer change is not published, so
//! findings never go back in time.

use std::sync::Arc;
use std::sync::mpsc::{Receiver, Sender, channel};
use std::thread;

use camino::{Utf8Path, Utf8PathBuf};
use rayon::{ThreadPool, ThreadPoolBuilder};
use tower_lsp::Client;
use tower_lsp::jsonrpc::{Error, ErrorCode, Result};
use tower_lsp::lsp_types::{TextDocumentContentChangeEvent, TextDocumentItem, Url};

use super::capabilities::Session;
use super::documents::{Document, Documents, Revisions};
use super::guard::{Fault, guarded};
use super::publish::Published;
use super::{from_proto, log};
use crate::text::SourceText;

/// Stack of the threads that compute: the parser recurses, and must reach its own limit first.
const STACK: usize = 16 * 1024 * 1024;

/// What the client did.
pub enum Event {
    /// Opened a text.
    Open { path: Utf8PathBuf, revision: u64, item: TextDocumentItem },
    /// Changed an open text.
    Change { path: Utf8PathBuf, revision: u64, version: i32, changes: Vec<TextDocumentContentChangeEvent> },
    /// Closed a text.
    Close { path: Utf8PathBuf },
    /// Asked something.
    Question(Question),
}

/// A question about one text, to be answered from a snapshot.
pub struct Question {
    path: Utf8PathBuf,
    /// The change after which it was asked.
    revision: u64,
    kind: Kind,
    answer: Box<dyn FnOnce(std::result::Result<&View, Overtaken>) + Send>,
}

/// What a change that comes after a question does to its answer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// The answer speaks of places in the text and would be wrong now. The client asks again after a change.
    Places,
    /// The answer stays useful, since the client carries it along with what is typed; it needs the state it asked about.
    Typing,
}

/// The text was changed before the question could be answered.
#[derive(Clone, Copy, Debug)]
pub struct Overtaken;

/// What is known at one moment; never changes.
#[derive(Clone)]
pub struct View {
    /// What was agreed with the client.
    pub session: Arc<Session>,
    /// The texts that are open.
    pub documents: Arc<Documents>,
}

/// The handlers' end: events in, answers out.
#[derive(Clone)]
pub struct World {
    events: Sender<Event>,
    revisions: Revisions,
    session: Arc<Session>,
}

impl World {
    /// Starts the owner thread.
    pub fn start(session: Session, client: Client) -> World {
        let (events, arriving) = channel();
        let world = World { events, revisions: Revisions::default(), session: Arc::new(session) };
        let owner = Owner {
            arriving,
            revisions: world.revisions.clone(),
            session: Arc::clone(&world.session),
            documents: Arc::default(),
            published: Published::new(client),
            pool: pool(),
        };
        if let Err(error) = thread::Builder::new().name("world".into()).stack_size(STACK).spawn(move || owner.run()) {
            log::write(format_args!("no thread for the world: {error}"));
        }
        world
    }

    /// What was agreed with the client.
    pub fn session(&self) -> &Session {
        &self.session
    }

    /// The client opened a text.
    pub fn open(&self, item: TextDocumentItem) {
        let path = self.path(&item.uri);
        let revision = self.revisions.advance(&path);
        self.push(Event::Open { path, revision, item });
    }

    /// The client changed a text.
    pub fn change(&self, uri: &Url, version: i32, changes: Vec<TextDocumentContentChangeEvent>) {
        let path = self.path(uri);
        let revision = self.revisions.advance(&path);
        self.push(Event::Change { path, revision, version, changes });
    }

    /// The client closed a text.
    pub fn close(&self, uri: &Url) {
        let path = self.path(uri);
        self.revisions.advance(&path);
        self.push(Event::Close { path });
    }

    /// Asks something about a text. The question is in its place among the changes when this returns; only the answer is
    /// waited for.
    ///
    /// # Errors
    /// `ContentModified` where the text was changed meanwhile, an internal error where answering failed.
    pub fn ask<T: Send + 'static>(
        &self,
        uri: &Url,
        kind: Kind,
        compute: impl FnOnce(&View, &Utf8Path) -> T + Send + 'static,
    ) -> impl Future<Output = Result<T>> + Send + 'static {
        let path = self.path(uri);
        let revision = self.revisions.latest(&path);
        let (reply, answer) = tokio::sync::oneshot::channel();
        let asked = path.clone();
        let work = move |view: std::result::Result<&View, Overtaken>| {
            // A client that has cancelled no longer waits; its answer need not be computed.
            if reply.is_closed() {
                return;
            }
            let computed = match view {
                Ok(view) => guarded(|| compute(view, &asked)).map_err(Refusal::Fault),
                Err(Overtaken) => Err(Refusal::Overtaken),
            };
            let _ = reply.send(computed);
        };
        self.push(Event::Question(Question { path: path.clone(), revision, kind, answer: Box::new(work) }));
        let revisions = self.revisions.clone();
        async move {
            match answer.await {
                Ok(Ok(_)) if kind == Kind::Places && revisions.latest(&path) != revision => Err(Error::content_modified()),
                Ok(Ok(value)) => Ok(value),
                Ok(Err(Refusal::Overtaken)) => Err(Error::content_modified()),
                Ok(Err(Refusal::Fault(fault))) => Err(failed(&fault)),
                // The owner is gone: the server is leaving.
                Err(_) => Err(Error::request_cancelled()),
            }
        }
    }

    fn path(&self, uri: &Url) -> Utf8PathBuf {
        let folder = self.session.folders.first().map_or(Utf8Path::new("/"), |folder| folder.as_path());
        from_proto::path(uri, folder)
    }

    fn push(&self, event: Event) {
        if self.events.send(event).is_err() {
            log::write(format_args!("the world has ended"));
        }
    }
}

/// Why there is no answer.
enum Refusal {
    Overtaken,
    Fault(Fault),
}

fn failed(fault: &Fault) -> Error {
    let message = format!("This is a fault of scruple, not of the recipe: {fault}");
    Error { code: ErrorCode::InternalError, message: message.into(), data: None }
}

/// Threads for answers: enough that a slow one holds up no quick one, few enough to leave the machine to the editor.
fn pool() -> Option<ThreadPool> {
    let threads = thread::available_parallelism().map_or(2, |count| count.get().clamp(2, 8));
    let builder = ThreadPoolBuilder::new().num_threads(threads).stack_size(STACK).thread_name(|index| format!("answer-{index}"));
    builder.build().inspect_err(|error| log::write(format_args!("no threads for answers: {error}"))).ok()
}

/// The owner of all that is known.
struct Owner {
    arriving: Receiver<Event>,
    revisions: Revisions,
    session: Arc<Session>,
    documents: Arc<Documents>,
    published: Published,
    pool: Option<ThreadPool>,
}

impl Owner {
    /// Takes events until the handlers are gone.
    fn run(mut self) {
        while let Ok(first) = self.arriving.recv() {
            let questions = self.take_all(first);
            if let Err(fault) = guarded(|| self.answer(questions)) {
                log::write(format_args!("questions were dropped: {fault}"));
            }
            if let Err(fault) = guarded(|| self.publish()) {
                log::write(format_args!("findings were not published: {fault}"));
            }
        }
    }

    /// Works in all changes that have arrived, up to a question that needs the state it was asked about.
    fn take_all(&mut self, first: Event) -> Vec<Question> {
        let mut questions = Vec::new();
        let mut next = Some(first);
        while let Some(event) = next {
            match event {
                Event::Question(question) => {
                    let barrier = question.kind == Kind::Typing;
                    questions.push(question);
                    if barrier {
                        break;
                    }
                }
                change => {
                    if let Err(fault) = guarded(|| self.work_in(change)) {
                        log::write(format_args!("a change failed: {fault}"));
                    }
                }
            }
            next = self.arriving.try_recv().ok();
        }
        questions
    }

    fn work_in(&mut self, change: Event) {
        let documents = Arc::make_mut(&mut self.documents);
        match change {
            Event::Open { path, revision, item } => {
                let text = SourceText::from(item.text.as_str());
                documents.open(path, Document { uri: item.uri, version: item.version, text, revision });
            }
            Event::Change { path, revision, version, changes } => {
                if !documents.change(&path, version, revision, changes, self.session.columns) {
                    log::write(format_args!("a change to {path}, which is not open"));
                }
            }
            Event::Close { path } => {
                if let Some(document) = documents.close(&path) {
                    self.published.clear(&document.uri);
                }
            }
            Event::Question(_) => (),
        }
    }

    fn answer(&self, questions: Vec<Question>) {
        if questions.is_empty() {
            return;
        }
        let view = View { session: Arc::clone(&self.session), documents: Arc::clone(&self.documents) };
        for question in questions {
            let applied = self.documents.get(&question.path).map_or(question.revision, |document| document.revision);
            if applied != question.revision {
                (question.answer)(Err(Overtaken));
                continue;
            }
            let view = view.clone();
            let answer = move || (question.answer)(Ok(&view));
            match &self.pool {
                Some(pool) => pool.spawn_fifo(answer),
                None => answer(),
            }
        }
    }

    fn publish(&mut self) {
        for (path, document) in self.documents.iter() {
            if self.revisions.latest(path) == document.revision {
                self.published.publish(&document.uri, document.version, Vec::new());
            }
        }
    }
}

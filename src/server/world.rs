//! The handlers' end of the world: events go in, answers come out.
//!
//! Handlers only push events, before their first wait, so events reach the owner (see `owner`) in the client's order.

use std::sync::Arc;
use std::sync::mpsc::{Sender, channel};
use std::thread;

use camino::{Utf8Path, Utf8PathBuf};
use tower_lsp::Client;
use tower_lsp::jsonrpc::{Error, ErrorCode, Result};
use tower_lsp::lsp_types::{TextDocumentContentChangeEvent, TextDocumentItem, Url};

use super::capabilities::Session;
use super::documents::Revisions;
use super::guard::{Fault, guarded};
use super::owner::Owner;
use super::settings::Settings;
use super::view::View;
use super::{from_proto, log};

/// Stack of the threads that compute: the parser recurses, and must reach its own limit first.
pub const STACK: usize = 16 * 1024 * 1024;

/// What the client did.
#[allow(missing_docs, reason = "the fields are the protocol's")]
pub enum Event {
    /// Opened a text.
    Open { path: Utf8PathBuf, revision: u64, item: TextDocumentItem },
    /// Changed an open text.
    Change { path: Utf8PathBuf, revision: u64, version: i32, changes: Vec<TextDocumentContentChangeEvent> },
    /// Saved an open text.
    Save,
    /// Closed a text.
    Close { path: Utf8PathBuf },
    /// Opened and closed folders.
    Folders { opened: Vec<Utf8PathBuf>, closed: Vec<Utf8PathBuf> },
    /// Saw files change on disk.
    Disk(Vec<Utf8PathBuf>),
    /// Was told the user's settings.
    Settings(Settings),
    /// Asked something.
    Question(Question),
}

/// A question about one text, to be answered from a snapshot.
pub struct Question {
    /// The text.
    pub path: Utf8PathBuf,
    /// The change after which it was asked.
    pub revision: u64,
    /// What becomes of it when the text changes.
    pub kind: Kind,
    /// Computes and sends the answer.
    pub answer: Box<dyn FnOnce(std::result::Result<&View, Refusal>) + Send>,
}

/// What a change that comes after a question does to its answer.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kind {
    /// The answer speaks of places in the text and would be wrong now. The client asks again after a change.
    Places,
    /// The answer stays useful, since the client carries it along with what is typed; it needs the state it asked about.
    Typing,
}

/// Why there is no answer.
#[derive(Clone, Debug)]
pub enum Refusal {
    /// The text was changed before the question could be answered.
    Overtaken,
    /// A fault of our own.
    Fault(Fault),
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
    pub fn start(session: Session, settings: Settings, client: Client) -> World {
        let (events, arriving) = channel();
        let world = World { events, revisions: Revisions::default(), session: Arc::new(session) };
        let owner = Owner::new(arriving, world.revisions.clone(), Arc::clone(&world.session), settings, client);
        if let Err(error) = thread::Builder::new().name("world".into()).stack_size(STACK).spawn(move || owner.run()) {
            log::write(format_args!("no thread for the world: {error}"));
        }
        world.push(Event::Folders { opened: world.session.folders.clone(), closed: Vec::new() });
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

    /// The client saved a text.
    pub fn save(&self) {
        self.push(Event::Save);
    }

    /// The client opened and closed folders.
    pub fn folders(&self, opened: impl Iterator<Item = Url>, closed: impl Iterator<Item = Url>) {
        let opened = opened.filter_map(|uri| from_proto::file_path(&uri)).collect();
        let closed = closed.filter_map(|uri| from_proto::file_path(&uri)).collect();
        self.push(Event::Folders { opened, closed });
    }

    /// The client saw files change on disk.
    pub fn disk(&self, files: impl Iterator<Item = Url>) {
        self.push(Event::Disk(files.filter_map(|uri| from_proto::file_path(&uri)).collect()));
    }

    /// The user's settings have changed.
    pub fn settings(&self, settings: Settings) {
        self.push(Event::Settings(settings));
    }

    /// Asks something that is about no single text.
    ///
    /// # Errors
    /// An internal error where answering failed.
    pub fn ask_all<T: Send + 'static>(
        &self,
        compute: impl FnOnce(&View) -> T + Send + 'static,
    ) -> impl Future<Output = Result<T>> + Send + 'static {
        self.ask_path(Utf8PathBuf::new(), Kind::Typing, |view, _| compute(view))
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
        self.ask_path(self.path(uri), kind, compute)
    }

    fn ask_path<T: Send + 'static>(
        &self,
        path: Utf8PathBuf,
        kind: Kind,
        compute: impl FnOnce(&View, &Utf8Path) -> T + Send + 'static,
    ) -> impl Future<Output = Result<T>> + Send + 'static {
        let revision = self.revisions.latest(&path);
        let (reply, answer) = tokio::sync::oneshot::channel();
        let asked = path.clone();
        let work = move |view: std::result::Result<&View, Refusal>| {
            // A client that has cancelled no longer waits; its answer need not be computed.
            if !reply.is_closed() {
                let _ = reply.send(view.and_then(|view| guarded(|| compute(view, &asked)).map_err(Refusal::Fault)));
            }
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

    /// The path that an address stands for; see [`super::library`] for those of pages.
    fn path(&self, uri: &Url) -> Utf8PathBuf {
        let folder = self.session.folders.first().map_or(Utf8Path::new("/"), |folder| folder.as_path());
        let path = from_proto::path(uri, folder);
        self.session.pages.path(uri, Some(&path)).unwrap_or(path)
    }

    fn push(&self, event: Event) {
        if self.events.send(event).is_err() {
            log::write(format_args!("the world has ended"));
        }
    }
}

fn failed(fault: &Fault) -> Error {
    let message = format!("This is a fault of scruple, not of the recipe: {fault}");
    Error { code: ErrorCode::InternalError, message: message.into(), data: None }
}

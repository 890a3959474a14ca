//! The one thread that owns what is known: open texts, files, and the snapshot made of them.
//!
//! The owner takes all events that have arrived, works the changes in, makes one snapshot for the newest state, hands
//! questions with that snapshot to a pool, and publishes findings. Nobody else publishes, and what has been overtaken by a
//! newer change is not published, so findings never go back in time.

use std::collections::BTreeSet;
use std::sync::Arc;
use std::sync::mpsc::Receiver;
use std::thread;

use camino::{Utf8Path, Utf8PathBuf};
use rayon::{ThreadPool, ThreadPoolBuilder};
use tower_lsp::Client;

use super::capabilities::Session;
use super::documents::{Document, Documents, Revisions};
use super::guard::{Fault, guarded};
use super::publish::Published;
use super::view::View;
use super::world::{Event, Kind, Question, Refusal, STACK};
use super::{library, log, to_proto};
use crate::text::SourceText;
use crate::workspace::{CONFIGURATION_FILE, Snapshot, Workspace, find_root, is_home};

/// The owner of all that is known.
pub struct Owner {
    arriving: Receiver<Event>,
    revisions: Revisions,
    session: Arc<Session>,
    documents: Arc<Documents>,
    workspace: Workspace,
    /// The folders that the client has open.
    folders: BTreeSet<Utf8PathBuf>,
    /// The roots whose files have been read.
    roots: BTreeSet<Utf8PathBuf>,
    /// What is known of the newest state, or why nothing is.
    snapshot: Result<Arc<Snapshot>, Fault>,
    published: Published,
    pool: Option<ThreadPool>,
}

impl Owner {
    /// An owner of nothing yet.
    pub fn new(arriving: Receiver<Event>, revisions: Revisions, session: Arc<Session>, client: Client) -> Owner {
        Owner {
            arriving,
            revisions,
            session,
            documents: Arc::default(),
            workspace: Workspace::new(),
            folders: BTreeSet::new(),
            roots: BTreeSet::new(),
            snapshot: Ok(Arc::default()),
            published: Published::new(client),
            pool: pool(),
        }
    }

    /// Takes events until the handlers are gone.
    pub fn run(mut self) {
        while let Ok(first) = self.arriving.recv() {
            let (changed, questions) = self.take_all(first);
            if changed {
                self.snapshot = guarded(|| self.workspace.snapshot());
                if let Err(fault) = &self.snapshot {
                    log::write(format_args!("no snapshot: {fault}"));
                }
            }
            if let Err(fault) = guarded(|| self.answer(questions)) {
                log::write(format_args!("questions were dropped: {fault}"));
            }
            if changed && let Err(fault) = guarded(|| self.publish()) {
                log::write(format_args!("findings were not published: {fault}"));
            }
        }
    }

    /// Works in all changes that have arrived, up to a question that needs the state it was asked about. Says whether
    /// anything changed, and returns the questions.
    fn take_all(&mut self, first: Event) -> (bool, Vec<Question>) {
        let mut changed = false;
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
                    changed = true;
                    if let Err(fault) = guarded(|| self.work_in(change)) {
                        log::write(format_args!("a change failed: {fault}"));
                    }
                }
            }
            next = self.arriving.try_recv().ok();
        }
        (changed, questions)
    }

    fn work_in(&mut self, change: Event) {
        match change {
            Event::Open { path, revision, item } => {
                self.open_root_of(&path);
                let text = SourceText::from(item.text.as_str());
                let document = Document { uri: item.uri, version: item.version, text, revision };
                Arc::make_mut(&mut self.documents).open(path.clone(), document);
                self.hand_over(&path);
            }
            Event::Change { path, revision, version, changes } => {
                let documents = Arc::make_mut(&mut self.documents);
                if documents.change(&path, version, revision, changes, self.session.columns) {
                    self.hand_over(&path);
                } else {
                    log::write(format_args!("a change to {path}, which is not open"));
                }
            }
            Event::Close { path } => {
                if let Some(document) = Arc::make_mut(&mut self.documents).close(&path) {
                    self.published.clear(&document.uri);
                    self.workspace.close(&path);
                }
            }
            Event::Folders(folders) => {
                for folder in folders {
                    let root = self.workspace.open_root(&folder, &folder);
                    self.roots.insert(root);
                    self.folders.insert(folder);
                }
            }
            Event::Disk(files) => {
                for file in files {
                    self.reread(&file);
                }
            }
            // A client that watches files for us has said what changed.
            Event::Save if self.session.watches_files => (),
            Event::Save => {
                let known = self.snapshot.as_ref().map(|known| known.files.values().map(|file| file.path.clone()).collect());
                let known: Vec<Utf8PathBuf> = known.unwrap_or_default();
                for file in known {
                    self.workspace.reread(&file);
                }
                for root in self.roots.clone() {
                    self.workspace.open_root(&root, &root);
                }
            }
            Event::Question(_) => (),
        }
    }

    /// Reads the library of recipes that a file belongs to. A file outside all open folders and marked roots is read alone,
    /// with what it uses: nobody asked for the folder that it happens to lie in.
    fn open_root_of(&mut self, path: &Utf8Path) {
        if library::name(path).is_some() {
            return;
        }
        let within = self.folders.iter().filter(|folder| path.starts_with(folder) && !is_home(folder));
        let deepest = within.max_by_key(|folder| folder.as_str().len()).cloned();
        let parent = path.parent().unwrap_or(path);
        let root = find_root(path, deepest.as_deref().unwrap_or(parent));
        if deepest.is_none() && root == parent && !root.join(CONFIGURATION_FILE).is_file() {
            self.workspace.open_file(path, &root);
        } else if self.roots.insert(root.clone()) {
            self.workspace.open_root(path, &root);
        }
    }

    /// Gives the workspace the text of an open document. Pages of the built-in library are as they are.
    fn hand_over(&mut self, path: &Utf8Path) {
        if library::name(path).is_none()
            && let Some(document) = self.documents.get(path)
        {
            self.workspace.set_open_text(path, Arc::new(document.text.clone()));
        }
    }

    fn reread(&mut self, path: &Utf8Path) {
        match path.parent() {
            Some(folder) if path.file_name() == Some(CONFIGURATION_FILE) => {
                self.workspace.open_root(folder, folder);
            }
            _ if path.extension() == Some("prep") => self.workspace.reread(path),
            _ => (),
        }
    }

    fn answer(&self, questions: Vec<Question>) {
        for question in questions {
            let applied = self.documents.get(&question.path).map_or(question.revision, |document| document.revision);
            let snapshot = match &self.snapshot {
                _ if applied != question.revision => Err(Refusal::Overtaken),
                Ok(snapshot) => Ok(Arc::clone(snapshot)),
                Err(fault) => Err(Refusal::Fault(fault.clone())),
            };
            let snapshot = match snapshot {
                Ok(snapshot) => snapshot,
                Err(refusal) => {
                    (question.answer)(Err(refusal));
                    continue;
                }
            };
            let view = self.view(snapshot);
            let answer = move || (question.answer)(Ok(&view));
            match &self.pool {
                Some(pool) => pool.spawn_fifo(answer),
                None => answer(),
            }
        }
    }

    fn view(&self, snapshot: Arc<Snapshot>) -> View {
        View { session: Arc::clone(&self.session), documents: Arc::clone(&self.documents), snapshot }
    }

    /// Publishes what is known of each open text, unless a newer change of it is waiting: that one will be published.
    fn publish(&mut self) {
        let Ok(snapshot) = &self.snapshot else { return };
        let view = self.view(Arc::clone(snapshot));
        for (path, document) in view.documents.iter() {
            if self.revisions.latest(path) == document.revision {
                let findings = view.snapshot.file_by_path(path).map(|file| to_proto::findings(&view, file));
                self.published.publish(&document.uri, document.version, findings.unwrap_or_default());
            }
        }
        for root in view.snapshot.roots.values() {
            if let Some(uri) = to_proto::uri(&root.path.join(CONFIGURATION_FILE)) {
                self.published.publish_file(&uri, to_proto::configuration_errors(&root.configuration.errors));
            }
        }
    }
}

/// Threads for answers: enough that a slow one holds up no quick one, few enough to leave the machine to the editor.
fn pool() -> Option<ThreadPool> {
    let threads = thread::available_parallelism().map_or(2, |count| count.get().clamp(2, 8));
    let builder = ThreadPoolBuilder::new().num_threads(threads).stack_size(STACK).thread_name(|index| format!("answer-{index}"));
    builder.build().inspect_err(|error| log::write(format_args!("no threads for answers: {error}"))).ok()
}

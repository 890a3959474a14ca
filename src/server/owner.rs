//! The one thread that owns what is known: open texts, files, and the snapshot made of them.
//!
//! The owner takes all events that have arrived, works the changes in, makes one snapshot for the newest state, hands
//! questions with that snapshot to a pool, and publishes findings. Nobody else publishes, and what has been overtaken by a
//! newer change is not published, so findings never go back in time.

use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{Receiver, RecvTimeoutError};
use std::thread;

use camino::{Utf8Path, Utf8PathBuf};
use rayon::{ThreadPool, ThreadPoolBuilder};
use tokio::runtime::Handle;
use tower_lsp::Client;

use super::capabilities::Session;
use super::documents::{Document, Documents, Revisions};
use super::guard::{Fault, guarded};
use super::indexing::Indexing;
use super::publish::Published;
use super::settings::Settings;
use super::view::View;
use super::watch::{self, Watch};
use super::world::{Event, Kind, Question, Refusal, STACK};
use super::{library, log, to_proto};
use crate::text::SourceText;
use crate::workspace::{CONFIGURATION_FILE, Progress, Snapshot, Workspace, find_root, is_home};

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
    settings: Arc<Settings>,
    client: Client,
    published: Published,
    /// What a client that asks for findings would be told of each open text: its version and the name of the list.
    to_pull: BTreeMap<Utf8PathBuf, (i32, String)>,
    /// The files as they were last seen on disk, for clients that do not watch them.
    watch: Watch,
    /// Whether the client has been asked to ask for inlay hints again and has not answered yet.
    refreshing: Arc<AtomicBool>,
    /// Where what waits for the client runs.
    runtime: Handle,
    pool: Option<ThreadPool>,
}

impl Owner {
    /// An owner of nothing yet.
    pub fn new(
        arriving: Receiver<Event>,
        revisions: Revisions,
        session: Arc<Session>,
        settings: Settings,
        client: Client,
    ) -> Owner {
        Owner {
            arriving,
            revisions,
            session,
            documents: Arc::default(),
            workspace: Workspace::new(),
            folders: BTreeSet::new(),
            roots: BTreeSet::new(),
            snapshot: Ok(Arc::default()),
            settings: Arc::new(settings),
            published: Published::new(client.clone()),
            to_pull: BTreeMap::new(),
            watch: Watch::default(),
            client,
            refreshing: Arc::default(),
            runtime: Handle::current(),
            pool: pool(),
        }
    }

    /// Takes events until the handlers are gone.
    pub fn run(mut self) {
        while let Some(first) = self.next() {
            let progress = Arc::new(Progress::default());
            let reads_files = matches!(first, Event::Open { .. } | Event::Save | Event::Folders { .. } | Event::Disk(_));
            let shown = (reads_files && self.session.shows_progress)
                .then(|| Indexing::begin(self.client.clone(), &self.runtime, Arc::clone(&progress)));
            let (changed, questions) = self.take_all(first);
            if changed {
                self.renew(&progress);
            }
            drop(shown);
            if let Err(fault) = guarded(|| self.answer(questions)) {
                log::write(format_args!("questions were dropped: {fault}"));
            }
            if changed && let Err(fault) = guarded(|| self.publish()) {
                log::write(format_args!("findings were not published: {fault}"));
            }
        }
    }

    /// The next event; nothing once the handlers are gone. Where the client does not watch files, they are looked at while
    /// nothing arrives.
    fn next(&mut self) -> Option<Event> {
        if self.session.watches_files {
            return self.arriving.recv().ok();
        }
        loop {
            match self.arriving.recv_timeout(watch::INTERVAL) {
                Ok(event) => return Some(event),
                Err(RecvTimeoutError::Disconnected) => return None,
                Err(RecvTimeoutError::Timeout) => {
                    let changed = guarded(|| self.changed_on_disk()).unwrap_or_default();
                    if !changed.is_empty() {
                        return Some(Event::Disk(changed));
                    }
                }
            }
        }
    }

    /// The known files, their folders and the configurations that are other than when they were looked at last.
    fn changed_on_disk(&mut self) -> Vec<Utf8PathBuf> {
        let Ok(snapshot) = &self.snapshot else { return Vec::new() };
        let files = snapshot.files.values().map(|file| file.path.clone());
        let folders: BTreeSet<Utf8PathBuf> =
            snapshot.files.values().filter_map(|file| file.path.parent()).map(Utf8Path::to_owned).chain(self.roots.iter().cloned()).collect();
        let configurations = snapshot.roots.keys().map(|root| root.join(CONFIGURATION_FILE));
        self.watch.changed(files.chain(folders).chain(configurations))
    }

    /// Makes the snapshot of the present state.
    fn renew(&mut self, progress: &Progress) {
        let before = std::mem::replace(&mut self.snapshot, guarded(|| self.workspace.snapshot_watched(progress)));
        match (&before, &self.snapshot) {
            (Ok(before), Ok(now)) => {
                let moved = self.documents.iter().any(|(path, _)| is_moved_from_outside(before, now, path));
                if moved {
                    self.refresh();
                }
            }
            (_, Err(fault)) => log::write(format_args!("no snapshot: {fault}")),
            (Err(_), Ok(_)) => (),
        }
    }

    /// Asks the client to ask again for what is shown beside the text; once, until it has answered.
    fn refresh(&self) {
        if !self.refreshing.swap(true, Ordering::SeqCst) {
            let (client, refreshing, session) = (self.client.clone(), Arc::clone(&self.refreshing), Arc::clone(&self.session));
            self.runtime.spawn(async move {
                // An answer of any kind will do.
                if session.refresh_hints {
                    let _ = client.inlay_hint_refresh().await;
                }
                if session.refresh_lenses {
                    let _ = client.code_lens_refresh().await;
                }
                if session.refresh_tokens {
                    let _ = client.semantic_tokens_refresh().await;
                }
                refreshing.store(false, Ordering::SeqCst);
            });
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
                    // What the screen shows changes nothing of what is known.
                    changed |= !matches!(change, Event::Settings(_));
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
                self.to_pull.remove(&path);
                if let Some(document) = Arc::make_mut(&mut self.documents).close(&path) {
                    if !self.session.pulls_findings {
                        self.published.clear(&document.uri);
                    }
                    self.workspace.close(&path);
                }
            }
            Event::Folders { opened, closed } => {
                self.close_folders(&closed);
                for folder in opened {
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
            Event::Settings(settings) => {
                if *self.settings != settings {
                    self.settings = Arc::new(settings);
                    self.refresh();
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

    /// Forgets what only these folders brought.
    fn close_folders(&mut self, closed: &[Utf8PathBuf]) {
        for folder in closed {
            self.folders.remove(folder);
        }
        let is_left = |root: &Utf8PathBuf| {
            closed.iter().any(|folder| root.starts_with(folder)) && !self.folders.iter().any(|folder| root.starts_with(folder))
        };
        let left: Vec<Utf8PathBuf> = self.roots.iter().filter(|root| is_left(root)).cloned().collect();
        for root in left {
            self.workspace.close_root(&root);
            self.roots.remove(&root);
        }
    }

    fn reread(&mut self, path: &Utf8Path) {
        match path.parent() {
            Some(folder) if path.file_name() == Some(CONFIGURATION_FILE) => {
                self.workspace.open_root(folder, folder);
            }
            _ if path.extension() == Some("prep") => self.workspace.reread(path),
            // Something came into a folder or left it, or the folder itself is gone.
            _ => {
                let known = self.snapshot.as_ref().map(|known| known.files.values().map(|file| file.path.clone()).collect());
                let known: Vec<Utf8PathBuf> = known.unwrap_or_default();
                known.iter().filter(|file| file.starts_with(path)).for_each(|file| self.workspace.reread(file));
                let around: Vec<Utf8PathBuf> = self.roots.iter().filter(|root| path.starts_with(root)).cloned().collect();
                for root in around.into_iter().filter(|_| path.is_dir()) {
                    self.workspace.open_root(&root, &root);
                }
            }
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
        View {
            session: Arc::clone(&self.session),
            documents: Arc::clone(&self.documents),
            settings: Arc::clone(&self.settings),
            snapshot,
        }
    }

    /// Publishes what is known of each open text, unless a newer change of it is waiting: that one will be published.
    fn publish(&mut self) {
        let Ok(snapshot) = &self.snapshot else { return };
        let view = self.view(Arc::clone(snapshot));
        if self.session.pulls_findings {
            return self.ask_to_pull(&view);
        }
        for (path, document) in view.documents.iter() {
            if self.revisions.latest(path) == document.revision {
                let findings = view.snapshot.file_by_path(path).map(|file| to_proto::findings(&view, file));
                self.published.publish(&document.uri, document.version, findings.unwrap_or_default());
            }
        }
        let mut configurations = BTreeSet::new();
        for root in view.snapshot.roots.values() {
            if let Some(uri) = to_proto::uri(&root.path.join(CONFIGURATION_FILE)) {
                self.published.publish_file(&uri, to_proto::configuration_errors(&root.configuration.errors));
                configurations.insert(uri);
            }
        }
        self.published.keep_files(&configurations);
    }

    /// Asks a client that pulls findings to do so again, where those of a text are other although the text is the same: after
    /// its own changes it asks unbidden.
    fn ask_to_pull(&mut self, view: &View) {
        let mut moved = false;
        for (path, document) in view.documents.iter().filter(|(path, document)| self.revisions.latest(path) == document.revision) {
            let findings = view.snapshot.file_by_path(path).map(|file| to_proto::findings(view, file)).unwrap_or_default();
            let now = (document.version, to_proto::result_id(&findings));
            let before = self.to_pull.insert(path.to_owned(), now.clone());
            moved |= before.is_some_and(|before| before.0 == now.0 && before.1 != now.1);
        }
        if moved {
            let client = self.client.clone();
            self.runtime.spawn(async move { client.workspace_diagnostic_refresh().await });
        }
    }
}

/// Whether the values of a file came out otherwise although its own text is the same: the client asks again after its own
/// changes, not after those elsewhere.
fn is_moved_from_outside(before: &Snapshot, now: &Snapshot, path: &Utf8Path) -> bool {
    let (Some(old), Some(new)) = (before.file_by_path(path), now.file_by_path(path)) else { return false };
    let is_other = |block: usize| match (before.checked(old.id, block), now.checked(new.id, block)) {
        (Some(old), Some(new)) => !Arc::ptr_eq(&old.evaluation, &new.evaluation),
        (old, new) => old.is_some() != new.is_some(),
    };
    Arc::ptr_eq(&old.source, &new.source) && (0..new.model.blocks.len()).any(is_other)
}

/// Threads for answers: enough that a slow one holds up no quick one, few enough to leave the machine to the editor.
fn pool() -> Option<ThreadPool> {
    let threads = thread::available_parallelism().map_or(2, |count| count.get().clamp(2, 8));
    let builder = ThreadPoolBuilder::new().num_threads(threads).stack_size(STACK).thread_name(|index| format!("answer-{index}"));
    builder.build().inspect_err(|error| log::write(format_args!("no threads for answers: {error}"))).ok()
}

//! Files, the graph of uses, configuration; an immutable snapshot of everything known.

mod build;
mod changes;
mod configuration;
mod disk;
mod order;
mod progress;
mod reader;
mod remember;
mod snapshot;
mod tree;

pub use changes::reached;
pub use configuration::{Configuration, ConfigurationError};
pub use disk::{CONFIGURATION_FILE, Disk, find_root, is_home, recipe_files, version_control_top};
pub use progress::Progress;
pub use remember::Remembered;
pub use reader::{MOST_BYTES, Reader, too_large};
pub use snapshot::{Checked, FileState, Located, Origin, RootView, Snapshot};
pub use tree::RevisionFiles;

use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

use camino::{Utf8Path, Utf8PathBuf};

use crate::library;
use crate::text::{FileId, SourceText};

/// Everything that can change: which files there are and what stands in them. Each call of [`Workspace::snapshot`] gives
/// what is known of the present state.
#[derive(Clone, Debug)]
pub struct Workspace {
    /// Where files that are not open in an editor are read from.
    reader: Arc<dyn Reader>,
    /// Absolute paths by number; never shrinks, so that a number stays its file's.
    paths: Vec<Utf8PathBuf>,
    /// The numbers by path.
    ids: BTreeMap<Utf8PathBuf, FileId>,
    /// What stands in each file.
    texts: BTreeMap<FileId, Entry>,
    /// The roots that have been opened, with their configuration.
    roots: BTreeMap<Utf8PathBuf, Arc<Configuration>>,
    /// Which root each file belongs to.
    root_of: BTreeMap<FileId, Utf8PathBuf>,
    /// What was known before the last change.
    last: Option<Arc<Snapshot>>,
    /// What was read from the reader before this one: what is the same there is shared.
    earlier: Earlier,
}

/// What another reader held.
#[derive(Clone, Debug, Default)]
struct Earlier {
    texts: BTreeMap<FileId, Arc<SourceText>>,
    roots: BTreeMap<Utf8PathBuf, Arc<Configuration>>,
}

impl Default for Workspace {
    fn default() -> Self {
        Workspace::reading(Arc::new(Disk))
    }
}

/// What stands in a file: in the editor where it is open there, else on disk.
#[derive(Debug, Default, Clone)]
struct Entry {
    open: Option<Arc<SourceText>>,
    disk: Option<Arc<SourceText>>,
    disk_problem: Option<String>,
}

impl Workspace {
    /// A workspace without files, which reads from the disk.
    pub fn new() -> Self {
        Workspace::default()
    }

    /// A workspace without files, which reads from somewhere else than the disk.
    pub fn reading(reader: Arc<dyn Reader>) -> Self {
        Workspace {
            reader,
            paths: Vec::new(),
            ids: BTreeMap::new(),
            texts: BTreeMap::new(),
            roots: BTreeMap::new(),
            root_of: BTreeMap::new(),
            last: None,
            earlier: Earlier::default(),
        }
    }

    /// Forgets every file and root, and reads from somewhere else from now on: another revision of the same library. What was
    /// known is remembered, so that the next snapshot shares with the last one whatever is the same in both.
    pub fn read_from(&mut self, reader: Arc<dyn Reader>) {
        let texts = std::mem::take(&mut self.texts).into_iter();
        self.earlier.texts = texts.filter_map(|(id, entry)| Some((id, entry.disk?))).collect();
        self.earlier.roots = std::mem::take(&mut self.roots);
        self.root_of.clear();
        self.reader = reader;
    }

    /// Opens what a path names: a folder with the roots in it, or a file with the root that it belongs to. Nothing where the
    /// path does not exist.
    pub fn open(&mut self, path: &Utf8Path) {
        if self.reader.is_folder(path) {
            self.open_root(path, path);
            for nested in self.reader.nested_roots(path) {
                self.open_root(&nested, &nested);
            }
        } else if self.reader.is_file(path) {
            let folder = path.parent().unwrap_or(path);
            let root = self.reader.find_root(path, folder);
            if root == folder && !self.reader.is_marked(&root) {
                // Nothing marks a library here, so nothing but the file and what it uses is read.
                self.open_file(path, folder);
            } else {
                self.open_root(path, folder);
            }
        }
    }

    /// The number of a file, made up if it is new. `path` is absolute.
    pub fn file_id(&mut self, path: &Utf8Path) -> FileId {
        if let Some(id) = self.ids.get(path) {
            return *id;
        }
        let id = FileId(library::first_user_file().0 + self.paths.len() as u32);
        self.paths.push(path.to_owned());
        self.ids.insert(path.to_owned(), id);
        id
    }

    /// Opens the root that holds `path` (a folder or a file) and reads every recipe file in it.
    /// `folder` bounds the search for a root: the workspace folder, or the folder that was named.
    pub fn open_root(&mut self, path: &Utf8Path, folder: &Utf8Path) -> Utf8PathBuf {
        let root = self.reader.find_root(path, folder);
        self.reload_configuration(&root);
        for file in self.reader.recipe_files(&root) {
            self.read(&file, &root);
        }
        root
    }

    /// Opens a single file without walking its root: for files outside any folder that may be walked. What it uses is
    /// read too.
    pub fn open_file(&mut self, path: &Utf8Path, folder: &Utf8Path) -> FileId {
        let root = self.reader.find_root(path, folder);
        if !self.roots.contains_key(&root) {
            self.reload_configuration(&root);
        }
        self.read(path, &root)
    }

    /// Forgets a root that is no longer open, with its files. Those that an editor still holds stay; what they use is read
    /// again when it is asked for.
    pub fn close_root(&mut self, root: &Utf8Path) {
        let of_root: Vec<FileId> = self.root_of.iter().filter(|(_, of)| of.as_path() == root).map(|(id, _)| *id).collect();
        let is_open = |id: &FileId| self.texts.get(id).is_some_and(|entry| entry.open.is_some());
        let (open, closed): (Vec<FileId>, Vec<FileId>) = of_root.into_iter().partition(is_open);
        for id in closed {
            self.texts.remove(&id);
            self.root_of.remove(&id);
        }
        if open.is_empty() {
            self.roots.remove(root);
        }
    }

    /// Reads the configuration of a root again.
    pub fn reload_configuration(&mut self, root: &Utf8Path) {
        let read = Configuration::read(self.reader.as_ref(), root);
        self.set_configuration(root, read);
    }

    /// Takes over a configuration for a root, whatever its `scruple.toml` says.
    pub fn set_configuration(&mut self, root: &Utf8Path, configuration: Configuration) {
        let known = self.roots.get(root).or_else(|| self.earlier.roots.get(root)).filter(|known| ***known == configuration);
        let shared = known.cloned().unwrap_or_else(|| Arc::new(configuration));
        self.roots.insert(root.to_owned(), shared);
    }

    /// Reads a file from disk again; a file that has vanished is forgotten unless it is open in an editor.
    pub fn reread(&mut self, path: &Utf8Path) {
        let root = self.root_for(path);
        self.read(path, &root);
    }

    fn root_for(&self, path: &Utf8Path) -> Utf8PathBuf {
        let own = self.ids.get(path).and_then(|id| self.root_of.get(id)).cloned();
        own.or_else(|| {
            // The deepest root that holds the file.
            self.roots.keys().filter(|root| path.starts_with(root)).max_by_key(|root| root.as_str().len()).cloned()
        })
        .unwrap_or_else(|| self.reader.find_root(path, path.parent().unwrap_or(path)))
    }

    fn read(&mut self, path: &Utf8Path, root: &Utf8Path) -> FileId {
        let id = self.file_id(path);
        self.root_of.insert(id, root.to_owned());
        let entry = self.texts.entry(id).or_default();
        match self.reader.read(path) {
            Ok(Some(text)) => {
                if entry.disk.as_ref().is_none_or(|old| old.as_str() != text) {
                    let earlier = self.earlier.texts.get(&id).filter(|earlier| earlier.as_str() == text);
                    entry.disk = Some(earlier.cloned().unwrap_or_else(|| Arc::new(SourceText::from(text.as_str()))));
                }
                entry.disk_problem = None;
            }
            Ok(None) => {
                entry.disk = None;
                entry.disk_problem = None;
            }
            Err(problem) => {
                entry.disk = None;
                entry.disk_problem = Some(problem);
            }
        }
        if entry.open.is_none() && entry.disk.is_none() && entry.disk_problem.is_none() {
            self.texts.remove(&id);
        }
        id
    }

    /// Takes over the text of an editor. Until [`Workspace::close`], the file on disk does not matter.
    pub fn set_open_text(&mut self, path: &Utf8Path, text: Arc<SourceText>) -> FileId {
        let id = self.file_id(path);
        if !self.root_of.contains_key(&id) {
            let root = self.root_for(path);
            if !self.roots.contains_key(&root) {
                self.reload_configuration(&root);
            }
            self.root_of.insert(id, root);
        }
        self.texts.entry(id).or_default().open = Some(text);
        id
    }

    /// Forgets an editor's text; the file on disk counts again.
    pub fn close(&mut self, path: &Utf8Path) {
        if let Some(entry) = self.ids.get(path).and_then(|id| self.texts.get_mut(id)) {
            entry.open = None;
        }
        self.reread(path);
    }

    /// Reads nothing any more and keeps only these files: for trying out edits of known texts.
    pub fn read_only(&mut self, files: &BTreeSet<FileId>) {
        self.reader = Arc::new(RevisionFiles::default());
        self.texts.retain(|id, _| files.contains(id));
    }

    /// Forgets an editor's text; what was read before counts again.
    pub fn drop_open_text(&mut self, path: &Utf8Path) {
        if let Some(id) = self.ids.get(path)
            && let Some(entry) = self.texts.get_mut(id)
        {
            entry.open = None;
            if entry.disk.is_none() && entry.disk_problem.is_none() {
                self.texts.remove(id);
            }
        }
    }

    /// The text that an editor holds of a file.
    pub fn open_text(&self, path: &Utf8Path) -> Option<Arc<SourceText>> {
        self.ids.get(path).and_then(|id| self.texts.get(id)).and_then(|entry| entry.open.clone())
    }

    /// The files that are open in an editor.
    pub fn open_files(&self) -> impl Iterator<Item = &Utf8Path> {
        self.texts
            .iter()
            .filter(|(_, entry)| entry.open.is_some())
            .filter_map(|(id, _)| self.paths.get((id.0 - library::first_user_file().0) as usize))
            .map(Utf8PathBuf::as_path)
    }

    /// Everything that is known now. What did not change is shared with the snapshot before. Files that `use` lines lead to
    /// are read where they are not known yet, and so are those that these use.
    pub fn snapshot(&mut self) -> Arc<Snapshot> {
        self.snapshot_watched(&Progress::default())
    }

    /// As [`Workspace::snapshot`], telling how far it has come.
    pub fn snapshot_watched(&mut self, progress: &Progress) -> Arc<Snapshot> {
        loop {
            let snapshot = self.build(progress);
            let used: Vec<(Utf8PathBuf, Utf8PathBuf)> = snapshot
                .files
                .values()
                .flat_map(|file| build::used_paths(file).map(|path| (path, file.root.clone())))
                .filter(|(path, _)| self.ids.get(path).is_none_or(|id| !self.texts.contains_key(id)) && self.reader.is_file(path))
                .collect();
            if used.is_empty() {
                return snapshot;
            }
            for (path, root) in used {
                self.read(&path, &root);
            }
        }
    }

    fn build(&mut self, progress: &Progress) -> Arc<Snapshot> {
        let inputs: Vec<build::FileInput> = self
            .texts
            .iter()
            .filter_map(|(id, entry)| {
                let path = self.paths.get((id.0 - library::first_user_file().0) as usize)?;
                let root = self.root_of.get(id)?;
                let (source, origin) = match (&entry.open, &entry.disk) {
                    (Some(open), _) => (open.clone(), Origin::Editor),
                    (None, Some(disk)) => (disk.clone(), Origin::Disk),
                    (None, None) => (Arc::new(SourceText::from("")), Origin::Unreadable(entry.disk_problem.clone()?)),
                };
                Some(build::FileInput { id: *id, path: path.clone(), root: root.clone(), source, origin })
            })
            .collect();
        let snapshot = Arc::new(build::snapshot(inputs, &self.roots, self.last.as_deref(), progress));
        self.last = Some(snapshot.clone());
        snapshot
    }
}

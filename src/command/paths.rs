//! From the paths on a command line to the files that a verb speaks of, each read within its root.

use std::collections::BTreeSet;
use std::sync::Arc;

use camino::{Utf8Path, Utf8PathBuf};

use super::Trouble;
use super::git::{Commit, Repository};
use super::progress::watched;
use crate::report::Selection;
use crate::text::FileId;
use crate::workspace::{CONFIGURATION_FILE, ConfigurationError, Disk, Progress, Snapshot, Workspace, reached, recipe_files};

/// What was opened.
pub(super) struct Opened {
    /// The files that the paths name.
    pub selection: Selection,
    /// What is wrong with the `scruple.toml` of their roots, by its path.
    pub configuration: Vec<(Utf8PathBuf, Vec<ConfigurationError>)>,
}

/// Opens files and folders. A file brings its root along, so that it may use others, but only the file itself is spoken of.
pub(super) fn open(paths: &[String]) -> Result<Opened, Trouble> {
    let progress = Progress::default();
    watched(&progress, || open_watched(&mut Workspace::new(), paths, &progress))
}

/// Opens files and folders as they are now, to speak only of what changed since a commit and of what depends on that.
pub(super) fn open_since(paths: &[String], repository: &Repository, commit: &Commit) -> Result<Opened, Trouble> {
    let base = current_folder()?;
    let named = paths.iter().map(|path| absolute(path, &base)).collect::<Result<Vec<_>, _>>()?;
    let mut workspace = Workspace::reading(Arc::new(repository.files(commit)?));
    let progress = Progress::default();
    watched(&progress, || {
        named.iter().for_each(|path| workspace.open(path));
        let before = workspace.snapshot_watched(&progress);
        workspace.read_from(Arc::new(Disk));
        let mut opened = open_watched(&mut workspace, paths, &progress)?;
        let blocks = reached(&before, &opened.selection.snapshot);
        opened.selection = opened.selection.only(blocks);
        Ok(opened)
    })
}

fn open_watched(workspace: &mut Workspace, paths: &[String], progress: &Progress) -> Result<Opened, Trouble> {
    let base = current_folder()?;
    let mut wanted = Vec::new();
    for path in paths {
        let named = absolute(path, &base)?;
        workspace.open(&named);
        wanted.push((path, named));
    }
    let mut snapshot = workspace.snapshot_watched(progress);
    let mut files: BTreeSet<FileId> = BTreeSet::new();
    for (written, path) in wanted {
        let mut below: Vec<FileId> = files_below(&snapshot, &path);
        if below.is_empty() {
            // A path that the root leaves out (hidden, ignored) counts all the same when it is named.
            let named = if path.is_file() { vec![path.clone()] } else { recipe_files(&path) };
            for file in &named {
                workspace.open_file(file, path.parent().unwrap_or(&path));
            }
            snapshot = workspace.snapshot_watched(progress);
            below = files_below(&snapshot, &path);
        }
        if below.is_empty() {
            return Err(Trouble(format!("There are no recipe files (.prep) in {written}.")));
        }
        files.extend(below);
    }
    let configuration = configuration_errors(&snapshot, &files);
    Ok(Opened { selection: Selection::new(snapshot, files, base), configuration })
}

/// What is wrong with the `scruple.toml` of the roots of some files, by its path.
pub(super) fn configuration_errors(snapshot: &Snapshot, files: &BTreeSet<FileId>) -> Vec<(Utf8PathBuf, Vec<ConfigurationError>)> {
    let roots: BTreeSet<&Utf8PathBuf> = files.iter().filter_map(|id| snapshot.file(*id)).map(|file| &file.root).collect();
    let roots = roots.into_iter().filter_map(|root| snapshot.roots.get(root));
    roots
        .filter(|root| !root.configuration.errors.is_empty())
        .map(|root| (root.path.join(CONFIGURATION_FILE), root.configuration.errors.clone()))
        .collect()
}

fn files_below(snapshot: &Snapshot, path: &Utf8Path) -> Vec<FileId> {
    snapshot.files.values().filter(|file| file.path.starts_with(path)).map(|file| file.id).collect()
}

/// The folder from which the command was called.
pub(super) fn current_folder() -> Result<Utf8PathBuf, Trouble> {
    let folder = std::env::current_dir().map_err(|error| Trouble(format!("The current folder cannot be read: {error}.")))?;
    Utf8PathBuf::from_path_buf(folder).map_err(|folder| Trouble(format!("The path {} is not UTF-8.", folder.display())))
}

/// An absolute path of something that is there.
pub(super) fn absolute(written: &str, base: &Utf8Path) -> Result<Utf8PathBuf, Trouble> {
    let path = base.join(written);
    if let Err(error) = path.metadata() {
        return Err(Trouble(match error.kind() {
            std::io::ErrorKind::NotFound => format!("There is no file or folder {written}."),
            _ => format!("{written} cannot be read: {error}."),
        }));
    }
    // Only the file system knows what `..` leads to; other paths stay as they are named.
    let has_dots = path.components().any(|part| matches!(part, camino::Utf8Component::ParentDir));
    if has_dots {
        return path.canonicalize_utf8().map_err(|error| Trouble(format!("{written} cannot be read: {error}.")));
    }
    Ok(path.components().collect())
}

//! From the paths on a command line to the files that a verb speaks of, each read within its root.

use std::collections::BTreeSet;

use camino::{Utf8Path, Utf8PathBuf};

use super::Trouble;
use super::progress::watched;
use crate::report::Selection;
use crate::text::FileId;
use crate::workspace::{CONFIGURATION_FILE, ConfigurationError, Progress, Workspace, find_root, is_marked, nested_roots, recipe_files};

/// What was opened.
pub(super) struct Opened {
    /// The files that the paths name.
    pub selection: Selection,
    /// What is wrong with the `scruple.toml` of their roots, by its name.
    pub configuration: Vec<(String, Vec<ConfigurationError>)>,
}

/// Opens files and folders. A file brings its root along, so that it may use others, but only the file itself is spoken of.
pub(super) fn open(paths: &[String]) -> Result<Opened, Trouble> {
    let progress = Progress::default();
    watched(&progress, || open_watched(paths, &progress))
}

fn open_watched(paths: &[String], progress: &Progress) -> Result<Opened, Trouble> {
    let base = current_folder()?;
    let mut workspace = Workspace::new();
    let mut wanted = Vec::new();
    for path in paths {
        wanted.push((path, open_path(&mut workspace, path, &base)?));
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
    let roots: BTreeSet<&Utf8PathBuf> = files.iter().filter_map(|id| snapshot.file(*id)).map(|file| &file.root).collect();
    let broken: Vec<(Utf8PathBuf, Vec<ConfigurationError>)> = roots
        .into_iter()
        .filter_map(|root| snapshot.roots.get(root))
        .filter(|root| !root.configuration.errors.is_empty())
        .map(|root| (root.path.join(CONFIGURATION_FILE), root.configuration.errors.clone()))
        .collect();
    let selection = Selection::new(snapshot, files, base);
    let configuration = broken.into_iter().map(|(path, errors)| (selection.name(&path), errors)).collect();
    Ok(Opened { selection, configuration })
}

fn open_path(workspace: &mut Workspace, written: &str, base: &Utf8Path) -> Result<Utf8PathBuf, Trouble> {
    let path = absolute(written, base)?;
    if path.is_dir() {
        workspace.open_root(&path, &path);
        for nested in nested_roots(&path) {
            workspace.open_root(&nested, &nested);
        }
        return Ok(path);
    }
    let folder = path.parent().unwrap_or(&path);
    let root = find_root(&path, folder);
    if root == folder && !is_marked(&root) {
        // Nothing marks a library here, so nothing but the file and what it uses is read.
        workspace.open_file(&path, folder);
    } else {
        workspace.open_root(&path, folder);
    }
    Ok(path)
}

fn files_below(snapshot: &crate::workspace::Snapshot, path: &Utf8Path) -> Vec<FileId> {
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

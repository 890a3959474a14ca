//! Reading the file system: which folder is a library's root, which files it holds, and their text.

use camino::{Utf8Path, Utf8PathBuf};

use super::reader::{MOST_BYTES, Reader, text_of, too_large};

/// The name of the file that marks a root and configures it.
pub const CONFIGURATION_FILE: &str = "scruple.toml";

/// What marks the root of version control.
const VERSION_CONTROL: &[&str] = &[".git", ".hg", ".svn", ".jj"];

/// Folders deeper than this are not walked.
const DEEPEST: usize = 32;

/// The disk.
#[derive(Clone, Copy, Debug, Default)]
pub struct Disk;

impl Reader for Disk {
    fn read(&self, path: &Utf8Path) -> Result<Option<String>, String> {
        read(path)
    }

    fn is_file(&self, path: &Utf8Path) -> bool {
        path.is_file()
    }

    fn is_folder(&self, path: &Utf8Path) -> bool {
        path.is_dir()
    }

    fn is_top(&self, folder: &Utf8Path) -> bool {
        VERSION_CONTROL.iter().any(|mark| folder.join(mark).exists())
    }

    fn is_forbidden(&self, folder: &Utf8Path) -> bool {
        is_home(folder)
    }

    fn recipe_files(&self, folder: &Utf8Path) -> Vec<Utf8PathBuf> {
        recipe_files(folder)
    }

    fn nested_roots(&self, folder: &Utf8Path) -> Vec<Utf8PathBuf> {
        nested_roots(folder)
    }
}

/// The root of the library that holds `path`, on disk.
pub fn find_root(path: &Utf8Path, folder: &Utf8Path) -> Utf8PathBuf {
    Disk.find_root(path, folder)
}

/// The top of the version control that holds a folder.
pub fn version_control_top(folder: &Utf8Path) -> Option<&Utf8Path> {
    folder.ancestors().find(|candidate| Disk.is_top(candidate))
}

/// Whether a folder is a bare home directory or the root of the file system, which are never walked.
pub fn is_home(folder: &Utf8Path) -> bool {
    let home = std::env::var("HOME").or_else(|_| std::env::var("USERPROFILE")).unwrap_or_default();
    folder.parent().is_none() || (!home.is_empty() && folder == Utf8Path::new(&home))
}

/// Every recipe file below a folder, in order; hidden and ignored ones left out, and folders that are roots of their own.
pub fn recipe_files(folder: &Utf8Path) -> Vec<Utf8PathBuf> {
    if is_home(folder) {
        return Vec::new();
    }
    let top = folder.to_owned();
    let mut files: Vec<Utf8PathBuf> = ignore::WalkBuilder::new(folder)
        .max_depth(Some(DEEPEST))
        .require_git(false)
        .filter_entry(move |entry| {
            let is_folder = entry.file_type().is_some_and(|kind| kind.is_dir());
            !is_folder || entry.path() == top.as_std_path() || !entry.path().join(CONFIGURATION_FILE).is_file()
        })
        .build()
        .filter_map(Result::ok)
        .filter(|entry| entry.file_type().is_some_and(|kind| kind.is_file()))
        .filter_map(|entry| Utf8PathBuf::from_path_buf(entry.into_path()).ok())
        .filter(|path| path.extension() == Some("prep"))
        .collect();
    files.sort();
    files
}

/// The folders below a folder that are roots of their own, in order; hidden and ignored ones left out.
fn nested_roots(folder: &Utf8Path) -> Vec<Utf8PathBuf> {
    if is_home(folder) {
        return Vec::new();
    }
    let mut roots: Vec<Utf8PathBuf> = ignore::WalkBuilder::new(folder)
        .max_depth(Some(DEEPEST))
        .require_git(false)
        .build()
        .filter_map(Result::ok)
        .filter(|entry| entry.depth() > 1 && entry.file_name() == CONFIGURATION_FILE)
        .filter_map(|entry| Utf8PathBuf::from_path_buf(entry.into_path()).ok())
        .filter_map(|path| path.parent().map(Utf8Path::to_owned))
        .collect();
    roots.sort();
    roots
}

/// The text of a file; nothing where there is no such file.
///
/// # Errors
/// A sentence that says why the file cannot be read as text.
fn read(path: &Utf8Path) -> Result<Option<String>, String> {
    let metadata = match std::fs::metadata(path) {
        Ok(metadata) => metadata,
        Err(error) if error.kind() == std::io::ErrorKind::NotFound => return Ok(None),
        Err(error) => return Err(format!("the file cannot be read: {error}")),
    };
    if !metadata.is_file() {
        return Ok(None);
    }
    if metadata.len() > MOST_BYTES {
        return Err(too_large());
    }
    text_of(std::fs::read(path).map_err(|error| format!("the file cannot be read: {error}"))?).map(Some)
}

//! Reading the file system: which folder is a library's root, which files it holds, and their text.

use camino::{Utf8Path, Utf8PathBuf};

/// The name of the file that marks a root and configures it.
pub const CONFIGURATION_FILE: &str = "scruple.toml";

/// What marks the root of version control.
const VERSION_CONTROL: &[&str] = &[".git", ".hg", ".svn", ".jj"];

/// A recipe file is text for people; one larger than this is something else.
const MOST_BYTES: u64 = 32 * 1024 * 1024;

/// Folders deeper than this are not walked.
const DEEPEST: usize = 32;

/// The root of the library that holds `path`: the nearest folder with a `scruple.toml`, else the version-control root, else
/// `folder`.
pub fn find_root(path: &Utf8Path, folder: &Utf8Path) -> Utf8PathBuf {
    let start = if path.is_dir() { Some(path) } else { path.parent() };
    let ancestors = || start.into_iter().flat_map(Utf8Path::ancestors);
    ancestors()
        .find(|candidate| candidate.join(CONFIGURATION_FILE).is_file())
        .or_else(|| ancestors().find(|candidate| VERSION_CONTROL.iter().any(|mark| candidate.join(mark).exists())))
        .filter(|root| !is_home(root))
        .unwrap_or(folder)
        .to_owned()
}

/// Whether a folder is a root by what stands in it: a `scruple.toml`, or a version control's own folder.
pub fn is_marked(folder: &Utf8Path) -> bool {
    folder.join(CONFIGURATION_FILE).is_file() || VERSION_CONTROL.iter().any(|mark| folder.join(mark).exists())
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
pub fn nested_roots(folder: &Utf8Path) -> Vec<Utf8PathBuf> {
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
pub fn read(path: &Utf8Path) -> Result<Option<String>, String> {
    let metadata = match std::fs::metadata(path) {
        Ok(metadata) => metadata,
        Err(error) if error.kind() == std::io::ErrorKind::NotFound => return Ok(None),
        Err(error) => return Err(format!("the file cannot be read: {error}")),
    };
    if !metadata.is_file() {
        return Ok(None);
    }
    if metadata.len() > MOST_BYTES {
        return Err(format!("the file is larger than {} MiB, which no recipe is", MOST_BYTES / 1024 / 1024));
    }
    let bytes = std::fs::read(path).map_err(|error| format!("the file cannot be read: {error}"))?;
    match String::from_utf8(bytes) {
        Ok(text) => Ok(Some(text)),
        Err(error) => {
            let line = 1 + error.as_bytes().iter().take(error.utf8_error().valid_up_to()).filter(|byte| **byte == b'\n').count();
            Err(format!("the file is not UTF-8 text: line {line} holds bytes that are no characters"))
        }
    }
}

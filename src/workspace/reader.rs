//! Where files are read from: the disk, or a revision of a repository held in memory.

use std::fmt::Debug;

use camino::{Utf8Path, Utf8PathBuf};

use super::disk::CONFIGURATION_FILE;

/// A recipe file is text for people; one larger than this is something else.
pub const MOST_BYTES: u64 = 32 * 1024 * 1024;

/// Something that holds files. All paths are absolute.
pub trait Reader: Debug + Send + Sync {
    /// The text of a file; nothing where there is no such file.
    ///
    /// # Errors
    /// A sentence that says why the file cannot be read as text.
    fn read(&self, path: &Utf8Path) -> Result<Option<String>, String>;

    /// Whether there is such a file.
    fn is_file(&self, path: &Utf8Path) -> bool;

    /// Whether there is such a folder.
    fn is_folder(&self, path: &Utf8Path) -> bool;

    /// Whether a folder is the top of something under version control.
    fn is_top(&self, folder: &Utf8Path) -> bool;

    /// Whether a folder is one that is never walked nor taken for a root.
    fn is_forbidden(&self, folder: &Utf8Path) -> bool;

    /// Every recipe file below a folder, in order; hidden and ignored ones left out, and folders that are roots of their own.
    fn recipe_files(&self, folder: &Utf8Path) -> Vec<Utf8PathBuf>;

    /// The folders below a folder that are roots of their own, in order; hidden and ignored ones left out.
    fn nested_roots(&self, folder: &Utf8Path) -> Vec<Utf8PathBuf>;

    /// The root of the library that holds `path`: the nearest folder with a `scruple.toml`, else the version-control root,
    /// else `folder`.
    fn find_root(&self, path: &Utf8Path, folder: &Utf8Path) -> Utf8PathBuf {
        let start = if self.is_folder(path) { Some(path) } else { path.parent() };
        let ancestors = || start.into_iter().flat_map(Utf8Path::ancestors);
        ancestors()
            .find(|candidate| self.is_file(&candidate.join(CONFIGURATION_FILE)))
            .or_else(|| ancestors().find(|candidate| self.is_top(candidate)))
            .filter(|root| !self.is_forbidden(root))
            .unwrap_or(folder)
            .to_owned()
    }

    /// Whether a folder is a root by what stands in it: a `scruple.toml`, or a version control's own folder.
    fn is_marked(&self, folder: &Utf8Path) -> bool {
        self.is_file(&folder.join(CONFIGURATION_FILE)) || self.is_top(folder)
    }
}

/// Bytes as text.
///
/// # Errors
/// A sentence that says why they are none.
pub fn text_of(bytes: Vec<u8>) -> Result<String, String> {
    if bytes.len() as u64 > MOST_BYTES {
        return Err(too_large());
    }
    String::from_utf8(bytes).map_err(|error| {
        let line = 1 + error.as_bytes().iter().take(error.utf8_error().valid_up_to()).filter(|byte| **byte == b'\n').count();
        format!("the file is not UTF-8 text: line {line} holds bytes that are no characters")
    })
}

/// What is said of a file that is too large.
pub fn too_large() -> String {
    format!("the file is larger than {} MiB, which no recipe is", MOST_BYTES / 1024 / 1024)
}

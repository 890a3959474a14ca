//! Pages that have no file of their own: the built-in library and the page of each finding.
//!
//! Their addresses are `scruple-library:/ions-buffers.prep` and `scruple-library:/findings/as-what.md`. A client that
//! announces `experimental: { scrupleLibrary: true }` opens these and fetches the text with `scruple/libraryText`. For any
//! other, a page that it is sent to is written, read-only, into the user's cache folder.

use std::collections::BTreeMap;
use std::sync::{Arc, Mutex, PoisonError};
use std::{env, fs, io};

use camino::{Utf8Path, Utf8PathBuf};
use serde::{Deserialize, Serialize};
use tower_lsp::lsp_types::Url;

use super::{log, to_proto};
use crate::finding::Code;
use crate::library;

/// The scheme of the addresses of pages.
pub const SCHEME: &str = "scruple-library";

/// Before the name of a page, in addresses and in the paths that stand for them here.
const PREFIX: &str = "scruple-library:/";

/// The parameters of `scruple/libraryText`.
#[derive(Debug, Deserialize)]
pub struct LibraryTextParams {
    /// The address of the page.
    pub uri: Url,
}

/// The answer to `scruple/libraryText`.
#[derive(Debug, Serialize)]
pub struct LibraryText {
    /// The text of the page.
    pub text: String,
}

/// The pages as one client sees them.
#[derive(Clone, Debug)]
pub struct Pages {
    /// Whether the client opens their addresses itself.
    virtual_pages: bool,
    /// Where copies go.
    cache: Option<Utf8PathBuf>,
    /// The copies that are known to be there.
    copies: Arc<Mutex<BTreeMap<String, Url>>>,
}

impl Pages {
    /// The pages for a client that does or does not open their addresses itself.
    pub fn new(virtual_pages: bool) -> Pages {
        Pages { virtual_pages, cache: cache_folder(), copies: Arc::default() }
    }

    /// The address of the page of that name; a copy is written where the client needs one.
    pub fn uri(&self, name: &str) -> Option<Url> {
        if self.virtual_pages {
            return Url::parse(&format!("{PREFIX}{name}")).ok();
        }
        let mut copies = self.copies.lock().unwrap_or_else(PoisonError::into_inner);
        if let Some(uri) = copies.get(name) {
            return Some(uri.clone());
        }
        let path = self.cache.as_ref()?.join(name);
        if let Err(error) = write_copy(&path, text(name)?) {
            log::write(format_args!("{path}: {error}"));
            return None;
        }
        let uri = to_proto::uri(&path)?;
        copies.insert(name.to_owned(), uri.clone());
        Some(uri)
    }

    /// The path that stands for a page, where the address is one of a page or of its copy.
    pub fn path(&self, uri: &Url, path: Option<&Utf8Path>) -> Option<Utf8PathBuf> {
        if let Some(name) = uri.as_str().strip_prefix(PREFIX) {
            return Some(format!("{PREFIX}{}", name.trim_start_matches('/')).into());
        }
        let name = path?.strip_prefix(self.cache.as_ref()?).ok()?.as_str().replace('\\', "/");
        text(&name).is_some().then(|| format!("{PREFIX}{name}").into())
    }
}

/// The name of the page that a path stands for.
pub fn name(path: &Utf8Path) -> Option<&str> {
    path.as_str().strip_prefix(PREFIX)
}

/// The name of the page that explains a code.
pub fn page_of(code: Code) -> String {
    format!("findings/{}.md", code.name())
}

/// The text of a page.
pub fn text(name: &str) -> Option<&'static str> {
    match name.strip_prefix("findings/").and_then(|page| page.strip_suffix(".md")) {
        Some(code) => Code::from_name(code).map(Code::page),
        None => library::built_in().files.iter().find(|file| file.name == name).map(|file| file.source.as_str()),
    }
}

/// `scruple/VERSION` in the user's cache folder, by the conventions of the system. The version keeps two installed programs
/// from writing over each other's copies.
fn cache_folder() -> Option<Utf8PathBuf> {
    let folder = |variable: &str| env::var(variable).ok().map(Utf8PathBuf::from).filter(|folder| folder.is_absolute());
    let base = folder("XDG_CACHE_HOME").or_else(|| {
        if cfg!(windows) {
            folder("LOCALAPPDATA")
        } else if cfg!(target_os = "macos") {
            folder("HOME").map(|home| home.join("Library/Caches"))
        } else {
            folder("HOME").map(|home| home.join(".cache"))
        }
    })?;
    Some(base.join("scruple").join(env!("CARGO_PKG_VERSION")))
}

/// Writes a read-only copy, unless it is there already. It is written aside and moved, so that no reader sees half of it.
fn write_copy(path: &Utf8Path, text: &str) -> io::Result<()> {
    if fs::read(path).is_ok_and(|present| present == text.as_bytes()) {
        return Ok(());
    }
    if let Some(folder) = path.parent() {
        fs::create_dir_all(folder)?;
    }
    let aside = Utf8PathBuf::from(format!("{path}.{}", std::process::id()));
    fs::write(&aside, text)?;
    let mut permissions = fs::metadata(&aside)?.permissions();
    permissions.set_readonly(true);
    fs::set_permissions(&aside, permissions)?;
    fs::rename(&aside, path)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_page_has_a_text() {
        for file in &library::built_in().files {
            assert!(text(file.name).is_some_and(|text| !text.is_empty()), "{}", file.name);
        }
        for code in Code::ALL {
            assert!(text(&page_of(*code)).is_some_and(|text| !text.is_empty()), "{}", code.name());
        }
        assert_eq!(text("findings/no-such.md"), None);
        assert_eq!(text("../Cargo.toml"), None);
    }

    #[test]
    fn addresses_lead_back_to_their_page() {
        let name = library::built_in().files[0].name;
        let pages = Pages { virtual_pages: true, cache: None, copies: Arc::default() };
        let uri = pages.uri(name).unwrap();
        let path = pages.path(&uri, None).unwrap();
        assert_eq!(super::name(&path), Some(name));
    }

    #[test]
    fn copies_are_read_only_and_lead_back_to_their_page() {
        let cache = Utf8PathBuf::from_path_buf(env::temp_dir()).unwrap().join(format!("scruple-pages-{}", std::process::id()));
        let pages = || Pages { virtual_pages: false, cache: Some(cache.clone()), copies: Arc::default() };
        let name = page_of(Code::DecimalComma);
        for _ in 0..2 {
            let pages = pages();
            let uri = pages.uri(&name).unwrap();
            let file = Utf8PathBuf::from_path_buf(uri.to_file_path().unwrap()).unwrap();
            assert_eq!(fs::read_to_string(&file).unwrap(), Code::DecimalComma.page());
            assert!(fs::metadata(&file).unwrap().permissions().readonly());
            assert_eq!(super::name(&pages.path(&uri, Some(&file)).unwrap()), Some(name.as_str()));
        }
        assert_eq!(fs::read_dir(cache.join("findings")).unwrap().count(), 1, "nothing is left aside");
        let other = cache.join("notes.prep");
        assert_eq!(pages().path(&to_proto::uri(&other).unwrap(), Some(&other)), None);
        fs::remove_dir_all(&cache).unwrap();
    }
}

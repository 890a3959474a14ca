//! The texts that the client has open, as it sees them.

use std::collections::BTreeMap;
use std::sync::Arc;
use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::{Mutex, PoisonError};

use camino::{Utf8Path, Utf8PathBuf};
use tower_lsp::lsp_types::{TextDocumentContentChangeEvent, Url};

use super::from_proto;
use crate::text::{Columns, SourceText};

/// An open text.
#[derive(Clone, Debug)]
pub struct Document {
    /// The address, as the client spelled it.
    pub uri: Url,
    /// The client's version number.
    pub version: i32,
    /// The text at that version.
    pub text: SourceText,
    /// How far the client's changes have been applied.
    pub revision: u64,
}

/// All open texts, by path.
#[derive(Clone, Debug, Default)]
pub struct Documents {
    open: BTreeMap<Utf8PathBuf, Document>,
}

impl Documents {
    /// Opens a text, or replaces it where the client opens it twice.
    pub fn open(&mut self, path: Utf8PathBuf, document: Document) {
        self.open.insert(path, document);
    }

    /// Applies changes in their order, each to the text that the one before left. False where the text is not open.
    pub fn change(
        &mut self,
        path: &Utf8Path,
        version: i32,
        revision: u64,
        changes: Vec<TextDocumentContentChangeEvent>,
        columns: Columns,
    ) -> bool {
        let Some(document) = self.open.get_mut(path) else { return false };
        for change in changes {
            match change.range {
                Some(range) => {
                    let span = from_proto::span(&document.text, range, columns);
                    document.text.apply_change(span, &change.text);
                }
                None => document.text = SourceText::from(change.text.as_str()),
            }
        }
        document.version = version;
        document.revision = revision;
        true
    }

    /// Closes a text and returns it.
    pub fn close(&mut self, path: &Utf8Path) -> Option<Document> {
        self.open.remove(path)
    }

    /// The open text of that path.
    pub fn get(&self, path: &Utf8Path) -> Option<&Document> {
        self.open.get(path)
    }

    /// All open texts, in the order of their paths.
    pub fn iter(&self) -> impl Iterator<Item = (&Utf8Path, &Document)> {
        self.open.iter().map(|(path, document)| (path.as_path(), document))
    }
}

/// How many changes of each open text have arrived, applied or not. Whoever computes can see here, without waiting, that
/// the text has moved on.
#[derive(Clone, Debug, Default)]
pub struct Revisions {
    arrived: Arc<Mutex<BTreeMap<Utf8PathBuf, Arc<AtomicU64>>>>,
}

impl Revisions {
    /// Notes that the text has changed, and returns the number of the change.
    pub fn advance(&self, path: &Utf8Path) -> u64 {
        self.counter(path).fetch_add(1, Ordering::SeqCst) + 1
    }

    /// The number of the last change that has arrived.
    pub fn latest(&self, path: &Utf8Path) -> u64 {
        let counters = self.arrived.lock().unwrap_or_else(PoisonError::into_inner);
        counters.get(path).map_or(0, |counter| counter.load(Ordering::SeqCst))
    }

    fn counter(&self, path: &Utf8Path) -> Arc<AtomicU64> {
        let mut counters = self.arrived.lock().unwrap_or_else(PoisonError::into_inner);
        Arc::clone(counters.entry(path.to_owned()).or_default())
    }
}

#[cfg(test)]
mod tests {
    use tower_lsp::lsp_types::{Position, Range};

    use super::*;

    fn edit(start: (u32, u32), end: (u32, u32), text: &str) -> TextDocumentContentChangeEvent {
        let range = Range::new(Position::new(start.0, start.1), Position::new(end.0, end.1));
        TextDocumentContentChangeEvent { range: Some(range), range_length: None, text: text.to_owned() }
    }

    fn changed(text: &str, changes: Vec<TextDocumentContentChangeEvent>, columns: Columns) -> String {
        let path = Utf8Path::new("/a.prep");
        let uri = Url::parse("file:///a.prep").unwrap();
        let mut documents = Documents::default();
        documents.open(path.to_owned(), Document { uri, version: 1, text: SourceText::from(text), revision: 1 });
        assert!(documents.change(path, 2, 2, changes, columns));
        let document = documents.close(path).unwrap();
        assert_eq!((document.version, document.revision), (2, 2));
        assert!(!documents.change(path, 3, 3, vec![], columns), "a closed text is not changed");
        document.text.as_str().to_owned()
    }

    #[test]
    fn each_change_applies_to_what_the_one_before_left() {
        let changes = vec![edit((0, 0), (0, 0), "x\n"), edit((1, 0), (1, 1), "y"), edit((1, 1), (1, 1), "z")];
        assert_eq!(changed("abc", changes, Columns::Utf16), "x\nyzbc");
    }

    #[test]
    fn columns_count_what_was_agreed() {
        assert_eq!(changed("µ𝛂x", vec![edit((0, 3), (0, 4), "y")], Columns::Utf16), "µ𝛂y");
        assert_eq!(changed("µ𝛂x", vec![edit((0, 6), (0, 7), "y")], Columns::Utf8), "µ𝛂y");
    }

    #[test]
    fn a_change_without_range_is_the_whole_text() {
        let whole = TextDocumentContentChangeEvent { range: None, range_length: None, text: "new".into() };
        assert_eq!(changed("old", vec![whole, edit((0, 0), (9, 9), "newer")], Columns::Utf16), "newer");
    }

    #[test]
    fn a_change_outside_the_text_is_applied_at_its_end() {
        assert_eq!(changed("a\r\nb", vec![edit((7, 7), (9, 0), "c")], Columns::Utf16), "a\r\nbc");
        assert_eq!(changed("a\r\nb", vec![edit((0, 5), (0, 9), "c")], Columns::Utf16), "ac\r\nb");
    }

    #[test]
    fn revisions_count_arrivals() {
        let revisions = Revisions::default();
        let path = Utf8Path::new("/a.prep");
        assert_eq!(revisions.latest(path), 0);
        assert_eq!(revisions.advance(path), 1);
        assert_eq!(revisions.clone().advance(path), 2);
        assert_eq!(revisions.latest(path), 2);
    }
}

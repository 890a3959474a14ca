//! Files in memory for the tests of the features: `‸` marks the cursor, a line `//- NAME` begins another file.

use std::sync::Arc;

use camino::Utf8PathBuf;

use crate::text::{FileId, SourceText};
use crate::workspace::{Snapshot, Workspace};

/// A workspace with a cursor.
pub struct Fixture {
    /// Everything known.
    pub snapshot: Arc<Snapshot>,
    /// The file that holds the cursor, else the first.
    pub file: FileId,
    /// The cursor, else the text's end.
    pub offset: usize,
    /// The text of that file.
    pub text: String,
    workspace: Workspace,
}

impl Fixture {
    /// What is known once the text of the cursor's file is another.
    pub fn retyped(&mut self, text: &str) -> Arc<Snapshot> {
        let path = self.snapshot.file(self.file).unwrap().path.clone();
        self.workspace.set_open_text(&path, Arc::new(SourceText::from(text)));
        self.workspace.snapshot()
    }
}

/// Reads a fixture.
pub fn fixture(text: &str) -> Fixture {
    let mut workspace = Workspace::new();
    let mut parts: Vec<(String, String)> = vec![("main.prep".to_owned(), String::new())];
    for line in text.split_inclusive('\n') {
        match line.strip_prefix("//- ") {
            Some(name) => parts.push((name.trim().to_owned(), String::new())),
            None => parts.last_mut().unwrap().1.push_str(line),
        }
    }
    let mut found: Option<(FileId, usize, String)> = None;
    for (index, (name, text)) in parts.iter().enumerate() {
        let cursor = text.find('‸');
        let text = text.replace('‸', "");
        let path = Utf8PathBuf::from(format!("/nowhere-at-all/{name}"));
        let id = workspace.set_open_text(&path, Arc::new(SourceText::from(text.as_str())));
        if cursor.is_some() || index == 0 {
            found = Some((id, cursor.unwrap_or(text.len()), text));
        }
    }
    let (file, offset, text) = found.unwrap();
    Fixture { snapshot: workspace.snapshot(), file, offset, text, workspace }
}

/// The text with replacements done.
pub fn applied(text: &str, edits: impl IntoIterator<Item = (crate::text::Span, String)>) -> String {
    let mut edits: Vec<_> = edits.into_iter().collect();
    edits.sort_by_key(|(span, _)| std::cmp::Reverse(*span));
    let mut text = text.to_owned();
    for (span, new) in edits {
        text.replace_range(span.start..span.end, &new);
    }
    text
}

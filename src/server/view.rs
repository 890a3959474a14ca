//! What is known at one moment, as answers need it: a snapshot, and how the client spells and counts.

use std::sync::Arc;

use camino::Utf8Path;
use tower_lsp::lsp_types::{Location, Position, Range, Url};

use super::capabilities::Session;
use super::documents::Documents;
use super::settings::Settings;
use super::{from_proto, library, to_proto};
use crate::text::{FileId, Span};
use crate::workspace::{FileState, Origin, Snapshot};

/// What is known at one moment; never changes.
#[derive(Clone)]
pub struct View {
    /// What was agreed with the client.
    pub session: Arc<Session>,
    /// The texts that are open; for their addresses and versions. Text is taken from the snapshot only.
    pub documents: Arc<Documents>,
    /// What the user sets in the editor.
    pub settings: Arc<Settings>,
    /// Everything else.
    pub snapshot: Arc<Snapshot>,
}

impl View {
    /// The file of a path, or of a page of the built-in library.
    pub fn file(&self, path: &Utf8Path) -> Option<&Arc<FileState>> {
        match library::name(path) {
            Some(name) => self.snapshot.library_files().find(|file| file.path == name),
            None => self.snapshot.file_by_path(path),
        }
    }

    /// The offset of a position.
    pub fn offset(&self, file: &FileState, position: Position) -> usize {
        from_proto::offset(&file.source, position, self.session.columns)
    }

    /// The span of a range.
    pub fn span(&self, file: &FileState, range: Range) -> Span {
        from_proto::span(&file.source, range, self.session.columns)
    }

    /// The span of the lines that a range touches. A range that ends at a line's beginning does not touch that line.
    pub fn whole_lines(&self, file: &FileState, range: Range) -> Span {
        let span = self.span(file, range);
        let first = file.source.line_of(span.start);
        let last = file.source.line_of(span.end);
        let last_start = file.source.line_span(last).start;
        let end = if last > first && span.end == last_start { last_start } else { file.source.line_span(last).end };
        Span::new(file.source.line_span(first).start, end)
    }

    /// The position of an offset.
    pub fn position(&self, file: &FileState, offset: usize) -> Position {
        to_proto::position(&file.source, offset, self.session.columns)
    }

    /// The range of a span.
    pub fn range(&self, file: &FileState, span: Span) -> Range {
        to_proto::range(&file.source, span, self.session.columns)
    }

    /// The address of a file: the client's own spelling where it has the file open.
    pub fn uri(&self, file: &FileState) -> Option<Url> {
        match file.origin {
            Origin::BuiltIn => self.session.pages.uri(file.path.as_str()),
            _ => match self.documents.get(&file.path) {
                Some(document) => Some(document.uri.clone()),
                None => to_proto::uri(&file.path),
            },
        }
    }

    /// A place in any file.
    pub fn location(&self, file: FileId, span: Span) -> Option<Location> {
        let file = self.snapshot.file(file)?;
        Some(Location::new(self.uri(file)?, self.range(file, span)))
    }
}

//! From ours to the protocol: places and addresses as the client reads them.

use camino::Utf8Path;
use tower_lsp::lsp_types::{Position, Range, Url};

use crate::text::{Columns, SourceText, Span};

/// Where an offset stands.
pub fn position(text: &SourceText, offset: usize, columns: Columns) -> Position {
    let position = text.position(offset, columns);
    Position::new(number(position.line), number(position.column))
}

/// Where a span stands.
pub fn range(text: &SourceText, span: Span, columns: Columns) -> Range {
    Range::new(position(text, span.start, columns), position(text, span.end, columns))
}

/// The address of a file.
pub fn uri(path: &Utf8Path) -> Option<Url> {
    Url::from_file_path(path).ok()
}

/// The protocol counts in 32 bits; a text is never that long, see the limit on messages.
fn number(count: usize) -> u32 {
    u32::try_from(count).unwrap_or(u32::MAX)
}

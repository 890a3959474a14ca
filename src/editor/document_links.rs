//! The paths of `use` lines as links.

use super::target::used_file;
use crate::finding::Anchor;
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// A path that leads to a file.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct DocumentLink {
    /// The path's characters, without the quotes.
    pub span: Span,
    /// The file.
    pub file: FileId,
}

/// The links of a file.
pub fn document_links(snapshot: &Snapshot, file: FileId) -> Vec<DocumentLink> {
    let Some(state) = snapshot.file(file) else { return Vec::new() };
    let uses = state.model.uses.iter();
    uses.filter_map(|used| {
        let target = used_file(snapshot, state, &used.path)?;
        let span = state.absolute(used.block, Anchor::new(used.path_at.line, used.path_at.span));
        let quoted = span.of(state.source.as_str());
        let inside = quoted.len() >= 2 && quoted.starts_with('"') && quoted.ends_with('"');
        let span = if inside { Span::new(span.start + 1, span.end - 1) } else { span };
        Some(DocumentLink { span, file: target })
    })
    .collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    #[test]
    fn a_path_is_a_link_where_its_file_is_there() {
        let fixture = fixture("use \"stocks.prep\"\nuse \"none.prep\"\n//- stocks.prep\n");
        let links = document_links(&fixture.snapshot, fixture.file);
        let [link] = links.as_slice() else { panic!("{links:?}") };
        assert_eq!(link.span.of(&fixture.text), "stocks.prep");
        assert_ne!(link.file, fixture.file);
    }
}

//! Places to go to: definitions, references, links, folds, growing selections.

use tower_lsp::lsp_types::{
    DocumentHighlight, DocumentHighlightKind, DocumentLink, FoldingRange, FoldingRangeKind, GotoDefinitionResponse, Location,
    LocationLink, SelectionRange,
};

use crate::editor::{self, FoldingKind};
use crate::server::view::View;
use crate::text::Span;
use crate::workspace::FileState;

/// Where the thing at an offset is defined.
pub fn definitions(view: &View, file: &FileState, offset: usize) -> Option<GotoDefinitionResponse> {
    let destinations = editor::definition(&view.snapshot, file.id, offset);
    if destinations.is_empty() {
        return None;
    }
    if view.session.definition_links {
        let links = destinations.iter().filter_map(|destination| {
            let target = view.snapshot.file(destination.file)?;
            Some(LocationLink {
                origin_selection_range: Some(view.range(file, destination.origin)),
                target_uri: view.uri(target)?,
                target_range: view.range(target, destination.whole.to(destination.name)),
                target_selection_range: view.range(target, destination.name),
            })
        });
        return Some(GotoDefinitionResponse::Link(links.collect()));
    }
    let locations = destinations.iter().filter_map(|destination| view.location(destination.file, destination.name));
    Some(GotoDefinitionResponse::Array(locations.collect()))
}

/// Where the thing at an offset is named.
pub fn references(view: &View, file: &FileState, offset: usize, with_definition: bool) -> Vec<Location> {
    let occurrences = editor::references(&view.snapshot, file.id, offset, with_definition);
    occurrences.iter().filter_map(|occurrence| view.location(occurrence.file, occurrence.span)).collect()
}

/// Where the thing at an offset is named in its own file.
pub fn highlights(view: &View, file: &FileState, offset: usize) -> Vec<DocumentHighlight> {
    let occurrences = editor::document_highlight(&view.snapshot, file.id, offset);
    let highlight = |occurrence: editor::Occurrence| DocumentHighlight {
        range: view.range(file, occurrence.span),
        kind: Some(if occurrence.defines { DocumentHighlightKind::WRITE } else { DocumentHighlightKind::READ }),
    };
    occurrences.into_iter().map(highlight).collect()
}

/// The links of a file.
pub fn links(view: &View, file: &FileState) -> Vec<DocumentLink> {
    let links = editor::document_links(&view.snapshot, file.id).into_iter();
    let link = |link: editor::DocumentLink| {
        let target = view.uri(view.snapshot.file(link.file)?)?;
        Some(DocumentLink { range: view.range(file, link.span), target: Some(target), tooltip: None, data: None })
    };
    links.filter_map(link).collect()
}

/// What can be folded, by whole lines: some clients know no other.
pub fn folding_ranges(view: &View, file: &FileState) -> Vec<FoldingRange> {
    let ranges = editor::folding_ranges(&view.snapshot, file.id).into_iter();
    let fold = |fold: editor::FoldingRange| {
        let range = view.range(file, fold.span);
        FoldingRange {
            start_line: range.start.line,
            end_line: range.end.line,
            kind: match fold.kind {
                FoldingKind::Block => None,
                FoldingKind::Comment => Some(FoldingRangeKind::Comment),
                FoldingKind::Uses => Some(FoldingRangeKind::Imports),
            },
            ..FoldingRange::default()
        }
    };
    ranges.map(fold).filter(|fold| fold.start_line < fold.end_line).collect()
}

/// What a selection at an offset grows to, step by step.
pub fn selection_range(view: &View, file: &FileState, offset: usize) -> SelectionRange {
    let spans = editor::selection_ranges(&view.snapshot, file.id, offset);
    let outer = |parent: Option<SelectionRange>, span: Span| {
        Some(SelectionRange { range: view.range(file, span), parent: parent.map(Box::new) })
    };
    // The client must get a range for each position that it asked about.
    let nothing = || SelectionRange { range: view.range(file, Span::empty(offset)), parent: None };
    spans.into_iter().rev().fold(None, outer).unwrap_or_else(nothing)
}

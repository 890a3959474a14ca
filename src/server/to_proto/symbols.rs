//! The outline of a file, and blocks found by name.

use tower_lsp::lsp_types::{DocumentSymbol, DocumentSymbolResponse, Location, SymbolInformation, SymbolKind};

use crate::editor;
use crate::server::view::View;
use crate::syntax::tree::BlockKind;
use crate::workspace::FileState;

/// The outline, nested where the client can show that.
pub fn document_symbols(view: &View, file: &FileState) -> Option<DocumentSymbolResponse> {
    let symbols = editor::document_symbols(&view.snapshot, file.id);
    if view.session.nested_symbols {
        return Some(DocumentSymbolResponse::Nested(symbols.into_iter().map(|symbol| nested(view, file, symbol)).collect()));
    }
    let mut flat = Vec::new();
    let location = |span| Some(Location::new(view.uri(file)?, view.range(file, span)));
    for symbol in &symbols {
        flat.push(information(symbol.name.clone(), symbol.kind, location(symbol.span)?, None));
        for child in &symbol.children {
            flat.push(information(child.name.clone(), child.kind, location(child.span)?, Some(symbol.name.clone())));
        }
    }
    Some(DocumentSymbolResponse::Flat(flat))
}

/// The blocks that fit a query.
pub fn workspace_symbols(view: &View, query: &str) -> Vec<SymbolInformation> {
    let found = editor::workspace_symbols(&view.snapshot, query).into_iter();
    let symbol = |symbol: editor::WorkspaceSymbol| {
        let location = view.location(symbol.file, symbol.name_span)?;
        Some(information(symbol.name, symbol.kind, location, Some(symbol.detail).filter(|detail| !detail.is_empty())))
    };
    found.filter_map(symbol).collect()
}

#[expect(deprecated, reason = "the protocol's type has a field of old that must be filled")]
fn nested(view: &View, file: &FileState, symbol: editor::DocumentSymbol) -> DocumentSymbol {
    let children = symbol.children.into_iter().map(|child| nested(view, file, child)).collect();
    DocumentSymbol {
        name: symbol.name,
        detail: Some(symbol.detail).filter(|detail| !detail.is_empty()),
        kind: kind(symbol.kind),
        tags: None,
        deprecated: None,
        range: view.range(file, symbol.span.to(symbol.name_span)),
        selection_range: view.range(file, symbol.name_span),
        children: Some(children),
    }
}

#[expect(deprecated, reason = "the protocol's type has a field of old that must be filled")]
fn information(name: String, of: editor::SymbolKind, location: Location, container_name: Option<String>) -> SymbolInformation {
    SymbolInformation { name, kind: kind(of), tags: None, deprecated: None, location, container_name }
}

/// The protocol has the kinds of programs; these are the nearest.
fn kind(kind: editor::SymbolKind) -> SymbolKind {
    match kind {
        editor::SymbolKind::Block(BlockKind::Solution) => SymbolKind::FUNCTION,
        editor::SymbolKind::Block(BlockKind::Bottle) => SymbolKind::OBJECT,
        editor::SymbolKind::Block(BlockKind::Substance) => SymbolKind::CLASS,
        editor::SymbolKind::Block(BlockKind::Ion) => SymbolKind::CONSTANT,
        editor::SymbolKind::Block(BlockKind::Solid) => SymbolKind::STRUCT,
        editor::SymbolKind::Block(BlockKind::Danger) => SymbolKind::EVENT,
        editor::SymbolKind::Block(BlockKind::Group) => SymbolKind::ARRAY,
        editor::SymbolKind::Block(BlockKind::Lab) => SymbolKind::MODULE,
        editor::SymbolKind::Ingredient => SymbolKind::FIELD,
    }
}

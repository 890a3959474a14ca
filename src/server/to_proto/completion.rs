//! What can be written under the cursor.

use tower_lsp::lsp_types::{
    CompletionItem, CompletionItemKind, CompletionList, CompletionResponse, CompletionTextEdit, Documentation, TextEdit,
};

use crate::editor::{self, CompletionKind};
use crate::server::view::View;
use crate::workspace::FileState;

/// What is offered at an offset.
pub fn completions(view: &View, file: &FileState, offset: usize) -> Option<CompletionResponse> {
    let editor::Completions { items, is_incomplete } = editor::completion(&view.snapshot, file.id, offset);
    let items = items.into_iter().map(|item| completion_item(view, file, item)).collect();
    Some(CompletionResponse::List(CompletionList { is_incomplete, items }))
}

fn completion_item(view: &View, file: &FileState, item: editor::CompletionItem) -> CompletionItem {
    let some = |text: String| Some(text).filter(|text| !text.is_empty());
    CompletionItem {
        label: item.label,
        kind: Some(kind(item.kind)),
        detail: some(item.detail),
        documentation: some(item.documentation).map(Documentation::String),
        sort_text: some(item.sort),
        filter_text: some(item.filter),
        text_edit: Some(CompletionTextEdit::Edit(TextEdit::new(view.range(file, item.span), item.insert))),
        ..CompletionItem::default()
    }
}

/// The protocol has the kinds of programs; these are the nearest of those that every client knows.
fn kind(kind: CompletionKind) -> CompletionItemKind {
    match kind {
        CompletionKind::Keyword => CompletionItemKind::KEYWORD,
        CompletionKind::Solution => CompletionItemKind::FUNCTION,
        CompletionKind::Bottle => CompletionItemKind::VARIABLE,
        CompletionKind::Substance => CompletionItemKind::CLASS,
        CompletionKind::Constituent | CompletionKind::Solid => CompletionItemKind::INTERFACE,
        CompletionKind::Lab => CompletionItemKind::MODULE,
        CompletionKind::Unit => CompletionItemKind::UNIT,
        CompletionKind::Property => CompletionItemKind::PROPERTY,
        CompletionKind::Code => CompletionItemKind::ENUM,
        CompletionKind::File => CompletionItemKind::FILE,
        CompletionKind::Value => CompletionItemKind::VALUE,
    }
}

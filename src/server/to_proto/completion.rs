//! What can be written under the cursor.

use serde_json::json;
use tower_lsp::lsp_types::{
    CompletionItem, CompletionItemKind, CompletionList, CompletionResponse, CompletionTextEdit, Documentation, TextEdit,
};

use super::markup;
use crate::editor::{self, CompletionKind};
use crate::model::Namespace;
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
    // What a thing is takes a page; it is fetched for the one that is looked at.
    let asked_later = view.session.resolves_documentation && namespace(item.kind).is_some();
    CompletionItem {
        data: asked_later.then(|| view.uri(file).map(|uri| json!(uri))).flatten(),
        label: item.label,
        kind: Some(kind(item.kind)),
        detail: some(item.detail),
        documentation: some(item.documentation).filter(|_| !asked_later).map(Documentation::String),
        sort_text: some(item.sort),
        filter_text: some(item.filter),
        text_edit: Some(CompletionTextEdit::Edit(TextEdit::new(view.range(file, item.span), item.insert))),
        ..CompletionItem::default()
    }
}

/// A completion with the page of the thing that it names.
pub fn resolved(view: &View, file: &FileState, mut item: CompletionItem) -> CompletionItem {
    let of = |kind: CompletionItemKind| CompletionKind::ALL.iter().copied().find(|own| self::kind(*own) == kind);
    let found = item.kind.and_then(of).and_then(|kind| Some((kind, namespace(kind)?)));
    if let Some((own, namespace)) = found {
        let pure = own == CompletionKind::Substance;
        if let Some(page) = editor::hover_of_completion(&view.snapshot, file.id, &item.label, namespace, pure) {
            let page = markup(view.session.markdown_completion, page.markdown, page.plain);
            item.documentation = Some(Documentation::MarkupContent(page));
        }
    }
    item
}

/// Where the name of an item of this kind is looked up; nothing for words and numbers.
fn namespace(kind: CompletionKind) -> Option<Namespace> {
    Some(match kind {
        CompletionKind::Solution | CompletionKind::Bottle | CompletionKind::Substance => Namespace::Ingredient,
        CompletionKind::Constituent => Namespace::Constituent,
        CompletionKind::Solid => Namespace::Phase,
        CompletionKind::Lab => Namespace::Lab,
        _ => return None,
    })
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

//! What a thing goes into and what a recipe is made of: the protocol's call hierarchy, and the lenses above recipes.

use serde_json::json;
use tower_lsp::lsp_types::{
    CallHierarchyIncomingCall, CallHierarchyItem, CallHierarchyOutgoingCall, CodeLens, Command, Location, Range, SymbolKind,
};

use crate::editor::{self, HierarchyItem, HierarchyKind, LensKind};
use crate::server::capabilities::TELL_COMMAND;
use crate::server::view::View;
use crate::text::Span;
use crate::workspace::FileState;

/// The command by which a client that announces it lists the uses of a recipe: address, position, places.
const SHOW_USES: &str = "scruple.showUses";

/// The thing at an offset.
pub fn prepare_call_hierarchy(view: &View, file: &FileState, offset: usize) -> Option<Vec<CallHierarchyItem>> {
    Some(vec![hierarchy_item(view, &editor::prepare_call_hierarchy(&view.snapshot, file.id, offset)?)?])
}

/// The recipes that the thing at an offset goes into.
pub fn incoming_calls(view: &View, file: &FileState, offset: usize) -> Option<Vec<CallHierarchyIncomingCall>> {
    let users = editor::goes_into(&view.snapshot, file.id, offset).into_iter();
    let call = |(item, spans): (HierarchyItem, Vec<Span>)| {
        let from_ranges = ranges(view, view.snapshot.file(item.file)?, &spans);
        Some(CallHierarchyIncomingCall { from: hierarchy_item(view, &item)?, from_ranges })
    };
    Some(users.filter_map(call).collect())
}

/// What the recipe at an offset is made of.
pub fn outgoing_calls(view: &View, file: &FileState, offset: usize) -> Option<Vec<CallHierarchyOutgoingCall>> {
    let parts = editor::made_of(&view.snapshot, file.id, offset).into_iter();
    let call = |(item, spans): (HierarchyItem, Vec<Span>)| {
        Some(CallHierarchyOutgoingCall { to: hierarchy_item(view, &item)?, from_ranges: ranges(view, file, &spans) })
    };
    Some(parts.filter_map(call).collect())
}

fn ranges(view: &View, file: &FileState, spans: &[Span]) -> Vec<Range> {
    spans.iter().map(|span| view.range(file, *span)).collect()
}

fn hierarchy_item(view: &View, item: &HierarchyItem) -> Option<CallHierarchyItem> {
    let file = view.snapshot.file(item.file)?;
    Some(CallHierarchyItem {
        name: item.name.clone(),
        kind: match item.kind {
            HierarchyKind::Solution => SymbolKind::FUNCTION,
            HierarchyKind::Bottle => SymbolKind::OBJECT,
            HierarchyKind::Substance => SymbolKind::CLASS,
        },
        tags: None,
        detail: Some(item.detail.clone()).filter(|detail| !detail.is_empty()),
        uri: view.uri(file)?,
        range: view.range(file, item.span.to(item.name_span)),
        selection_range: view.range(file, item.name_span),
        data: None,
    })
}

/// The lenses of a file. A client that can list places is told them; any other gets the same in words.
pub fn code_lenses(view: &View, file: &FileState) -> Option<Vec<CodeLens>> {
    let uri = view.uri(file)?;
    let lens = |lens: editor::CodeLens| {
        let range = view.range(file, lens.span);
        let tell = || Command::new(lens.title.clone(), TELL_COMMAND.to_owned(), Some(vec![json!(uri), json!(range.start)]));
        let command = match &lens.kind {
            LensKind::UsedBy(users) if view.session.shows_uses => {
                let places = users.iter().flat_map(|(item, spans)| {
                    spans.iter().filter_map(|span| view.location(item.file, *span)).collect::<Vec<Location>>()
                });
                let places: Vec<Location> = places.collect();
                Command::new(lens.title.clone(), SHOW_USES.to_owned(), Some(vec![json!(uri), json!(range.start), json!(places)]))
            }
            LensKind::UsedBy(_) | LensKind::State => tell(),
        };
        CodeLens { range, command: Some(command), data: None }
    };
    Some(editor::code_lens(&view.snapshot, file.id).into_iter().map(lens).collect())
}

/// What the lenses of the recipe at an offset have to say, in words: its page, and what it goes into.
pub fn told(view: &View, file: &FileState, offset: usize) -> Option<String> {
    let mut text = editor::hover(&view.snapshot, file.id, offset)?.plain;
    let users = editor::goes_into(&view.snapshot, file.id, offset);
    if !users.is_empty() {
        text.push_str("\nused by");
    }
    for (item, spans) in users {
        let Some((file, span)) = view.snapshot.file(item.file).zip(spans.first()) else { continue };
        let line = view.position(file, span.start).line + 1;
        text.push_str(&format!("\n  {} ({}:{line})", item.name, file.shown_path()));
    }
    Some(text)
}

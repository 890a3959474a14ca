//! Computed values beside the text, as inlay hints.

use tower_lsp::lsp_types::{InlayHint, InlayHintLabel, InlayHintTooltip};

use super::text_edits;
use crate::editor;
use crate::server::view::View;
use crate::text::Span;
use crate::workspace::FileState;

/// The hints of a span, those of categories that the user has switched off left out.
pub fn inlay_hints(view: &View, file: &FileState, span: Span) -> Vec<InlayHint> {
    let hints = editor::inlay_hints(&view.snapshot, file.id, span).into_iter();
    hints.filter(|hint| view.settings.shows(hint.category)).map(|hint| inlay_hint(view, file, hint)).collect()
}

fn inlay_hint(view: &View, file: &FileState, hint: editor::InlayHint) -> InlayHint {
    let switch = format!("{}\n(Switched off by scruple.inlayHints.{}.)", hint.tooltip, hint.category.name());
    InlayHint {
        position: view.position(file, hint.offset),
        label: InlayHintLabel::String(hint.label),
        kind: None,
        text_edits: hint.text_edit.map(|edit| text_edits(view, file, vec![edit])),
        tooltip: Some(InlayHintTooltip::String(switch)),
        padding_left: Some(true),
        padding_right: None,
        data: None,
    }
}

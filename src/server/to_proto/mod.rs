//! From ours to the protocol: what the editor features found, as the client reads it. What a client did not announce it is
//! not sent. This file: places and addresses; one file beside it for each kind of answer.

mod actions;
mod completion;
mod findings;
mod hierarchy;
mod hints;
mod hover;
mod navigation;
mod pulled;
mod sheet;
mod signature;
mod symbols;
mod tokens;

use camino::Utf8Path;
use tower_lsp::lsp_types::{MarkupContent, MarkupKind, Position, Range, TextEdit, Url};

pub use actions::{code_actions, workspace_edit};
pub use completion::{completions, resolved};
pub use findings::{configuration_errors, findings};
pub use hierarchy::{code_lenses, incoming_calls, outgoing_calls, prepare_call_hierarchy, told};
pub use hints::inlay_hints;
pub use hover::hover;
pub use navigation::{definitions, folding_ranges, highlights, links, references, selection_range};
pub use pulled::{document_report, result_id, workspace_report};
pub use sheet::{RecipeSheet, recipe_sheet};
pub use signature::signature_help;
pub use symbols::{document_symbols, workspace_symbols};
pub use tokens::{semantic_tokens, token_legend};

use super::view::View;
use crate::text::{Columns, SourceText, Span};
use crate::workspace::FileState;

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

/// Replacements in one file.
pub fn text_edits(view: &View, file: &FileState, edits: Vec<(Span, String)>) -> Vec<TextEdit> {
    edits.into_iter().map(|(span, text)| TextEdit::new(view.range(file, span), text)).collect()
}

/// Text for a client that does or does not draw Markdown.
fn markup(is_markdown: bool, markdown: String, plain: String) -> MarkupContent {
    if is_markdown {
        MarkupContent { kind: MarkupKind::Markdown, value: markdown }
    } else {
        MarkupContent { kind: MarkupKind::PlainText, value: plain }
    }
}

/// The protocol counts in 32 bits; a text is never that long, see the limit on messages.
fn number(count: usize) -> u32 {
    u32::try_from(count).unwrap_or(u32::MAX)
}

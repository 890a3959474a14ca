//! What editors show: one file per feature, each a pure function of a snapshot, a file and an offset. Plain data with
//! byte spans in, plain data out; the protocol is the server's affair.

mod call_hierarchy;
mod code_actions;
mod code_lens;
mod completion;
mod cursor;
mod definition;
mod describe;
mod diagnostics;
mod document_links;
mod document_symbols;
mod file_renames;
mod folding_ranges;
mod formatting;
mod hover;
mod inlay_hints;
mod names;
mod page;
mod quantities;
mod references;
mod rename;
mod selection_ranges;
mod semantic_tokens;
mod signature_help;
mod target;
mod values;
mod words;
mod workspace_symbols;

pub use call_hierarchy::{HierarchyItem, HierarchyKind, goes_into, made_of, prepare_call_hierarchy};
pub use code_actions::{ActionKind, CodeAction, FileEdit, code_actions, fix_all};
pub use code_lens::{CodeLens, LensKind, code_lens};
pub use completion::{CompletionItem, CompletionKind, Completions, completion};
pub use definition::{Destination, definition};
pub use diagnostics::{Diagnostic, DiagnosticTag, RelatedPlace, diagnostics};
pub use document_links::{DocumentLink, document_links};
pub use document_symbols::{DocumentSymbol, SymbolKind, document_symbols};
pub use file_renames::file_renames;
pub use folding_ranges::{FoldingKind, FoldingRange, folding_ranges};
pub use formatting::formatting;
pub use hover::{Hover, hover, hover_of_completion};
pub use inlay_hints::{HintCategory, InlayHint, inlay_hints};
pub use references::{Occurrence, document_highlight, references};
pub use rename::{Rename, RenameRefusal, prepare_rename, rename};
pub use selection_ranges::selection_ranges;
pub use semantic_tokens::{SemanticKind, SemanticToken, semantic_tokens};
pub use signature_help::{SignatureHelp, signature_help};
pub use workspace_symbols::{WorkspaceSymbol, workspace_symbols};

#[cfg(test)]
mod fixture;

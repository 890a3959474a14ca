//! Changes that the editor offers, and changes of several files.

use std::collections::{BTreeMap, HashMap};

use tower_lsp::lsp_types::{
    CodeAction, CodeActionContext, CodeActionKind, CodeActionOrCommand, Diagnostic, DocumentChanges, NumberOrString, OneOf,
    OptionalVersionedTextDocumentIdentifier, TextDocumentEdit, TextEdit, Url, WorkspaceEdit,
};

use crate::editor::{self, ActionKind, FileEdit};
use crate::server::capabilities::FIX_ALL;
use crate::server::view::View;
use crate::text::{FileId, Span};
use crate::workspace::FileState;

/// The changes offered for a span, of the kinds that the client asks for.
pub fn code_actions(view: &View, file: &FileState, span: Span, context: &CodeActionContext) -> Vec<CodeActionOrCommand> {
    if !view.session.code_actions {
        return Vec::new();
    }
    let findings = view.snapshot.findings(file.id);
    let action = |action: editor::CodeAction| {
        let kind = match action.kind {
            ActionKind::QuickFix => CodeActionKind::QUICKFIX,
            ActionKind::Rewrite => CodeActionKind::REFACTOR_REWRITE,
            ActionKind::Extract => CodeActionKind::REFACTOR_EXTRACT,
            ActionKind::Inline => CodeActionKind::REFACTOR_INLINE,
        };
        if !is_wanted(&kind, context) {
            return None;
        }
        let answers = action.finding.and_then(|(index, _)| findings.get(index)).map(|located| {
            let at = view.range(file, located.span);
            let code = NumberOrString::String(located.finding.code.name().to_owned());
            let same = |known: &&Diagnostic| known.code.as_ref() == Some(&code) && known.range.start.line == at.start.line;
            context.diagnostics.iter().filter(same).cloned().collect::<Vec<_>>()
        });
        let action = CodeAction {
            title: action.title,
            kind: Some(kind),
            diagnostics: answers.filter(|answers| !answers.is_empty()),
            edit: Some(workspace_edit(view, action.edits)?),
            is_preferred: Some(action.is_preferred).filter(|preferred| *preferred && view.session.preferred_actions),
            ..CodeAction::default()
        };
        Some(CodeActionOrCommand::CodeAction(action))
    };
    let mut actions: Vec<CodeActionOrCommand> =
        editor::code_actions(&view.snapshot, file.id, span).into_iter().filter_map(action).collect();
    // Changes of the whole file are for clients that ask for them, as on saving; in a menu they would be noise.
    if context.only.is_some() && is_wanted(&FIX_ALL, context) {
        actions.extend(fix_everything(view, file).map(CodeActionOrCommand::CodeAction));
    }
    actions
}

/// All fixes of a file that need no thought, as one change.
fn fix_everything(view: &View, file: &FileState) -> Option<CodeAction> {
    let edits = editor::fix_all(&view.snapshot, file.id);
    if edits.is_empty() {
        return None;
    }
    Some(CodeAction {
        title: "Apply all fixes of spelling and characters".to_owned(),
        kind: Some(FIX_ALL),
        edit: Some(workspace_edit(view, edits)?),
        ..CodeAction::default()
    })
}

/// Whether a client that asks for certain kinds wants this one: `refactor` means `refactor.rewrite` too.
fn is_wanted(kind: &CodeActionKind, context: &CodeActionContext) -> bool {
    let within = |wanted: &CodeActionKind| {
        let rest = kind.as_str().strip_prefix(wanted.as_str());
        wanted.as_str().is_empty() || rest.is_some_and(|rest| rest.is_empty() || rest.starts_with('.'))
    };
    context.only.as_ref().is_none_or(|only| only.iter().any(within))
}

/// Replacements in several files; with the versions they are for where the client can check them. `None` where a file has no
/// address: half a change is worse than none.
pub fn workspace_edit(view: &View, edits: Vec<FileEdit>) -> Option<WorkspaceEdit> {
    let mut by_file: BTreeMap<FileId, Vec<FileEdit>> = BTreeMap::new();
    for edit in edits {
        by_file.entry(edit.file).or_default().push(edit);
    }
    let mut changes: Vec<(Url, Option<i32>, Vec<TextEdit>)> = Vec::new();
    for (file, edits) in by_file {
        let file = view.snapshot.file(file)?;
        let version = view.documents.get(&file.path).map(|document| document.version);
        let edits = edits.into_iter().map(|edit| TextEdit::new(view.range(file, edit.span), edit.text));
        changes.push((view.uri(file)?, version, edits.collect()));
    }
    if view.session.versioned_edits {
        let edit = |(uri, version, edits): (Url, Option<i32>, Vec<TextEdit>)| TextDocumentEdit {
            text_document: OptionalVersionedTextDocumentIdentifier { uri, version },
            edits: edits.into_iter().map(OneOf::Left).collect(),
        };
        let changes = DocumentChanges::Edits(changes.into_iter().map(edit).collect());
        return Some(WorkspaceEdit { document_changes: Some(changes), ..WorkspaceEdit::default() });
    }
    let changes: HashMap<Url, Vec<TextEdit>> = changes.into_iter().map(|(uri, _, edits)| (uri, edits)).collect();
    Some(WorkspaceEdit { changes: Some(changes), ..WorkspaceEdit::default() })
}

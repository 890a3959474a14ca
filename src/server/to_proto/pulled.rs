//! Findings for a client that asks for them, each list under a name by which an unchanged one need not be sent again.

use std::collections::BTreeMap;
use std::hash::{DefaultHasher, Hash, Hasher};

use camino::Utf8PathBuf;
use tower_lsp::lsp_types::{
    Diagnostic, DocumentDiagnosticReport, FullDocumentDiagnosticReport, PreviousResultId, RelatedFullDocumentDiagnosticReport,
    RelatedUnchangedDocumentDiagnosticReport, UnchangedDocumentDiagnosticReport, Url, WorkspaceDiagnosticReport,
    WorkspaceDocumentDiagnosticReport, WorkspaceFullDocumentDiagnosticReport, WorkspaceUnchangedDocumentDiagnosticReport,
};

use super::{configuration_errors, findings, uri};
use crate::server::from_proto;
use crate::server::view::View;
use crate::workspace::{CONFIGURATION_FILE, FileState};

/// The name of a list of findings: the same for the same list as long as the server runs.
pub fn result_id(findings: &[Diagnostic]) -> String {
    if findings.is_empty() {
        return "none".to_owned();
    }
    let mut hasher = DefaultHasher::new();
    serde_json::to_string(findings).unwrap_or_default().hash(&mut hasher);
    format!("{:016x}", hasher.finish())
}

/// The findings of a file, or that they are those that the client has.
pub fn document_report(view: &View, file: Option<&FileState>, known: Option<&str>) -> DocumentDiagnosticReport {
    let items = file.map(|file| findings(view, file)).unwrap_or_default();
    let result_id = result_id(&items);
    if known == Some(result_id.as_str()) {
        return DocumentDiagnosticReport::Unchanged(RelatedUnchangedDocumentDiagnosticReport {
            related_documents: None,
            unchanged_document_diagnostic_report: UnchangedDocumentDiagnosticReport { result_id },
        });
    }
    DocumentDiagnosticReport::Full(RelatedFullDocumentDiagnosticReport {
        related_documents: None,
        full_document_diagnostic_report: FullDocumentDiagnosticReport { result_id: Some(result_id), items },
    })
}

/// The findings of all files, configurations included. Clean files that the client never heard of are left out; so that a
/// client that asks every second is not sent a library each time, unchanged lists go by name.
pub fn workspace_report(view: &View, known: Vec<PreviousResultId>) -> WorkspaceDiagnosticReport {
    let path = |uri: &Url| from_proto::file_path(uri).unwrap_or_else(|| Utf8PathBuf::from(uri.as_str()));
    let mut known: BTreeMap<Utf8PathBuf, (Url, String)> = known.into_iter().map(|one| (path(&one.uri), (one.uri, one.value))).collect();
    let mut all: Vec<(Url, Option<i64>, Vec<Diagnostic>)> = Vec::new();
    for file in view.snapshot.files.values() {
        let Some(uri) = view.uri(file) else { continue };
        let version = view.documents.get(&file.path).map(|document| i64::from(document.version));
        all.push((uri, version, findings(view, file)));
    }
    for root in view.snapshot.roots.values() {
        if let Some(uri) = uri(&root.path.join(CONFIGURATION_FILE)) {
            all.push((uri, None, configuration_errors(&root.configuration.errors)));
        }
    }
    all.sort_by(|(one, ..), (other, ..)| one.cmp(other));
    let mut items = Vec::new();
    for (uri, version, findings) in all {
        let before = known.remove(&path(&uri)).map(|(_, id)| id);
        let result_id = result_id(&findings);
        match before {
            None if findings.is_empty() => {}
            Some(before) if before == result_id => items.push(WorkspaceDocumentDiagnosticReport::Unchanged(
                WorkspaceUnchangedDocumentDiagnosticReport {
                    uri,
                    version,
                    unchanged_document_diagnostic_report: UnchangedDocumentDiagnosticReport { result_id },
                },
            )),
            _ => items.push(full(uri, version, Some(result_id), findings)),
        }
    }
    // What is no longer there has no findings any more.
    items.extend(known.into_values().map(|(uri, _)| full(uri, None, None, Vec::new())));
    WorkspaceDiagnosticReport { items }
}

fn full(uri: Url, version: Option<i64>, result_id: Option<String>, items: Vec<Diagnostic>) -> WorkspaceDocumentDiagnosticReport {
    WorkspaceDocumentDiagnosticReport::Full(WorkspaceFullDocumentDiagnosticReport {
        uri,
        version,
        full_document_diagnostic_report: FullDocumentDiagnosticReport { result_id, items },
    })
}

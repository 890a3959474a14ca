//! Findings as diagnostics.

use tower_lsp::lsp_types::{
    CodeDescription, Diagnostic, DiagnosticRelatedInformation, DiagnosticSeverity, DiagnosticTag, NumberOrString, Position, Range,
};

use super::number;
use crate::editor;
use crate::finding::Level;
use crate::server::library;
use crate::server::view::View;
use crate::workspace::{ConfigurationError, FileState};

/// Whose findings they are, as editors show it.
const SOURCE: &str = "scruple";

/// The findings of a file.
pub fn findings(view: &View, file: &FileState) -> Vec<Diagnostic> {
    editor::diagnostics(&view.snapshot, file.id).into_iter().map(|finding| diagnostic(view, file, finding)).collect()
}

fn diagnostic(view: &View, file: &FileState, finding: editor::Diagnostic) -> Diagnostic {
    let session = &view.session;
    let page = || Some(CodeDescription { href: session.pages.uri(&library::page_of(finding.code))? });
    let related: Vec<DiagnosticRelatedInformation> = finding
        .related
        .iter()
        .filter_map(|related| {
            let location = view.location(related.file, related.span)?;
            Some(DiagnosticRelatedInformation { location, message: related.message.clone() })
        })
        .collect();
    let tags = finding.tags.iter().map(|tag| match tag {
        editor::DiagnosticTag::Unnecessary => DiagnosticTag::UNNECESSARY,
    });
    let tags: Vec<DiagnosticTag> = tags.filter(|tag| session.finding_tags.contains(tag)).collect();
    Diagnostic {
        range: view.range(file, finding.span),
        severity: Some(severity(finding.level)),
        code: Some(NumberOrString::String(finding.code.name().to_owned())),
        code_description: if session.code_description { page() } else { None },
        source: Some(SOURCE.to_owned()),
        related_information: Some(related).filter(|related| session.related_information && !related.is_empty()),
        tags: Some(tags).filter(|tags| !tags.is_empty()),
        message: finding.message,
        data: None,
    }
}

fn severity(level: Level) -> DiagnosticSeverity {
    match level {
        Level::Error => DiagnosticSeverity::ERROR,
        Level::Warning => DiagnosticSeverity::WARNING,
        Level::Hint => DiagnosticSeverity::HINT,
    }
}

/// What is wrong with a `scruple.toml`, each at its line.
pub fn configuration_errors(errors: &[ConfigurationError]) -> Vec<Diagnostic> {
    let at = |line: usize| Range::new(Position::new(number(line), 0), Position::new(number(line + 1), 0));
    let diagnostic = |error: &ConfigurationError| Diagnostic {
        range: at(error.line.unwrap_or(1).saturating_sub(1)),
        severity: Some(DiagnosticSeverity::ERROR),
        source: Some(SOURCE.to_owned()),
        message: error.message.clone(),
        ..Diagnostic::default()
    };
    errors.iter().map(diagnostic).collect()
}

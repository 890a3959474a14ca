//! From ours to the protocol: places, addresses and findings as the client reads them.

use camino::Utf8Path;
use tower_lsp::lsp_types::{
    CodeDescription, Diagnostic, DiagnosticRelatedInformation, DiagnosticSeverity, NumberOrString, Position, Range, Url,
};

use super::library;
use super::view::View;
use crate::finding::{Finding, Level};
use crate::text::{Columns, SourceText, Span};
use crate::workspace::{ConfigurationError, FileState, Located};

/// Whose findings they are, as editors show it.
const SOURCE: &str = "scruple";

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

/// The findings of a file.
pub fn findings(view: &View, file: &FileState) -> Vec<Diagnostic> {
    view.snapshot.findings(file.id).iter().map(|located| finding(view, file, located)).collect()
}

/// One finding. What the client did not announce it is not sent.
pub fn finding(view: &View, file: &FileState, located: &Located) -> Diagnostic {
    let session = &view.session;
    let Located { span, block, finding } = located;
    let related = || {
        let places = finding.related.iter().filter_map(|related| {
            let (file, span) = view.snapshot.place(file.id, *block, &related.place)?;
            Some(DiagnosticRelatedInformation { location: view.location(file, span)?, message: related.message.clone() })
        });
        Some(places.collect::<Vec<_>>()).filter(|places| !places.is_empty())
    };
    let page = || Some(CodeDescription { href: session.pages.uri(&library::page_of(finding.code))? });
    Diagnostic {
        range: view.range(file, *span),
        severity: Some(severity(finding.level)),
        code: Some(NumberOrString::String(finding.code.name().to_owned())),
        code_description: if session.code_description { page() } else { None },
        source: Some(SOURCE.to_owned()),
        message: words(finding),
        related_information: if session.related_information { related() } else { None },
        ..Diagnostic::default()
    }
}

/// What is wrong and what to do, as two lines.
fn words(finding: &Finding) -> String {
    if finding.help.is_empty() { finding.message.clone() } else { format!("{}\n{}", finding.message, finding.help) }
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

/// The protocol counts in 32 bits; a text is never that long, see the limit on messages.
fn number(count: usize) -> u32 {
    u32::try_from(count).unwrap_or(u32::MAX)
}

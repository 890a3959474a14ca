//! A finding as machines read it, with lines and columns.

use serde::Serialize;

use super::Selection;
use super::fingerprint::Fingerprints;
use crate::finding::Level;
use crate::text::{Columns, SourceText, Span};
use crate::workspace::{ConfigurationError, FileState, Located};

/// What `scruple check --format json` prints of each finding, in the schema `check.schema.json`. Lines and columns count from 1,
/// columns in characters unless another format counts otherwise; an end is the place after the last character.
#[derive(Clone, Debug, Serialize)]
pub struct FindingReport {
    /// The finding's code; none for what is wrong with a `scruple.toml`.
    pub code: Option<&'static str>,
    /// `error`, `warning` or `hint`.
    pub level: &'static str,
    /// The file, as the reader's folder knows it.
    pub file: String,
    /// The line.
    pub line: usize,
    /// The column.
    pub column: usize,
    /// The line of the end.
    pub end_line: usize,
    /// The column of the end.
    pub end_column: usize,
    /// The block in which it stands.
    pub block: Option<String>,
    /// What is wrong, with its numbers.
    pub message: String,
    /// What to do; empty where the message says all.
    pub help: String,
    /// Other places that have to do with it.
    pub related: Vec<RelatedReport>,
    /// Changes that would answer it, the likeliest first.
    pub fixes: Vec<FixReport>,
    /// The same for the same finding from run to run, wherever its line moves to in its file.
    pub fingerprint: String,
}

/// A place that has to do with a finding.
#[derive(Clone, Debug, Serialize)]
pub struct RelatedReport {
    /// The file.
    pub file: String,
    /// The line.
    pub line: usize,
    /// The column.
    pub column: usize,
    /// What stands there.
    pub message: String,
}

/// A change that answers a finding.
#[derive(Clone, Debug, Serialize)]
pub struct FixReport {
    /// What it does.
    pub title: String,
    /// The replacements, all in the finding's file; they do not overlap.
    pub edits: Vec<EditReport>,
}

/// A replacement of text.
#[derive(Clone, Debug, Serialize)]
pub struct EditReport {
    /// The line of its beginning.
    pub line: usize,
    /// The column of its beginning.
    pub column: usize,
    /// The line of its end.
    pub end_line: usize,
    /// The column of its end.
    pub end_column: usize,
    /// The new text.
    pub text: String,
}

/// Every finding of the selection, in the order of files and places.
pub fn finding_reports(selection: &Selection, columns: Columns) -> Vec<FindingReport> {
    let mut fingerprints = Fingerprints::default();
    let all = selection.findings();
    all.map(|(file, located)| finding_report(selection, file, located, columns, fingerprints.next(file, located))).collect()
}

/// A finding in its file.
pub(super) fn finding_report(
    selection: &Selection,
    file: &FileState,
    located: &Located,
    columns: Columns,
    fingerprint: String,
) -> FindingReport {
    let range = |source: &SourceText, span| range(source, span, columns);
    let finding = &located.finding;
    let (line, column, end_line, end_column) = range(&file.source, located.span);
    let block = file.model.blocks.get(located.block).and_then(|block| block.name.as_ref());
    let snapshot = &selection.snapshot;
    let related = finding.related.iter().filter_map(|related| {
        let (other, span) = snapshot.place(file.id, located.block, &related.place)?;
        let other = snapshot.file(other)?;
        let (line, column, ..) = range(&other.source, span);
        Some(RelatedReport { file: selection.file_name(other), line, column, message: related.message.clone() })
    });
    let fixes = finding.fixes.iter().map(|fix| FixReport {
        title: fix.title.clone(),
        edits: fix
            .edits
            .iter()
            .filter_map(|edit| {
                let (span, text) = snapshot.edit(file.id, located.block, edit)?;
                let (line, column, end_line, end_column) = range(&file.source, span);
                Some(EditReport { line, column, end_line, end_column, text })
            })
            .collect(),
    });
    FindingReport {
        code: Some(finding.code.name()),
        level: finding.level.word(),
        file: selection.file_name(file),
        line,
        column,
        end_line,
        end_column,
        block: block.map(|name| name.text.clone()),
        message: finding.message.clone(),
        help: finding.help.clone(),
        related: related.collect(),
        fixes: fixes.collect(),
        fingerprint,
    }
}

/// What is wrong with a `scruple.toml`, as findings of that file.
pub fn configuration_findings(file: &str, errors: &[ConfigurationError]) -> Vec<FindingReport> {
    let report = |error: &ConfigurationError| {
        let line = error.line.unwrap_or(1);
        FindingReport {
            code: None,
            level: Level::Error.word(),
            file: file.to_owned(),
            line,
            column: 1,
            end_line: line,
            end_column: 1,
            block: None,
            message: error.message.clone(),
            help: String::new(),
            related: Vec::new(),
            fixes: Vec::new(),
            fingerprint: super::fingerprint::of_words(&[file, &error.message]),
        }
    };
    errors.iter().map(report).collect()
}

/// Line and column of both ends, counted from 1.
fn range(source: &SourceText, span: Span, columns: Columns) -> (usize, usize, usize, usize) {
    let start = source.position(span.start, columns);
    let end = source.position(span.end, columns);
    (start.line + 1, start.column + 1, end.line + 1, end.column + 1)
}

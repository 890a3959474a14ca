//! The findings of a file as an editor lists them.

use crate::finding::{Code, Level};
use crate::text::{FileId, Span};
use crate::workspace::{Located, Snapshot};

/// A finding in its file.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Diagnostic {
    /// The characters that caused it; never empty where the file has a character to show.
    pub span: Span,
    /// How much it weighs.
    pub level: Level,
    /// Which kind of finding it is.
    pub code: Code,
    /// What is wrong, with its numbers, and what to do.
    pub message: String,
    /// Other places that have to do with it.
    pub related: Vec<RelatedPlace>,
    /// How the characters may be drawn.
    pub tags: Vec<DiagnosticTag>,
    /// Index of the finding among those of its file, by which its fixes are found again.
    pub index: usize,
}

/// A place that has to do with a finding.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct RelatedPlace {
    /// The file.
    pub file: FileId,
    /// Where in it.
    pub span: Span,
    /// What stands there.
    pub message: String,
}

/// How the characters of a finding may be drawn.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum DiagnosticTag {
    /// They have no effect.
    Unnecessary,
}

/// The findings of a file, in the order of their places.
pub fn diagnostics(snapshot: &Snapshot, file: FileId) -> Vec<Diagnostic> {
    let Some(state) = snapshot.file(file) else { return Vec::new() };
    let text = state.source.as_str();
    let findings = snapshot.findings(file).iter().enumerate();
    findings
        .map(|(index, located)| {
            let finding = &located.finding;
            Diagnostic {
                span: visible(located.span, text),
                level: finding.level,
                code: finding.code,
                message: message(located),
                related: related(snapshot, file, located),
                tags: tags(finding.code),
                index,
            }
        })
        .collect()
}

/// The message and what to do, as one text.
fn message(located: &Located) -> String {
    let finding = &located.finding;
    match finding.help.as_str() {
        "" => finding.message.clone(),
        help => format!("{}\n{help}", finding.message),
    }
}

fn related(snapshot: &Snapshot, file: FileId, located: &Located) -> Vec<RelatedPlace> {
    let places = located.finding.related.iter();
    places
        .filter_map(|related| {
            let (file, span) = snapshot.place(file, located.block, &related.place)?;
            Some(RelatedPlace { file, span, message: related.message.clone() })
        })
        .collect()
}

fn tags(code: Code) -> Vec<DiagnosticTag> {
    match code {
        Code::AcceptWithoutEffect => vec![DiagnosticTag::Unnecessary],
        _ => Vec::new(),
    }
}

/// A gap has no characters to underline, so the one before it on its line is taken, else the one behind it.
fn visible(span: Span, text: &str) -> Span {
    if !span.is_empty() {
        return span;
    }
    let before = text.get(..span.start).and_then(|before| before.chars().next_back()).filter(|one| !matches!(one, '\n' | '\r'));
    let after = text.get(span.start..).and_then(|after| after.chars().next()).filter(|one| !matches!(one, '\n' | '\r'));
    match (before, after) {
        (Some(before), _) => Span::new(span.start - before.len_utf8(), span.start),
        (None, Some(after)) => Span::new(span.start, span.start + after.len_utf8()),
        (None, None) => span,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    #[test]
    fn a_finding_has_words_a_place_and_what_to_do() {
        let fixture = fixture("solution A\n    1 g        sodium chlorid\n    q.s.       water to 1 L\n");
        let all = diagnostics(&fixture.snapshot, fixture.file);
        let unknown = all.iter().find(|one| one.code == Code::UnknownName).unwrap();
        assert_eq!(unknown.span.of(&fixture.text), "sodium chlorid");
        assert_eq!(unknown.level, Level::Error);
        assert!(unknown.message.contains("sodium chlorid") && unknown.message.contains("\nDid you mean sodium chloride?"), "{}", unknown.message);
        assert_eq!(fixture.snapshot.findings(fixture.file)[unknown.index].finding.code, Code::UnknownName);
    }

    #[test]
    fn a_gap_underlines_the_character_before_it() {
        let fixture = fixture("solution A\n    q.s.       water to\n");
        let all = diagnostics(&fixture.snapshot, fixture.file);
        let gap = all.iter().find(|one| one.code == Code::IncompleteLine).unwrap();
        assert!(!gap.span.is_empty() && !gap.span.of(&fixture.text).contains('\n'), "{gap:?}");
    }
}

//! A finding as people read it on a terminal: the line, what is marked in it, and what would mend it.

use std::ops::Range;

use annotate_snippets::renderer::DecorStyle;
use annotate_snippets::{AnnotationKind, Group, Level as Severity, Origin, Patch, Renderer, Snippet};

use super::Selection;
use crate::finding::Level;
use crate::text::Span;
use crate::workspace::{ConfigurationError, FileState, Located};

/// How many fixes are drawn; the first is the likeliest.
const FIXES_SHOWN: usize = 3;

/// How many places in other files are drawn.
const PLACES_SHOWN: usize = 2;

/// A finding with its lines, in colours (ANSI escapes), `width` columns wide. The caller takes the colours out where there
/// is no terminal.
pub fn excerpt(selection: &Selection, file: &FileState, located: &Located, width: usize) -> String {
    let finding = &located.finding;
    let path = selection.file_name(file);
    let title = severity(finding.level).primary_title(finding.message.as_str()).id(finding.code.name());
    let mut first = Group::with_title(title);
    if file.source.is_empty() {
        first = first.element(Origin::path(path.clone()));
    } else {
        let mut here = Snippet::source(file.source.as_str())
            .path(path.clone())
            .annotation(AnnotationKind::Primary.span(marked(file, located.span)));
        let mut elsewhere = Vec::new();
        for related in &finding.related {
            let Some((other, span)) = selection.snapshot.place(file.id, located.block, &related.place) else { continue };
            let Some(other) = selection.snapshot.file(other) else { continue };
            let mark = AnnotationKind::Context.span(marked(other, span)).label(related.message.as_str());
            if other.id == file.id {
                here = here.annotation(mark);
            } else {
                elsewhere.push(Snippet::source(other.source.as_str()).path(selection.file_name(other)).annotation(mark));
            }
        }
        let hidden = elsewhere.len().saturating_sub(PLACES_SHOWN);
        first = first.element(here).elements(elsewhere.into_iter().take(PLACES_SHOWN));
        if hidden > 0 {
            first = first.element(Severity::NOTE.message(format!("and {hidden} other places")));
        }
    }
    if !finding.help.is_empty() {
        first = first.element(Severity::HELP.message(finding.help.as_str()));
    }
    let mut groups = vec![first];
    for fix in finding.fixes.iter().take(FIXES_SHOWN) {
        let patches: Option<Vec<Patch>> = fix
            .edits
            .iter()
            .map(|edit| selection.snapshot.edit(file.id, located.block, edit).map(|(span, text)| Patch::new(range(file, span), text)))
            .collect();
        let title = Severity::HELP.with_name("fix").secondary_title(fix.title.as_str());
        let snippet = Snippet::source(file.source.as_str()).path(path.clone()).patches(patches.unwrap_or_default());
        groups.push(title.element(snippet));
    }
    renderer(width).render(&groups)
}

/// What is wrong with a `scruple.toml`, in colours.
pub fn configuration_excerpt(path: &str, error: &ConfigurationError, width: usize) -> String {
    let origin = match error.line {
        Some(line) => Origin::path(path).line(line),
        None => Origin::path(path),
    };
    let title = Severity::ERROR.primary_title(error.message.as_str());
    renderer(width).render(&[Group::with_title(title).element(origin)])
}

fn renderer(width: usize) -> Renderer {
    Renderer::styled().decor_style(DecorStyle::Unicode).term_width(width)
}

fn severity(level: Level) -> Severity<'static> {
    match level {
        Level::Error => Severity::ERROR,
        Level::Warning => Severity::WARNING,
        Level::Hint => Severity::INFO.with_name("hint"),
    }
}

/// The bytes of a place, on character boundaries.
fn range(file: &FileState, span: Span) -> Range<usize> {
    let start = file.source.clamp(span.start);
    start..file.source.clamp(span.end).max(start)
}

/// The bytes to mark: the place without the line breaks and white space at its end.
fn marked(file: &FileState, span: Span) -> Range<usize> {
    let range = range(file, span);
    let text = file.source.as_str().get(range.clone()).unwrap_or_default();
    range.start..range.start + text.trim_end().len()
}

//! What can be folded away: blocks, and runs of comment lines.

use super::cursor::block_span;
use crate::syntax::tree::{Content, TokenKind};
use crate::text::{FileId, Span};
use crate::workspace::{FileState, Snapshot};

/// What is folded.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum FoldingKind {
    /// A block.
    Block,
    /// Comment lines.
    Comment,
    /// `use` lines.
    Uses,
}

/// Lines that can be folded into their first.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct FoldingRange {
    /// From the first line's beginning to the last line's end.
    pub span: Span,
    /// What they are.
    pub kind: FoldingKind,
}

/// What can be folded in a file, each over two lines or more, in the order of their beginnings.
pub fn folding_ranges(snapshot: &Snapshot, file: FileId) -> Vec<FoldingRange> {
    let Some(state) = snapshot.file(file) else { return Vec::new() };
    let mut ranges: Vec<FoldingRange> = (0..state.model.blocks.len())
        .filter(|index| state.model.blocks.get(*index).is_some_and(|block| block.kind().is_some()))
        .map(|index| FoldingRange { span: block_span(state, index), kind: FoldingKind::Block })
        .collect();
    ranges.extend(runs(state, FoldingKind::Comment, is_comment));
    ranges.extend(runs(state, FoldingKind::Uses, |state, line| {
        state.tree.lines.get(line).is_some_and(|placed| {
            matches!(placed.line.content, Content::Statement(crate::syntax::tree::Statement::Use(_)))
        })
    }));
    let lines = |span: Span| state.source.line_of(span.end) - state.source.line_of(span.start);
    ranges.retain(|range| lines(range.span) > 0);
    ranges.sort_by_key(|range| range.span);
    ranges
}

fn is_comment(state: &FileState, line: usize) -> bool {
    state.tree.lines.get(line).is_some_and(|placed| {
        matches!(placed.line.content, Content::Blank)
            && placed.line.tokens.iter().any(|token| token.kind == TokenKind::Comment)
    })
}

/// Runs of lines that follow each other.
fn runs(state: &FileState, kind: FoldingKind, is_one: impl Fn(&FileState, usize) -> bool) -> Vec<FoldingRange> {
    let mut runs: Vec<FoldingRange> = Vec::new();
    let mut open: Option<Span> = None;
    for (index, placed) in state.tree.lines.iter().enumerate() {
        let text = placed.line.text.trim_end_matches(['\n', '\r']);
        let span = Span::new(placed.start, placed.start + text.len());
        open = match (open, is_one(state, index)) {
            (Some(run), true) => Some(run.to(span)),
            (None, true) => Some(span),
            (run, false) => {
                runs.extend(run.map(|span| FoldingRange { span, kind }));
                None
            }
        };
    }
    runs.extend(open.map(|span| FoldingRange { span, kind }));
    runs
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    #[test]
    fn blocks_comments_and_uses_fold() {
        let fixture = fixture("# One\n# Two\nuse \"a.prep\"\nuse \"b.prep\"\n\nsolution A\n    q.s.       water to 1 L\n\n# Below\nsolution B\n");
        let ranges = folding_ranges(&fixture.snapshot, fixture.file);
        let shown: Vec<(FoldingKind, &str)> = ranges.iter().map(|range| (range.kind, range.span.of(&fixture.text))).collect();
        assert_eq!(
            shown,
            [
                (FoldingKind::Comment, "# One\n# Two"),
                (FoldingKind::Uses, "use \"a.prep\"\nuse \"b.prep\""),
                (FoldingKind::Block, "solution A\n    q.s.       water to 1 L"),
            ]
        );
    }
}

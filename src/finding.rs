//! Findings as data: code, level, place, words and fixes. Words and levels are decided in the core, never at an edge.

use crate::text::Span;

/// How much a finding weighs.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Level {
    /// Worth knowing; never fails a check.
    Hint,
    /// A careful reviewer would ask about it.
    Warning,
    /// The recipe is not what it says, or cannot be made.
    Error,
}

/// A place inside a block, free of file positions: the logical line, counted from the block's header (which is 0), and
/// a span inside that line's text.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Anchor {
    /// Index of the logical line within its block.
    pub line: usize,
    /// Range within the text of that logical line.
    pub span: Span,
}

//! The tree of a file: one node per logical line, each with a typed statement, its tokens and what is wrong with it.
//!
//! A logical line is a line and those after it that begin with a comma. Spans inside a [`Line`] count from the start of
//! that logical line, so an equal line is an equal tree wherever it stands; [`Placed::start`] moves them into the file.

mod constant;
mod danger;
mod expectation;
mod fault;
mod lab;
mod part;
mod solution;
mod statement;

use std::sync::Arc;

pub use constant::*;
pub use danger::*;
pub use expectation::*;
pub use fault::*;
pub use lab::*;
pub use part::*;
pub use solution::*;
pub use statement::*;

use crate::text::Span;

/// The tree of a whole file. Lines follow each other without gap or overlap and cover the text.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Tree {
    /// The logical lines in file order.
    pub lines: Vec<Placed>,
}

/// A logical line and where it stands.
#[derive(Clone, Debug, PartialEq)]
pub struct Placed {
    /// Byte offset of the line's first character in the file.
    pub start: usize,
    /// The line, shared with every equal line.
    pub line: Arc<Line>,
}

/// One logical line.
#[derive(Clone, Debug, PartialEq)]
pub struct Line {
    /// The text, line breaks included.
    pub text: String,
    /// Whether white space stands before the first word. Guides recovery only.
    pub indented: bool,
    /// What the line says.
    pub content: Content,
    /// Every token and gap in order, for colours, completion and the formatter.
    pub tokens: Vec<Token>,
    /// What is wrong with the line as it is written, whatever it means.
    pub faults: Vec<Fault>,
}

/// What a line says.
#[allow(clippy::large_enum_variant, reason = "nearly every line is a statement")]
#[derive(Clone, Debug, PartialEq)]
pub enum Content {
    /// Nothing, or a comment.
    Blank,
    /// A statement, perhaps with gaps.
    Statement(Statement),
    /// A line whose first word is unknown.
    Junk(Span),
}

/// A run of characters of one kind, or a gap where something is missing.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Token {
    /// Its kind.
    pub kind: TokenKind,
    /// Its place; empty for a gap.
    pub span: Span,
}

/// The kinds of token.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum TokenKind {
    /// A statement word, header word or other fixed word of the language (`to`, `at`, `purity`).
    Keyword,
    /// A number.
    Number,
    /// A unit.
    Unit,
    /// The name of a thing being defined.
    Definition,
    /// The name of a thing being referred to.
    Name,
    /// A property of `expect` or of a target: pH, ionic strength …
    Property,
    /// `±`, `/`, `+`.
    Operator,
    /// A comma between parts.
    Separator,
    /// Free text of `step`, `note`, `source` …
    Text,
    /// A quoted path.
    Path,
    /// A finding code.
    Code,
    /// A chemical formula.
    Formula,
    /// A comment.
    Comment,
    /// Something that cannot be read.
    Bad,
    /// A gap: nothing stands here yet, and this is what belongs here.
    Missing(Expected),
}

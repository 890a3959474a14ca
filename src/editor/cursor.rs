//! Where an offset stands: its file, block, logical line and token.

use std::sync::Arc;

use crate::finding::Anchor;
use crate::model::Block;
use crate::syntax::tree::{Content, Line, Statement, Token, TokenKind};
use crate::text::{FileId, Span};
use crate::workspace::{FileState, Snapshot};

/// An offset with everything that holds it.
#[derive(Clone, Copy, Debug)]
pub struct Cursor<'a> {
    /// The file.
    pub file: &'a Arc<FileState>,
    /// Index of the block in the file.
    pub block_index: usize,
    /// The block.
    pub block: &'a Arc<Block>,
    /// Index of the logical line within the block.
    pub line_index: usize,
    /// The logical line.
    pub line: &'a Arc<Line>,
    /// Where the logical line begins in the file.
    pub line_start: usize,
    /// The offset within the logical line.
    pub at: usize,
}

impl<'a> Cursor<'a> {
    /// The cursor at an offset of a file; nothing in a file without lines.
    pub fn new(snapshot: &'a Snapshot, file: FileId, offset: usize) -> Option<Self> {
        let file = snapshot.file(file)?;
        let line = file.line_at(offset);
        let placed = file.tree.lines.get(line)?;
        let (block_index, line_index) = file.block_of_line(line);
        Some(Cursor {
            file,
            block_index,
            block: file.model.blocks.get(block_index)?,
            line_index,
            line: &placed.line,
            line_start: placed.start,
            at: offset.saturating_sub(placed.start),
        })
    }

    /// The statement of the line.
    pub fn statement(&self) -> Option<&'a Statement> {
        match &self.line.content {
            Content::Statement(statement) => Some(statement),
            Content::Blank | Content::Junk(_) => None,
        }
    }

    /// A span of the line as a span of the file.
    pub fn absolute(&self, span: Span) -> Span {
        span.shifted(self.line_start)
    }

    /// The token under the cursor: the one that holds it, else the one that ends there. Gaps are none.
    pub fn token(&self) -> Option<Token> {
        let mut touching = self
            .line
            .tokens
            .iter()
            .filter(|token| !matches!(token.kind, TokenKind::Missing(_)) && token.span.touches(self.at));
        let holding = touching.clone().find(|token| token.span.start <= self.at && self.at < token.span.end);
        // Between a name and the comma behind it, the name is meant.
        let ending = touching.find(|token| token.span.end == self.at);
        match (holding, ending) {
            (Some(holding), Some(ending)) if weight(holding.kind) < weight(ending.kind) => Some(*ending),
            (Some(holding), _) => Some(*holding),
            (None, ending) => ending.copied(),
        }
    }

    /// The text of a span of the line.
    pub fn text(&self, span: Span) -> &'a str {
        span.of(&self.line.text)
    }

    /// Whether a place of the block stands on the cursor's line.
    pub fn is_on_line(&self, anchor: Anchor) -> bool {
        anchor.line == self.line_index
    }
}

/// Of two tokens that touch, the one that says more is meant.
fn weight(kind: TokenKind) -> u8 {
    match kind {
        TokenKind::Separator | TokenKind::Comment | TokenKind::Missing(_) => 0,
        TokenKind::Operator | TokenKind::Bad => 1,
        _ => 2,
    }
}

/// The whole of a block in its file, without the blank lines and comments below it that lead over to the next.
pub fn block_span(file: &FileState, block_index: usize) -> Span {
    let first = file.model.first_lines.get(block_index).copied().unwrap_or(0);
    let lines = file.model.blocks.get(block_index).map_or(&[][..], |block| block.lines.as_slice());
    let last = lines.iter().rposition(|line| !matches!(line.content, Content::Blank)).unwrap_or(0);
    let start = file.line_start(first);
    let text = lines.get(last).map_or("", |line| line.text.as_str());
    let end = file.line_start(first + last) + text.trim_end_matches(['\n', '\r']).len();
    let indent = lines.first().map_or(0, |line| line.text.len() - line.text.trim_start().len());
    Span::new(start + indent.min(end.saturating_sub(start)), end)
}

/// The characters of a line that its statement takes up: from its first token to its last that is no comment and no gap.
pub fn statement_span(line: &Line) -> Span {
    let mut tokens = line
        .tokens
        .iter()
        .filter(|token| !matches!(token.kind, TokenKind::Comment | TokenKind::Missing(_)) && !token.span.is_empty());
    match tokens.next() {
        Some(first) => tokens.fold(first.span, |whole, token| whole.to(token.span)),
        None => Span::empty(line.text.len() - line.text.trim_start().len()),
    }
}

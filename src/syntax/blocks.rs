//! Blocks of a file: a header and the lines below it.

use std::ops::Range;

use super::tree::*;

/// A run of lines that belong together.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Block {
    /// Index of the line that opens the block: a header, or an unindented junk line that opens a nameless one. None for the
    /// lines above the first block.
    pub header: Option<usize>,
    /// Indices of its lines, the opening one included.
    pub lines: Range<usize>,
    /// Whether the block is nameless: parsed, but not to be evaluated.
    pub nameless: bool,
}

impl Tree {
    /// The blocks in order. They cover all lines; the first is the file's head, which may have no line.
    pub fn blocks(&self) -> impl Iterator<Item = Block> + '_ {
        let mut next = 0;
        let mut head = true;
        std::iter::from_fn(move || {
            let start = next;
            if !std::mem::take(&mut head) && start >= self.lines.len() {
                return None;
            }
            let opener = self.lines.get(start).filter(|placed| opens_a_block(&placed.line));
            let is_head = start == 0 && opener.is_none();
            if start == 0 && opener.is_some() {
                // A file that begins with a header has an empty head, which is not reported.
                head = false;
            }
            let after = if is_head { start } else { start + 1 };
            next = self
                .lines
                .iter()
                .enumerate()
                .skip(after)
                .find(|(_, placed)| opens_a_block(&placed.line))
                .map_or(self.lines.len(), |(index, _)| index);
            Some(Block {
                header: (!is_head).then_some(start),
                lines: start..next,
                nameless: opener.is_some_and(|placed| matches!(placed.line.content, Content::Junk(_))),
            })
        })
    }

    /// The index of the logical line that holds `offset`; the last one for the end of the text, none for an empty text.
    pub fn line_at(&self, offset: usize) -> Option<usize> {
        self.lines.partition_point(|placed| placed.start <= offset).checked_sub(1)
    }

    /// Length of the text that the lines cover, in bytes.
    pub fn len(&self) -> usize {
        self.lines.last().map_or(0, |placed| placed.start + placed.line.text.len())
    }

    /// Whether the tree is that of an empty text.
    pub fn is_empty(&self) -> bool {
        self.lines.is_empty()
    }
}

fn opens_a_block(line: &Line) -> bool {
    match &line.content {
        Content::Statement(Statement::Header(_)) => true,
        Content::Junk(_) => !line.indented,
        _ => false,
    }
}

#[cfg(test)]
mod tests {
    use crate::syntax::parse;

    #[test]
    fn a_mistyped_header_pours_its_lines_into_no_other_block() {
        let tree = parse("use \"a.prep\"\nsolution A\n    1 g sodium chloride\nsoluton B\n    2 g sodium chloride\nlab C\n");
        let blocks: Vec<_> = tree.blocks().collect();
        assert_eq!(blocks.len(), 4);
        assert_eq!(blocks[0].header, None);
        assert_eq!(blocks[1].lines, 1..3);
        assert_eq!((blocks[2].header, blocks[2].nameless), (Some(3), true));
        assert_eq!(blocks[2].lines, 3..5);
        assert_eq!(blocks[3].header, Some(5));
    }

    #[test]
    fn blocks_cover_all_lines() {
        for text in ["", "solution A", "# x\n\nsolution A\n", "5 g x\n", "junk\n5 g x\n"] {
            let tree = parse(text);
            let mut next = 0;
            for block in tree.blocks() {
                assert_eq!(block.lines.start, next, "{text:?}");
                next = block.lines.end;
            }
            assert_eq!(next, tree.lines.len(), "{text:?}");
        }
    }

    #[test]
    fn finds_the_line_of_an_offset() {
        let tree = parse("ab\ncd\n");
        assert_eq!(tree.line_at(0), Some(0));
        assert_eq!(tree.line_at(3), Some(1));
        assert_eq!(tree.line_at(99), Some(1));
        assert_eq!(parse("").line_at(0), None);
    }
}

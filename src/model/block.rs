//! A file as a sequence of blocks: its head, what each header opens, and the nameless ones.

use std::sync::Arc;

use super::{Danger, Group, Ion, Lab, NameKey, Recipe, Solid, Substance};
use crate::finding::{Anchor, Finding};
use crate::syntax::tree::{BlockKind, Line};
use crate::text::{FileId, Span};

/// A file as its tree means it.
#[derive(Clone, Debug)]
pub struct File {
    /// Which file.
    pub id: FileId,
    /// The blocks in file order. The first is the head, which may be empty.
    pub blocks: Vec<Arc<Block>>,
    /// For each block, the index of its first logical line in the tree.
    pub first_lines: Vec<usize>,
    /// The paths of the `use` lines, with their places in the head or wherever they stand.
    pub uses: Vec<UseLine>,
}

/// A `use` line.
#[derive(Clone, Debug, PartialEq)]
pub struct UseLine {
    /// Which block it stands in.
    pub block: usize,
    /// The whole statement.
    pub at: Anchor,
    /// The path as written.
    pub path: String,
    /// Where the path stands.
    pub path_at: Anchor,
}

/// What opens a block.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum BlockRole {
    /// What stands above the first header.
    Head,
    /// A header with its kind.
    Defines(BlockKind),
    /// A line that should have been a header: what follows is read and not evaluated.
    Nameless,
}

/// The name that a header defines.
#[derive(Clone, Debug, PartialEq)]
pub struct DefinedName {
    /// As written, without quotes.
    pub text: String,
    /// As compared.
    pub key: NameKey,
    /// Where it stands in the header.
    pub span: Span,
}

/// A block, free of its place in the file.
#[derive(Clone, Debug)]
pub struct Block {
    /// What opened it.
    pub role: BlockRole,
    /// Its name; none for the head, nameless blocks and headers without one.
    pub name: Option<DefinedName>,
    /// Other names of a substance, bottle or ion.
    pub also: Vec<DefinedName>,
    /// The logical lines, header first.
    pub lines: Vec<Arc<Line>>,
    /// What the lines mean.
    pub body: Body,
    /// What is wrong with the lines whatever stands elsewhere.
    pub findings: Vec<Finding>,
}

/// What a block means.
#[derive(Clone, Debug)]
#[allow(missing_docs, reason = "named after the header words")]
pub enum Body {
    /// The head or a nameless block.
    None,
    Solution(Recipe),
    Bottle(Recipe),
    Substance(Substance),
    Ion(Ion),
    Solid(Solid),
    Danger(Danger),
    Group(Group),
    Lab(Lab),
}

impl Block {
    /// The kind of block, where a header opened it.
    pub fn kind(&self) -> Option<BlockKind> {
        match self.role {
            BlockRole::Defines(kind) => Some(kind),
            BlockRole::Head | BlockRole::Nameless => None,
        }
    }

    /// The recipe of a solution or bottle.
    pub fn recipe(&self) -> Option<&Recipe> {
        match &self.body {
            Body::Solution(recipe) | Body::Bottle(recipe) => Some(recipe),
            _ => None,
        }
    }

    /// Where the name stands, or else the header line's beginning.
    pub fn header_anchor(&self) -> Anchor {
        Anchor::new(0, self.name.as_ref().map_or(Span::empty(0), |name| name.span))
    }
}

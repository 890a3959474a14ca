//! From text to tree: the only room that names pest. `parse` accepts every string.

mod blocks;
mod build;
mod characters;
mod format;
pub mod formula;
mod grammar;
mod number;
mod scanner;
mod spelling;
pub mod tree;

use std::collections::HashMap;
use std::sync::Arc;

pub use blocks::Block;
pub use format::{format, format_line, format_tree};
use tree::{Line, Placed, Tree};

/// The tree of a text. Every text has one: what cannot be read is a fault of its line and of no other.
pub fn parse(text: &str) -> Tree {
    parse_with(text, HashMap::new())
}

/// The tree of a text, sharing with `before` every line that is equal to one of its lines. The result is that of [`parse`].
pub fn parse_reusing(text: &str, before: &Tree) -> Tree {
    let known = before.lines.iter().map(|placed| (placed.line.text.as_str(), &placed.line)).collect();
    parse_with(text, known)
}

/// Whether a name can be written without quotes wherever a name stands; others need them (see [`quoted_name`]).
pub fn is_bare_name(name: &str) -> bool {
    build::can_stand_bare(name)
}

/// A name in double quotes, its own quotes doubled.
pub fn quoted_name(name: &str) -> String {
    build::quoted(name)
}

fn parse_with(text: &str, known: HashMap<&str, &Arc<Line>>) -> Tree {
    let mut new: HashMap<&str, Arc<Line>> = HashMap::new();
    let mut start = 0;
    let lines = scanner::logical_lines(text)
        .into_iter()
        .map(|written| {
            // A byte order mark is lawful only where the file begins, so lines that begin with one are never shared.
            let line = if written.starts_with('\u{FEFF}') {
                Arc::new(build::line(written, start == 0))
            } else if let Some(line) = known.get(written) {
                Arc::clone(line)
            } else {
                Arc::clone(new.entry(written).or_insert_with(|| Arc::new(build::line(written, false))))
            };
            let placed = Placed { start, line };
            start += written.len();
            placed
        })
        .collect();
    Tree { lines }
}

//! From text to tree: the only room that names pest. `parse` accepts every string.

pub mod tree;
pub mod formula;
pub fn parse(_: &str) -> tree::Tree { tree::Tree::default() }
pub fn parse_reusing(_: &str, _: &tree::Tree) -> tree::Tree { tree::Tree::default() }
pub fn is_bare_name(_: &str) -> bool { true }
// Placeholder until the parser lands: whoever lands it replaces this file and formula.rs with theirs.

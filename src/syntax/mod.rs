//! From text to tree: the only room that names pest. `parse` accepts every string.

pub mod tree;

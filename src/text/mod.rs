//! Text and places in it: the only room that names ropey. Positions are byte offsets, spans are half-open;
//! lines and columns exist only here and at the edges.

mod file_id;
mod source;
mod span;

pub use file_id::FileId;
pub use source::{Columns, Position, SourceText};
pub use span::Span;

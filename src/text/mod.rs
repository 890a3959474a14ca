//! Text and places in it: the only room that names ropey. Positions are byte offsets, spans are half-open;
//! lines and columns exist only here and at the edges.

mod span;

pub use span::Span;

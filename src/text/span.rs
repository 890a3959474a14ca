//! A half-open range of bytes in a text.

use serde::Serialize;

/// A half-open range of byte offsets, `start..end`, into one particular text (a file, or a logical line where the
/// owner says so).
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash, PartialOrd, Ord, Serialize)]
pub struct Span {
    /// First byte of the range.
    pub start: usize,
    /// First byte after the range; never less than `start`.
    pub end: usize,
}

impl Span {
    /// The range `start..end`; an `end` before `start` gives the empty range at `start`.
    pub fn new(start: usize, end: usize) -> Self {
        Span { start, end: end.max(start) }
    }

    /// The empty range at `offset`.
    pub fn empty(offset: usize) -> Self {
        Span { start: offset, end: offset }
    }

    /// Length in bytes.
    pub fn len(self) -> usize {
        self.end - self.start
    }

    /// Whether no byte lies in the range.
    pub fn is_empty(self) -> bool {
        self.start == self.end
    }

    /// The same range, moved right by `offset` bytes: from a logical line's text to its file's.
    pub fn shifted(self, offset: usize) -> Self {
        Span { start: self.start + offset, end: self.end + offset }
    }

    /// The smallest range that holds both.
    pub fn to(self, other: Span) -> Self {
        Span { start: self.start.min(other.start), end: self.end.max(other.end) }
    }

    /// Whether `offset` lies in the range or touches either end, as a cursor does.
    pub fn touches(self, offset: usize) -> bool {
        self.start <= offset && offset <= self.end
    }

    /// The text of this range, or an empty string where the range does not fit `text`.
    pub fn of(self, text: &str) -> &str {
        text.get(self.start..self.end).unwrap_or_default()
    }
}

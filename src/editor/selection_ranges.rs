//! What a growing selection takes in: word, token, statement, line, block, file.

use super::cursor::{Cursor, block_span, statement_span};
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// The ranges round an offset from the smallest to the whole file, each larger than the one before.
pub fn selection_ranges(snapshot: &Snapshot, file: FileId, offset: usize) -> Vec<Span> {
    let Some(state) = snapshot.file(file) else { return Vec::new() };
    let mut ranges = vec![word(state.source.as_str(), state.source.clamp(offset))];
    if let Some(cursor) = Cursor::new(snapshot, file, offset) {
        ranges.extend(cursor.token().map(|token| cursor.absolute(token.span)));
        ranges.push(cursor.absolute(statement_span(cursor.line)));
        ranges.push(cursor.absolute(Span::new(0, cursor.line.text.trim_end_matches(['\n', '\r']).len())));
        ranges.push(block_span(cursor.file, cursor.block_index));
    }
    ranges.push(Span::new(0, state.source.len()));
    let mut growing: Vec<Span> = Vec::new();
    for range in ranges {
        let inner = growing.last().copied().unwrap_or(Span::empty(offset));
        if range.start <= inner.start && inner.end <= range.end && range.len() > inner.len() {
            growing.push(range);
        }
    }
    growing
}

/// The word that touches an offset; empty between blanks.
fn word(text: &str, offset: usize) -> Span {
    let is_word = |letter: &char| letter.is_alphanumeric() || matches!(letter, 'µ' | '.' | '-');
    let before: usize = text.get(..offset).unwrap_or_default().chars().rev().take_while(is_word).map(char::len_utf8).sum();
    let after: usize = text.get(offset..).unwrap_or_default().chars().take_while(is_word).map(char::len_utf8).sum();
    Span::new(offset - before, offset + after)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    #[test]
    fn a_selection_grows_by_meaning() {
        let fixture = fixture("solution A\n    1 g        sodium chlo‸ride # salt\n    q.s.       water to 1 L\n");
        let ranges = selection_ranges(&fixture.snapshot, fixture.file, fixture.offset);
        let shown: Vec<&str> = ranges.iter().map(|range| range.of(&fixture.text)).collect();
        assert_eq!(shown[..4], ["chloride", "sodium chloride", "1 g        sodium chloride", "    1 g        sodium chloride # salt"]);
        assert_eq!(shown.last(), Some(&fixture.text.as_str()));
    }
}

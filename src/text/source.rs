//! The text of a file, edited in place and asked for lines and columns.

use std::sync::Arc;

use ropey::Rope;

use super::span::Span;

/// A line and a column, both from zero. What a column counts is said by [`Columns`].
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Position {
    /// The line.
    pub line: usize,
    /// The column.
    pub column: usize,
}

/// What a column counts.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Columns {
    /// Bytes of UTF-8.
    Utf8,
    /// Code units of UTF-16.
    Utf16,
    /// Characters (Unicode scalar values), as people are told on a command line.
    Characters,
}

/// The text of a file. Lines end at LF, CRLF or CR and nowhere else. Every place that does not fit is moved to the
/// nearest that does; nothing here panics or fails.
#[derive(Clone, Debug)]
pub struct SourceText {
    rope: Rope,
    contents: Arc<str>,
}

impl From<&str> for SourceText {
    fn from(text: &str) -> Self {
        SourceText { rope: Rope::from_str(text), contents: Arc::from(text) }
    }
}

impl PartialEq for SourceText {
    fn eq(&self, other: &Self) -> bool {
        self.contents == other.contents
    }
}

impl SourceText {
    /// The text.
    pub fn as_str(&self) -> &str {
        &self.contents
    }

    /// The text, shared.
    pub fn contents(&self) -> Arc<str> {
        Arc::clone(&self.contents)
    }

    /// Length in bytes.
    pub fn len(&self) -> usize {
        self.contents.len()
    }

    /// Whether there is no text.
    pub fn is_empty(&self) -> bool {
        self.contents.is_empty()
    }

    /// The nearest character boundary at or before `offset`.
    pub fn clamp(&self, offset: usize) -> usize {
        let mut offset = offset.min(self.contents.len());
        while !self.contents.is_char_boundary(offset) {
            offset -= 1;
        }
        offset
    }

    /// Puts `text` in place of `range`.
    pub fn apply_change(&mut self, range: Span, text: &str) {
        let start = self.clamp(range.start);
        let end = self.clamp(range.end.max(start));
        let characters = self.rope.try_byte_to_char(start).and_then(|from| Ok((from, self.rope.try_byte_to_char(end)?)));
        let edited = characters.and_then(|(from, to)| {
            self.rope.try_remove(from..to)?;
            self.rope.try_insert(from, text)
        });
        if edited.is_err() {
            // Clamped offsets always fit; should the rope disagree, the contents are right and the rope is made anew.
            let mut whole = String::with_capacity(self.contents.len() + text.len());
            whole.push_str(self.contents.get(..start).unwrap_or_default());
            whole.push_str(text);
            whole.push_str(self.contents.get(end..).unwrap_or_default());
            self.rope = Rope::from_str(&whole);
        }
        self.contents = Arc::from(self.rope.to_string());
    }

    /// How many lines there are; a text that ends in a line break has an empty last line.
    pub fn line_count(&self) -> usize {
        self.rope.len_lines()
    }

    /// The line that holds `offset`.
    pub fn line_of(&self, offset: usize) -> usize {
        self.rope.try_byte_to_line(self.clamp(offset)).unwrap_or_default()
    }

    /// The bytes of a line without its break. A line past the last is the empty range at the end.
    pub fn line_span(&self, line: usize) -> Span {
        let start = self.rope.try_line_to_byte(line).unwrap_or(self.len());
        let next = self.rope.try_line_to_byte(line.saturating_add(1)).unwrap_or(self.len());
        let whole = self.contents.get(start..next).unwrap_or_default();
        Span::new(start, start + whole.trim_end_matches(['\n', '\r']).len())
    }

    /// The text of a line without its break.
    pub fn line_text(&self, line: usize) -> &str {
        self.line_span(line).of(&self.contents)
    }

    /// Where `offset` stands.
    pub fn position(&self, offset: usize, columns: Columns) -> Position {
        let offset = self.clamp(offset);
        let line = self.line_of(offset);
        let start = self.rope.try_line_to_byte(line).unwrap_or_default();
        let before = self.contents.get(start..offset).unwrap_or_default();
        Position { line, column: width(before, columns) }
    }

    /// The offset of a position. A column past the line's end is the line's end, a line past the last the text's end;
    /// a column inside a character is that character's beginning.
    pub fn offset(&self, position: Position, columns: Columns) -> usize {
        if position.line >= self.line_count() {
            return self.len();
        }
        let span = self.line_span(position.line);
        let text = span.of(&self.contents);
        let mut column = 0;
        for (index, character) in text.char_indices() {
            let next = column + character_width(character, columns);
            if next > position.column {
                return span.start + index;
            }
            column = next;
        }
        span.end
    }
}

fn character_width(character: char, columns: Columns) -> usize {
    match columns {
        Columns::Utf8 => character.len_utf8(),
        Columns::Utf16 => character.len_utf16(),
        Columns::Characters => 1,
    }
}

fn width(text: &str, columns: Columns) -> usize {
    match columns {
        Columns::Utf8 => text.len(),
        Columns::Utf16 => text.chars().map(char::len_utf16).sum(),
        Columns::Characters => text.chars().count(),
    }
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;

    #[test]
    fn only_line_feeds_and_carriage_returns_break_lines() {
        let text = SourceText::from("a\u{2028}b\u{85}c\r\nd\re\n");
        assert_eq!(text.line_count(), 4);
        assert_eq!(text.line_text(0), "a\u{2028}b\u{85}c");
        assert_eq!(text.line_text(1), "d");
        assert_eq!(text.line_text(2), "e");
        assert_eq!(text.line_text(3), "");
        assert_eq!(text.line_text(9), "");
    }

    #[test]
    fn columns_are_counted_three_ways() {
        let text = SourceText::from("5 µL 𝛂x");
        let end = text.len();
        assert_eq!(text.position(end, Columns::Utf8).column, 11);
        assert_eq!(text.position(end, Columns::Utf16).column, 8);
        assert_eq!(text.position(end, Columns::Characters).column, 7);
        // Inside the surrogate pair is the beginning of the letter.
        assert_eq!(text.offset(Position { line: 0, column: 6 }, Columns::Utf16), 6);
        assert_eq!(text.offset(Position { line: 0, column: 99 }, Columns::Utf16), end);
    }

    proptest! {
        #[test]
        fn edits_agree_with_plain_strings(text in "[a-c\\r\\nµ𝛂]{0,40}", start in 0usize..60, length in 0usize..60, insert in "[x\\n\\rµ]{0,6}") {
            let mut source = SourceText::from(text.as_str());
            let from = source.clamp(start);
            let to = source.clamp(start + length).max(from);
            let mut plain = text.clone();
            plain.replace_range(from..to, &insert);
            source.apply_change(Span::new(start, start + length), &insert);
            prop_assert_eq!(source.as_str(), plain.as_str());
            let fresh = SourceText::from(plain.as_str());
            prop_assert_eq!(source.line_count(), fresh.line_count());
            for offset in 0..=plain.len() {
                prop_assert_eq!(source.position(offset, Columns::Utf16), fresh.position(offset, Columns::Utf16));
            }
        }

        #[test]
        fn a_position_leads_back_to_its_offset(text in "[a\\r\\nµ𝛂]{0,40}", offset in 0usize..200) {
            let source = SourceText::from(text.as_str());
            let offset = source.clamp(offset);
            // Between CR and LF there is no column of its own: it is the line's end.
            let between = text.as_bytes().get(offset) == Some(&b'\n') && offset > 0 && text.as_bytes()[offset - 1] == b'\r';
            for columns in [Columns::Utf8, Columns::Utf16, Columns::Characters] {
                let back = source.offset(source.position(offset, columns), columns);
                prop_assert_eq!(back, if between { offset - 1 } else { offset });
            }
        }
    }
}

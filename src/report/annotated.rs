//! A file with what comes out of its solutions below each of them: what `git diff` and `git log -p` compare in the place of the
//! bare text.

use super::Selection;
use super::selection::Subject;
use super::solution_sheet::facts;
use crate::evaluate::LineOutcome;
use crate::evaluate::Role;
use crate::model::Body;
use crate::units::format;
use crate::workspace::FileState;

/// What every added line begins with. In a recipe it is a comment.
const MARK: &str = "#=";

/// The text of a file, every line as it stands, and below each solution a line for each of its values, verdicts and findings.
pub fn annotated(selection: &Selection, file: &FileState) -> String {
    let source = file.source.as_str();
    let mut out = String::new();
    let mut at = 0;
    for (index, block) in file.model.blocks.iter().enumerate() {
        if !matches!(block.body, Body::Solution(_)) {
            continue;
        }
        // Below the last line that says something.
        let first = file.model.first_lines.get(index).copied().unwrap_or(0);
        let saying = block.lines.iter().rposition(|line| !line.text.trim().is_empty()).unwrap_or(0);
        let end = file.line_start(first + saying + 1).max(at);
        out.push_str(source.get(at..end).unwrap_or_default());
        at = end;
        if !out.ends_with('\n') {
            out.push('\n');
        }
        let subjects = selection.solutions().filter(|subject| subject.file.id == file.id && subject.index == index);
        subjects.flat_map(|subject| lines(&subject, file)).for_each(|line| out.push_str(&format!("{MARK} {line}\n")));
    }
    out.push_str(source.get(at..).unwrap_or_default());
    out
}

fn lines(subject: &Subject, file: &FileState) -> Vec<String> {
    let name = &subject.member.name;
    let mut lines = Vec::new();
    match subject.member.outcome.as_deref() {
        Some(outcome) => {
            lines.extend(facts(subject, outcome).into_iter().map(|(what, value)| format!("{name}: {what} {value}")));
            let sought = outcome.lines.iter().filter(|line| matches!(line.role, Role::Adjusts | Role::MakesUp | Role::OfPair));
            lines.extend(sought.map(|line| format!("{name}: takes {}", taken(line))));
            lines.extend(outcome.verdicts.iter().map(|verdict| {
                let value = verdict.value.map(|value| format::with_unit(value, verdict.unit)).unwrap_or_default();
                let holds = match verdict.holds {
                    Some(true) => "as expected",
                    Some(false) => "not as expected",
                    None => "not judged",
                };
                format!("{name}: {} {value} at {}, {holds}", verdict.property.words(), format::temperature(verdict.temperature_K))
            }));
        }
        None if file.model.uses.is_empty() => lines.push(format!("{name}: has no values")),
        // Which revision the other files belong to is not known here.
        None => lines.push(format!("{name}: takes what stands in other files; scruple compare works it out")),
    }
    let of_others = subject.member.outcome.is_none() && !file.model.uses.is_empty();
    if !of_others && subject.member_index == 0 {
        lines.extend(subject.findings().map(|located| {
            let finding = &located.finding;
            format!("{name}: {} {}: {}", finding.level.word(), finding.code.name(), finding.message)
        }));
    }
    lines
}

fn taken(line: &LineOutcome) -> String {
    let amount = line.volume_L.map_or_else(|| format::mass(line.mass_kg, 4), |volume| format::volume(volume, 4));
    format!("{amount} {}", line.name)
}

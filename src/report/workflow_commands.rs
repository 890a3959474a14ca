//! Findings as workflow commands: lines on standard output that a runner turns into annotations on the changed lines
//! (`::error file=…,line=…::message`).

use super::FindingReport;

/// A runner shows so many annotations of each level per step and drops the rest.
const MOST_SHOWN: usize = 10;

/// The findings as commands, the gravest first. What the runner would drop follows as plain lines, and a last line counts.
pub fn workflow_commands(findings: &[FindingReport]) -> String {
    let mut out = String::new();
    let mut rest = Vec::new();
    let mut counts = Vec::new();
    for (level, command) in [("error", "error"), ("warning", "warning"), ("hint", "notice")] {
        let of_level: Vec<&FindingReport> = findings.iter().filter(|finding| finding.level == level).collect();
        for (number, finding) in of_level.iter().enumerate() {
            if number < MOST_SHOWN {
                out.push_str(&annotation(command, finding));
            } else {
                rest.push(*finding);
            }
        }
        counts.push(format!("{} {level}{}", of_level.len(), if of_level.len() == 1 { "" } else { "s" }));
    }
    for finding in &rest {
        let code = finding.code.unwrap_or("configuration");
        out.push_str(&plain(&format!("{} {code}: {}:{}:{}: {}", finding.level, finding.file, finding.line, finding.column, finding.message)));
    }
    out.push_str(&plain(&format!("scruple: {}", counts.join(", "))));
    out
}

fn annotation(command: &str, finding: &FindingReport) -> String {
    let title = finding.code.unwrap_or("configuration");
    let mut properties = format!("title={},file={},line={},endLine={}", property(title), property(&finding.file), finding.line, finding.end_line);
    // Columns are refused where the place runs over several lines.
    if finding.line == finding.end_line {
        properties.push_str(&format!(",col={},endColumn={}", finding.column, finding.end_column.max(finding.column)));
    }
    let help = if finding.help.is_empty() { String::new() } else { format!("\n{}", finding.help) };
    command_line(command, &properties, &format!("{}{help}", finding.message))
}

/// A command with properties that are escaped already.
pub(super) fn command_line(command: &str, properties: &str, message: &str) -> String {
    format!("::{command} {properties}::{}\n", data(message))
}

/// The message of a command.
fn data(text: &str) -> String {
    text.replace('%', "%25").replace('\r', "%0D").replace('\n', "%0A")
}

/// The value of a property of a command.
pub(super) fn property(text: &str) -> String {
    data(text).replace(':', "%3A").replace(',', "%2C")
}

/// A line that no runner takes for a command, whatever names stand in it.
fn plain(text: &str) -> String {
    let line: String = text.chars().map(|character| if character.is_control() { ' ' } else { character }).collect();
    format!("{}\n", line.replace("##[", "## ["))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_cannot_become_commands_or_properties() {
        // The same as the toolkit of the runner writes (npm @actions/core 3.0.1, issueCommand).
        let line = command_line(
            "error",
            &format!("title={},file={},line=3", property("S001: pH, out of range"), property("recipes/a,b:c.buf")),
            "line1\nline2 100% bad: a,b",
        );
        assert_eq!(line, "::error title=S001%3A pH%2C out of range,file=recipes/a%2Cb%3Ac.buf,line=3::line1%0Aline2 100%25 bad: a,b\n");
        assert_eq!(plain("warning x\n::error::y ##[error]z\u{1b}[31m"), "warning x ::error::y ## [error]z [31m\n");
    }
}

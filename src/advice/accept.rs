//! What the author has judged: accepted findings are left out, and an acceptance that silences nothing is reported.

use super::Case;
use crate::finding::{Code, Edit, EditPlace, Finding, Fix, Level};

/// Leaves out what the block's `accept` lines name, and adds what is to be said of those lines.
pub(super) fn apply(case: &Case, mut findings: Vec<Finding>) -> Vec<Finding> {
    let Some(recipe) = case.recipe() else { return findings };
    let mut said = Vec::new();
    for acceptance in &recipe.accepts {
        let Some(code) = Code::from_name(&acceptance.code.value) else {
            let mut near: Vec<(usize, &str)> = Code::ALL
                .iter()
                .map(|code| (strsim::damerau_levenshtein(code.name(), &acceptance.code.value), code.name()))
                .filter(|(distance, _)| *distance <= 3)
                .collect();
            near.sort_unstable();
            said.push(
                Finding::new(
                    Code::AcceptWithoutEffect,
                    acceptance.code.at,
                    format!("No finding has the code `{}`.", acceptance.code.value),
                )
                .help("Write the code as the finding shows it.")
                .fixes(near.iter().take(2).map(|(_, name)| Fix::replace(format!("Write `{name}`"), acceptance.code.at, *name))),
            );
            continue;
        };
        let is_meant = |finding: &Finding| {
            finding.code == code
                && acceptance.on.as_ref().is_none_or(|on| finding.about.iter().any(|key| key == on.key.as_str()))
        };
        let errors = findings.iter().filter(|finding| is_meant(finding) && finding.level == Level::Error).count();
        let before = findings.len();
        findings.retain(|finding| !(is_meant(finding) && finding.level != Level::Error));
        if findings.len() != before {
            continue;
        }
        let (message, help) = if errors > 0 || code.level() == Level::Error {
            (format!("`{}` is an error, and errors cannot be accepted.", code.name()), "Mend what it points to, and remove this line.")
        } else if recipe.sound && case.outcomes().next().is_some() {
            (format!("Nothing here raises `{}`, so accepting it has no effect.", code.name()), "Remove the line; what it judged is gone.")
        } else {
            // Without values nothing can be said of what would be found.
            continue;
        };
        said.push(
            Finding::new(Code::AcceptWithoutEffect, acceptance.at, message).help(help).fix(Fix {
                title: "Remove the line".into(),
                edits: vec![Edit { place: EditPlace::WholeLine(acceptance.at.line), text: String::new() }],
            }),
        );
    }
    findings.extend(said);
    findings
}

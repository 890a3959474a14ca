//! A comparison as a comment on a pull request: a table on top, the details folded.

use super::super::sheet::escaped_markdown;
use super::html::escaped as escaped_html;
use super::{ChangeReport, ComparisonReport, plain};

/// Services refuse longer comments (65,536 characters); the rest is counted.
const MOST_CHARACTERS: usize = 60_000;

/// The table names so many solutions; the rest is counted.
const MOST_ROWS: usize = 50;

/// The comparison as Markdown.
pub fn markdown(report: &ComparisonReport) -> String {
    let mut out = format!("### Recipes: {}\n\n", masked(&report.summary()));
    out.push_str(&format!("{} → {}, both worked out by scruple {}.\n", masked(&report.old), masked(&report.new), report.program));
    let (worded, told): (Vec<_>, Vec<_>) = report.changes.iter().partition(|change| change.told == "words only");
    if !told.is_empty() {
        out.push_str("\n| solution | | expectations | because of |\n|---|---|---|---|\n");
        told.iter().take(MOST_ROWS).for_each(|change| out.push_str(&row(change)));
        if told.len() > MOST_ROWS {
            out.push_str(&format!("\nand {} more\n", told.len() - MOST_ROWS));
        }
    }
    if !worded.is_empty() {
        let names: Vec<String> = worded.iter().take(MOST_ROWS).map(|change| masked(&change.name)).collect();
        out.push_str(&format!("\nChanged in words only: {}{}\n", names.join(", "), if worded.len() > MOST_ROWS { ", …" } else { "" }));
    }
    if !report.replayed {
        out.push_str("\nThere are too many edited lines to say what each of them does.\n");
    }
    let mut hidden = 0;
    for change in told {
        let details = details(change, report);
        if out.chars().count() + details.chars().count() > MOST_CHARACTERS {
            hidden += 1;
        } else {
            out.push_str(&details);
        }
    }
    if hidden > 0 {
        out.push_str(&format!("\nThe details of {hidden} more would make this too long; `scruple compare` shows them.\n"));
    }
    out
}

fn row(change: &ChangeReport) -> String {
    let first = match change.shifts.first() {
        Some(shift) => format!("{} {}", shift.property, shift.sentence()),
        None => change.headline(),
    };
    let breaks = change.expectations.iter().filter(|verdict| verdict.breaks).count();
    let expectations = match breaks {
        0 => String::new(),
        1 => "**1 breaks**".to_owned(),
        more => format!("**{more} break**"),
    };
    format!("| {} | {} | {expectations} | {} |\n", masked(&change.name), masked(&first), masked(&change.because()))
}

fn details(change: &ChangeReport, report: &ComparisonReport) -> String {
    let title = format!("{} ({}, line {}): {}", change.name, change.file, change.line, change.headline());
    let mut out = format!("\n<details><summary>{}</summary>\n\n", no_mention(&escaped_html(&plain(&title))));
    if !change.shifts.is_empty() {
        out.push_str("| | was | is | change |\n|---|---:|---:|---:|\n");
        for shift in &change.shifts {
            let cell = |shown: &Option<String>| masked(shown.as_deref().unwrap_or("no value"));
            let change = masked(shift.shown_change.as_deref().unwrap_or(""));
            out.push_str(&format!("| {} | {} | {} | {change} |\n", masked(&shift.property), cell(&shift.shown_was), cell(&shift.shown_is)));
        }
        out.push('\n');
    }
    if let Some(shift) = change.shared() {
        out.push_str(&format!("Responsible for the shift of {}:\n\n", masked(&shift.property)));
        let (told, left_out) = shift.told_shares(&report.edits);
        for (share, edit) in told {
            let amount = share.shown.clone().unwrap_or_else(|| "only together with others".to_owned());
            out.push_str(&format!("- {}: {}\n", masked(&amount), masked(&edit.sentence())));
        }
        if left_out > 0 {
            out.push_str(&format!("- next to nothing: {left_out} other edited lines\n"));
        }
        if let Some(rest) = &shift.shown_remainder {
            out.push_str(&format!("- {}: the edits acting together\n", masked(rest)));
        }
        out.push('\n');
    }
    if change.smaller > 0 {
        out.push_str(&format!("{} more numbers changed too little to show.\n\n", change.smaller));
    }
    for verdict in &change.expectations {
        let word = if verdict.breaks { "**Breaks**" } else { "Expected" };
        out.push_str(&format!("- {word}: {}\n", masked(&verdict.sentence())));
    }
    for finding in &change.findings {
        let came = if finding.came { "New" } else { "Gone" };
        out.push_str(&format!("- {came} {} `{}`: {}\n", finding.level, finding.code, masked(&finding.message)));
    }
    out.push_str("\n</details>\n");
    out
}

/// Text that stays text: no markup, no line break, nobody mentioned.
fn masked(text: &str) -> String {
    let masked = escaped_markdown(&plain(text).replace('&', "&amp;"));
    no_mention(&masked.replace("\\<", "&lt;").replace("\\>", "&gt;"))
}

/// The text with a mark of no width behind each `@`, so that a name in a recipe calls nobody.
fn no_mention(text: &str) -> String {
    text.replace('@', "@\u{200b}")
}

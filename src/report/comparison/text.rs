//! A comparison for a terminal.

use super::{ChangeReport, ComparisonReport, plain};

/// The comparison as plain text.
pub fn text(report: &ComparisonReport) -> String {
    let mut out = String::new();
    for change in &report.changes {
        out.push_str(&plain(&format!("{} ({}, line {}): {}", change.name, change.file, change.line, change.headline())));
        out.push('\n');
        body(change, report, &mut out);
        out.push('\n');
    }
    if !report.replayed {
        out.push_str("There are too many edited lines to say what each of them does.\n");
    }
    out.push_str(&plain(&format!("{} → {}: {}", report.old, report.new, report.summary())));
    out.push('\n');
    out
}

fn body(change: &ChangeReport, report: &ComparisonReport, out: &mut String) {
    let mut say = |indent: usize, words: &str| {
        out.push_str(&" ".repeat(indent));
        out.push_str(plain(words).trim_end());
        out.push('\n');
    };
    if !change.reasons.is_empty() {
        say(2, &format!("because of {}", change.because()));
    }
    let width = change.shifts.iter().map(|shift| shift.property.chars().count()).max().unwrap_or(0);
    let shared = change.shared().map(|shift| &shift.property);
    for shift in &change.shifts {
        let padding = " ".repeat(width - shift.property.chars().count());
        say(2, &format!("{}{padding}  {}", shift.property, shift.sentence()));
        if shared == Some(&shift.property) {
            let (told, left_out) = shift.told_shares(&report.edits);
            for (share, edit) in told {
                let amount = share.shown.clone().unwrap_or_else(|| "only together with others".to_owned());
                say(6, &format!("{amount:>9}  {}", edit.sentence()));
            }
            if left_out > 0 {
                say(6, &format!("{:>9}  {left_out} other edited lines, each next to nothing", ""));
            }
            if let Some(rest) = &shift.shown_remainder {
                say(6, &format!("{rest:>9}  the edits acting together"));
            }
        }
    }
    if change.smaller > 0 {
        say(2, &format!("{} more changed too little to show", change.smaller));
    }
    for verdict in &change.expectations {
        say(2, &format!("{} {}", if verdict.breaks { "breaks:" } else { "expected:" }, verdict.sentence()));
    }
    for finding in &change.findings {
        let came = if finding.came { "new" } else { "gone" };
        say(2, &format!("{came} {} {}: {}", finding.level, finding.code, finding.message));
    }
}

//! A comparison as a page of its own, without anything that it would have to fetch.

use super::{ChangeReport, ComparisonReport, plain};

const STYLE: &str = "body{font:16px/1.5 system-ui,sans-serif;max-width:60rem;margin:2rem auto;padding:0 1rem;color:#1b1b1b;background:#fff}\
table{border-collapse:collapse;margin:.5rem 0}td,th{padding:.15rem .8rem .15rem 0;text-align:left;vertical-align:top}\
td.n{text-align:right;font-variant-numeric:tabular-nums}section{border-top:1px solid #bbb;margin-top:1.5rem}\
.breaks{font-weight:700}.place{color:#555}@media (prefers-color-scheme:dark){body{color:#e8e8e8;background:#181818}.place{color:#aaa}}";

/// The comparison as an HTML page.
pub fn html(report: &ComparisonReport) -> String {
    let title = escaped(&plain(&format!("Recipes: {} → {}", report.old, report.new)));
    let sections: String = report.changes.iter().map(|change| section(change, report)).collect();
    let unsaid = if report.replayed { "" } else { "<p>There are too many edited lines to say what each of them does.</p>\n" };
    format!(
        "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n<meta name=\"viewport\" content=\"width=device-width\">\n\
<title>{title}</title>\n<style>{STYLE}</style>\n</head>\n<body>\n<h1>{title}</h1>\n<p>{}. Both worked out by scruple {}, built-in library {}.</p>\n\
{unsaid}{sections}</body>\n</html>\n",
        escaped(&plain(&report.summary())),
        report.program,
        report.library,
    )
}

fn section(change: &ChangeReport, report: &ComparisonReport) -> String {
    let text = |words: &str| escaped(&plain(words));
    let mut out = format!(
        "<section>\n<h2>{}</h2>\n<p class=\"place\">{}, line {}</p>\n<p{}>{}.</p>\n",
        text(&change.name),
        text(&change.file),
        change.line,
        if change.breaks { " class=\"breaks\"" } else { "" },
        text(&capital(&change.headline())),
    );
    if !change.reasons.is_empty() {
        out.push_str(&format!("<p>Because of {}.</p>\n", text(&change.because())));
    }
    if !change.shifts.is_empty() {
        out.push_str("<table>\n<tr><th></th><th>was</th><th>is</th><th>change</th></tr>\n");
        for shift in &change.shifts {
            let cell = |shown: &Option<String>| text(shown.as_deref().unwrap_or("no value"));
            out.push_str(&format!(
                "<tr><td>{}</td><td class=\"n\">{}</td><td class=\"n\">{}</td><td class=\"n\">{}</td></tr>\n",
                text(&shift.property),
                cell(&shift.shown_was),
                cell(&shift.shown_is),
                text(shift.shown_change.as_deref().unwrap_or("")),
            ));
        }
        out.push_str("</table>\n");
    }
    let mut items = Vec::new();
    if let Some(shift) = change.shared() {
        out.push_str(&format!("<p>Responsible for the shift of {}:</p>\n", text(&shift.property)));
        let (told, left_out) = shift.told_shares(&report.edits);
        let amount = |shown: &Option<String>| shown.clone().unwrap_or_else(|| "only together with others".to_owned());
        items.extend(told.into_iter().map(|(share, edit)| format!("{}: {}", amount(&share.shown), edit.sentence())));
        if left_out > 0 {
            items.push(format!("next to nothing: {left_out} other edited lines"));
        }
        items.extend(shift.shown_remainder.iter().map(|rest| format!("{rest}: the edits acting together")));
        out.push_str(&list(&items));
        items.clear();
    }
    if change.smaller > 0 {
        items.push(format!("{} more numbers changed too little to show", change.smaller));
    }
    items.extend(change.expectations.iter().map(|verdict| {
        format!("{} {}", if verdict.breaks { "Breaks:" } else { "Expected:" }, verdict.sentence())
    }));
    items.extend(change.findings.iter().map(|finding| {
        format!("{} {} {}: {}", if finding.came { "New" } else { "Gone" }, finding.level, finding.code, finding.message)
    }));
    out.push_str(&list(&items));
    out.push_str("</section>\n");
    out
}

fn list(items: &[String]) -> String {
    if items.is_empty() {
        return String::new();
    }
    let items: String = items.iter().map(|item| format!("<li>{}</li>\n", escaped(&plain(item)))).collect();
    format!("<ul>\n{items}</ul>\n")
}

fn capital(words: &str) -> String {
    let mut characters = words.chars();
    characters.next().map(|first| first.to_uppercase().chain(characters).collect()).unwrap_or_default()
}

/// Text as HTML, in content and in quoted attributes.
pub(super) fn escaped(text: &str) -> String {
    text.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;").replace('"', "&quot;").replace('\'', "&#39;")
}

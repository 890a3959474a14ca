//! Findings as a Code Quality report: the JSON array that merge requests read.

use std::collections::HashMap;

use serde::Serialize;

use super::FindingReport;

/// One entry of the report.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "the names are the format's")]
pub struct Entry {
    pub description: String,
    pub check_name: String,
    pub fingerprint: String,
    pub severity: &'static str,
    pub location: Location,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "the names are the format's")]
pub struct Location {
    pub path: String,
    pub lines: Lines,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "the names are the format's")]
pub struct Lines {
    pub begin: usize,
    pub end: usize,
}

/// The findings as entries. The description carries the code, which is shown nowhere else; fingerprints are unique.
pub fn code_quality(findings: &[FindingReport]) -> Vec<Entry> {
    let mut seen: HashMap<&str, usize> = HashMap::new();
    let entries = findings.iter().map(|finding| {
        let FindingReport { code, level, file, line, end_line, message, fingerprint, .. } = finding;
        let count = seen.entry(fingerprint).or_default();
        *count += 1;
        let code = code.unwrap_or("configuration");
        Entry {
            description: format!("{code}: {message}"),
            check_name: code.to_owned(),
            fingerprint: if *count == 1 { fingerprint.clone() } else { format!("{fingerprint}+{count}") },
            severity: match *level {
                "error" => "major",
                "warning" => "minor",
                _ => "info",
            },
            location: Location { path: file.clone(), lines: Lines { begin: *line, end: *end_line } },
        }
    });
    entries.collect()
}

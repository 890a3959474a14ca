//! Findings as SARIF 2.1.0 (OASIS Standard), for services that collect what checkers find. Columns count UTF-16 code units,
//! which is what SARIF means where nothing is said.

use serde_json::{Value, json};

use super::{EditReport, FindingReport};
use crate::finding::{Code, Level};

/// The address of the schema that the report follows.
const SCHEMA: &str = "https://docs.oasis-open.org/sarif/sarif/v2.1.0/errata01/os/schemas/sarif-schema-2.1.0.json";

/// The rule of what is wrong with a `scruple.toml`, which has no code of its own.
const CONFIGURATION: &str = "configuration";

/// The findings, whose columns count UTF-16 code units, as a log with one run. `usable` says whether every file and
/// configuration could be read.
pub fn sarif(findings: &[FindingReport], usable: bool) -> Value {
    let mut rules: Vec<Value> = Code::ALL.iter().map(|code| rule(*code)).collect();
    rules.push(configuration_rule());
    json!({
        "$schema": SCHEMA,
        "version": "2.1.0",
        "runs": [{
            "tool": {
                "driver": {
                    "name": "scruple",
                    "semanticVersion": env!("CARGO_PKG_VERSION"),
                    "rules": rules,
                }
            },
            // Reports of other tools or parts do not replace this one.
            "automationDetails": { "id": "scruple/" },
            "columnKind": "utf16CodeUnits",
            "invocations": [{ "executionSuccessful": usable }],
            "results": findings.iter().map(result).collect::<Vec<_>>(),
        }]
    })
}

fn rule(code: Code) -> Value {
    let severity = match code.level() {
        Level::Error => "error",
        Level::Warning => "warning",
        Level::Hint => "recommendation",
    };
    json!({
        "id": code.name(),
        "shortDescription": { "text": code.summary() },
        "fullDescription": { "text": code.summary() },
        "help": { "text": code.page(), "markdown": code.page() },
        "defaultConfiguration": { "level": level(code.level().word()) },
        "properties": { "tags": ["recipes"], "precision": "high", "problem.severity": severity },
    })
}

fn configuration_rule() -> Value {
    let summary = "A scruple.toml that cannot be used.";
    json!({
        "id": CONFIGURATION,
        "shortDescription": { "text": summary },
        "fullDescription": { "text": summary },
        "help": { "text": "Correct the file; the message says what is wrong with it." },
        "defaultConfiguration": { "level": "error" },
        "properties": { "tags": ["recipes"], "precision": "high", "problem.severity": "error" },
    })
}

fn result(finding: &FindingReport) -> Value {
    let index = finding.code.and_then(|name| Code::ALL.iter().position(|code| code.name() == name)).unwrap_or(Code::ALL.len());
    let help = if finding.help.is_empty() { String::new() } else { format!(" {}", finding.help) };
    let mut result = json!({
        "ruleId": finding.code.unwrap_or(CONFIGURATION),
        "ruleIndex": index,
        "level": level(finding.level),
        "message": { "text": format!("{}{help}", finding.message) },
        "locations": [{
            "physicalLocation": {
                "artifactLocation": { "uri": uri(&finding.file) },
                "region": region(finding.line, finding.column, finding.end_line, finding.end_column),
            }
        }],
        "partialFingerprints": { "primaryLocationLineHash": finding.fingerprint },
    });
    if let Some(fields) = result.as_object_mut() {
        if !finding.related.is_empty() {
            let related = finding.related.iter().enumerate().map(|(id, related)| {
                json!({
                    "id": id,
                    "message": { "text": related.message },
                    "physicalLocation": {
                        "artifactLocation": { "uri": uri(&related.file) },
                        "region": { "startLine": related.line, "startColumn": related.column },
                    }
                })
            });
            fields.insert("relatedLocations".to_owned(), related.collect());
        }
        let fixes: Vec<Value> = finding.fixes.iter().filter(|fix| !fix.edits.is_empty()).map(|fix| {
            json!({
                "description": { "text": fix.title },
                "artifactChanges": [{
                    "artifactLocation": { "uri": uri(&finding.file) },
                    "replacements": fix.edits.iter().map(replacement).collect::<Vec<_>>(),
                }]
            })
        }).collect();
        if !fixes.is_empty() {
            fields.insert("fixes".to_owned(), Value::Array(fixes));
        }
    }
    result
}

fn replacement(edit: &EditReport) -> Value {
    json!({
        "deletedRegion": region(edit.line, edit.column, edit.end_line, edit.end_column),
        "insertedContent": { "text": edit.text },
    })
}

fn region(line: usize, column: usize, end_line: usize, end_column: usize) -> Value {
    json!({ "startLine": line, "startColumn": column, "endLine": end_line, "endColumn": end_column })
}

fn level(word: &str) -> &'static str {
    match word {
        "error" => "error",
        "warning" => "warning",
        _ => "note",
    }
}

/// A path as a relative reference (RFC 3986): everything but unreserved characters and `/` in per cent of its bytes.
fn uri(path: &str) -> String {
    let mut out = String::with_capacity(path.len());
    for byte in path.bytes() {
        match byte {
            b'a'..=b'z' | b'A'..=b'Z' | b'0'..=b'9' | b'-' | b'.' | b'_' | b'~' | b'/' => out.push(char::from(byte)),
            other => out.push_str(&format!("%{other:02X}")),
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn paths_become_references() {
        assert_eq!(uri("recipes/µ buffer #2: 100%.prep"), "recipes/%C2%B5%20buffer%20%232%3A%20100%25.prep");
    }
}

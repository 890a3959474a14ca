//! Findings as rdjson: the diagnostic format that review robots post as comments. Its columns count bytes of UTF-8.

use serde_json::{Value, json};

use super::FindingReport;

/// The findings, whose columns count bytes, as one object.
pub fn rdjson(findings: &[FindingReport]) -> Value {
    json!({
        "source": { "name": "scruple" },
        "diagnostics": findings.iter().map(diagnostic).collect::<Vec<_>>(),
    })
}

fn diagnostic(finding: &FindingReport) -> Value {
    let help = if finding.help.is_empty() { String::new() } else { format!(" {}", finding.help) };
    let mut diagnostic = json!({
        "message": format!("{}{help}", finding.message),
        "location": {
            "path": finding.file,
            "range": range(finding.line, finding.column, finding.end_line, finding.end_column),
        },
        "severity": match finding.level { "error" => "ERROR", "warning" => "WARNING", _ => "INFO" },
        "code": { "value": finding.code.unwrap_or("configuration") },
    });
    // Suggestions are applied one by one, so only a fix that is a single edit is one.
    let suggestions: Vec<Value> = finding
        .fixes
        .iter()
        .filter_map(|fix| match fix.edits.as_slice() {
            [edit] => Some(json!({ "range": range(edit.line, edit.column, edit.end_line, edit.end_column), "text": edit.text })),
            _ => None,
        })
        .collect();
    let related: Vec<Value> = finding
        .related
        .iter()
        .map(|related| {
            let start = json!({ "line": related.line, "column": related.column });
            json!({ "message": related.message, "location": { "path": related.file, "range": { "start": start } } })
        })
        .collect();
    if let Some(fields) = diagnostic.as_object_mut() {
        for (name, values) in [("suggestions", suggestions), ("related_locations", related)] {
            if !values.is_empty() {
                fields.insert(name.to_owned(), Value::Array(values));
            }
        }
    }
    diagnostic
}

fn range(line: usize, column: usize, end_line: usize, end_column: usize) -> Value {
    json!({ "start": { "line": line, "column": column }, "end": { "line": end_line, "column": end_column } })
}

//! Findings as a JUnit report: a suite for each file, a failed case for each finding that fails the check, a passed case for a
//! file without.

use super::FindingReport;

/// The report. `fails` says whether a finding fails the check; the others are told as output of a case that passes.
pub fn junit(findings: &[FindingReport], files: &[String], fails: impl Fn(&FindingReport) -> bool) -> String {
    let failing = findings.iter().filter(|finding| fails(finding)).count();
    let mut names: Vec<&str> = files.iter().map(String::as_str).collect();
    names.extend(findings.iter().map(|finding| finding.file.as_str()));
    names.sort_unstable();
    names.dedup();
    let mut suites = String::new();
    let mut cases = 0;
    for name in names {
        let own: Vec<&FindingReport> = findings.iter().filter(|finding| finding.file == name).collect();
        let failures = own.iter().filter(|finding| fails(finding)).count();
        let mut written: Vec<String> = own.iter().map(|finding| case(finding, fails(finding))).collect();
        if failures == 0 {
            written.insert(0, format!("    <testcase classname=\"{}\" name=\"recipes\"/>\n", escaped(name)));
        }
        cases += written.len();
        suites.push_str(&format!(
            "  <testsuite name=\"{}\" tests=\"{}\" failures=\"{failures}\" errors=\"0\" skipped=\"0\">\n{}  </testsuite>\n",
            escaped(name),
            written.len(),
            written.concat(),
        ));
    }
    format!(
        "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n<testsuites name=\"scruple\" tests=\"{cases}\" failures=\"{failing}\" errors=\"0\">\n{suites}</testsuites>\n"
    )
}

fn case(finding: &FindingReport, fails: bool) -> String {
    let code = finding.code.unwrap_or("configuration");
    let block = finding.block.as_ref().map(|block| format!(" in {block}")).unwrap_or_default();
    let place = format!("{}:{}:{}", finding.file, finding.line, finding.column);
    let help = if finding.help.is_empty() { String::new() } else { format!("\n{}", finding.help) };
    let said = escaped(&format!("{place}\n{}{help}", finding.message));
    let told = if fails {
        format!("<failure type=\"{code}\" message=\"{}\">{said}</failure>", escaped(&finding.message))
    } else {
        format!("<system-out>{said}</system-out>")
    };
    let name = escaped(&format!("{code}{block}, line {}", finding.line));
    format!("    <testcase classname=\"{}\" name=\"{name}\">\n      {told}\n    </testcase>\n", escaped(&finding.file))
}

/// Text as XML, in content and in attributes. Characters that XML 1.0 does not have become `�`.
fn escaped(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for character in text.chars() {
        match character {
            '&' => out.push_str("&amp;"),
            '<' => out.push_str("&lt;"),
            '>' => out.push_str("&gt;"),
            '"' => out.push_str("&quot;"),
            '\n' => out.push_str("&#10;"),
            '\t' => out.push_str("&#9;"),
            '\r' => out.push_str("&#13;"),
            '\u{0}'..='\u{1f}' | '\u{fffe}' | '\u{ffff}' => out.push('\u{fffd}'),
            other => out.push(other),
        }
    }
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn names_cannot_become_markup() {
        assert_eq!(escaped("a<b> & \"c\"\u{0}\n"), "a&lt;b&gt; &amp; &quot;c&quot;\u{fffd}&#10;");
        let clean = junit(&[], &["µ<&>.prep".to_owned()], |_| true);
        assert!(clean.contains("<testcase classname=\"µ&lt;&amp;&gt;.prep\" name=\"recipes\"/>"), "{clean}");
    }
}

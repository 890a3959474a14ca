//! Findings that a library starts with: known ones, which are not said again until somebody touches their lines.

use std::collections::BTreeMap;

use serde::{Deserialize, Serialize};

use super::FindingReport;

/// The form of the file that this program writes.
const FORM: u32 = 1;

/// A list of known findings, as it stands in a baseline file.
#[derive(Clone, Debug, Default, Serialize, Deserialize)]
pub struct Baseline {
    form: u32,
    findings: Vec<Known>,
}

/// A known finding. Only the fingerprint counts; the rest is for people who look at the file.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Serialize, Deserialize)]
struct Known {
    file: String,
    block: Option<String>,
    code: Option<String>,
    fingerprint: String,
}

impl Baseline {
    /// The findings of a run as known ones.
    pub fn of(findings: &[FindingReport]) -> Self {
        let known = |finding: &FindingReport| Known {
            file: finding.file.clone(),
            block: finding.block.clone(),
            code: finding.code.map(str::to_owned),
            fingerprint: finding.fingerprint.clone(),
        };
        let mut findings: Vec<Known> = findings.iter().filter(|finding| finding.code.is_some()).map(known).collect();
        findings.sort();
        Baseline { form: FORM, findings }
    }

    /// Reads a baseline file.
    ///
    /// # Errors
    /// A sentence that says why it is none.
    pub fn parse(text: &str) -> Result<Self, String> {
        let baseline: Baseline = serde_json::from_str(text).map_err(|error| format!("it is no baseline: {error}"))?;
        if baseline.form != FORM {
            return Err(format!("it has form {}; this program knows form {FORM}", baseline.form));
        }
        Ok(baseline)
    }

    /// The text of the file.
    pub fn text(&self) -> String {
        serde_json::to_string_pretty(self).map(|text| text + "\n").unwrap_or_default()
    }

    /// For each finding, whether it is a known one; and how many known ones are gone.
    pub fn known(&self, findings: &[FindingReport]) -> (Vec<bool>, usize) {
        let mut left: BTreeMap<&str, usize> = BTreeMap::new();
        for known in &self.findings {
            *left.entry(&known.fingerprint).or_default() += 1;
        }
        let mut take = |finding: &FindingReport| match left.get_mut(finding.fingerprint.as_str()) {
            Some(count) if *count > 0 => {
                *count -= 1;
                true
            }
            _ => false,
        };
        let known = findings.iter().map(&mut take).collect();
        (known, left.values().sum())
    }
}

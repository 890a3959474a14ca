//! Why a recipe has no values, as findings with their places.

use crate::chemistry::Failure;
use crate::finding::{Anchor, Code, Finding};

/// Why a recipe, or one of its lines, has no values. The cause is reported once, where it is.
#[derive(Clone, Debug)]
pub struct Refusal(Vec<Finding>);

impl Refusal {
    /// A refusal with its findings.
    pub fn new(finding: Finding) -> Self {
        Refusal(vec![finding])
    }

    /// A refusal with several findings.
    pub fn several(findings: Vec<Finding>) -> Self {
        Refusal(findings)
    }

    /// A refusal whose cause has been reported already.
    pub fn reported() -> Self {
        Refusal(Vec::new())
    }

    /// The findings.
    pub fn into_findings(self) -> Vec<Finding> {
        self.0
    }

    /// The chemistry gave no answer at this line.
    pub fn of_chemistry(at: Anchor, failure: &Failure) -> Self {
        Refusal::new(
            Finding::new(Code::NoSolutionFound, at, format!("No state could be worked out: {failure}."))
                .help("Check the amounts and the temperature; a number may be off by a factor of a thousand."),
        )
    }
}

impl From<Finding> for Refusal {
    fn from(finding: Finding) -> Self {
        Refusal::new(finding)
    }
}

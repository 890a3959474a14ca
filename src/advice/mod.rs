//! Findings: one file per family, one plain array that lists them.

mod accept;

use std::sync::Arc;

use crate::evaluate::{Context, Evaluation, Outcome};
use crate::finding::Finding;
use crate::model::{Block, Recipe};
use crate::text::FileId;

/// Everything that a rule may look at.
#[derive(Clone, Copy)]
pub struct Case<'a> {
    /// The file that the block stands in.
    pub file: FileId,
    /// The block.
    pub block: &'a Arc<Block>,
    /// What came out of it; empty for blocks that are no recipe.
    pub evaluation: &'a Evaluation,
    /// What it was worked out with.
    pub context: &'a Context<'a>,
}

impl<'a> Case<'a> {
    /// The recipe, where the block is a solution or a bottle.
    pub fn recipe(&self) -> Option<&'a Recipe> {
        self.block.recipe()
    }

    /// The outcomes of the solution, or of every member of a series.
    pub fn outcomes(&self) -> impl Iterator<Item = &'a Outcome> {
        self.evaluation.members.iter().filter_map(|member| member.outcome.as_deref())
    }
}

/// A rule looks at a case and adds what it finds.
pub type Rule = fn(&Case, &mut Vec<Finding>);

/// Every rule, in the order in which they are asked.
pub const RULES: &[Rule] = &[];

/// Every finding of a block: of its lines, of its evaluation, of the rules; those that are accepted left out.
pub fn findings(case: &Case) -> Vec<Finding> {
    let mut findings = case.block.findings.clone();
    findings.extend(case.evaluation.findings.iter().cloned());
    for rule in RULES {
        rule(case, &mut findings);
    }
    accept::apply(case, findings)
}

//! Findings: one file per family, one plain array that lists them.

mod accept;
mod amounts;
mod buffer_choice;
mod buffering;
mod dangers;
mod definitions;
mod dissolving;
mod expectations;
mod forms;
mod free_ions;
mod gases;
mod range;
mod saturated;
mod setting;
mod settling;
mod steps;
mod stocks;
mod temperature;
mod unevaluated;

pub use buffer_choice::{BufferChoice, Wanted, buffer_choices};

use std::sync::Arc;

use crate::evaluate::{Context, Evaluation, Outcome};
use crate::finding::Finding;
use crate::model::{Block, Body, DefinitionKey, Recipe};
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
    /// The recipe, where the block is a solution or a bottle; with the lines of the one that it is `like`.
    pub fn recipe(&self) -> Option<&'a Recipe> {
        self.evaluation.recipe.as_deref().or(self.block.recipe())
    }

    /// The recipe as its own lines say it, for what concerns how a line is written: lines taken over are judged where they
    /// stand.
    pub fn own_recipe(&self) -> Option<&'a Recipe> {
        self.block.recipe()
    }

    /// The outcomes of the solution, or of every member of a series.
    pub fn outcomes(&self) -> impl Iterator<Item = &'a Outcome> {
        self.evaluation.members.iter().filter_map(|member| member.outcome.as_deref())
    }
}

/// A block that names another one, and what came out of it.
#[derive(Clone, Copy)]
pub struct User<'a> {
    /// The file that it stands in.
    pub file: FileId,
    /// The block.
    pub block: &'a Arc<Block>,
    /// What came out of it.
    pub evaluation: &'a Evaluation,
}

/// A rule looks at a case and adds what it finds.
pub type Rule = fn(&Case, &mut Vec<Finding>);

/// Every rule, in the order in which they are asked.
pub const RULES: &[Rule] = &[
    definitions::defined_twice,
    definitions::hides_the_built_in,
    definitions::bad_definition,
    definitions::spelled_otherwise,
    unevaluated::not_evaluated_yet,
    steps::quantity_in_step,
    amounts::said_twice,
    amounts::ph_said_twice,
    amounts::same_stock_twice,
    amounts::adds_to_total,
    amounts::molality_made_up_to_volume,
    amounts::added_after_volume,
    amounts::volume_from_density,
    amounts::percent_of_what,
    forms::hydrate_not_stated,
    forms::mass_fits_other_hydrate,
    forms::as_what,
    stocks::outlives_its_parts,
    stocks::fold_mismatch,
    stocks::dilution_shift,
    stocks::salt_shift,
    stocks::strength_density_disagree,
    stocks::stock_found,
    setting::liquid_counted_in,
    setting::moves_after_setting,
    setting::about_differs,
    setting::takes_too_much,
    setting::alternative_differs,
    setting::found_differs,
    temperature::temperature_not_stated,
    temperature::temperature_shift,
    buffering::weak_buffering,
    dangers::dangers,
    dangers::keep_apart,
    dangers::hot_when_made_up,
    dangers::unmodelled_matters,
    dissolving::does_not_dissolve,
    settling::may_precipitate,
    settling::precipitates_in_transit,
    settling::crystallises_in_store,
    settling::freeze_shift,
    gases::open_to_the_air,
    gases::not_at_gas_equilibrium,
    gases::set_under_another_gas,
    range::outside_model_range,
    free_ions::steep_target,
    free_ions::metal_bound,
    expectations::rule,
];

/// Whether a substance is an acid or a base that the trade sells as solutions of several strengths.
fn is_acid_or_base(case: &Case, key: &DefinitionKey) -> bool {
    let scope = case.context.scope;
    [&scope.own, &scope.built_in]
        .into_iter()
        .flat_map(|names| names.named(key.namespace, &key.name))
        .any(|definition| matches!(&definition.block.body, Body::Substance(substance) if crate::evaluate::comes_in_strengths(substance)))
}

/// Every finding of a block for itself: of its lines, of its evaluation, of the rules. Nothing is accepted yet.
pub fn findings(case: &Case) -> Vec<Finding> {
    let mut findings = case.block.findings.clone();
    findings.extend(case.evaluation.findings.iter().cloned());
    for rule in RULES {
        rule(case, &mut findings);
    }
    findings
}

/// What only those who use a solution can tell of it.
pub fn findings_by_use(case: &Case, users: &[User]) -> Vec<Finding> {
    let mut findings = Vec::new();
    stocks::dilution_shift_by_use(case, users, &mut findings);
    findings
}

/// The findings that the block's author has not accepted, and what is to be said of the acceptances.
pub fn not_accepted(case: &Case, findings: Vec<Finding>) -> Vec<Finding> {
    accept::apply(case, findings)
}

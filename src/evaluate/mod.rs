//! A solution's lines, in bench order, through the chemistry to a state; stocks out of stocks.

mod above;
mod beaker;
mod bench;
mod bottle;
mod found;
mod goods;
mod like;
mod names;
mod outcome;
mod plan;
mod property;
mod refusal;
mod solubility;
mod strength;
mod verdicts;

use std::collections::HashMap;
use std::sync::Arc;

pub use above::{Above, carbon_dioxide};
pub use goods::{Goods, Stock};
pub use strength::table_density;
pub use names::{Found, comes_in_strengths, is_plain_stock_of, listed, meaning, place_of, written_form};
pub use outcome::*;
pub use property::{PropertyValue, Question, as_formula_factor, free_mol, hardness_mol_per_L, key_element, property_value, total_mol};
pub use refusal::Refusal;
pub use solubility::{SolidForm, solid_form, solids_of};

use crate::chemistry::Settings;
use crate::finding::{Anchor, Code, Finding, Place};
use crate::model::{Block, Body, Constituents, DefinitionKey, Lab, Recipe, Reference, Scope, Stated};
use crate::text::FileId;

/// Where no temperature is stated and no lab is in scope, K.
pub const DEFAULT_TEMPERATURE_K: f64 = 298.15;

/// Everything that a solution's values depend on besides its own lines.
#[derive(Clone, Copy)]
pub struct Context<'a> {
    /// The root's chemistry.
    pub constituents: &'a Constituents,
    /// The names visible from the solution's file.
    pub scope: &'a Scope,
    /// The names visible from every file, for lines that come from another one.
    pub scopes: &'a HashMap<FileId, Scope>,
    /// The evaluations of the solutions and bottles that it takes; none for one that is in a cycle with it.
    pub stocks: &'a (dyn Fn(&DefinitionKey) -> Option<Arc<Evaluation>> + Sync),
    /// The lab that it is made in.
    pub lab: Option<&'a Lab>,
    /// The activity model.
    pub settings: &'a Settings,
}

impl<'a> Context<'a> {
    /// The scope in which a name has its meaning.
    pub fn scope_of(&self, reference: &Reference) -> &'a Scope {
        reference.home.and_then(|file| self.scopes.get(&file)).unwrap_or(self.scope)
    }

    /// The temperature at which a recipe is made, K, with its half-width.
    pub fn made_at_K(&self, recipe: &Recipe) -> (f64, f64) {
        match (recipe.made_at, self.lab.and_then(|lab| lab.room)) {
            (Some(stated), _) => (stated.value, 0.0),
            (None, Some(Stated { value: (low, high), .. })) => (0.5 * (low + high), 0.5 * (high - low)),
            (None, None) => (DEFAULT_TEMPERATURE_K, 0.0),
        }
    }
}

/// Evaluates a solution or a bottle. Other blocks give nothing.
pub fn evaluate(block: &Block, context: &Context) -> Evaluation {
    let (recipe, is_bottle) = match &block.body {
        Body::Solution(recipe) => (recipe, false),
        Body::Bottle(recipe) => (recipe, true),
        _ => return Evaluation::default(),
    };
    let name = block.name.as_ref().map_or("", |name| name.text.as_str());
    let mut findings = Vec::new();
    let mut members = Vec::new();
    let merged = match (recipe.sound, is_bottle, recipe.like.is_some() || !recipe.without.is_empty()) {
        (true, false, true) => match like::with_likeness(recipe, context, 0) {
            Ok(merged) => Some(Arc::new(merged)),
            Err(refusal) => {
                let members = vec![Member { name: name.to_string(), outcome: None }];
                return Evaluation { recipe: None, members, findings: refusal.into_findings() };
            }
        },
        _ => None,
    };
    let recipe = merged.as_deref().unwrap_or(recipe);
    for index in 0..recipe.members {
        let outcome = match (recipe.sound, is_bottle) {
            (false, _) => None,
            (true, true) => settle(bottle::evaluate(block, recipe, context), &mut findings),
            (true, false) => settle(bench::evaluate(block, recipe, index, context, &mut findings), &mut findings),
        };
        members.push(Member { name: recipe.member_name(name, index), outcome: outcome.map(Arc::new) });
    }
    if !recipe.sound || members.iter().any(|member| member.outcome.is_none()) {
        // Every name is looked up even where the first mistake leaves the recipe without values.
        names::report_all(recipe, context, &mut findings);
    }
    findings.dedup();
    let mut unique: Vec<Finding> = Vec::new();
    for finding in findings {
        if !unique.contains(&finding) {
            unique.push(finding);
        }
    }
    Evaluation { recipe: merged, members, findings: unique }
}

/// A solution's outcome, or the findings that say why there is none.
fn settle(result: Result<Outcome, Refusal>, findings: &mut Vec<Finding>) -> Option<Outcome> {
    match result {
        Ok(outcome) => Some(outcome),
        Err(refusal) => {
            findings.extend(refusal.into_findings());
            None
        }
    }
}

/// The finding for an ingredient whose own recipe has no values.
fn ingredient_has_no_value(at: Anchor, name: &str, key: &DefinitionKey) -> Finding {
    Finding::new(
        Code::IngredientHasNoValue,
        at,
        format!("{name} could not be worked out, so neither can this solution."),
    )
    .help("Mend its recipe first.")
    .related_at(
        Place::Block { file: key.file, key: key.name.as_str().to_string(), anchor: Anchor::default() },
        format!("{name} is defined here"),
    )
}

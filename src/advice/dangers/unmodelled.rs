//! Solutes of which nothing is worked out, where something is expected of the solution.

use super::super::Case;
use super::capital;
use crate::finding::{Code, Finding};
use crate::model::{Body, Property};
use crate::syntax::tree::BlockKind;
use crate::units::format;

/// From here on a solute without formula can matter, g/L. Common practice, no source.
const MATTERS_G_PER_L: f64 = 1.0;

/// Names the solutes without formula that are there in noticeable amounts while something is expected.
pub fn unmodelled_matters(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let depends = |property: &Property| !matches!(property, Property::Total(_));
    let Some(expectation) = recipe.expectations.iter().find(|expectation| depends(&expectation.property)) else { return };
    let scope = case.context.scope;
    let Some(outcome) = case.outcomes().next() else { return };
    for solute in &outcome.solutes {
        let grams = 1000.0 * solute.mass_kg / outcome.volume_L;
        let is_unmodelled = [&scope.own, &scope.built_in]
            .into_iter()
            .flat_map(|names| names.named(solute.definition.namespace, &solute.definition.name))
            .filter(|definition| definition.block.kind() == Some(BlockKind::Substance))
            .any(|definition| matches!(&definition.block.body, Body::Substance(one) if one.inert && one.formula.is_none()));
        if !is_unmodelled || grams <= MATTERS_G_PER_L {
            continue;
        }
        let at = outcome.lines.iter().find(|line| line.definition == solute.definition).map_or(expectation.at, |line| line.at);
        findings.push(
            Finding::new(
                Code::UnmodelledMatters,
                at,
                format!(
                    "{} has no formula; {} of it count as mass and volume only, and the {} is worked out without it.",
                    capital(&solute.name),
                    format::mass_concentration(grams, 2),
                    expectation.property.words()
                ),
            )
            .help("Measure what is expected, or keep it out of the expectation.")
            .related(expectation.at, "expected here")
            .about(solute.definition.name.as_str()),
        );
    }
}

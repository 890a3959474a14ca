//! Solutions beyond the range of the model.

use super::Case;
use super::buffering::ph_is_wanted;
use crate::chemistry::{State, Warning};
use crate::finding::{Code, Finding, Level};
use crate::model::Property;

/// What forms esters with borate that change the pH noticeably. Common practice, no source.
const BORATE_PARTNERS: [&str; 8] = ["Tris", "Bis-tris", "triethanolamine", "glycerol", "mannitol", "sorbitol", "fructose", "glucose"];
/// Below this concentration of either the ester is no matter, mol/L.
const LEAST_ESTER: f64 = 0.01;

/// The partner of an ester with borate, where there is enough of both.
fn borate_ester(state: &State) -> Option<&'static str> {
    let concentration = |name: &str| {
        let is_it = |id| state.chemistry().component(id).is_some_and(|component| component.name == name);
        state.totals_mol_per_L().filter(|(id, _)| is_it(*id)).map(|(_, concentration)| concentration).sum::<f64>()
    };
    let partners = BORATE_PARTNERS.into_iter().filter(|_| concentration("borate") >= LEAST_ESTER);
    partners.map(|name| (name, concentration(name))).filter(|(_, much)| *much >= LEAST_ESTER).max_by(|a, b| a.1.total_cmp(&b.1)).map(|(name, _)| name)
}

/// Says why the values are doubtful; a hint where nothing is expected of them.
pub(super) fn outside_model_range(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    if !matches!(case.block.body, crate::model::Body::Solution(_)) {
        return;
    }
    let of_chemistry = |property: &Property| !matches!(property, Property::Total(_) | Property::Density);
    let is_expected = ph_is_wanted(recipe).is_some() || recipe.expectations.iter().any(|one| one.diluted.is_none() && of_chemistry(&one.property));
    for outcome in case.outcomes() {
        let at = case.block.header_anchor();
        let state = match &outcome.finished {
            Ok(state) => state,
            Err(failure) => {
                let level = if is_expected { Level::Warning } else { Level::Hint };
                findings.push(
                    Finding::new(Code::OutsideModelRange, at, format!("No state is worked out for this solution: {failure}."))
                        .help("Amounts, masses and volumes hold; the pH and what follows from it are not known.")
                        .at_level(level),
                );
                return;
            }
        };
        if let Some(partner) = borate_ester(state) {
            let finding = Finding::new(
                Code::OutsideModelRange,
                at,
                format!("Borate forms an ester with {partner}, for which no published constant is known to the library; the pH is lower than worked out."),
            )
            .help("Take the pH as an upper limit: Tris with borate reads about 0.3 lower (common practice, no source), polyols move it further.");
            findings.push(if is_expected { finding } else { finding.at_level(Level::Hint) });
            return;
        }
        let Some(warning) = state.warnings.first() else { continue };
        let chemistry = state.chemistry();
        let species = |id| chemistry.species(id).map_or("", |species| species.name.as_str());
        let (message, help) = match warning {
            Warning::IonicStrengthBeyondModel { ionic_strength_mol_per_kg, limit_mol_per_kg } => (
                format!(
                    "The ionic strength is {ionic_strength_mol_per_kg:.1} mol/kg; the activity model is trusted up to {limit_mol_per_kg:.0} mol/kg."
                ),
                "Take the pH as a guide only; at such a strength a meter calibrated in dilute buffers is off as well.",
            ),
            Warning::NoInteraction { ionic_strength_mol_per_kg, cation, anion } => (
                format!(
                    "The ionic strength is {ionic_strength_mol_per_kg:.1} mol/kg, and no published interaction of {} with {} is known to the library.",
                    species(*cation),
                    species(*anion)
                ),
                "Take the pH as a guide only; the ions' activities are estimated by charge alone.",
            ),
            Warning::ConstantBeyondTemperature { constant, temperature_K } => (
                format!(
                    "The {} is used at {}, beyond the temperatures at which it was measured.",
                    chemistry.constant(*constant).map_or("", |constant| constant.name.as_str()),
                    crate::units::format::temperature(*temperature_K)
                ),
                "Take the pH as a guide only.",
            ),
            Warning::MostlyNotWater { water_fraction } => (
                format!("Only {:.0} % of the mass is water; the pH is that of an aqueous solution.", 100.0 * water_fraction),
                "Take the pH as that of the aqueous part before mixing; a meter reads something else.",
            ),
        };
        let finding = Finding::new(Code::OutsideModelRange, at, message).help(help);
        findings.push(if is_expected { finding } else { finding.at_level(Level::Hint) });
        return;
    }
}

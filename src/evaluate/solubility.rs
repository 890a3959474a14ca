//! When a solution is saturated with a substance: by the solids that it can be, or by its published solubility.
//!
//! A solubility is taken as the activity product of the saturated solution of the substance alone, as this chemistry has it, so that
//! acid, base and common ions count, and errors of the activity model at high strength largely cancel.

use super::goods::state_of;
use super::Context;
use crate::chemistry::{Mixture, Phase, PhaseId, REFERENCE_K, State};
use crate::model::{Amount, Constituents, DefinitionKey, Substance};
use crate::units::Dimension;

/// A solubility holds this far from where it was measured, K: most change by less than a fifth over it.
const REACH_K: f64 = 5.0;
/// So near to where it was measured it stands as it is, K.
const SURE_K: f64 = 1.0;
/// Where a published solubility does not say at which temperature it holds, K.
const UNSTATED_K: f64 = 293.15;

/// Products larger than this are of soluble salts, log₁₀.
const SOLUBLE: f64 = -4.0;

/// A substance as a solid beside its solution.
#[derive(Clone, Debug)]
pub struct SolidForm {
    /// One mole of it in solution.
    pub mole: Mixture,
    /// The solids that are of its composition, crystal water aside, and form.
    phases: Vec<PhaseId>,
    /// Whether it is a soluble salt.
    is_soluble: bool,
    /// Temperature, K, and log₁₀ of the activity product of the solution saturated with it alone; in order of the temperature.
    points: Vec<(f64, f64)>,
}

impl SolidForm {
    /// log₁₀ of how far a state is saturated with it; none where that is not known, or where the state holds nothing of it.
    pub fn saturation_index(&self, state: &State) -> Option<f64> {
        let by_phase = |id: &PhaseId| {
            let known = state.chemistry().phase(*id).is_some_and(|phase| phase.holds_at(state.chemistry(), state.temperature_K));
            state.saturation_index(*id).filter(|_| known)
        };
        let by_phases = || self.phases.iter().filter_map(by_phase).max_by(f64::total_cmp);
        let published = |reach_K: f64| Some(state.log10_activity_product(&self.mole)? - self.log10_saturated(state.temperature_K, reach_K)?);
        // At high strength the published solubility is surer than an activity model that starts from infinite dilution.
        let sure = if self.is_soluble { published(SURE_K) } else { None };
        sure.or_else(by_phases).or_else(|| published(REACH_K))
    }

    /// Between two temperatures the logarithm is taken as linear; beyond the last it holds so far (K).
    fn log10_saturated(&self, temperature_K: f64, reach_K: f64) -> Option<f64> {
        let (first, last) = (self.points.first()?, self.points.last()?);
        if temperature_K <= first.0 {
            return (temperature_K >= first.0 - reach_K - 0.01).then_some(first.1);
        }
        if temperature_K >= last.0 {
            return (temperature_K <= last.0 + reach_K + 0.01).then_some(last.1);
        }
        self.points.windows(2).find_map(|pair| match pair {
            [(low_K, low), (high_K, high)] if (*low_K..=*high_K).contains(&temperature_K) => {
                Some(low + (high - low) * (temperature_K - low_K) / (high_K - low_K).max(1e-9))
            }
            _ => None,
        })
    }
}

/// The solids that form and have the composition of a mixture, crystal water aside.
pub fn solids_of(mole: &Mixture, constituents: &Constituents) -> Vec<PhaseId> {
    let is_it = |phase: &Phase| {
        let present = mole.amounts_mol.iter().filter(|(_, amount)| **amount != 0.0).count();
        let Some(&(first, count)) = phase.parts.first() else { return false };
        let Some(factor) = mole.amounts_mol.get(&first).filter(|amount| **amount > 0.0).map(|amount| f64::from(count) / amount) else {
            return false;
        };
        let same = |one: f64, other: f64| (one - factor * other).abs() < 1e-6;
        phase.parts.len() == present
            && phase.parts.iter().all(|(part, count)| same(f64::from(*count), mole.amounts_mol.get(part).copied().unwrap_or(0.0)))
            && same(f64::from(phase.hydrogen), mole.hydrogen_mol)
    };
    constituents.chemistry.phases().filter(|(_, phase)| phase.forms() && is_it(phase)).map(|(id, _)| id).collect()
}

/// A substance as a solid, where anything is known of how it dissolves.
pub fn solid_form(key: &DefinitionKey, substance: &Substance, context: &Context) -> Option<SolidForm> {
    let molar_mass = substance.molar_mass?;
    let (mole, _) = context.constituents.per_mole(key, substance).ok()?;
    let phases = solids_of(&mole, context.constituents);
    let mut points: Vec<(f64, f64)> = Vec::new();
    let product = |id: &PhaseId| {
        let chemistry = &context.constituents.chemistry;
        let own = chemistry.phase(*id).and_then(|phase| phase.log_k.first());
        own.and_then(|&(_, id)| chemistry.constant(id)).map_or(0.0, |constant| constant.log10_k(REFERENCE_K))
    };
    let is_soluble = phases.iter().map(product).fold(f64::INFINITY, f64::min) > SOLUBLE;
    if is_soluble {
        points.extend(substance.solubility.iter().filter_map(|(amount, kelvin)| {
            let kelvin = kelvin.unwrap_or(UNSTATED_K);
            let state = saturated(&mole, molar_mass, amount, kelvin, context)?;
            Some((kelvin, state.log10_activity_product(&mole)?))
        }));
        points.sort_by(|one, other| one.0.total_cmp(&other.0));
        if points.is_empty() && phases.is_empty() {
            return None;
        }
    }
    Some(SolidForm { mole, phases, is_soluble, points })
}

/// The solution of a substance alone that holds as much as its solubility says.
fn saturated(mole: &Mixture, molar_mass: f64, amount: &Amount, temperature_K: f64, context: &Context) -> Option<State> {
    let of = |moles: f64, water_kg: f64| {
        let mut mixture = mole.scaled(moles);
        mixture.water_kg += water_kg;
        state_of(&mixture, temperature_K, context).ok()
    };
    let per_litre = match amount.dimension() {
        Dimension::MassFraction => return of(amount.value / molar_mass, 1.0 - amount.value),
        Dimension::Molality => return of(amount.value, 1.0),
        Dimension::MassConcentration => amount.value / 1000.0 / molar_mass,
        Dimension::AmountConcentration => amount.value,
        _ => return None,
    };
    // How much water a litre holds beside it.
    let mut water_kg = (1.0 - 0.6 * per_litre * molar_mass).max(0.1);
    for _ in 0..12 {
        let missing_L = 1.0 - of(per_litre, water_kg)?.volume_L;
        water_kg += missing_L;
        if missing_L.abs() < 1e-6 {
            break;
        }
    }
    of(per_litre, water_kg)
}

//! What limits the trust in a state.

use super::{ConstantId, Species, SpeciesId, State};

/// Ionic strength beyond which SIT with published coefficients is not to be trusted, mol/kg.
pub const IONIC_STRENGTH_LIMIT_mol_per_kg: f64 = 3.0;
/// Ionic strength beyond which a model without interaction coefficients is not to be trusted, mol/kg.
pub const IONIC_STRENGTH_LIMIT_WITHOUT_INTERACTIONS_mol_per_kg: f64 = 0.5;

/// A reason to doubt a state.
#[derive(Clone, Debug, PartialEq)]
pub enum Warning {
    /// The ionic strength is beyond the range of the activity model.
    IonicStrengthBeyondModel {
        /// The ionic strength, mol/kg.
        ionic_strength_mol_per_kg: f64,
        /// Where the range ends, mol/kg.
        limit_mol_per_kg: f64,
    },
    /// The ionic strength is above 0.5 mol/kg and no interaction coefficient is known for the main cation with the main anion.
    NoInteraction {
        /// The ionic strength, mol/kg.
        ionic_strength_mol_per_kg: f64,
        /// The most plentiful cation.
        cation: SpeciesId,
        /// The most plentiful anion.
        anion: SpeciesId,
    },
    /// A constant that matters is used beyond the temperatures for which it is known.
    ConstantBeyondTemperature {
        /// The constant.
        constant: ConstantId,
        /// The temperature, K.
        temperature_K: f64,
    },
    /// Less than half of the mass is water, so that the aqueous model hardly applies.
    MostlyNotWater {
        /// Mass fraction of water.
        water_fraction: f64,
    },
}

/// Share of one of its components that a species must hold for its constants to matter.
const SHARE_THAT_MATTERS: f64 = 0.01;

/// Whether a species holds a noticeable share of any of its components. Those of water alone always matter.
fn matters(state: &State, species: &Species, molality_mol_per_kg: f64) -> bool {
    species.parts.is_empty()
        || species.parts.iter().any(|(component, count)| {
            let total_mol = state.mixture.amounts_mol.get(component).copied().unwrap_or(0.0);
            f64::from(*count) * molality_mol_per_kg * state.water_kg > SHARE_THAT_MATTERS * total_mol
        })
}

/// The warnings of a state.
pub(super) fn warnings(state: &State) -> Vec<Warning> {
    let mut warnings = Vec::new();
    let (chemistry, ionic_strength_mol_per_kg) = (&state.chemistry, state.ionic_strength_mol_per_kg);
    if ionic_strength_mol_per_kg > IONIC_STRENGTH_LIMIT_mol_per_kg {
        let limit_mol_per_kg = IONIC_STRENGTH_LIMIT_mol_per_kg;
        warnings.push(Warning::IonicStrengthBeyondModel { ionic_strength_mol_per_kg, limit_mol_per_kg });
    }
    if ionic_strength_mol_per_kg > IONIC_STRENGTH_LIMIT_WITHOUT_INTERACTIONS_mol_per_kg {
        // The main ions are those that contribute most to the ionic strength.
        let main = |sign: i32| {
            let contribution = |id: SpeciesId, m: f64| {
                let z = chemistry.species(id).map_or(0, |s| s.charge);
                if z.signum() == sign { f64::from(z * z) * m } else { 0.0 }
            };
            state.species().max_by(|a, b| contribution(a.0, a.1).total_cmp(&contribution(b.0, b.1))).map(|s| s.0)
        };
        if let (Some(cation), Some(anion)) = (main(1), main(-1)) {
            let known = chemistry.interactions(cation).iter().any(|(partner, _)| *partner == anion);
            if !known || !state.settings.model.uses_interactions() {
                warnings.push(Warning::NoInteraction { ionic_strength_mol_per_kg, cation, anion });
            }
        }
    }
    let mut constants: Vec<ConstantId> = state
        .species()
        .filter_map(|(id, molality, _)| Some((chemistry.species(id)?, molality)))
        .filter(|(species, molality)| matters(state, species, *molality))
        .flat_map(|(species, _)| species.log_beta.iter().map(|&(_, constant)| constant))
        .collect();
    constants.sort();
    constants.dedup();
    let temperature_K = state.temperature_K;
    for constant in constants {
        if chemistry.constant(constant).is_some_and(|c| !c.holds_at(temperature_K)) {
            warnings.push(Warning::ConstantBeyondTemperature { constant, temperature_K });
        }
    }
    let water_fraction = state.water_kg / state.mass_kg;
    if water_fraction < 0.5 {
        warnings.push(Warning::MostlyNotWater { water_fraction });
    }
    warnings
}

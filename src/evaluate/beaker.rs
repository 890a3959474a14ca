//! The beaker: what it holds after some lines, and what leaves it.

use super::goods::{Goods, state_of};
use super::{Context, Removed};
use crate::chemistry::{Failure, Mixture, Phase, PhaseId, phase_mass_kg, water};
use crate::finding::Anchor;

/// Partial pressure down to which a gas is driven off, Pa: boiling and degassing leave a hundredth of a millibar. A judgement.
const DRIVEN_OFF_PASCAL: f64 = 1.0;

/// What the beaker holds.
#[derive(Clone, Debug, Default)]
pub(super) struct Beaker {
    pub mixture: Mixture,
    pub kilograms: f64,
    /// All water that was added, kg.
    pub water_kg: f64,
    /// Its temperature where it was cooled or warmed, K.
    pub temperature_K: Option<f64>,
    /// What was filtered or driven off.
    pub removed: Vec<Removed>,
}

impl Beaker {
    pub fn add(&mut self, goods: &Goods, mass_kg: f64) {
        self.mixture.add(&goods.per_kg, mass_kg);
        self.kilograms += mass_kg;
        self.water_kg += mass_kg * goods.water_kg;
    }

    /// Drives a gas off at a temperature (K).
    pub fn drive_off(&mut self, gas: PhaseId, entry: usize, at: Anchor, temperature_K: f64, context: &Context) -> Result<(), Failure> {
        let state = state_of(&self.mixture, temperature_K, context)?;
        if state.partial_pressure_Pa(gas).is_none_or(|pressure| pressure <= DRIVEN_OFF_PASCAL) {
            return Ok(());
        }
        let settled = state.under(gas, DRIVEN_OFF_PASCAL)?;
        self.mixture = settled.state.mixture().clone();
        for (gas, taken_up_mol) in settled.taken_up {
            self.take_out(gas, -taken_up_mol, entry, at, context);
        }
        Ok(())
    }

    /// Filters off what has settled at a temperature (K).
    pub fn filter(&mut self, entry: usize, at: Anchor, temperature_K: f64, context: &Context) -> Result<(), Failure> {
        let settled = state_of(&self.mixture, temperature_K, context)?.settled(Phase::forms)?;
        self.mixture = settled.state.mixture().clone();
        for (solid, amount_mol) in settled.solids {
            self.take_out(solid, amount_mol, entry, at, context);
        }
        Ok(())
    }

    /// Notes what the mixture has lost already.
    fn take_out(&mut self, phase: PhaseId, amount_mol: f64, entry: usize, at: Anchor, context: &Context) {
        let chemistry = &context.constituents.chemistry;
        let mass_kg = phase_mass_kg(chemistry, phase, amount_mol);
        self.kilograms -= mass_kg;
        if let Some(solid) = chemistry.phase(phase).filter(|phase| phase.forms()) {
            // Water of crystallisation went with it; that of a hydroxide was never added as water.
            let crystal = (solid.water + f64::from(solid.hydrogen.min(0))).max(0.0);
            self.water_kg -= amount_mol * crystal * water::MOLAR_MASS_kg_per_mol;
        }
        self.removed.push(Removed { entry, at, phase, amount_mol, mass_kg });
    }
}

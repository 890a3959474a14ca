//! Derivatives of the pH at a solved state, by the implicit function theorem.
//!
//! One solve with the transposed Jacobian gives the derivative with respect to everything: totals, water, constants, temperature.

#![allow(clippy::indexing_slicing, reason = "matrices are indexed by the sizes they were made with, never by input")]

use std::collections::BTreeMap;

use super::{
    ConstantId, Mixture, State, debye_hueckel,
    equilibrium::newton::Linearisation,
    trace::Trace,
    water::MOLAR_MASS_kg_per_mol as WATER_kg_per_mol,
};

/// The derivatives of the pH at a state. Where the Jacobian is singular, which no stable solution is, all are zero.
#[derive(Clone, Debug)]
pub struct Sensitivity<'a> {
    state: &'a State,
    /// ∂ ln a(H⁺)/∂(total of each balance), 1/mol.
    to_totals: Vec<f64>,
    /// ∂ ln a(H⁺)/∂(ln K) of each species' formation.
    to_formation: Vec<f64>,
}

impl<'a> Sensitivity<'a> {
    pub(super) fn new(state: &'a State) -> Self {
        let nothing = || (vec![0.0; state.system.totals_mol.len()], vec![0.0; state.system.species.len()]);
        let (to_totals, to_formation) = Self::adjoint(state).unwrap_or_else(nothing);
        Self { state, to_totals, to_formation }
    }

    fn adjoint(state: &State) -> Option<(Vec<f64>, Vec<f64>)> {
        let (system, point) = (&state.system, &state.point);
        let linear = Linearisation::new(system, point, &[])?;
        let (to_totals, action) = linear.adjoint(system, point, 0);
        Some((to_totals, action.iter().map(|x| -x).collect()))
    }

    /// ∂pH for a unit of this mixture added. It may bring components that the state has none of.
    pub fn pH_derivative(&self, direction: &Mixture) -> f64 {
        let system = &self.state.system;
        let mut change = self.to_totals[0] * direction.hydrogen_mol;
        let mut water_mol = direction.water_kg / WATER_kg_per_mol;
        for (&id, &amount_mol) in &direction.amounts_mol {
            if amount_mol == 0.0 {
                continue;
            }
            if let Some(at) = system.components.iter().position(|component| *component == id) {
                change += self.to_totals[at + 1] * amount_mol;
            } else if self.state.chemistry.component(id).is_some() {
                let trace = Trace::new(self.state, id);
                let taken: f64 = self.to_totals.iter().zip(&trace.taken).map(|(d, n)| d * n).sum();
                let moved: f64 = self.to_formation.iter().zip(&trace.sources).map(|(d, s)| d * s).sum();
                change += (moved - taken) * amount_mol;
                water_mol -= trace.water * amount_mol;
            }
        }
        // More water in the same proportions is the same as less of every total.
        let diluted: f64 = self.to_totals.iter().zip(&system.totals_mol).map(|(d, t)| d * t).sum();
        change -= diluted * water_mol / system.water_mol;
        -change / core::f64::consts::LN_10
    }

    /// Buffer capacity β = dC_b/dpH, mol of strong base per litre and unit of pH, at constant volume.
    pub fn buffer_capacity_mol_per_L(&self) -> f64 {
        core::f64::consts::LN_10 / (self.to_totals[0] * self.state.volume_L)
    }

    /// ∂pH/∂(log₁₀ K) for every constant that takes part.
    pub fn to_constants(&self) -> Vec<(ConstantId, f64)> {
        let mut sums: BTreeMap<ConstantId, f64> = BTreeMap::new();
        for (row, &id) in self.state.system.species.iter().enumerate() {
            let Some(species) = self.state.chemistry.species(id) else { continue };
            for &(factor, constant) in &species.log_beta {
                *sums.entry(constant).or_insert(0.0) -= factor * self.to_formation[row];
            }
        }
        sums.into_iter().collect()
    }

    /// ∂pH/∂T at fixed composition, 1/K.
    pub fn dpH_dT_per_K(&self) -> f64 {
        let (state, system) = (self.state, &self.state.system);
        let t = state.temperature_K;
        let mut change: f64 = self
            .to_constants()
            .iter()
            .map(|&(id, derivative)| {
                derivative * state.chemistry.constant(id).map_or(0.0, |c| c.slope_per_K(t))
            })
            .sum();
        // ln γ and ln a_w are proportional to the Debye–Hückel slope but for the interactions, which are taken as constant.
        let step = 0.01;
        let growth = (debye_hueckel::slope(t + step) - debye_hueckel::slope(t - step)) / (2.0 * step * system.slope);
        let term = system.model.ionic_term(system.slope, state.ionic_strength_mol_per_kg);
        for row in 0..system.species.len() {
            let z = system.charge[row];
            let source = z * z * term.value + system.water[row] * WATER_kg_per_mol * term.osmotic_mol_per_kg;
            change -= self.to_formation[row] * source * growth / core::f64::consts::LN_10;
        }
        change
    }
}

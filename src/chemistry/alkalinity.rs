//! Alkalinity: the strong acid that a solution takes up on titration to pH 4.5; and the way to any other pH.

use super::{Failure, Mixture, State, targets};

/// End point of the titration of total alkalinity (ISO 9963-1:1994).
pub const ALKALINITY_END_POINT_pH: f64 = 4.5;

impl State {
    /// Total alkalinity, mol of strong acid per litre of solution: what brings it to pH 4.5 (ISO 9963-1) at its temperature, closed, without
    /// the acid's volume and counter-ion. Negative where the solution is more acid than that: the strong base that it would take.
    ///
    /// # Errors
    /// As [`super::Chemistry::solve`].
    pub fn alkalinity_mol_per_L(&self) -> Result<f64, Failure> {
        Ok(self.acid_to_pH(ALKALINITY_END_POINT_pH)? / self.volume_L)
    }

    /// The state with as much strong acid or base as brings it to a pH, without its volume and counter-ion.
    ///
    /// # Errors
    /// As [`super::Chemistry::solve`].
    pub fn moved_to_pH(&self, pH: f64) -> Result<State, Failure> {
        self.with_acid(self.acid_to_pH(pH)?)
    }

    fn with_acid(&self, added_mol: f64) -> Result<State, Failure> {
        let mut mixture = self.mixture.clone();
        mixture.add(&Mixture::default().with_hydrogen(1.0), added_mol);
        self.chemistry.solve_ions(&mixture, self.temperature_K, &self.settings)
    }

    /// Strong acid that brings the solution to a pH, mol; negative for base.
    fn acid_to_pH(&self, pH: f64) -> Result<f64, Failure> {
        let miss = |added_mol: f64| Ok::<_, Failure>(self.with_acid(added_mol)?.pH() - pH);
        let start = self.pH() - pH;
        if start == 0.0 {
            return Ok(0.0);
        }
        // The pH falls with every addition of acid, so stepping outward finds the way; the buffer capacity says how far to step first.
        let sign = start.signum();
        let first_mol = start.abs().min(1.0) * self.buffer_capacity_mol_per_L() * self.volume_L;
        let (mut near_mol, mut far_mol) = (0.0, sign * first_mol.max(1e-9 * self.volume_L));
        while miss(far_mol)? * sign > 0.0 {
            (near_mol, far_mol) = (far_mol, 3.0 * far_mol);
        }
        let tolerance = 1e-13 * far_mol.abs();
        match targets::find_root(miss, near_mol.min(far_mol), near_mol.max(far_mol), tolerance, 100) {
            Ok(root) => Ok(root.x),
            Err(targets::TargetFailure::Evaluation(failure)) => Err(failure),
            // The bracket is there and the function smooth: its middle is as near as the digits allow.
            Err(_) => Ok(0.5 * (near_mol + far_mol)),
        }
    }
}

//! Over which pH a solution keeps buffering: how far acid and base can move it before its capacity has fallen to half.

use super::{Failure, Mixture, State, targets};

/// How far in pH the search goes to either side.
const REACH: f64 = 4.0;
/// Steps of the search, in pH.
const STRIDE: f64 = 0.1;

/// Where the buffer capacity falls to half of what it is in the state.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BufferInterval {
    /// The lower end; `None` if the capacity stays above half for four units of pH.
    pub low_pH: Option<f64>,
    /// The upper end; `None` if the capacity stays above half for four units of pH.
    pub high_pH: Option<f64>,
}

impl State {
    /// The pH interval around this state over which the buffer capacity stays above half of its value here. Strong acid or base is thought
    /// to be added without its counter-ion and without volume.
    ///
    /// # Errors
    /// As [`super::Chemistry::solve`].
    pub fn buffer_interval(&self) -> Result<BufferInterval, Failure> {
        Ok(BufferInterval { low_pH: self.half_capacity(1.0)?, high_pH: self.half_capacity(-1.0)? })
    }

    /// Where the capacity falls to half on adding (+1) or removing (−1) hydrogen ions.
    fn half_capacity(&self, sign: f64) -> Result<Option<f64>, Failure> {
        let half = 0.5 * self.buffer_capacity_mol_per_L();
        let at = |added_mol: f64| {
            let mut mixture = self.mixture.clone();
            mixture.add(&Mixture::default().with_hydrogen(sign), added_mol);
            self.chemistry.solve_ions(&mixture, self.temperature_K, &self.settings)
        };
        let (mut added_mol, mut capacity) = (0.0, 2.0 * half);
        loop {
            let next_mol = added_mol + STRIDE * capacity * self.volume_L;
            let state = at(next_mol)?;
            capacity = state.buffer_capacity_mol_per_L();
            if capacity < half {
                let tolerance = 1e-3 * (next_mol - added_mol);
                let excess = |n: f64| Ok::<_, Failure>(at(n)?.buffer_capacity_mol_per_L() / half - 1.0);
                return match targets::find_root(excess, added_mol, next_mol, tolerance, 40) {
                    Ok(root) => Ok(Some(at(root.x)?.pH())),
                    Err(targets::TargetFailure::Evaluation(failure)) => Err(failure),
                    // The bracket is there and the function smooth; should the search yet end early, its last bound is near enough.
                    Err(_) => Ok(Some(state.pH())),
                };
            }
            if (state.pH() - self.pH()).abs() > REACH || next_mol <= added_mol {
                return Ok(None);
            }
            added_mol = next_mol;
        }
    }
}

//! Gases: partial pressures over a solution, and a solution in equilibrium with a gas above it.

use super::{Failure, PhaseId, PhaseKind, Settled, State, phases::Activities};

/// Normal pressure of the atmosphere, Pa.
pub const ATMOSPHERE_Pa: f64 = 101_325.0;
/// Partial pressure of carbon dioxide in air, Pa: 0.042 kPa, the global mean of the early 2020s (NOAA Global Monitoring Laboratory).
pub const CARBON_DIOXIDE_OF_AIR_Pa: f64 = 42.0;

/// Vapour pressure of water at a temperature (K), Pa (Wagner & Pruß 1993, J. Phys. Chem. Ref. Data 22:783, as in IAPWS SR1-86(1992)).
pub fn water_vapour_Pa(temperature_K: f64) -> f64 {
    const CRITICAL_K: f64 = 647.096;
    const CRITICAL_Pa: f64 = 22.064e6;
    let t = 1.0 - temperature_K / CRITICAL_K;
    let root = libm::sqrt(t);
    let sum = -7.859_517_83 * t + 1.844_082_59 * t * root - 11.786_649_7 * t * t * t + 22.680_741_1 * t * t * t * root
        - 15.961_871_9 * t * t * t * t
        + 1.801_225_02 * t * t * t * t * t * t * t * root;
    CRITICAL_Pa * libm::exp(CRITICAL_K / temperature_K * sum)
}

impl State {
    /// Partial pressure of a gas over the solution, Pa; none where one of its components is absent.
    pub fn partial_pressure_Pa(&self, id: PhaseId) -> Option<f64> {
        let gas = self.chemistry.phase(id).filter(|phase| phase.kind == PhaseKind::Gas)?;
        Activities::of(self).log10_excess(self, gas).map(|excess| 1e5 * libm::pow(10.0, excess))
    }

    /// Partial pressure (Pa) of every gas whose components are all present, in order of their handles.
    pub fn partial_pressures_Pa(&self) -> Vec<(PhaseId, f64)> {
        let activities = Activities::of(self);
        let gases = self.chemistry.phases().filter(|(_, phase)| phase.kind == PhaseKind::Gas);
        gases.filter_map(|(id, gas)| Some((id, 1e5 * libm::pow(10.0, activities.log10_excess(self, gas)?)))).collect()
    }

    /// The state in equilibrium with a gas at a partial pressure (Pa), without a solid.
    ///
    /// # Errors
    /// As [`super::Chemistry::solve`].
    pub fn under(&self, gas: PhaseId, pressure_Pa: f64) -> Result<Settled, Failure> {
        self.equilibrated(&[(gas, pressure_Pa)], |_| false)
    }
}

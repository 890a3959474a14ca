//! The Debye–Hückel limiting slopes of activity coefficients and of volumes, from the properties of water.

use super::water;

/// Molar gas constant, J/(mol·K), exact in the SI.
pub const GAS_CONSTANT_J_per_mol_K: f64 = 8.314462618;

/// Slope A of log₁₀ γ = −A z² √I, (kg/mol)^½, at 0.1 MPa, from density and permittivity of water and the exact SI constants.
pub fn slope(temperature_K: f64) -> f64 {
    slope_at(water::density_kg_per_m3(temperature_K), water::relative_permittivity(temperature_K), temperature_K)
}

fn slope_at(density_kg_per_m3: f64, permittivity: f64, temperature_K: f64) -> f64 {
    const AVOGADRO_per_mol: f64 = 6.02214076e23;
    const ELEMENTARY_CHARGE_C: f64 = 1.602176634e-19;
    const BOLTZMANN_J_per_K: f64 = 1.380649e-23;
    const VACUUM_PERMITTIVITY_F_per_m: f64 = 8.8541878128e-12;
    let bjerrum_m = ELEMENTARY_CHARGE_C * ELEMENTARY_CHARGE_C
        / (4.0 * core::f64::consts::PI * VACUUM_PERMITTIVITY_F_per_m * permittivity * BOLTZMANN_J_per_K * temperature_K);
    libm::sqrt(2.0 * core::f64::consts::PI * AVOGADRO_per_mol * density_kg_per_m3)
        * bjerrum_m
        * libm::sqrt(bjerrum_m)
        / core::f64::consts::LN_10
}

/// Slope A_V of apparent molar volumes, φV = V° + A_V √m for a 1:1 electrolyte, L·kg^½/mol^(3/2): the pressure derivative of the
/// Debye–Hückel free energy (Pitzer's definition), with permittivity and compressibility of water.
pub fn volume_slope(temperature_K: f64) -> f64 {
    let density = water::density_kg_per_m3(temperature_K);
    let (permittivity, d_ln_permittivity) = water::permittivity_and_slope(density, temperature_K);
    let osmotic_slope = slope_at(density, permittivity, temperature_K) * core::f64::consts::LN_10 / 3.0;
    2.0 * GAS_CONSTANT_J_per_mol_K
        * temperature_K
        * osmotic_slope
        * water::compressibility_per_Pa(temperature_K)
        * (3.0 * d_ln_permittivity - 1.0)
        * 1000.0
}

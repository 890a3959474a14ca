//! Electrolytic conductivity from limiting molar ionic conductivities.
//!
//! Ionic strength: the relaxation and electrophoretic terms of Onsager with a finite ion size, as a product (Falkenhagen, Leist & Kelbg 1952;
//! Robinson & Stokes, Electrolyte Solutions, chapter 7), the opposite ions of a mixture taken at their mean. Temperature: Walden's rule in
//! its fractional form, but for H⁺ and OH⁻, which move by a mechanism of their own.

use super::{State, constants::REFERENCE_K, water};

/// Ion size parameter for all ions, Å (near the sum of the radii of hydrated alkali and halide ions; Robinson & Stokes table 9.5).
const ION_SIZE_angstrom: f64 = 4.0;
/// Exponent of the fluidity with which limiting conductivities rise: 0.87 reproduces K⁺ and Cl⁻ from 0 °C to 55 °C within 2 %
/// (Robinson & Stokes, appendix 6.2).
const WALDEN_EXPONENT: f64 = 0.87;
/// Limiting conductivities of H⁺ and OH⁻, S·cm²/mol, by temperature in °C (Robinson & Stokes, appendix 6.2; from memory).
const BY_TEMPERATURE: [(f64, f64, f64); 9] = [
    (0.0, 225.0, 105.0),
    (5.0, 250.1, 124.0),
    (15.0, 300.6, 165.9),
    (18.0, 315.0, 175.8),
    (25.0, 349.8, 199.1),
    (35.0, 397.0, 233.0),
    (45.0, 441.4, 267.2),
    (55.0, 483.1, 301.4),
    (100.0, 630.0, 450.0),
];

/// A conductivity, and how much of the ionic strength it leaves out.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Conductivity {
    /// Conductivity, S/m.
    pub value_S_per_m: f64,
    /// Share of the ionic strength that belongs to ions without a known conductivity, 0 to 1; these count nothing.
    pub unknown_share: f64,
    /// Relative standard uncertainty of the model for simple salts: 0.5 %, and 3 % for each mol/L of ionic strength, as far as the checks
    /// against tables show. The viscosity that ions give or take is not in it.
    pub relative_uncertainty: f64,
}

/// One kind of ion: charge number without sign, amount concentration in mol/L, equivalent conductivity in S·cm²/mol.
struct Ion {
    positive: bool,
    charge: f64,
    concentration: f64,
    equivalent: f64,
}

impl State {
    /// The conductivity of the solution at its temperature.
    pub fn conductivity(&self) -> Conductivity {
        let to_litre = self.water_kg / self.volume_L;
        let mut ions = Vec::new();
        let (mut known, mut unknown) = (0.0, 0.0);
        for (id, molality, _) in self.species() {
            let charge = self.chemistry.species(id).map_or(0, |species| species.charge);
            if charge == 0 {
                continue;
            }
            let size = f64::from(charge.abs());
            let concentration = molality * to_litre;
            let limiting = if id == self.chemistry.hydrogen() || id == self.chemistry.hydroxide() {
                Some(of_water(charge > 0, self.temperature_K))
            } else {
                let at_25 = self.chemistry.molar_conductivity_S_cm2_per_mol(id);
                at_25.map(|limiting| limiting * fluidity_ratio(self.temperature_K, WALDEN_EXPONENT))
            };
            match limiting {
                Some(limiting) => {
                    known += size * size * concentration;
                    ions.push(Ion { positive: charge > 0, charge: size, concentration, equivalent: limiting / size });
                }
                None => unknown += size * size * concentration,
            }
        }
        let all = known + unknown;
        Conductivity {
            value_S_per_m: 0.1 * self.conductance(&ions, 0.5 * all),
            relative_uncertainty: 0.005 + 0.03 * 0.5 * all,
            unknown_share: if all > 0.0 { unknown / all } else { 0.0 },
        }
    }

    /// Σ c |z| λ of the ions (mol/L · S·cm²/mol = mS/cm) at an ionic strength in mol/L.
    fn conductance(&self, ions: &[Ion], ionic_strength: f64) -> f64 {
        let t = self.temperature_K;
        let permittivity_K = water::relative_permittivity(t) * t;
        let root = libm::sqrt(ionic_strength);
        // κ a with κ = 50.29 √I/√(εT) per ångström, and the two coefficients of Onsager (Robinson & Stokes, equations 7.19 and 7.36).
        let shielded = root / (1.0 + 50.29 / libm::sqrt(permittivity_K) * ION_SIZE_angstrom * root);
        let electrophoretic = 41.25 / (water::viscosity_Pa_s(t) * 10.0 * libm::sqrt(permittivity_K)) * shielded;
        let relaxation = 2.801e6 / (permittivity_K * libm::sqrt(permittivity_K)) * shielded;
        let mean = |positive: bool| {
            let (mut equivalents, mut charge, mut mobility) = (0.0, 0.0, 0.0);
            for ion in ions.iter().filter(|ion| ion.positive == positive) {
                let share = ion.concentration * ion.charge;
                equivalents += share;
                charge += share * ion.charge;
                mobility += share * ion.equivalent;
            }
            (equivalents > 0.0).then(|| (charge / equivalents, mobility / equivalents))
        };
        let (cations, anions) = (mean(true).unwrap_or((1.0, 50.0)), mean(false).unwrap_or((1.0, 50.0)));
        ions.iter()
            .map(|ion| {
                let opposite = if ion.positive { anions } else { cations };
                let mobilities = ion.equivalent + opposite.1;
                let q = ion.charge * opposite.0 / (ion.charge + opposite.0) * mobilities
                    / (opposite.0 * ion.equivalent + ion.charge * opposite.1);
                let slowed = relaxation * ion.charge * opposite.0 * q / (1.0 + libm::sqrt(q));
                let equivalent = (ion.equivalent - electrophoretic * ion.charge) * (1.0 - slowed);
                ion.concentration * ion.charge * equivalent.max(0.0)
            })
            .sum()
    }
}

/// (η(25 °C)/η(T)) to a power.
fn fluidity_ratio(temperature_K: f64, exponent: f64) -> f64 {
    libm::pow(water::viscosity_Pa_s(REFERENCE_K) / water::viscosity_Pa_s(temperature_K), exponent)
}

/// Limiting conductivity of H⁺ or OH⁻ (S·cm²/mol), interpolated in the table.
fn of_water(hydrogen: bool, temperature_K: f64) -> f64 {
    let t = temperature_K - water::ZERO_CELSIUS_K;
    let value = |row: &(f64, f64, f64)| if hydrogen { row.1 } else { row.2 };
    let mut result = value(&BY_TEMPERATURE[0]);
    for pair in BY_TEMPERATURE.windows(2) {
        if let [low, high] = pair
            && t >= low.0
        {
            result = value(low) + (value(high) - value(low)) * (t - low.0) / (high.0 - low.0);
        }
    }
    result
}

//! Equilibrium constants and how they change with temperature.

use super::{debye_hueckel::GAS_CONSTANT_J_per_mol_K, water};

/// Temperature to which tabulated constants refer, K.
pub const REFERENCE_K: f64 = 298.15;

/// Handle of a constant in a [`super::Chemistry`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct ConstantId(pub(crate) usize);

/// A thermodynamic equilibrium constant (molal, zero ionic strength) with its standard uncertainty.
#[derive(Clone, Debug, PartialEq)]
pub struct Constant {
    /// What it is called, for reports: `pKa of acetic acid`.
    pub name: String,
    /// Its value as a function of temperature.
    pub value: ConstantValue,
    /// Standard uncertainty of log₁₀ K at 25 °C; 0 where none is known.
    pub standard_uncertainty: f64,
}

/// log₁₀ K as a function of temperature.
#[derive(Clone, Debug, PartialEq)]
pub enum ConstantValue {
    /// The integrated van 't Hoff equation with constant heat capacity (as in Goldberg, Kishore & Lennen 2002). For an acid give the
    /// ionisation HA → H⁺ + A⁻: log₁₀ K = −pKa, with the enthalpy of ionisation; the species HA then has it with the factor −1.
    VantHoff {
        /// log₁₀ K at 25 °C.
        log10_k: f64,
        /// Standard enthalpy of the reaction, J/mol; `None` where it is not known: the constant then stays at its 25 °C value.
        enthalpy_J_per_mol: Option<f64>,
        /// Standard heat capacity change of the reaction, J/(mol·K); `None` is taken as 0.
        heat_capacity_J_per_mol_K: Option<f64>,
    },
    /// log₁₀ K = a/T + b + c T + d ln T, T in kelvin.
    Equation {
        /// Coefficient of 1/T, K.
        a: f64,
        /// Constant term.
        b: f64,
        /// Coefficient of T, 1/K.
        c: f64,
        /// Coefficient of ln T.
        d: f64,
        /// Temperatures at which the equation holds, K.
        range_K: (f64, f64),
    },
    /// The ionisation of water, H₂O → H⁺ + OH⁻ (IAPWS R11-07).
    Water,
}

impl Constant {
    /// log₁₀ K at a temperature (K).
    pub fn log10_k(&self, temperature_K: f64) -> f64 {
        match self.value {
            ConstantValue::VantHoff { log10_k, enthalpy_J_per_mol, heat_capacity_J_per_mol_K } => {
                let enthalpy = enthalpy_J_per_mol.unwrap_or(0.0);
                let heat_capacity = heat_capacity_J_per_mol_K.unwrap_or(0.0);
                let (t, t0) = (temperature_K, REFERENCE_K);
                let exponent = enthalpy * (1.0 / t0 - 1.0 / t) + heat_capacity * (t0 / t - 1.0 + libm::log(t / t0));
                log10_k + exponent / (GAS_CONSTANT_J_per_mol_K * core::f64::consts::LN_10)
            }
            ConstantValue::Equation { a, b, c, d, .. } => {
                a / temperature_K + b + c * temperature_K + d * libm::log(temperature_K)
            }
            ConstantValue::Water => -water::pKw(temperature_K),
        }
    }

    /// d log₁₀ K / dT, 1/K.
    pub fn slope_per_K(&self, temperature_K: f64) -> f64 {
        let t = temperature_K;
        match self.value {
            ConstantValue::VantHoff { enthalpy_J_per_mol, heat_capacity_J_per_mol_K, .. } => {
                let enthalpy = enthalpy_J_per_mol.unwrap_or(0.0)
                    + heat_capacity_J_per_mol_K.unwrap_or(0.0) * (t - REFERENCE_K);
                enthalpy / (GAS_CONSTANT_J_per_mol_K * core::f64::consts::LN_10 * t * t)
            }
            ConstantValue::Equation { a, c, d, .. } => -a / (t * t) + c + d / t,
            // A closed formula without a short derivative: a central difference over 0.02 K is exact to nine digits.
            ConstantValue::Water => (water::pKw(t - 0.01) - water::pKw(t + 0.01)) / 0.02,
        }
    }

    /// Whether the value at this temperature (K) is within what the source supports. A constant without an enthalpy is
    /// good for 5 K around 25 °C (a judgement: 30 kJ/mol would shift it by 0.09 there).
    pub fn holds_at(&self, temperature_K: f64) -> bool {
        match self.value {
            ConstantValue::VantHoff { enthalpy_J_per_mol: None, .. } => (temperature_K - REFERENCE_K).abs() <= 5.0,
            ConstantValue::VantHoff { .. } => true,
            ConstantValue::Equation { range_K: (low, high), .. } => {
                // A hundredth of a kelvin for limits converted from Celsius.
                temperature_K >= low - 0.01 && temperature_K <= high + 0.01
            }
            ConstantValue::Water => temperature_K >= water::RANGE_K.0 && temperature_K <= water::RANGE_K.1,
        }
    }
}

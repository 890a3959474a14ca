//! Why a state could not be computed: a typed reason with its numbers.

use core::fmt;

/// A reason instead of a number.
#[derive(Clone, Debug, PartialEq)]
pub enum Failure {
    /// There is no water, or the species leave none.
    NoWater {
        /// Water brought in, kg.
        water_kg: f64,
    },
    /// An amount, or the temperature, is not a finite number.
    NotFinite {
        /// Which input.
        what: String,
    },
    /// An amount is negative.
    NegativeAmount {
        /// Name of the component.
        component: String,
        /// The amount, mol.
        amount_mol: f64,
    },
    /// A component does not belong to this chemistry.
    UnknownComponent,
    /// The temperature is outside the range of the formulas.
    TemperatureOutOfRange {
        /// The temperature, K.
        temperature_K: f64,
    },
    /// The amounts carry a net charge: something is missing from the recipe.
    Charged {
        /// Net charge, mol.
        charge_mol: f64,
    },
    /// The equations were not solved to the required residual.
    NotConverged {
        /// Newton steps taken.
        steps: usize,
        /// Largest relative mass-balance residual reached.
        residual: f64,
    },
}

impl fmt::Display for Failure {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NoWater { water_kg } => write!(f, "there is no water to dissolve in ({water_kg} kg)"),
            Self::NotFinite { what } => write!(f, "{what} is not a finite number"),
            Self::NegativeAmount { component, amount_mol } => {
                write!(f, "the amount of {component} is negative ({amount_mol} mol)")
            }
            Self::UnknownComponent => write!(f, "a component is not part of this chemistry"),
            Self::TemperatureOutOfRange { temperature_K } => {
                write!(f, "{:.2} °C is outside 0 °C to 100 °C", temperature_K - super::water::ZERO_CELSIUS_K)
            }
            Self::Charged { charge_mol } => {
                write!(f, "the amounts carry a net charge of {charge_mol:.3e} mol, so an ion is missing or counted twice")
            }
            Self::NotConverged { steps, residual } => {
                write!(f, "the equilibrium was not found: after {steps} steps a mass balance is still off by {residual:.1e} of its total")
            }
        }
    }
}

impl std::error::Error for Failure {}

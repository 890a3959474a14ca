//! What stands above the liquid: which gas, and its partial pressure at a temperature.

use super::goods::state_of;
use super::names::ingredient;
use super::{Context, Refusal};
use crate::chemistry::gases::{ATMOSPHERE_Pa, CARBON_DIOXIDE_OF_AIR_Pa, water_vapour_Pa};
use crate::chemistry::{Failure, Mixture, PhaseId, State};
use crate::finding::{Anchor, Code, Finding, Level};
use crate::model::{Atmosphere, Recipe};
use crate::units::Dimension;

/// A gas above the liquid that dissolves in it.
#[derive(Clone, Debug, PartialEq)]
pub struct Above {
    /// The gas.
    pub gas: PhaseId,
    /// Its name.
    pub name: String,
    /// Where it is stated.
    pub at: Anchor,
    /// Whether it is there in use only.
    pub in_use_only: bool,
    amount: Part,
}

/// How much of what is above it is.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Part {
    /// At this partial pressure, Pa.
    Pressure(f64),
    /// As this share of the gas, at normal pressure; dry, or of what water vapour leaves.
    Share { share: f64, moist: bool },
}

impl Above {
    /// Its partial pressure at a temperature (K), Pa.
    pub fn pressure_Pa(&self, temperature_K: f64) -> f64 {
        match self.amount {
            Part::Pressure(pascal) => pascal,
            Part::Share { share, moist: false } => share * ATMOSPHERE_Pa,
            Part::Share { share, moist: true } => share * (ATMOSPHERE_Pa - water_vapour_Pa(temperature_K)).max(0.0),
        }
    }

    /// The state of a mixture in equilibrium with it.
    ///
    /// # Errors
    /// As [`crate::chemistry::Chemistry::solve`].
    pub fn over(&self, mixture: &Mixture, temperature_K: f64, context: &Context) -> Result<State, Failure> {
        let closed = state_of(mixture, temperature_K, context)?;
        Ok(closed.under(self.gas, self.pressure_Pa(temperature_K))?.state)
    }
}

/// The gas that a recipe states; none where it is closed or open, or where nothing of the gas is known to dissolve, which is said.
///
/// # Errors
/// The gas is not known by its name.
pub(super) fn above(recipe: &Recipe, context: &Context, findings: &mut Vec<Finding>) -> Result<Option<Above>, Refusal> {
    let Some(stated) = &recipe.atmosphere else { return Ok(None) };
    let (gas, name, amount) = match &stated.value {
        Atmosphere::Sealed | Atmosphere::Open => return Ok(None),
        Atmosphere::Air => (carbon_dioxide(context), "carbon dioxide".to_owned(), Part::Pressure(CARBON_DIOXIDE_OF_AIR_Pa)),
        Atmosphere::Gas { quantity, of, moist } => {
            let found = ingredient(of, false, context)?;
            let amount = match quantity.dimension() {
                Dimension::Pressure => Part::Pressure(quantity.value),
                _ => Part::Share { share: quantity.value, moist: *moist },
            };
            (context.constituents.phases.gas(&found.definition.key), found.definition.name().to_owned(), amount)
        }
    };
    let positive = match amount {
        Part::Pressure(pascal) => pascal > 0.0,
        Part::Share { share, .. } => share > 0.0,
    };
    match gas.filter(|_| positive) {
        Some(gas) => Ok(Some(Above { gas, name, at: stated.at, in_use_only: recipe.gas_in_use_only, amount })),
        None => {
            findings.push(
                Finding::new(Code::NotEvaluatedYet, stated.at, format!("What {name} does in water is not known to the library."))
                    .at_level(Level::Hint)
                    .help("The values of the solution are those of the closed liquid."),
            );
            Ok(None)
        }
    }
}

/// Carbon dioxide as a gas.
pub fn carbon_dioxide(context: &Context) -> Option<PhaseId> {
    context.constituents.phases.carbon_dioxide()
}

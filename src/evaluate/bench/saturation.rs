//! As much of a substance as the beaker dissolves.

use super::Bench;
use crate::evaluate::Refusal;
use crate::evaluate::beaker::Beaker;
use crate::evaluate::goods::{Goods, state_of};
use crate::evaluate::plan::Planned;
use crate::evaluate::solubility::SolidForm;
use crate::finding::{Code, Finding};
use crate::units::format;

/// The saturation index of a solid of which nothing is there, which has no end below.
pub(super) const ABSENT: f64 = -100.0;

impl Bench<'_, '_> {
    /// The beaker's temperature: where it was brought to, else where the solution is made.
    pub(super) fn temperature_of(&self, beaker: &Beaker) -> f64 {
        beaker.temperature_K.unwrap_or(self.temperature_K)
    }

    /// How much of the goods the beaker dissolves, kg.
    pub(super) fn saturate(&self, beaker: &Beaker, goods: &Goods, form: &SolidForm, line: &Planned) -> Result<f64, Refusal> {
        if beaker.mixture.water_kg <= 0.0 {
            return Err(self.nothing_to_set(line));
        }
        let temperature_K = self.temperature_of(beaker);
        let index = |mass: f64| -> Result<f64, Refusal> {
            let mut mixture = beaker.mixture.clone();
            mixture.add(&goods.per_kg, mass);
            let state = state_of(&mixture, temperature_K, self.context).map_err(|failure| Refusal::of_chemistry(line.at, &failure))?;
            Ok(form.saturation_index(&state).unwrap_or(ABSENT))
        };
        if index(0.0)? >= 0.0 {
            return Ok(0.0);
        }
        let (mut low, mut high) = (0.0, 1e-13 * beaker.kilograms);
        while index(high)? < 0.0 {
            (low, high) = (high, 8.0 * high);
            if high > 10.0 * beaker.kilograms {
                let message = format!("At {} it is not known when {} is saturated.", format::temperature(temperature_K), goods.name);
                return Err(Finding::new(Code::TargetOutOfReach, line.at, message)
                    .help("State an amount, or work where its solubility is known.")
                    .into());
            }
        }
        self.root(index, low, high, 1e-12 * high, line.at)
    }
}

//! What can be compared of a solution: each number in one unit, under a key that outlives edits.

use std::collections::BTreeMap;

use crate::chemistry::State;
use crate::evaluate::{Outcome, Role};
use crate::model::NameKey;
use crate::units::{Dimension, format};

/// What a number measures, and so its unit, its digits and what is worth showing.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Measure {
    /// pH.
    Ph,
    /// mol/L.
    Concentration,
    /// S/m.
    Conductivity,
    /// mol/kg.
    Osmolality,
    /// kg/m³.
    Density,
    /// L.
    Volume,
    /// kg.
    Mass,
}

/// Significant figures of what is worked out, and of what is weighed and measured.
const FIGURES: usize = 3;
const FIGURES_TAKEN: usize = 4;

impl Measure {
    /// The unit of the number, as it is written in data.
    pub fn unit(self) -> &'static str {
        match self {
            Measure::Ph => "1",
            Measure::Concentration => "mol/L",
            Measure::Conductivity => "S/m",
            Measure::Osmolality => "mol/kg",
            Measure::Density => "kg/m³",
            Measure::Volume => "L",
            Measure::Mass => "kg",
        }
    }

    fn figures(self) -> usize {
        match self {
            Measure::Density | Measure::Volume | Measure::Mass => FIGURES_TAKEN,
            _ => FIGURES,
        }
    }

    /// Two values as people read them, in one unit and with one more digit where they would look the same.
    pub fn shown(self, old: Option<f64>, new: Option<f64>) -> (Option<String>, Option<String>) {
        let both = |more: usize| (old.map(|value| self.one(value, new, more)), new.map(|value| self.one(value, old, more)));
        let shown = both(0);
        if shown.0 == shown.1 && old != new { both(1) } else { shown }
    }

    fn one(self, value: f64, other: Option<f64>, more: usize) -> String {
        let largest = value.abs().max(other.unwrap_or(0.0).abs());
        match self {
            Measure::Ph => format::fixed(value, 2 + more),
            Measure::Density => format::density(value, self.figures() + more),
            measure => {
                let unit = format::readable_unit(largest, measure.dimension(), measure.figures());
                format::quantity(value, unit, measure.figures() + more)
            }
        }
    }

    /// A difference as people read it, with its sign.
    pub fn difference(self, change: f64) -> String {
        let sign = if change > 0.0 { "+" } else { "" };
        match self {
            Measure::Ph if change.abs() >= 0.095 => format!("{sign}{}", format::fixed(change, 2)),
            Measure::Ph => format!("{sign}{}", format::fixed(change, 3)),
            Measure::Density => format!("{sign}{}", format::density(change, 2)),
            measure => format!("{sign}{}", format::readable(change, measure.dimension(), 2)),
        }
    }

    fn dimension(self) -> Dimension {
        match self {
            Measure::Ph | Measure::Density | Measure::Concentration => Dimension::AmountConcentration,
            Measure::Conductivity => Dimension::Conductivity,
            Measure::Osmolality => Dimension::Osmolality,
            Measure::Volume => Dimension::Volume,
            Measure::Mass => Dimension::Mass,
        }
    }

    /// Whether two values are the same but for rounding.
    pub fn is_equal(self, one: f64, other: f64) -> bool {
        let floor = if self == Measure::Ph { 1e-9 } else { 1e-15 };
        (one - other).abs() <= f64::max(floor, 1e-9 * one.abs())
    }

    /// Whether a difference shows in the digits that are told: half a unit of the last one.
    pub fn is_worth_showing(self, old: f64, new: f64) -> bool {
        if self == Measure::Ph {
            // A thousandth of it leaves room for what the subtraction costs.
            return (new - old).abs() >= 0.005 * 0.999;
        }
        let largest = old.abs().max(new.abs());
        if largest == 0.0 {
            return false;
        }
        let last = libm::pow(10.0, libm::floor(libm::log10(largest)) + 1.0 - self.figures() as f64);
        (new - old).abs() >= 0.5 * last
    }
}

/// A number of a solution.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Value {
    /// What it is, in words that also serve as its key.
    pub name: String,
    pub measure: Measure,
    /// None where there is a reason instead.
    pub value: Option<f64>,
}

/// Ions whose conductivity is not known may carry so much of the ionic strength before none is told.
const MOST_UNKNOWN: f64 = 0.02;

/// What definitions of the old state are called now, where that is another name.
pub(super) type Renamed = BTreeMap<NameKey, String>;

/// Every number of an outcome, the most telling first. What is taken goes by the name that it has now.
pub(super) fn values(outcome: &Outcome, renamed: &Renamed) -> Vec<Value> {
    let mut values = Vec::new();
    let mut push = |name: &str, measure, value: Option<f64>| {
        values.push(Value { name: name.to_owned(), measure, value: value.filter(|value| value.is_finite()) });
    };
    let state = outcome.finished.as_ref().ok();
    push("pH", Measure::Ph, state.map(State::pH));
    for (kelvin, state) in &outcome.uses {
        push(&format!("pH at {}", format::temperature(*kelvin)), Measure::Ph, state.as_ref().ok().map(State::pH));
    }
    push("pH as set", Measure::Ph, outcome.set_points.last().map(|point| point.state.pH()));
    push("ionic strength", Measure::Concentration, state.map(State::ionic_strength_mol_per_L));
    push("buffer capacity", Measure::Concentration, state.map(State::buffer_capacity_mol_per_L));
    push("osmolality", Measure::Osmolality, state.map(State::osmolality_mol_per_kg));
    let conductivity = state.map(State::conductivity).filter(|found| found.unknown_share <= MOST_UNKNOWN);
    push("conductivity", Measure::Conductivity, conductivity.map(|found| found.value_S_per_m));
    push("density", Measure::Density, state.map(State::density_kg_per_m3));
    push("volume", Measure::Volume, Some(outcome.volume_L));
    if let Some(state) = state {
        let mut totals: BTreeMap<&str, f64> = BTreeMap::new();
        for (id, concentration) in state.totals_mol_per_L() {
            if let Some(component) = state.chemistry().component(id) {
                totals.insert(&component.name, concentration);
            }
        }
        totals.iter().for_each(|(name, value)| push(&format!("total {name}"), Measure::Concentration, Some(*value)));
    }
    let mut seen: BTreeMap<String, usize> = BTreeMap::new();
    for line in outcome.lines.iter().filter(|line| line.role != Role::Alternative) {
        let called = renamed.get(&NameKey::new(&line.name)).unwrap_or(&line.name);
        let count = seen.entry(called.clone()).or_default();
        *count += 1;
        let name = if *count == 1 { format!("{called} taken") } else { format!("{called} taken ({count})") };
        match line.volume_L {
            Some(volume) => push(&name, Measure::Volume, Some(volume)),
            None => push(&name, Measure::Mass, Some(line.mass_kg)),
        }
    }
    values
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_shows_in_the_digits_is_worth_showing() {
        assert!(Measure::Ph.is_worth_showing(7.0, 7.005) && !Measure::Ph.is_worth_showing(7.0, 7.004));
        assert!(Measure::Concentration.is_worth_showing(0.1, 0.1006) && !Measure::Concentration.is_worth_showing(0.1, 0.1004));
        assert!(!Measure::Mass.is_worth_showing(0.0, 0.0));
        assert_eq!(Measure::Ph.shown(Some(7.004), Some(7.001)), (Some("7.004".into()), Some("7.001".into())));
        assert_eq!(Measure::Volume.shown(Some(0.0009), Some(0.0011)), (Some("0.9000 mL".into()), Some("1.100 mL".into())));
        assert_eq!(Measure::Concentration.difference(-0.0021), "-2.1 mmol/L");
        assert_eq!((Measure::Ph.difference(0.12).as_str(), Measure::Ph.difference(-0.012).as_str()), ("+0.12", "-0.012"));
    }
}

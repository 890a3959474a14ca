//! Quantities, tolerances, goals and properties in base units.

use super::{reference, strong_reference};
use crate::finding::Anchor;
use crate::model::{Amount, Dilution, Goal, GoalKind, HalfWidth, Property, Stated};
use crate::syntax::formula;
use crate::syntax::tree::{self, Range, Slot, TargetKind};
use crate::units::{Dimension, Unit};

/// A quantity as an amount.
pub fn amount(quantity: &tree::Quantity) -> Amount {
    Amount {
        value: quantity.unit.to_base(quantity.number.value),
        half_range: 0.0,
        unit: quantity.unit,
        span: quantity.span,
    }
}

/// A quantity of the dimension wanted, in its base unit.
pub fn base_value(quantity: &Slot<tree::Quantity>, dimension: Dimension) -> Option<f64> {
    let quantity = quantity.given().filter(|quantity| quantity.unit.dimension() == dimension)?;
    Some(quantity.unit.to_base(quantity.number.value))
}

/// The same with its place.
pub fn stated(line: usize, quantity: &Slot<tree::Quantity>, dimension: Dimension) -> Option<Stated<f64>> {
    let value = base_value(quantity, dimension)?;
    quantity.given().map(|quantity| Stated { value, at: Anchor::new(line, quantity.span) })
}

/// A length of a unit, without its offset: a difference of temperatures, a half-width.
fn difference(unit: Unit, value: f64) -> f64 {
    unit.to_base(value) - unit.to_base(0.0)
}

/// A tolerance; a bare number has the unit of what it stands beside.
pub fn half_width(tolerance: &tree::Tolerance, beside: Option<Unit>) -> HalfWidth {
    let value = tolerance.half_width.value;
    match tolerance.unit.or(beside) {
        Some(unit) if unit.dimension() == Dimension::Percent => HalfWidth::Relative(unit.to_base(value)),
        Some(unit) => HalfWidth::Absolute(difference(unit, value)),
        None => HalfWidth::Absolute(value),
    }
}

/// A property, where it can be read.
pub fn property(line: usize, property: &tree::Property) -> Option<Property> {
    use tree::PropertyKind as Kind;
    Some(match &property.kind {
        Kind::Ph => Property::Ph,
        Kind::IonicStrength => Property::IonicStrength,
        Kind::BufferCapacity => Property::BufferCapacity,
        Kind::Osmolality => Property::Osmolality,
        Kind::Conductivity => Property::Conductivity,
        Kind::Density => Property::Density,
        Kind::WaterActivity => Property::WaterActivity,
        Kind::Alkalinity => Property::Alkalinity,
        Kind::Hardness => Property::Hardness,
        Kind::Total(name) => Property::Total(reference(line, name.given()?)),
        Kind::Free(name) => Property::Free(reference(line, name.given()?)),
        Kind::SaturationIndex(name) => Property::SaturationIndex(reference(line, name.given()?)),
    })
}

/// The limits of a range in base units, and the unit written.
pub struct Limits {
    /// Lower limit.
    pub low: Option<f64>,
    /// Upper limit.
    pub high: Option<f64>,
    /// What is aimed at.
    pub aim: f64,
    /// The unit; none for bare numbers.
    pub unit: Option<Unit>,
}

/// The limits of a range.
pub fn limits(range: &Range) -> Limits {
    let base = |bound: &tree::Bound, unit: Option<Unit>| match bound.unit.or(unit) {
        Some(unit) => unit.to_base(bound.number.value),
        None => bound.number.value,
    };
    match range {
        Range::Exactly(bound) => {
            Limits { low: None, high: None, aim: base(bound, None), unit: bound.unit }
        }
        Range::PlusMinus(bound, tolerance) => {
            // `50 ± 2 mg/L` carries its unit once, at the end.
            let unit = bound.unit.or(tolerance.unit.filter(|unit| unit.dimension() != Dimension::Percent));
            let middle = base(bound, unit);
            let width = half_width(tolerance, unit).about(middle);
            Limits { low: Some(middle - width), high: Some(middle + width), aim: middle, unit }
        }
        Range::Between(from, to) => {
            let unit = to.unit.or(from.unit);
            let (low, high) = (base(from, unit), base(to, unit));
            Limits { low: Some(low), high: Some(high), aim: 0.5 * (low + high), unit }
        }
        Range::AtLeast(bound) => {
            let low = base(bound, None);
            Limits { low: Some(low), high: None, aim: low, unit: bound.unit }
        }
        Range::AtMost(bound) => {
            let high = base(bound, None);
            Limits { low: None, high: Some(high), aim: high, unit: bound.unit }
        }
    }
}

/// A dilution, where it can be read.
pub fn dilution(line: usize, dilution: &tree::Dilution) -> Option<Dilution> {
    let fold = dilution.fold.given()?.value;
    let with = match &dilution.with {
        None => None,
        Some(name) => Some(strong_reference(line, &None, name)?),
    };
    (fold >= 1.0).then_some(Dilution { fold, with })
}

/// The goals of a target: one, or several where it is a series. Empty where it cannot be read.
pub fn goals(line: usize, target: &tree::Target) -> Vec<Goal> {
    read_goals(line, target).unwrap_or_default()
}

fn read_goals(line: usize, target: &tree::Target) -> Option<Vec<Goal>> {
    let at = Anchor::new(line, target.span);
    let temperature = match &target.at {
        None => None,
        Some(slot) => Some(stated(line, slot, Dimension::Temperature)?),
    };
    let diluted = match &target.diluted {
        None => None,
        Some(given) => Some(dilution(line, given)?),
    };
    let as_formula = match &target.as_formula {
        None => None,
        Some(slot) => Some(formula::parse(&slot.given()?.text).ok()?),
    };
    let goal = |kind| Goal { kind, at, as_formula: as_formula.clone(), temperature, diluted: diluted.clone() };
    let of_property = |property: &Property, limits: Limits| {
        goal(GoalKind::Property {
            property: property.clone(),
            aim: limits.aim,
            low: limits.low,
            high: limits.high,
            unit: limits.unit,
        })
    };
    Some(match &target.kind {
        TargetKind::Extent { about, quantity, tolerance } => {
            let value = quantity.unit.to_base(quantity.number.value);
            let tolerance = tolerance.as_ref().map(|given| half_width(given, Some(quantity.unit)));
            let about = *about;
            vec![goal(match quantity.unit.dimension() {
                Dimension::Volume => GoalKind::Volume { litres: value, about, tolerance },
                Dimension::Mass => GoalKind::Mass { kilograms: value, about, tolerance },
                _ => return None,
            })]
        }
        TargetKind::Property { property: sought, range } => {
            let sought = property(line, sought)?;
            vec![of_property(&sought, limits(range.given()?))]
        }
        TargetKind::Series { property: sought, values } => {
            let sought = property(line, sought)?;
            let unit = values.iter().rev().find_map(|bound| bound.unit);
            values
                .iter()
                .map(|bound| {
                    let bound = tree::Bound { unit: bound.unit.or(unit), ..*bound };
                    of_property(&sought, limits(&Range::Exactly(bound)))
                })
                .collect()
        }
        TargetKind::Saturation => vec![goal(GoalKind::Saturation)],
        TargetKind::ByEye(text) => vec![goal(GoalKind::ByEye(text.text.clone()))],
    })
}

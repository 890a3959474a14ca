//! Substances, ions and solids: from statements to facts in base units.

use std::sync::Arc;

use super::quantities::{amount, base_value};
use super::{Lowering, defined_name, reference, statement_span, statements};
use crate::chemistry::Forming;
use crate::finding::{Anchor, Code, Finding};
use crate::model::*;
use crate::syntax::formula::{self, Formula};
use crate::syntax::tree::{self, ConstantPartKind, FormsHow, Line, Slot, Statement, Value};
use crate::units::Dimension;

/// Density tables of aqueous solutions hold at 20 °C unless a row says otherwise.
const TABLE_TEMPERATURE_K: f64 = 293.15;

impl Lowering {
    pub(super) fn substance(&mut self, lines: &[Arc<Line>]) -> Substance {
        let mut substance = Substance::default();
        for (index, line, statement) in statements(lines) {
            match statement {
                Statement::Also(names) => self.also.extend(names.iter().map(defined_name)),
                Statement::Formula(slot) => substance.formula = self.formula(index, slot),
                Statement::MolarMass(slot) => substance.molar_mass = measured(slot, Dimension::MassPerAmount),
                Statement::Cas(slot) => substance.cas = slot.given().map(|text| text.text.clone()),
                Statement::Gives(given) => substance.gives = gives(index, given),
                Statement::Form(slot) => substance.form = slot.given().map(|text| text.text.clone()),
                Statement::Density(density) => {
                    substance.density = base_value(&density.value, Dimension::MassConcentration);
                }
                Statement::Aqueous(row) => {
                    let kelvin = row.at.as_ref().and_then(|at| base_value(at, Dimension::Temperature));
                    let fraction = base_value(&row.strength, Dimension::MassFraction);
                    let density = base_value(&row.density, Dimension::MassConcentration);
                    if let (Some(fraction), Some(density)) = (fraction, density) {
                        substance.aqueous.push((fraction, density, kelvin.unwrap_or(TABLE_TEMPERATURE_K)));
                    }
                }
                Statement::MolarVolume(constant) => {
                    substance.molar_volume = plain_value(constant, Dimension::MolarVolume);
                }
                Statement::Solubility(solubility) => {
                    if let Some(value) = solubility.value.given() {
                        let kelvin = solubility.at.as_ref().and_then(|at| base_value(at, Dimension::Temperature));
                        substance.solubility.push((amount(value), kelvin));
                    }
                }
                Statement::HeatOfSolution(heat) => {
                    let strength = heat.at.as_ref().and_then(|at| base_value(at, Dimension::MassFraction));
                    let joules = measured(&heat.value, Dimension::MolarEnergy);
                    substance.heats_of_solution.extend(joules.map(|joules| (joules, strength)));
                }
                Statement::Hazard(codes) => {
                    substance.hazards.extend(codes.iter().map(|code| code.text.clone()));
                }
                Statement::KeepAwayFrom(names) => {
                    substance.keep_away_from.extend(names.iter().map(|name| reference(index, name)));
                }
                Statement::LogKh(given) => {
                    let at = Anchor::new(index, statement_span(line));
                    substance.log_kh = constant(index, at, given, None);
                }
                Statement::Inert => substance.inert = true,
                Statement::InsteadOfTheBuiltIn => substance.instead = true,
                Statement::Source(slot) => substance.source = slot.given().map(|text| text.text.clone()),
                _ => {}
            }
        }
        if let Some((_, formula)) = &substance.formula {
            substance.molar_mass = molar_mass(formula).or(substance.molar_mass);
        }
        substance.aqueous.sort_by(|one, other| one.0.total_cmp(&other.0));
        substance
    }

    pub(super) fn ion(&mut self, lines: &[Arc<Line>]) -> Ion {
        let mut ion = Ion::default();
        let mut charge = None;
        for (index, line, statement) in statements(lines) {
            let at = Anchor::new(index, statement_span(line));
            match statement {
                Statement::Also(names) => self.also.extend(names.iter().map(defined_name)),
                Statement::Formula(slot) => ion.formula = self.formula(index, slot),
                Statement::Charge(slot) => charge = slot.given().map(|number| number.value as i32),
                Statement::MolarMass(slot) => ion.molar_mass = measured(slot, Dimension::MassPerAmount),
                Statement::Pka(given) => ion.pka.extend(constant(index, at, given, None)),
                Statement::ComplexWith(given) => ion.complexes.extend(complex(index, at, given)),
                Statement::InteractionWith(given) => ion.interactions.extend(interaction(index, at, given)),
                Statement::MolarVolume(given) => {
                    ion.molar_volumes.extend(constant(index, at, given, Some(Dimension::MolarVolume)));
                }
                Statement::MolarConductivity(given) => {
                    ion.molar_conductivities.extend(constant(index, at, given, Some(Dimension::MolarConductivity)));
                }
                Statement::InsteadOfTheBuiltIn => ion.instead = true,
                Statement::Source(slot) => ion.source = slot.given().map(|text| text.text.clone()),
                _ => {}
            }
        }
        let written = ion.formula.as_ref().map_or(0, |(_, formula)| formula.charge());
        ion.charge = charge.unwrap_or(written);
        ion
    }

    pub(super) fn solid(&mut self, lines: &[Arc<Line>]) -> Solid {
        let mut solid = Solid::default();
        for (index, line, statement) in statements(lines) {
            let at = Anchor::new(index, statement_span(line));
            match statement {
                Statement::Also(names) => self.also.extend(names.iter().map(defined_name)),
                Statement::Formula(slot) => solid.formula = self.formula(index, slot),
                Statement::Gives(given) => solid.gives = gives(index, given),
                Statement::LogKsp(given) => solid.log_ksp = constant(index, at, given, None),
                Statement::Forms(slot) => {
                    solid.forming = match slot.given() {
                        Some(FormsHow::Slowly) => Forming::Slowly,
                        Some(FormsHow::AtOnce) => Forming::AtOnce,
                        Some(FormsHow::OnFreezing) => Forming::OnFreezing,
                        Some(FormsHow::InPassing) => Forming::InPassing,
                        None => Forming::Readily,
                    };
                }
                Statement::InsteadOfTheBuiltIn => solid.instead = true,
                Statement::Source(slot) => solid.source = slot.given().map(|text| text.text.clone()),
                _ => {}
            }
        }
        solid
    }

    /// A formula as written and parsed; one with an element that has no standard atomic weight is refused.
    fn formula(&mut self, line: usize, slot: &Slot<tree::FormulaText>) -> Option<(String, Formula)> {
        let text = slot.given()?;
        let formula = formula::parse(&text.text).ok()?;
        if molar_mass(&formula).is_none() {
            self.findings.push(
                Finding::new(
                    Code::BadFormula,
                    Anchor::new(line, text.span),
                    format!("{} holds an element that has no standard atomic weight.", text.text),
                )
                .help("State a `molar mass` instead of the formula."),
            );
            return None;
        }
        Some((text.text.clone(), formula))
    }
}

fn gives(line: usize, given: &[tree::Given]) -> Vec<(f64, Reference)> {
    given.iter().filter_map(|part| Some((part.count, reference(line, part.name.given()?)))).collect()
}

fn measured(slot: &Slot<tree::Measured>, dimension: Dimension) -> Option<f64> {
    let measured = slot.given()?;
    let unit = measured.unit.filter(|unit| unit.dimension() == dimension)?;
    Some(unit.to_base(measured.number.value))
}

fn plain_value(constant: &tree::Constant, dimension: Dimension) -> Option<f64> {
    match constant.value.given()? {
        Value::Measured(measured) => {
            let unit = measured.unit.filter(|unit| unit.dimension() == dimension)?;
            Some(unit.to_base(measured.number.value))
        }
        Value::Equation(_) => None,
    }
}

/// A constant from its value and parts; `dimension` is none for logarithms.
fn constant(line: usize, at: Anchor, given: &tree::Constant, dimension: Option<Dimension>) -> Option<Constant> {
    constant_from(line, at, given.value.given()?, &given.parts, dimension)
}

fn constant_from(
    line: usize,
    at: Anchor,
    value: &Value,
    parts: &[tree::ConstantPart],
    dimension: Option<Dimension>,
) -> Option<Constant> {
    let mut result = Constant {
        value: ConstantValue::Number { value: 0.0, enthalpy: None, heat_capacity: None },
        uncertainty: None,
        of: None,
        water: 0.0,
        ionic_strength: 0.0,
        source: None,
        at,
    };
    let (mut enthalpy, mut heat_capacity, mut range) = (None, None, None);
    for part in parts {
        match &part.kind {
            ConstantPartKind::Of(slot) => result.of = slot.given().map(|name| reference(line, name)),
            ConstantPartKind::Enthalpy(slot) => enthalpy = measured(slot, Dimension::MolarEnergy),
            ConstantPartKind::HeatCapacity(slot) => heat_capacity = measured(slot, Dimension::MolarHeatCapacity),
            ConstantPartKind::AtIonicStrength(slot) => {
                result.ionic_strength = slot.given().map_or(0.0, |quantity| amount(quantity).value);
            }
            ConstantPartKind::Range(slot) => {
                let base = |quantity: &tree::Quantity| quantity.unit.to_base(quantity.number.value);
                range = slot.given().map(|range| (base(&range.low), base(&range.high)));
            }
            ConstantPartKind::Partner(given) if given.name.given().is_some_and(|name| name.text == "water") => {
                result.water += given.count;
            }
            ConstantPartKind::Source(slot) => result.source = slot.given().map(|text| text.text.clone()),
            _ => {}
        }
    }
    match value {
        Value::Measured(measured) => {
            let factor = match (dimension, measured.unit) {
                (None, None) => 1.0,
                (Some(dimension), Some(unit)) if unit.dimension() == dimension => unit.to_base(1.0),
                _ => return None,
            };
            result.uncertainty = measured.uncertainty.map(|uncertainty| uncertainty * factor);
            result.value =
                ConstantValue::Number { value: measured.number.value * factor, enthalpy, heat_capacity };
        }
        Value::Equation(equation) => {
            result.uncertainty = equation.uncertainty;
            let tree::Equation { a, b, c, d, .. } = *equation;
            result.value = ConstantValue::Equation { a, b, c, d, range };
        }
    }
    Some(result)
}

fn complex(line: usize, at: Anchor, given: &tree::Complex) -> Option<Complex> {
    let first = given.partner.given()?;
    let mut partners = vec![(first.count, reference(line, first.name.given()?))];
    let (mut itself, mut named, mut log_k) = (1.0, None, None);
    for part in &given.parts {
        match &part.kind {
            ConstantPartKind::Partner(given) => partners.push((given.count, reference(line, given.name.given()?))),
            ConstantPartKind::Itself(slot) => itself = slot.given()?.value,
            ConstantPartKind::Named(slot) => named = slot.given().map(|name| reference(line, name)),
            ConstantPartKind::LogK(slot) => log_k = slot.given(),
            _ => {}
        }
    }
    Some(Complex { partners, itself, named, log_k: constant_from(line, at, log_k?, &given.parts, None)? })
}

fn interaction(line: usize, at: Anchor, given: &tree::Partnered) -> Option<Interaction> {
    let partner = reference(line, given.partner.given()?);
    let value = Value::Measured(*given.value.given()?);
    let constant = constant_from(line, at, &value, &given.parts, Some(Dimension::MassPerAmount))?;
    match constant.value {
        ConstantValue::Number { value, .. } => Some(Interaction { partner, epsilon: value, constant }),
        ConstantValue::Equation { .. } => None,
    }
}

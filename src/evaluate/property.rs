//! What a state says of a property that recipes expect or seek, in the base unit of the unit written.

use super::names::constituent;
use super::{Context, Refusal};
use crate::chemistry::State;
use crate::finding::{Anchor, Code, Finding, Level};
use crate::model::{AtomicWeights, Constituent, Property, Reference};
use crate::syntax::formula::Formula;
use crate::units::{Dimension, Unit};

/// Why a property has no value.
#[derive(Clone, Debug)]
pub enum PropertyValue {
    /// The program reads the property but does not work it out yet.
    NotEvaluated(String),
    /// The unit does not measure the property.
    WrongUnit(String),
    /// A name is not known; the finding says more.
    Unknown(Refusal),
}

impl PropertyValue {
    /// The finding that says so.
    pub fn finding(self, at: Anchor) -> Finding {
        match self {
            PropertyValue::NotEvaluated(words) => {
                Finding::new(Code::NotEvaluatedYet, at, format!("The {words} is read, but not worked out yet."))
                    .at_level(Level::Hint)
            }
            PropertyValue::WrongUnit(words) => {
                Finding::new(Code::UnitOfWrongKind, at, format!("This unit does not measure the {words}."))
                    .help("Write a unit of the property.")
            }
            PropertyValue::Unknown(refusal) => refusal
                .into_findings()
                .into_iter()
                .next()
                .unwrap_or_else(|| Finding::new(Code::UnknownName, at, "This name is not known.")),
        }
    }
}

/// The value of a property of a state, in the base unit of the unit written.
pub fn property_value(
    state: &State,
    property: &Property,
    unit: Option<Unit>,
    as_formula: Option<&Formula>,
    context: &Context,
) -> Result<f64, PropertyValue> {
    let dimension = unit.map(Unit::dimension);
    let wrong = || PropertyValue::WrongUnit(property.words());
    Ok(match property {
        Property::Ph if dimension.is_none() => state.pH(),
        Property::IonicStrength => match dimension {
            Some(Dimension::AmountConcentration) => state.ionic_strength_mol_per_L(),
            Some(Dimension::Molality) => state.ionic_strength_mol_per_kg,
            _ => return Err(wrong()),
        },
        Property::BufferCapacity => match dimension {
            Some(Dimension::AmountConcentration) => state.buffer_capacity_mol_per_L(),
            _ => return Err(wrong()),
        },
        Property::Density => match dimension {
            Some(Dimension::MassConcentration) => state.density_kg_per_m3(),
            _ => return Err(wrong()),
        },
        Property::Total(reference) => {
            let constituent = known(reference, context)?;
            let amount = total_mol(state, constituent);
            in_unit(amount, constituent, state, dimension, as_formula, context).ok_or_else(wrong)?
        }
        Property::Free(reference) => {
            let constituent = known(reference, context)?;
            let amount = free_mol(state, constituent, context);
            in_unit(amount, constituent, state, dimension, as_formula, context).ok_or_else(wrong)?
        }
        Property::Ph => return Err(wrong()),
        Property::Osmolality => match dimension {
            Some(Dimension::Osmolality) => state.osmolality_mol_per_kg(),
            _ => return Err(wrong()),
        },
        Property::Conductivity => match dimension {
            // An ion whose conductivity is not known would be left out of the sum without a word.
            Some(Dimension::Conductivity) if state.conductivity().unknown_share < 0.01 => state.conductivity().value_S_per_m,
            Some(Dimension::Conductivity) => return Err(PropertyValue::NotEvaluated(property.words())),
            _ => return Err(wrong()),
        },
        Property::Alkalinity
        | Property::Hardness
        | Property::SaturationIndex(_) => return Err(PropertyValue::NotEvaluated(property.words())),
    })
}

fn known<'a>(reference: &Reference, context: &Context<'a>) -> Result<&'a Constituent, PropertyValue> {
    constituent(reference, context).map_err(PropertyValue::Unknown)
}

/// All forms of a constituent, mol.
fn total_mol(state: &State, constituent: &Constituent) -> f64 {
    constituent.component.and_then(|component| state.mixture().amounts_mol.get(&component).copied()).unwrap_or(0.0)
}

/// The forms made of a constituent and hydrogen only, mol.
fn free_mol(state: &State, constituent: &Constituent, context: &Context) -> f64 {
    let Some(component) = constituent.component else { return 0.0 };
    state
        .species()
        .filter_map(|(id, molality, _)| {
            let species = context.constituents.chemistry.species(id)?;
            match species.parts.as_slice() {
                [(part, 1)] if *part == component => Some(molality * state.water_kg),
                _ => None,
            }
        })
        .sum()
}

/// An amount in the solution, in the base unit of a dimension.
fn in_unit(
    amount_mol: f64,
    constituent: &Constituent,
    state: &State,
    dimension: Option<Dimension>,
    as_formula: Option<&Formula>,
    context: &Context,
) -> Option<f64> {
    let grams = || -> Option<f64> {
        match as_formula {
            None => Some(1000.0 * amount_mol * constituent.molar_mass?),
            Some(formula) => {
                let own = context.constituents.formula_of(&crate::model::NameKey::new(&constituent.name))?;
                as_formula_factor(formula, &own).map(|mol_per_gram| amount_mol / mol_per_gram)
            }
        }
    };
    Some(match dimension? {
        Dimension::AmountConcentration => amount_mol / state.volume_L,
        Dimension::Molality => amount_mol / state.water_kg,
        Dimension::MassConcentration => grams()? / state.volume_L,
        Dimension::MassFraction => grams()? / 1000.0 / state.mass_kg,
        _ => return None,
    })
}

/// The element that a reported formula counts: the first that is not hydrogen or oxygen, carbon only where it is alone,
/// calcium before carbon (`as CaCO3`).
pub fn key_element(formula: &Formula) -> Option<String> {
    let counted = |symbol: &&str| !matches!(*symbol, "H" | "O");
    let mut elements: Vec<&str> = formula.elements().map(|(symbol, _)| symbol).filter(counted).collect();
    if elements.len() > 1 {
        elements.retain(|symbol| *symbol != "C");
    }
    elements.first().or(formula.elements().map(|(symbol, _)| symbol).collect::<Vec<_>>().first()).map(|symbol| (*symbol).to_string())
}

/// Moles of a thing in one gram of the formula that it is reported as; none where it holds nothing of it.
pub fn as_formula_factor(reported: &Formula, own: &Formula) -> Option<f64> {
    let element = key_element(reported)?;
    let count = |formula: &Formula| formula.elements().find(|(symbol, _)| *symbol == element).map(|(_, count)| count);
    let of_reported = count(reported)?;
    let of_own = count(own)?;
    let mut grams = 0.0;
    for (symbol, count) in reported.elements() {
        grams += count * AtomicWeights::built_in().of(symbol)?;
    }
    Some(of_reported / of_own / grams)
}

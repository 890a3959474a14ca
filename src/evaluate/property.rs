//! What a state says of a property that recipes expect or seek, in the base unit of the unit written.

use super::names::constituent;
use super::{Context, Refusal};
use crate::chemistry::{Failure, State};
use crate::finding::{Anchor, Code, Finding, Level};
use crate::model::{AtomicWeights, Constituent, Property, Reference};
use crate::syntax::formula::Formula;
use crate::units::{Dimension, Unit};

/// Why a property has no value.
#[derive(Clone, Debug)]
pub enum PropertyValue {
    /// The program reads the property but does not work it out yet.
    NotEvaluated(String),
    /// Ions that carry this share of the ionic strength have no known conductivity.
    UnknownConductivity(f64),
    /// A conductivity is asked for, and nothing says at which temperature.
    NoTemperature,
    /// The equilibrium was not found.
    Failed(Failure),
    /// The unit does not measure the property.
    WrongUnit(String),
    /// A mass concentration that does not say of what: the property, and what could be written.
    AsWhat(String, &'static str),
    /// The solution holds nothing of what the property is about.
    Absent(String),
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
            PropertyValue::UnknownConductivity(share) => Finding::new(
                Code::ExpectationWithoutValue,
                at,
                format!("The conductivity is not known: for {:.0} % of the ionic strength the library has no ion conductivities.", 100.0 * share),
            )
            .help("Measure it, or give the ions a `molar conductivity`."),
            PropertyValue::NoTemperature => Finding::new(
                Code::ConductivityTemperatureMissing,
                at,
                "A conductivity rises by about 2 % for each kelvin, and this one says no temperature.",
            )
            .help("Write `at 25 °C`, or give the lab's conductivity meter its `reference 25 °C`."),
            PropertyValue::Failed(failure) => {
                Finding::new(Code::ExpectationWithoutValue, at, format!("This is not judged: {failure}."))
                    .help("Expect it where the solution can be worked out.")
            }
            PropertyValue::Absent(words) => {
                Finding::new(Code::ExpectationWithoutValue, at, format!("There is no {words}: one of its ions is absent."))
                    .help("Remove the line, or name a solid whose ions are there.")
            }
            PropertyValue::WrongUnit(words) => {
                Finding::new(Code::UnitOfWrongKind, at, format!("This unit does not measure the {words}."))
                    .help("Write a unit of the property.")
            }
            PropertyValue::AsWhat(words, formulas) => {
                Finding::new(Code::UnitOfWrongKind, at, format!("As a mass per litre the {words} depends on what it is counted as."))
                    .help(format!("Write {formulas} after the value, or use mmol/L."))
            }
            PropertyValue::Unknown(refusal) => refusal
                .into_findings()
                .into_iter()
                .next()
                .unwrap_or_else(|| Finding::new(Code::UnknownName, at, "This name is not known.")),
        }
    }
}

/// What a recipe asks of a state.
#[derive(Clone, Copy)]
pub struct Question<'a> {
    /// Which property.
    pub property: &'a Property,
    /// In which unit.
    pub unit: Option<Unit>,
    /// Counted as what.
    pub as_formula: Option<&'a Formula>,
    /// Whether the line says at which temperature.
    pub says_temperature: bool,
}

/// The share of the ionic strength that ions without a known conductivity may carry where a conductivity is judged.
const MOST_UNKNOWN: f64 = 0.01;

/// The value of a property of a state, in the base unit of the unit written.
pub fn property_value(state: &State, question: &Question, context: &Context) -> Result<f64, PropertyValue> {
    let Question { property, unit, as_formula, says_temperature } = *question;
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
            let amount = free_mol(state, constituent);
            in_unit(amount, constituent, state, dimension, as_formula, context).ok_or_else(wrong)?
        }
        Property::WaterActivity if dimension.is_none() => state.water_activity(),
        Property::Ph | Property::WaterActivity => return Err(wrong()),
        Property::Osmolality => match dimension {
            Some(Dimension::Osmolality) => state.osmolality_mol_per_kg(),
            _ => return Err(wrong()),
        },
        Property::Conductivity => match dimension {
            Some(Dimension::Conductivity) => conductivity(state, says_temperature, context)?,
            _ => return Err(wrong()),
        },
        Property::Alkalinity => {
            let equivalents = state.alkalinity_mol_per_L().map_err(PropertyValue::Failed)?;
            let per_mole = as_formula.and_then(equivalents_of_alkalinity);
            as_equivalents(equivalents, 1.0, property, dimension, as_formula.zip(per_mole))?
        }
        Property::Hardness => {
            let amount = hardness_mol_per_L(state);
            let per_mole = as_formula.map(|formula| 2.0 * element_count(formula, &["Ca", "Mg"])).filter(|count| *count > 0.0);
            as_equivalents(2.0 * amount, 2.0, property, dimension, as_formula.zip(per_mole))?
        }
        Property::SaturationIndex(_) if dimension.is_some() => return Err(wrong()),
        Property::SaturationIndex(reference) => {
            let id = phase(reference, context).map_err(PropertyValue::Unknown)?;
            state.saturation_index(id).ok_or_else(|| PropertyValue::Absent(property.words()))?
        }
    })
}

/// The solid that a reference means.
fn phase(reference: &Reference, context: &Context) -> Result<crate::chemistry::PhaseId, Refusal> {
    context.constituents.phases.solid(&reference.key).ok_or_else(|| {
        Finding::new(Code::UnknownName, reference.at, format!("No solid is called {}.", reference.text))
            .help("Correct the name, or define it in a `solid` block.")
            .about(reference.key.as_str())
            .into()
    })
}

/// The conductivity, S/m. Where the line says no temperature it is what the lab's meter shows: brought from the temperature of the state to
/// its reference, by its compensation or, without one, in truth.
fn conductivity(state: &State, says_temperature: bool, context: &Context) -> Result<f64, PropertyValue> {
    let of = |state: &State| {
        let conductivity = state.conductivity();
        // An ion whose conductivity is not known would be left out of the sum without a word.
        match conductivity.unknown_share <= MOST_UNKNOWN {
            true => Ok(conductivity.value_S_per_m),
            false => Err(PropertyValue::UnknownConductivity(conductivity.unknown_share)),
        }
    };
    if says_temperature {
        return of(state);
    }
    let Some(meter) = context.lab.and_then(|lab| lab.conductivity_meter) else { return Err(PropertyValue::NoTemperature) };
    match meter.compensation_per_K {
        Some(compensation) => Ok(of(state)? / (1.0 + compensation * (state.temperature_K - meter.reference_K))),
        None => of(&state.at_temperature(meter.reference_K).map_err(PropertyValue::Failed)?),
    }
}

/// The ions that hardness counts (ISO 6059:1984).
const HARD: [&str; 2] = ["calcium", "magnesium"];

/// Hardness: calcium and magnesium in all forms, mol per litre of solution.
pub fn hardness_mol_per_L(state: &State) -> f64 {
    let is_hard = |id| state.chemistry().component(id).is_some_and(|component| HARD.contains(&component.name.as_str()));
    state.totals_mol_per_L().filter(|(id, _)| is_hard(*id)).map(|(_, concentration)| concentration).sum()
}

/// Equivalents of acid that a mole of what alkalinity is reported as takes up; none for what takes up none.
fn equivalents_of_alkalinity(formula: &Formula) -> Option<f64> {
    // Charges of the carbonate, hydrogen carbonate, oxide or hydroxide in it, as the trade counts them.
    const BASES: [(&str, f64); 8] = [
        ("CaCO3", 2.0), ("HCO3", 1.0), ("CO3", 2.0), ("Na2CO3", 2.0), ("NaHCO3", 1.0), ("CaO", 2.0), ("OH", 1.0), ("NaOH", 1.0),
    ];
    let same = |written: &str| crate::syntax::formula::parse(written).is_ok_and(|base| base.elements().eq(formula.elements()));
    BASES.iter().find(|(written, _)| same(written)).map(|(_, equivalents)| *equivalents)
}

fn element_count(formula: &Formula, symbols: &[&str]) -> f64 {
    formula.elements().filter(|(symbol, _)| symbols.contains(symbol)).map(|(_, count)| count).sum()
}

/// Equivalents per litre in the base unit of a dimension. `per_amount` is how many of them a mole has where the unit is mol/L; the formula
/// that a mass is counted as comes with its own.
fn as_equivalents(
    equivalents: f64,
    per_amount: f64,
    property: &Property,
    dimension: Option<Dimension>,
    counted_as: Option<(&Formula, f64)>,
) -> Result<f64, PropertyValue> {
    match (dimension, counted_as) {
        (Some(Dimension::EquivalentConcentration), _) => Ok(equivalents),
        (Some(Dimension::AmountConcentration), None) => Ok(equivalents / per_amount),
        (Some(Dimension::AmountConcentration), Some((_, own))) => Ok(equivalents / own),
        (Some(Dimension::MassConcentration), Some((formula, own))) => {
            grams_per_mole(formula).map(|grams| equivalents / own * grams).ok_or_else(|| PropertyValue::WrongUnit(property.words()))
        }
        (Some(Dimension::MassConcentration), None) => Err(PropertyValue::AsWhat(property.words(), match property {
            Property::Alkalinity => "`as CaCO3` or `as HCO3`",
            _ => "`as CaCO3` or `as Ca`",
        })),
        _ => Err(PropertyValue::WrongUnit(property.words())),
    }
}

fn known<'a>(reference: &Reference, context: &Context<'a>) -> Result<&'a Constituent, PropertyValue> {
    constituent(reference, context).map_err(PropertyValue::Unknown)
}

/// All forms of a constituent, mol.
pub fn total_mol(state: &State, constituent: &Constituent) -> f64 {
    constituent.component.and_then(|component| state.mixture().amounts_mol.get(&component).copied()).unwrap_or(0.0)
}

/// The forms made of a constituent and hydrogen only, mol: no complex, and no hydroxide of a metal.
pub fn free_mol(state: &State, constituent: &Constituent) -> f64 {
    let Some(component) = constituent.component else { return 0.0 };
    state
        .species()
        .filter_map(|(id, molality, _)| {
            let species = state.chemistry().species(id)?;
            match species.parts.as_slice() {
                [(part, 1)] if *part == component && species.hydrogen >= 0 => Some(molality * state.water_kg),
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
    Some(of_reported / of_own / grams_per_mole(reported)?)
}

/// Molar mass of a formula, g/mol; none where it names an unknown element.
fn grams_per_mole(formula: &Formula) -> Option<f64> {
    let mut grams = 0.0;
    for (symbol, count) in formula.elements() {
        grams += count * AtomicWeights::built_in().of(symbol)?;
    }
    Some(grams)
}

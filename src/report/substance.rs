//! What the built-in library says of a substance, an ion or a solid, as machines read it: `scruple lookup --format json`.

use serde::Serialize;
use strsim::jaro_winkler;

use super::number::{celsius, number};
use crate::chemistry::{Forming, REFERENCE_K};
use crate::library::{LibraryFile, built_in, hazard_statement};
use crate::model::{Block, Body, Constant, ConstantValue, Definition, Ion, NameKey, Namespace, Reference, Solid, Substance, WATER_KG_PER_MOL};
use crate::text::Columns;

/// Names as like each other as this are offered for an unknown one (Jaro–Winkler).
const LIKENESS: f64 = 0.85;

/// How many names are offered.
const OFFERED: usize = 6;

/// What was found, or everything there is.
#[derive(Debug, Default, Serialize)]
pub struct LibraryReport {
    /// The version of the library.
    pub library: &'static str,
    /// Substances.
    pub substances: Vec<Entry<SubstanceReport>>,
    /// Ions and molecules that protonate, with their constants.
    pub ions: Vec<Entry<IonReport>>,
    /// Solids that can precipitate.
    pub solids: Vec<Entry<SolidReport>>,
}

/// A block of the library.
#[derive(Debug, Serialize)]
pub struct Entry<T> {
    /// Its name.
    pub name: String,
    /// Its other names.
    pub also: Vec<String>,
    /// The file in which it stands.
    pub file: &'static str,
    /// The line on which it begins.
    pub line: usize,
    /// Where its facts come from, where a line of its own does not say.
    pub source: Option<String>,
    /// What it says.
    #[serde(flatten)]
    pub facts: T,
}

/// What is known of a substance.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named with their units")]
pub struct SubstanceReport {
    pub formula: Option<String>,
    pub molar_mass_g_per_mol: Option<f64>,
    pub CAS: Option<String>,
    pub form: Option<String>,
    pub density_g_per_mL: Option<f64>,
    pub inert: bool,
    /// What a mole gives in water; water of crystallisation, or taken up (negative), is worked out from the formula.
    pub gives: Vec<Counted>,
    pub water_mol_per_mol: Option<f64>,
    pub solubility: Vec<SolubilityReport>,
    pub log10_KH: Option<ConstantReport>,
    pub aqueous: Vec<AqueousReport>,
    pub hazards: Vec<HazardReport>,
    pub keep_away_from: Vec<String>,
}

/// A count and a name.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named for what they are")]
pub struct Counted {
    pub count: f64,
    pub name: String,
}

/// A hazard statement.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named for what they are")]
pub struct HazardReport {
    pub code: String,
    pub statement: Option<&'static str>,
}

/// A solubility as written.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named with their units")]
pub struct SolubilityReport {
    pub value: Option<f64>,
    pub unit: &'static str,
    pub temperature_C: Option<f64>,
}

/// A row of a density table.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named with their units")]
pub struct AqueousReport {
    pub mass_fraction: Option<f64>,
    pub density_g_per_mL: Option<f64>,
    pub temperature_C: Option<f64>,
}

/// What is known of an ion.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named with their units")]
pub struct IonReport {
    pub formula: Option<String>,
    pub charge: i32,
    pub molar_mass_g_per_mol: Option<f64>,
    /// Most acidic first.
    pub pKa: Vec<ConstantReport>,
    pub complexes: Vec<ComplexReport>,
    pub interactions: Vec<InteractionReport>,
    pub molar_volumes_cm3_per_mol: Vec<OfSpecies>,
    pub molar_conductivities_S_cm2_per_mol: Vec<OfSpecies>,
}

/// A constant with its course over temperature.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named with their units")]
pub struct ConstantReport {
    /// The species that it belongs to.
    pub of: Option<String>,
    pub at_25_C: Option<f64>,
    pub enthalpy_kJ_per_mol: Option<f64>,
    pub heat_capacity_J_per_mol_K: Option<f64>,
    /// Instead of enthalpy and heat capacity.
    pub equation: Option<EquationReport>,
    pub standard_uncertainty: Option<f64>,
    pub ionic_strength_mol_per_kg: f64,
    /// Molecules of water that the species holds beside the ion and its hydrogens.
    pub water: f64,
    pub source: Option<String>,
}

/// a/T + b + c T + d ln T, T in kelvin.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "the coefficients as the language writes them")]
pub struct EquationReport {
    pub a: f64,
    pub b: f64,
    pub c: f64,
    pub d: f64,
    pub from_C: Option<f64>,
    pub to_C: Option<f64>,
}

/// A complex, by its overall formation constant.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named for what they are")]
pub struct ComplexReport {
    pub name: Option<String>,
    /// How many of the block's own ion.
    pub itself: f64,
    pub partners: Vec<Counted>,
    pub log10_K: ConstantReport,
}

/// A coefficient of specific ion interaction.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named with their units")]
pub struct InteractionReport {
    pub with: String,
    /// The species of this block; its most deprotonated form where none is named.
    pub of: Option<String>,
    pub epsilon_kg_per_mol: Option<f64>,
    pub standard_uncertainty: Option<f64>,
    pub source: Option<String>,
}

/// A value of one species.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named for what they are")]
pub struct OfSpecies {
    pub of: Option<String>,
    pub value: Option<f64>,
    pub source: Option<String>,
}

/// What is known of a solid.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "named with their units")]
pub struct SolidReport {
    pub formula: Option<String>,
    pub gives: Vec<Counted>,
    pub forms: &'static str,
    pub log10_Ksp: Option<ConstantReport>,
}

/// Everything in the built-in library, in the order of its files.
pub fn all() -> LibraryReport {
    let mut report = empty();
    for file in &built_in().files {
        for block in &file.model.blocks {
            add(file, block, &mut report);
        }
    }
    report
}

/// What bears a name: substances with the ions that they give, else ions, else solids.
///
/// # Errors
/// The names most like it, where nothing bears it.
pub fn found(name: &str) -> Result<LibraryReport, Vec<String>> {
    let key = NameKey::new(name);
    let names = &built_in().names;
    let mut report = empty();
    let mut ingredients: Vec<&Definition> = names.named(Namespace::Ingredient, &key).iter().collect();
    if ingredients.is_empty()
        && let Ok(formula) = crate::syntax::formula::parse(name)
    {
        ingredients = names.with_formula(&formula.canonical()).iter().collect();
    }
    for definition in &ingredients {
        add_definition(definition, &mut report);
    }
    let mut ions: Vec<NameKey> = Vec::new();
    for definition in &ingredients {
        if let Body::Substance(substance) = &definition.block.body {
            ions.extend(substance.gives.iter().map(|(_, reference)| reference.key.clone()));
        }
    }
    ions.push(key.clone());
    let constituents = &built_in().constituents;
    let mut shown = Vec::new();
    for ion in ions {
        // A name such as `dihydrogen phosphate` is a form of an ion; its block is the ion's.
        let Some(definition) = constituents.named(&ion).and_then(|constituent| constituent.definition.clone()) else { continue };
        if definition.namespace == Namespace::Constituent && !shown.contains(&definition) {
            for found in names.named(Namespace::Constituent, &definition.name) {
                add_definition(found, &mut report);
            }
            shown.push(definition);
        }
    }
    for definition in names.named(Namespace::Phase, &key) {
        add_definition(definition, &mut report);
    }
    if report.substances.is_empty() && report.ions.is_empty() && report.solids.is_empty() {
        return Err(like(&key));
    }
    Ok(report)
}

/// The names most like a name, most alike first.
fn like(key: &NameKey) -> Vec<String> {
    let mut near: Vec<(f64, &str)> = built_in()
        .names
        .all()
        .flat_map(|(_, name, definitions)| definitions.iter().map(move |definition| (name, definition)))
        .filter_map(|(name, definition)| {
            let holds = name.as_str().contains(key.as_str()) && key.as_str().len() > 2;
            let likeness = if holds { 1.0 } else { jaro_winkler(name.as_str(), key.as_str()) };
            (likeness >= LIKENESS).then(|| (likeness, definition.name()))
        })
        .collect();
    near.sort_by(|one, other| other.0.total_cmp(&one.0).then(one.1.cmp(other.1)));
    let mut names: Vec<String> = Vec::new();
    for (_, name) in near {
        if !names.iter().any(|known| known == name) {
            names.push(name.to_owned());
        }
    }
    names.truncate(OFFERED);
    names
}

fn empty() -> LibraryReport {
    LibraryReport { library: crate::library::VERSION, ..LibraryReport::default() }
}

fn add_definition(definition: &Definition, report: &mut LibraryReport) {
    if let Some(file) = crate::library::file(definition.key.file) {
        add(file, &definition.block, report);
    }
}

fn add(file: &LibraryFile, block: &Block, report: &mut LibraryReport) {
    match &block.body {
        Body::Substance(substance) => {
            let facts = substance_report(file, block, substance);
            report.substances.extend(entry(file, block, substance.source.clone(), facts));
        }
        Body::Ion(ion) => report.ions.extend(entry(file, block, ion.source.clone(), ion_report(ion))),
        Body::Solid(solid) => report.solids.extend(entry(file, block, solid.source.clone(), solid_report(solid))),
        _ => {}
    }
}

fn entry<T>(file: &LibraryFile, block: &Block, source: Option<String>, facts: T) -> Option<Entry<T>> {
    let name = block.name.as_ref()?;
    let index = file.model.blocks.iter().position(|other| std::ptr::eq(other.as_ref(), block))?;
    let first = file.model.first_lines.get(index).and_then(|line| file.tree.lines.get(*line)).map_or(0, |placed| placed.start);
    Some(Entry {
        name: name.text.clone(),
        also: block.also.iter().map(|also| also.text.clone()).collect(),
        file: file.name,
        line: 1 + file.source.position(first, Columns::Characters).line,
        source,
        facts,
    })
}

fn substance_report(file: &LibraryFile, block: &Block, substance: &Substance) -> SubstanceReport {
    let key = block.name.as_ref().map(|name| crate::model::DefinitionKey {
        file: file.model.id,
        namespace: Namespace::Ingredient,
        name: name.key.clone(),
    });
    // Water that stands in `gives` is counted there.
    let water = key.and_then(|key| built_in().constituents.per_mole(&key, substance).ok()).map(|(mixture, _)| mixture.water_kg / WATER_KG_PER_MOL);
    SubstanceReport {
        formula: substance.formula.as_ref().map(|(written, _)| written.clone()),
        molar_mass_g_per_mol: substance.molar_mass.and_then(|mass| number(1000.0 * mass)),
        CAS: substance.cas.clone(),
        form: substance.form.clone(),
        density_g_per_mL: substance.density.and_then(|density| number(density / 1000.0)),
        inert: substance.inert,
        gives: counted(&substance.gives),
        water_mol_per_mol: water.map(|molecules| (molecules * 1e3).round() / 1e3 + 0.0),
        log10_KH: substance.log_kh.as_ref().map(|constant| constant_report(constant, substance.source.as_ref())),
        solubility: substance
            .solubility
            .iter()
            .map(|(amount, temperature)| SolubilityReport {
                value: number(amount.unit.from_base(amount.value)),
                unit: amount.unit.symbol(),
                temperature_C: temperature.and_then(celsius),
            })
            .collect(),
        aqueous: substance
            .aqueous
            .iter()
            .map(|(fraction, density, temperature)| AqueousReport {
                mass_fraction: number(*fraction),
                density_g_per_mL: number(density / 1000.0),
                temperature_C: celsius(*temperature),
            })
            .collect(),
        hazards: substance
            .hazards
            .iter()
            .map(|code| HazardReport { code: code.clone(), statement: hazard_statement(code) })
            .collect(),
        keep_away_from: substance.keep_away_from.iter().map(|other| other.text.clone()).collect(),
    }
}

fn counted(parts: &[(f64, Reference)]) -> Vec<Counted> {
    parts.iter().map(|(count, reference)| Counted { count: *count, name: reference.text.clone() }).collect()
}

fn ion_report(ion: &Ion) -> IonReport {
    let constant = |constant: &Constant| constant_report(constant, ion.source.as_ref());
    let of_species = |constant: &Constant, factor: f64| OfSpecies {
        of: constant.of.as_ref().map(|of| of.text.clone()),
        value: at_reference(&constant.value).and_then(|value| number(factor * value)),
        source: constant.source.clone().or(ion.source.clone()),
    };
    IonReport {
        formula: ion.formula.as_ref().map(|(written, _)| written.clone()),
        charge: ion.charge,
        molar_mass_g_per_mol: ion
            .formula
            .as_ref()
            .and_then(|(_, formula)| crate::model::molar_mass(formula))
            .or(ion.molar_mass)
            .and_then(|mass| number(1000.0 * mass)),
        pKa: ion.pka.iter().map(constant).collect(),
        complexes: ion
            .complexes
            .iter()
            .map(|complex| ComplexReport {
                name: complex.named.as_ref().map(|named| named.text.clone()),
                itself: complex.itself,
                partners: counted(&complex.partners),
                log10_K: constant(&complex.log_k),
            })
            .collect(),
        interactions: ion
            .interactions
            .iter()
            .map(|interaction| InteractionReport {
                with: interaction.partner.text.clone(),
                of: interaction.constant.of.as_ref().map(|of| of.text.clone()),
                epsilon_kg_per_mol: number(interaction.epsilon),
                standard_uncertainty: interaction.constant.uncertainty.and_then(number),
                source: interaction.constant.source.clone().or(ion.source.clone()),
            })
            .collect(),
        // L/mol to cm³/mol; S·m²/mol to S·cm²/mol.
        molar_volumes_cm3_per_mol: ion.molar_volumes.iter().map(|volume| of_species(volume, 1e3)).collect(),
        molar_conductivities_S_cm2_per_mol: ion.molar_conductivities.iter().map(|value| of_species(value, 1e4)).collect(),
    }
}

fn solid_report(solid: &Solid) -> SolidReport {
    SolidReport {
        formula: solid.formula.as_ref().map(|(written, _)| written.clone()),
        gives: counted(&solid.gives),
        forms: match solid.forming {
            Forming::Readily => "readily",
            Forming::Slowly => "slowly",
            Forming::AtOnce => "at once",
            Forming::OnFreezing => "on freezing",
            Forming::InPassing => "in passing",
        },
        log10_Ksp: solid.log_ksp.as_ref().map(|constant| constant_report(constant, solid.source.as_ref())),
    }
}

fn constant_report(constant: &Constant, of_block: Option<&String>) -> ConstantReport {
    let (enthalpy, heat_capacity, equation) = match constant.value {
        ConstantValue::Number { enthalpy, heat_capacity, .. } => (enthalpy, heat_capacity, None),
        ConstantValue::Equation { a, b, c, d, range } => {
            let end = |pick: fn((f64, f64)) -> f64| range.map(pick).and_then(celsius);
            (None, None, Some(EquationReport { a, b, c, d, from_C: end(|range| range.0), to_C: end(|range| range.1) }))
        }
    };
    ConstantReport {
        of: constant.of.as_ref().map(|of| of.text.clone()),
        at_25_C: at_reference(&constant.value).and_then(number),
        enthalpy_kJ_per_mol: enthalpy.and_then(|value| number(value / 1000.0)),
        heat_capacity_J_per_mol_K: heat_capacity.and_then(number),
        equation,
        standard_uncertainty: constant.uncertainty.and_then(number),
        ionic_strength_mol_per_kg: constant.ionic_strength,
        water: constant.water,
        source: constant.source.clone().or(of_block.cloned()),
    }
}

/// The value at 25 °C.
fn at_reference(value: &ConstantValue) -> Option<f64> {
    match *value {
        ConstantValue::Number { value, .. } => Some(value),
        ConstantValue::Equation { a, b, c, d, .. } => Some(a / REFERENCE_K + b + c * REFERENCE_K + d * REFERENCE_K.ln()),
    }
}

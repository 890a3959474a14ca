//! A solution as machines read it: `scruple show --format json`. The schema is `show.schema.json`; fields are only ever added.

use serde::Serialize;

use super::cautions::{Hazard, hazards};
use super::fingerprint::Fingerprints;
use super::finding::{FindingReport, finding_report};
use super::number::{celsius, number};
use super::phases::{self, DriftReport, GasReport, RemovedReport, SaturationReport, SettledReport};
use super::reasons::{ReasonsReport, reasons_report};
use super::Subject;
use crate::chemistry::{Failure, State};
use crate::evaluate::{LineOutcome, Outcome, Role, SetPoint, Verdict, hardness_mol_per_L};
use crate::model::{Expectation, Property};
use crate::text::Columns;
use crate::units::Unit;

/// A solution, or a member of a series. What is not computed is null.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct SolutionReport {
    pub name: String,
    pub file: String,
    pub line: usize,
    pub document: Option<DocumentReport>,
    pub why: Option<String>,
    pub volume_L: Option<f64>,
    pub mass_kg: Option<f64>,
    pub water_kg: Option<f64>,
    pub temperature_C: Option<f64>,
    pub temperature_half_width_K: Option<f64>,
    pub pH: Option<f64>,
    pub pH_as_set: Option<f64>,
    pub ionic_strength_mol_per_L: Option<f64>,
    pub ionic_strength_mol_per_kg: Option<f64>,
    pub buffer_capacity_mol_per_L: Option<f64>,
    pub dpH_dT_per_K: Option<f64>,
    pub dilution_value: Option<f64>,
    pub density_kg_per_m3: Option<f64>,
    pub conductivity_S_per_m: Option<f64>,
    pub osmolality_mol_per_kg: Option<f64>,
    pub water_activity: Option<f64>,
    pub alkalinity_mol_per_L: Option<f64>,
    pub hardness_mol_per_L: Option<f64>,
    pub ingredients: Vec<IngredientReport>,
    pub set_points: Vec<SetPointReport>,
    pub removed: Vec<RemovedReport>,
    pub found: Option<FoundReport>,
    pub at: Vec<StateReport>,
    pub in_air: Option<DriftReport>,
    pub saturation: Vec<SaturationReport>,
    pub gases: Vec<GasReport>,
    pub settled: Option<SettledReport>,
    pub species: Vec<SpeciesReport>,
    pub totals: Vec<TotalReport>,
    pub expectations: Vec<ExpectationReport>,
    pub hazards: Vec<Hazard>,
    pub findings: Vec<FindingReport>,
    pub reasons: Option<ReasonsReport>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct DocumentReport {
    pub code: String,
    pub revision: Option<String>,
    pub effective: Option<String>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct IngredientReport {
    pub name: String,
    pub written: String,
    pub line: usize,
    pub role: &'static str,
    pub mass_g: Option<f64>,
    pub volume_mL: Option<f64>,
    pub amount_mol: Option<f64>,
    pub concentration_mol_per_L: Option<f64>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct SetPointReport {
    pub line: usize,
    pub aim: Option<f64>,
    pub low: Option<f64>,
    pub high: Option<f64>,
    pub pH_before: Option<f64>,
    pub pH: Option<f64>,
    pub volume_L: Option<f64>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct FoundReport {
    pub computed_mol_per_L: Option<f64>,
    pub found_mol_per_L: Option<f64>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct StateReport {
    pub temperature_C: Option<f64>,
    pub gas: Option<GasReport>,
    pub pH: Option<f64>,
    pub ionic_strength_mol_per_L: Option<f64>,
    pub ionic_strength_mol_per_kg: Option<f64>,
    pub buffer_capacity_mol_per_L: Option<f64>,
    pub density_kg_per_m3: Option<f64>,
    pub conductivity_S_per_m: Option<f64>,
    pub osmolality_mol_per_kg: Option<f64>,
    pub why: Option<String>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct SpeciesReport {
    pub name: String,
    pub charge: i32,
    pub mol_per_kg: Option<f64>,
    pub log10_activity_coefficient: Option<f64>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct TotalReport {
    pub name: String,
    pub mol_per_L: Option<f64>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct ExpectationReport {
    pub line: usize,
    pub property: String,
    pub unit: Option<&'static str>,
    #[serde(rename = "as")]
    pub as_formula: Option<String>,
    pub temperature_C: Option<f64>,
    pub fold: Option<f64>,
    pub value: Option<f64>,
    pub low: Option<f64>,
    pub high: Option<f64>,
    pub holds: Option<bool>,
    pub why: Option<String>,
}

/// Conductivity is not told where ions without a known conductivity carry more than this share of the ionic strength.
const MOST_UNKNOWN: f64 = 0.02;

/// The conductivity, S/m, where nearly all that conducts is known.
pub(super) fn conductivity(state: &State) -> Option<f64> {
    let conductivity = state.conductivity();
    (conductivity.unknown_share <= MOST_UNKNOWN).then_some(conductivity.value_S_per_m).and_then(number)
}

/// The same, with how the numbers came about.
pub fn solution_report_with_reasons(subject: &Subject) -> SolutionReport {
    SolutionReport { reasons: reasons_report(subject), ..solution_report(subject) }
}

/// Everything that is known of a solution, its reasons left out.
pub fn solution_report(subject: &Subject) -> SolutionReport {
    let outcome = subject.member.outcome.as_deref();
    let finished = outcome.map(|outcome| &outcome.finished);
    let state = finished.and_then(|finished| finished.as_ref().ok());
    let of_state = |value: fn(&State) -> f64| state.map(value).and_then(number);
    SolutionReport {
        name: subject.member.name.clone(),
        file: subject.selection.name(&subject.file.path),
        line: subject.header_line(),
        document: subject.recipe.document.as_ref().map(|document| DocumentReport {
            code: document.value.code.clone(),
            revision: document.value.revision.clone(),
            effective: document.value.effective.clone(),
        }),
        why: match finished {
            None => Some("the recipe has no values; its findings say why".to_owned()),
            Some(finished) => why(finished),
        },
        volume_L: outcome.and_then(|outcome| number(outcome.volume_L)),
        mass_kg: outcome.and_then(|outcome| number(outcome.mass_kg)),
        water_kg: outcome.and_then(|outcome| number(outcome.water_kg)),
        temperature_C: outcome.and_then(|outcome| celsius(outcome.made_at_K)),
        temperature_half_width_K: outcome.and_then(|outcome| number(outcome.made_at_half_width_K)),
        pH: of_state(State::pH),
        pH_as_set: outcome.and_then(|outcome| outcome.set_points.last()).and_then(|point| number(point.state.pH())),
        ionic_strength_mol_per_L: of_state(State::ionic_strength_mol_per_L),
        ionic_strength_mol_per_kg: of_state(|state| state.ionic_strength_mol_per_kg),
        buffer_capacity_mol_per_L: of_state(State::buffer_capacity_mol_per_L),
        dpH_dT_per_K: of_state(State::dpH_dT_per_K),
        dilution_value: state.and_then(|state| state.dilution_value().ok()).and_then(number),
        density_kg_per_m3: of_state(State::density_kg_per_m3),
        conductivity_S_per_m: state.and_then(conductivity),
        osmolality_mol_per_kg: of_state(State::osmolality_mol_per_kg),
        water_activity: of_state(State::water_activity),
        alkalinity_mol_per_L: state.and_then(|state| state.alkalinity_mol_per_L().ok()).and_then(number),
        hardness_mol_per_L: of_state(hardness_mol_per_L),
        ingredients: lines(outcome).map(|line| ingredient(subject, line)).collect(),
        set_points: outcome.into_iter().flat_map(|outcome| &outcome.set_points).map(|point| set_point(subject, point)).collect(),
        removed: outcome.map(|outcome| phases::removed(subject, outcome)).unwrap_or_default(),
        found: outcome.and_then(|outcome| outcome.found).map(|(computed, found)| FoundReport {
            computed_mol_per_L: number(computed),
            found_mol_per_L: number(found),
        }),
        at: outcome
            .into_iter()
            .flat_map(|outcome| &outcome.uses)
            .map(|(temperature_K, state)| StateReport {
                gas: outcome.and_then(|outcome| outcome.above.as_ref()).map(|above| GasReport {
                    gas: above.name.clone(),
                    partial_pressure_kPa: number(above.pressure_Pa(*temperature_K) / 1000.0),
                }),
                ..state_report(*temperature_K, state)
            })
            .collect(),
        in_air: outcome.and_then(phases::drift),
        saturation: state.map(phases::saturation).unwrap_or_default(),
        gases: state.map(phases::gases).unwrap_or_default(),
        settled: None,
        species: state.map(species).unwrap_or_default(),
        totals: state.map(totals).unwrap_or_default(),
        expectations: expectations(subject, outcome),
        hazards: outcome.map(|outcome| hazards(subject, outcome)).unwrap_or_default(),
        findings: findings(subject),
        reasons: None,
    }
}

fn findings(subject: &Subject) -> Vec<FindingReport> {
    let mut fingerprints = Fingerprints::default();
    let report = |located| {
        let fingerprint = fingerprints.next(subject.file, located);
        finding_report(subject.selection, subject.file, located, Columns::Characters, fingerprint)
    };
    subject.findings().map(report).collect()
}

/// A report with what is left when every solid that forms has settled.
pub fn with_settled(subject: &Subject, report: SolutionReport) -> SolutionReport {
    let settled = subject.member.outcome.as_deref().and_then(phases::settled);
    SolutionReport { settled, ..report }
}

fn lines(outcome: Option<&Outcome>) -> impl Iterator<Item = &LineOutcome> {
    outcome.into_iter().flat_map(|outcome| &outcome.lines)
}

fn why(state: &Result<State, Failure>) -> Option<String> {
    state.as_ref().err().map(ToString::to_string)
}

fn ingredient(subject: &Subject, line: &LineOutcome) -> IngredientReport {
    IngredientReport {
        name: subject.selection.defined_name(&line.definition).unwrap_or(&line.name).to_owned(),
        written: line.name.clone(),
        line: subject.line(line.at),
        role: match line.role {
            Role::Stated => "stated",
            Role::OfPair => "pair",
            Role::MakesUp => "makes up",
            Role::Adjusts => "adjusts",
        Role::Alternative => "alternative",
        },
        mass_g: number(1000.0 * line.mass_kg).filter(|_| !line.by_count),
        volume_mL: line.volume_L.and_then(|volume| number(1000.0 * volume)),
        amount_mol: line.amount_mol.and_then(number),
        concentration_mol_per_L: line.concentration_mol_per_L.and_then(number),
    }
}

fn set_point(subject: &Subject, point: &SetPoint) -> SetPointReport {
    SetPointReport {
        line: subject.line(point.at),
        aim: number(point.aim),
        low: point.window.and_then(|(low, _)| number(low)),
        high: point.window.and_then(|(_, high)| number(high)),
        pH_before: number(point.pH_before),
        pH: number(point.state.pH()),
        volume_L: number(point.state.volume_L),
    }
}

fn state_report(temperature_K: f64, state: &Result<State, Failure>) -> StateReport {
    let of_state = |value: fn(&State) -> f64| state.as_ref().ok().map(value).and_then(number);
    StateReport {
        temperature_C: celsius(temperature_K),
        gas: None,
        pH: of_state(State::pH),
        ionic_strength_mol_per_L: of_state(State::ionic_strength_mol_per_L),
        ionic_strength_mol_per_kg: of_state(|state| state.ionic_strength_mol_per_kg),
        buffer_capacity_mol_per_L: of_state(State::buffer_capacity_mol_per_L),
        density_kg_per_m3: of_state(State::density_kg_per_m3),
        conductivity_S_per_m: state.as_ref().ok().and_then(conductivity),
        osmolality_mol_per_kg: of_state(State::osmolality_mol_per_kg),
        why: why(state),
    }
}

fn species(state: &State) -> Vec<SpeciesReport> {
    let mut species: Vec<SpeciesReport> = state
        .species()
        .filter_map(|(id, molality, log_gamma)| {
            let species = state.chemistry().species(id)?;
            Some(SpeciesReport {
                name: species.name.clone(),
                charge: species.charge,
                mol_per_kg: number(molality),
                log10_activity_coefficient: number(log_gamma),
            })
        })
        .collect();
    species.sort_by(|one, other| one.name.cmp(&other.name));
    species
}

fn totals(state: &State) -> Vec<TotalReport> {
    let mut totals: Vec<TotalReport> = state
        .totals_mol_per_L()
        .filter_map(|(id, concentration)| {
            let component = state.chemistry().component(id)?;
            Some(TotalReport { name: component.name.clone(), mol_per_L: number(concentration) })
        })
        .collect();
    totals.sort_by(|one, other| one.name.cmp(&other.name));
    totals
}

/// What became of each expectation, one entry for each temperature at which it was judged; where the recipe has no values,
/// one entry without.
fn expectations(subject: &Subject, outcome: Option<&Outcome>) -> Vec<ExpectationReport> {
    let Some(outcome) = outcome else {
        return subject
            .recipe
            .expectations
            .iter()
            .map(|expectation| ExpectationReport {
                temperature_C: expectation.temperature.and_then(celsius),
                value: None,
                holds: None,
                why: Some("the recipe has no values; its findings say why".to_owned()),
                ..expectation_report(subject, expectation)
            })
            .collect();
    };
    let judged = outcome.verdicts.iter().filter_map(|verdict| {
        let expectation = subject.recipe.expectations.get(verdict.expectation)?;
        Some(ExpectationReport {
            temperature_C: celsius(verdict.temperature_K),
            value: verdict.value.and_then(|value| in_unit(value, verdict.unit)),
            holds: verdict.holds,
            why: reason(subject, verdict),
            ..expectation_report(subject, expectation)
        })
    });
    judged.collect()
}

fn expectation_report(subject: &Subject, expectation: &Expectation) -> ExpectationReport {
    ExpectationReport {
        line: subject.line(expectation.at),
        property: expectation.property.words(),
        unit: expectation.unit.map(Unit::symbol),
        as_formula: expectation.as_formula.as_ref().map(|(written, _)| written.clone()),
        temperature_C: None,
        fold: expectation.diluted.as_ref().and_then(|dilution| number(dilution.fold)),
        value: None,
        low: expectation.low.and_then(|low| in_unit(low, expectation.unit)),
        high: expectation.high.and_then(|high| in_unit(high, expectation.unit)),
        holds: None,
        why: None,
    }
}

/// A value of the base unit in the unit that was written.
fn in_unit(value: f64, unit: Option<Unit>) -> Option<f64> {
    number(unit.map_or(value, |unit| unit.from_base(value)))
}

/// Why an expectation has no value: what a finding on its line says.
pub(super) fn reason(subject: &Subject, verdict: &Verdict) -> Option<String> {
    if verdict.value.is_some() {
        return None;
    }
    let said = subject.checked.findings.iter().find(|finding| finding.at.line == verdict.at.line);
    Some(match (said, &verdict.property) {
        (Some(finding), _) => finding.message.clone(),
        (None, Property::Ph) => "there is no state at this temperature".to_owned(),
        (None, property) => format!("the {} is not worked out", property.words()),
    })
}

//! How the numbers of a solution came about, as data: `scruple show --reasons`. What an audit asks for is read off the account of the
//! finished state; nothing is worked out a second way, except where a second model is asked on purpose.

use serde::Serialize;

use super::assumptions::assumptions;
use super::number::{celsius, number};
use super::Subject;
use crate::chemistry::{ActivityModel, ConstantValue, SpeciesId, State, UsedConstant, UsedInteraction};
use crate::evaluate::Outcome;
use crate::finding::Anchor;
use crate::library;
use crate::model::{Body, DefinitionKey};
use crate::text::Columns;

/// Constants that move the pH by less than this for a unit of log K are only counted.
const LEAST_INFLUENCE: f64 = 1e-3;

/// Interactions that change no log γ by more than this are only counted.
const LEAST_EFFECT: f64 = 1e-3;

/// How the numbers of a solution came about.
#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct ReasonsReport {
    pub program: &'static str,
    pub library: &'static str,
    pub activity_model: &'static str,
    pub debye_hueckel_slope: Option<f64>,
    pub temperature_C: Option<f64>,
    pub solver_steps: usize,
    pub second_model: Option<SecondModel>,
    pub constants: Vec<ConstantUse>,
    pub constants_without_influence: usize,
    pub activities: Vec<Activity>,
    pub interactions: Vec<InteractionUse>,
    pub interactions_without_influence: usize,
    pub balances: Vec<BalanceReport>,
    pub relative_charge: Option<f64>,
    pub assumptions: Vec<String>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct SecondModel {
    pub name: &'static str,
    pub pH: Option<f64>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct ConstantUse {
    pub name: String,
    pub value: Option<f64>,
    pub at_25_C: Option<f64>,
    pub standard_uncertainty: Option<f64>,
    pub course: String,
    pub within_its_range: bool,
    pub pH_per_unit: Option<f64>,
    pub source: Option<String>,
    pub place: Option<String>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct Activity {
    pub species: String,
    pub mol_per_kg: Option<f64>,
    pub activity_coefficient: Option<f64>,
    pub log10_activity: Option<f64>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct InteractionUse {
    pub between: [String; 2],
    pub epsilon_kg_per_mol: Option<f64>,
    pub standard_uncertainty: Option<f64>,
    pub largest_effect: Option<f64>,
    pub source: Option<String>,
    pub place: Option<String>,
}

#[derive(Debug, Serialize)]
#[allow(missing_docs, reason = "each field is described in show.schema.json")]
pub struct BalanceReport {
    pub of: String,
    pub given_mol: Option<f64>,
    pub found_mol: Option<f64>,
    pub relative_residual: Option<f64>,
}

/// How the numbers of a solution came about; none where it has no state.
pub fn reasons_report(subject: &Subject) -> Option<ReasonsReport> {
    let outcome = subject.member.outcome.as_deref()?;
    let state = outcome.finished.as_ref().ok()?;
    Some(of_state(subject, outcome, state))
}

fn of_state(subject: &Subject, outcome: &Outcome, state: &State) -> ReasonsReport {
    let account = state.account();
    let (constants, weak_constants): (Vec<&UsedConstant>, Vec<&UsedConstant>) =
        account.constants.iter().partition(|used| used.pH_per_log10_k.abs() >= LEAST_INFLUENCE);
    let (interactions, weak_interactions): (Vec<&UsedInteraction>, Vec<&UsedInteraction>) =
        account.interactions.iter().partition(|used| used.largest_effect >= LEAST_EFFECT);
    ReasonsReport {
        program: env!("CARGO_PKG_VERSION"),
        library: library::VERSION,
        activity_model: model_name(state.settings().model),
        debye_hueckel_slope: number(account.debye_hueckel_slope),
        temperature_C: celsius(state.temperature_K),
        solver_steps: state.steps,
        second_model: second_model(state),
        constants: constants.into_iter().filter_map(|used| constant_use(subject, state, used)).collect(),
        constants_without_influence: weak_constants.len(),
        activities: activities(state),
        interactions: interactions.into_iter().map(|used| interaction_use(subject, state, used)).collect(),
        interactions_without_influence: weak_interactions.len(),
        balances: (account.balances.iter())
            .map(|balance| BalanceReport {
                of: balance.of.clone(),
                given_mol: number(balance.given_mol),
                found_mol: number(balance.found_mol),
                relative_residual: number(balance.relative_residual),
            })
            .collect(),
        relative_charge: number(account.relative_charge),
        assumptions: assumptions(subject, outcome),
    }
}

/// What an activity model is called.
pub(super) fn model_name(model: ActivityModel) -> &'static str {
    match model {
        ActivityModel::Sit => "specific ion interaction theory",
        ActivityModel::BatesGuggenheim => "the Bates–Guggenheim convention",
        ActivityModel::Davies => "the Davies equation",
    }
}

fn second_model(state: &State) -> Option<SecondModel> {
    let pH = state.alternative_pH().ok()?;
    Some(SecondModel { name: model_name(state.alternative_model()), pH: number(pH) })
}

fn constant_use(subject: &Subject, state: &State, used: &UsedConstant) -> Option<ConstantUse> {
    let constant = state.chemistry().constant(used.id)?;
    let known = subject.constituents().constants.get(&used.id).cloned();
    let water = matches!(constant.value, ConstantValue::Water);
    let (source, place) = match known {
        Some((key, at, source)) => (source.or_else(|| source_of(subject, &key)), place(subject, &key, at)),
        None => (water.then(|| "IAPWS R11-07, ionisation constant of water".to_owned()), None),
    };
    Some(ConstantUse {
        name: constant.name.clone(),
        value: number(used.log10_k),
        at_25_C: number(constant.log10_k(crate::chemistry::REFERENCE_K)),
        standard_uncertainty: (constant.standard_uncertainty > 0.0).then_some(constant.standard_uncertainty).and_then(number),
        course: course(&constant.value),
        within_its_range: used.holds,
        pH_per_unit: number(used.pH_per_log10_k),
        source,
        place,
    })
}

/// What is known of a constant's way over the temperature.
fn course(value: &ConstantValue) -> String {
    let celsius = |kelvin: f64| crate::units::format::temperature(kelvin);
    match value {
        ConstantValue::VantHoff { enthalpy_J_per_mol: None, .. } => "known at 25 °C only".to_owned(),
        ConstantValue::VantHoff { heat_capacity_J_per_mol_K: None, .. } => "enthalpy".to_owned(),
        ConstantValue::VantHoff { .. } => "enthalpy and heat capacity".to_owned(),
        ConstantValue::Equation { range_K: (low, high), .. } => format!("equation, {} to {}", celsius(*low), celsius(*high)),
        ConstantValue::Water => "release of the IAPWS".to_owned(),
    }
}

fn activities(state: &State) -> Vec<Activity> {
    let mut all: Vec<(SpeciesId, f64, f64)> = state.species().collect();
    all.sort_by(|one, other| other.1.total_cmp(&one.1).then(one.0.cmp(&other.0)));
    all.into_iter()
        .filter_map(|(id, molality, log_gamma)| {
            Some(Activity {
                species: state.chemistry().species(id)?.name.clone(),
                mol_per_kg: number(molality),
                activity_coefficient: number(10f64.powf(log_gamma)),
                log10_activity: number(molality.log10() + log_gamma),
            })
        })
        .collect()
}

fn interaction_use(subject: &Subject, state: &State, used: &UsedInteraction) -> InteractionUse {
    let (one, other) = used.pair;
    let name = |id: SpeciesId| state.chemistry().species(id).map_or_else(String::new, |species| species.name.clone());
    let known = subject.constituents().interactions.get(&(one.min(other), one.max(other))).cloned();
    let (source, place) = match known {
        Some((key, at, source)) => (source.or_else(|| source_of(subject, &key)), place(subject, &key, at)),
        None => (None, None),
    };
    InteractionUse {
        between: [name(one), name(other)],
        epsilon_kg_per_mol: number(used.epsilon_kg_per_mol),
        standard_uncertainty: (used.standard_uncertainty > 0.0).then_some(used.standard_uncertainty).and_then(number),
        largest_effect: number(used.largest_effect),
        source,
        place,
    }
}

/// What the `source` line of a block says, for facts that name no source of their own.
fn source_of(subject: &Subject, key: &DefinitionKey) -> Option<String> {
    match &subject.selection.definition(key)?.body {
        Body::Ion(ion) => ion.source.clone(),
        Body::Substance(substance) => substance.source.clone(),
        Body::Solid(solid) => solid.source.clone(),
        _ => None,
    }
}

/// File and line of a statement in a definition.
fn place(subject: &Subject, key: &DefinitionKey, at: Anchor) -> Option<String> {
    let (file, block) = subject.selection.snapshot.locate(key)?;
    let file = subject.selection.snapshot.file(file)?;
    let line = 1 + file.source.position(file.absolute(block, at).start, Columns::Characters).line;
    Some(format!("{}, line {line}", subject.selection.file_name(file)))
}

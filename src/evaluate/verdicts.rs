//! Whether what a recipe expects holds: at the making, at every use temperature, and after dilution.

use super::above::{above, carbon_dioxide};
use super::bench::diluted;
use super::goods::state_of;
use super::property::{PropertyValue, Question, property_value};
use super::{Context, Outcome, Refusal, Verdict};
use crate::finding::{Code, Finding};
use crate::chemistry::gases::CARBON_DIOXIDE_OF_AIR_Pa;
use crate::chemistry::{Failure, State};
use crate::model::{Atmosphere, Expectation, Recipe};
use crate::units::format;

/// Limits are compared with the rounding of a double in mind.
const SLACK: f64 = 1e-9;

/// Fills in the states at use temperatures and judges every expectation.
pub(super) fn verdicts(
    recipe: &Recipe,
    mut outcome: Outcome,
    context: &Context,
    findings: &mut Vec<Finding>,
) -> Result<Outcome, Refusal> {
    outcome.above = above(recipe, context, findings)?;
    let mut used_at: Vec<f64> = recipe.used_at.iter().map(|kelvin| kelvin.value).collect();
    if used_at.is_empty() && outcome.above.is_some() {
        used_at.push(outcome.made_at_K);
    }
    outcome.uses = used_at.into_iter().map(|kelvin| (kelvin, in_use(recipe, &outcome, kelvin, context))).collect();
    if recipe.atmosphere.as_ref().is_some_and(|gas| gas.value == Atmosphere::Open) {
        outcome.drift = carbon_dioxide(context).map(|gas| {
            let closed = outcome.finished.as_ref().map_err(Failure::clone)?;
            closed.under(gas, CARBON_DIOXIDE_OF_AIR_Pa)
        });
    }
    for (index, expectation) in recipe.expectations.iter().enumerate() {
        let temperatures = match expectation.temperature {
            Some(kelvin) => vec![kelvin],
            // Without a temperature it must hold at the making and at every use temperature.
            None => {
                let mut all = vec![outcome.made_at_K];
                all.extend(recipe.used_at.iter().map(|kelvin| kelvin.value).filter(|kelvin| (kelvin - outcome.made_at_K).abs() > 1e-6));
                all
            }
        };
        let mut reported = false;
        for temperature_K in temperatures {
            let value = match value_of(expectation, recipe, &outcome, temperature_K, context) {
                Ok(value) => value,
                Err(refusals) => {
                    if !reported {
                        findings.extend(refusals);
                    }
                    reported = true;
                    None
                }
            };
            let holds = value.map(|value| {
                let slack = SLACK * value.abs().max(1e-3);
                expectation.low.is_none_or(|low| value >= low - slack)
                    && expectation.high.is_none_or(|high| value <= high + slack)
            });
            outcome.verdicts.push(Verdict {
                expectation: index,
                at: expectation.at,
                property: expectation.property.clone(),
                temperature_K,
                fold: expectation.diluted.as_ref().map_or(1.0, |dilution| dilution.fold),
                value,
                low: expectation.low,
                high: expectation.high,
                unit: expectation.unit,
                holds,
            });
        }
    }
    Ok(outcome)
}

/// The state at a temperature (K), under the gas that is stated there: everywhere, or in use only.
fn in_use(recipe: &Recipe, outcome: &Outcome, temperature_K: f64, context: &Context) -> Result<State, Failure> {
    let is_use = || recipe.used_at.is_empty() || recipe.used_at.iter().any(|kelvin| (kelvin.value - temperature_K).abs() < 1e-6);
    match outcome.above.as_ref().filter(|gas| !gas.in_use_only || is_use()) {
        Some(gas) => gas.over(&outcome.mixture, temperature_K, context),
        None => state_of(&outcome.mixture, temperature_K, context),
    }
}

/// The value of what is expected, or why there is none. A dilution is judged closed.
fn value_of(
    expectation: &Expectation,
    recipe: &Recipe,
    outcome: &Outcome,
    temperature_K: f64,
    context: &Context,
) -> Result<Option<f64>, Vec<Finding>> {
    let state = match &expectation.diluted {
        None => in_use(recipe, outcome, temperature_K, context),
        Some(dilution) => {
            let mixture = diluted(&outcome.mixture, dilution.fold, dilution.with.as_ref(), outcome.made_at_K, context)
                .map_err(Refusal::into_findings)?;
            state_of(&mixture, temperature_K, context)
        }
    };
    // An expectation that is not judged must not look like one that holds.
    let state = state.map_err(|failure| {
        let message = format!("This is not judged at {}: {failure}.", format::temperature(temperature_K));
        let finding = Finding::new(Code::ExpectationWithoutValue, expectation.at, message);
        vec![finding.help("Expect it where the solution can be worked out.")]
    })?;
    let formula = expectation.as_formula.as_ref().map(|(_, formula)| formula);
    let question = Question {
        property: &expectation.property,
        unit: expectation.unit,
        as_formula: formula,
        says_temperature: expectation.temperature.is_some(),
    };
    property_value(&state, &question, context).map(Some).map_err(|why| match why {
        PropertyValue::Unknown(refusal) => refusal.into_findings(),
        other => vec![other.finding(expectation.at)],
    })
}

//! Gases: what an open solution takes up and gives off, and gases that nothing states or that are not those of the setting.

use super::Case;
use super::buffering::ph_is_wanted;
use crate::chemistry::gases::CARBON_DIOXIDE_OF_AIR_Pa;
use crate::chemistry::{PhaseId, Settled, State};
use crate::evaluate::carbon_dioxide;
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Action, Atmosphere, Body, GoalKind, Property, Recipe};
use crate::units::format;

/// A move of the pH that matters where no limit is stated.
const MOVE: f64 = 0.10;

/// An alkaline solution takes up carbon dioxide whether its pH is wanted or not.
const ALKALINE: f64 = 8.0;

/// A gas escapes where an equal volume of air takes this share of it. A judgement: a hundred changes of that air take a hundredth.
const ESCAPES: f64 = 1e-4;

/// Less of a gas than this is not missed, mol/L.
const LEAST: f64 = 1e-3;

/// Solutions for living cells are used from here up, K. Common practice, no source.
const LIVING_K: f64 = 303.15;

/// Gas constant, Pa·L/(mol·K).
const GAS_CONSTANT_PASCAL: f64 = 8_314.462_618;

fn pressure(pascal: f64) -> String {
    format!("{} kPa", format::significant(pascal / 1000.0, 2))
}

/// Where a solution drifts that is kept open, and what escapes from it.
pub(super) fn open_to_the_air(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(at) = recipe.atmosphere.as_ref().filter(|gas| gas.value == Atmosphere::Open).map(|gas| gas.at) else { return };
    for outcome in case.outcomes() {
        let Ok(closed) = &outcome.finished else { continue };
        let before = findings.len();
        if let (Some(Ok(drifted)), Some(gas)) = (&outcome.drift, carbon_dioxide(case.context)) {
            findings.extend(drift(recipe, at, closed, drifted, gas));
        }
        findings.extend(escapes(case, at, closed));
        if findings.len() > before {
            return;
        }
    }
}

fn drift(recipe: &Recipe, at: Anchor, closed: &State, drifted: &Settled, gas: PhaseId) -> Option<Finding> {
    let moved = drifted.state.pH() - closed.pH();
    if moved.abs() <= MOVE || (closed.pH() < ALKALINE && ph_is_wanted(recipe).is_none()) {
        return None;
    }
    let over_it = closed.partial_pressure_Pa(gas).unwrap_or(0.0);
    let (from, to) = (format::ph(closed.pH()), format::ph(drifted.state.pH()));
    let change = drifted.taken_up.first().map_or(0.0, |(_, amount)| amount / closed.volume_L);
    Some(if over_it < CARBON_DIOXIDE_OF_AIR_Pa {
        Finding::new(Code::TakesUpCarbonDioxide, at, format!("In air the pH goes from {from} to {to}: the solution takes up {} of carbon dioxide.", format::concentration(change.abs(), 2)))
            .help("Keep it closed, with little air above it, and use it soon; or expect the pH that it has in air.")
    } else {
        Finding::new(Code::GasEscapes, at, format!("In air the pH goes from {from} to {to}: {} of carbon dioxide leave the solution, {} over it against {} in air.", format::concentration(change.abs(), 2), pressure(over_it), pressure(CARBON_DIOXIDE_OF_AIR_Pa)))
            .help("Keep it closed, or state the gas that it stands under.")
    })
}

/// Gases other than carbon dioxide that leave an open solution.
fn escapes(case: &Case, at: Anchor, closed: &State) -> Option<Finding> {
    let carbon_dioxide = carbon_dioxide(case.context);
    let chemistry = closed.chemistry();
    closed.partial_pressures_Pa().into_iter().filter(|(id, _)| Some(*id) != carbon_dioxide).find_map(|(id, pascal)| {
        let gas = chemistry.phase(id)?;
        let amounts = gas.parts.iter().map(|(part, count)| closed.mixture().amounts_mol.get(part).copied().unwrap_or(0.0) / f64::from(*count));
        let concentration = amounts.fold(f64::INFINITY, f64::min) / closed.volume_L;
        let share = pascal / (GAS_CONSTANT_PASCAL * closed.temperature_K) / concentration;
        (concentration >= LEAST && share >= ESCAPES).then(|| {
            Finding::new(Code::GasEscapes, at, format!("{} stand over the open solution as {}: it is lost, and the pH of {} with it.", pressure(pascal), gas.name, format::ph(closed.pH())))
                .help("Keep it closed and cold, and open it under a fume hood; see the safety data sheet and the local rules.")
        })
    })
}

/// A hydrogen carbonate solution for cells, and nothing says under which gas.
pub(super) fn not_at_gas_equilibrium(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe().filter(|_| matches!(case.block.body, Body::Solution(_))) else { return };
    let Some(gas) = carbon_dioxide(case.context).filter(|_| recipe.atmosphere.is_none()) else { return };
    let Some(used) = recipe.used_at.iter().find(|kelvin| kelvin.value >= LIVING_K) else { return };
    for outcome in case.outcomes() {
        let Some((_, Ok(state))) = outcome.uses.iter().find(|(kelvin, _)| (kelvin - used.value).abs() < 1e-6) else { continue };
        let Some(component) = state.chemistry().phase(gas).and_then(|phase| phase.parts.first()).map(|(part, _)| *part) else { continue };
        let total = outcome.mixture.amounts_mol.get(&component).copied().unwrap_or(0.0);
        let hydrogen_carbonate: f64 = state
            .species()
            .filter(|(id, ..)| state.chemistry().species(*id).is_some_and(|species| species.parts.as_slice() == [(component, 1)] && species.hydrogen == 1))
            .map(|(_, molality, _)| molality * state.water_kg)
            .sum();
        if total / outcome.volume_L < 2.0 * LEAST || hydrogen_carbonate < 0.5 * total {
            continue;
        }
        let (Some(over_it), Ok(in_air)) = (state.partial_pressure_Pa(gas), state.under(gas, CARBON_DIOXIDE_OF_AIR_Pa)) else { continue };
        if (in_air.state.pH() - state.pH()).abs() <= MOVE {
            continue;
        }
        findings.push(
            Finding::new(
                Code::NotAtGasEquilibrium,
                used.at,
                format!(
                    "At {} the closed solution has pH {} with {} of carbon dioxide over it, in air pH {}; which gas it is used under is not said.",
                    format::temperature(used.value),
                    format::ph(state.pH()),
                    pressure(over_it),
                    format::ph(in_air.state.pH())
                ),
            )
            .help("State the gas: `under 5 % CO2, moist`, `under air`, or `sealed` if it stays closed."),
        );
        return;
    }
}

/// A pH that was set in the closed beaker and is another one under the gas of use.
pub(super) fn set_under_another_gas(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    for outcome in case.outcomes() {
        let (Some(above), Ok(finished)) = (&outcome.above, &outcome.finished) else { continue };
        let pair = recipe.entries.iter().rev().find_map(|entry| match &entry.action {
            Action::Pair(pair) => pair.goals.iter().find(|goal| matches!(goal.kind, GoalKind::Property { property: Property::Ph, .. })),
            _ => None,
        });
        let (set, at, window) = match (outcome.set_points.last(), pair) {
            (Some(point), _) if point.elsewhere => continue,
            (Some(point), _) => (point.state.pH(), ph_is_wanted(recipe).unwrap_or(point.at), point.window),
            (None, Some(goal)) => (finished.pH(), goal.at, None),
            (None, None) => continue,
        };
        let limit = window.map_or(MOVE, |(low, high)| 0.5 * (high - low));
        let states = outcome.uses.iter().filter_map(|(kelvin, state)| Some((*kelvin, state.as_ref().ok()?.pH())));
        let worst = states.max_by(|one, other| (one.1 - set).abs().total_cmp(&(other.1 - set).abs()));
        let Some((kelvin, pH)) = worst.filter(|(_, pH)| (pH - set).abs() > limit) else { continue };
        findings.push(
            Finding::new(
                Code::SetUnderAnotherGas,
                at,
                format!(
                    "Set to {} in the closed beaker, the pH is {} at {} under {} of {}.",
                    format::ph(set),
                    format::ph(pH),
                    format::temperature(kelvin),
                    pressure(above.pressure_Pa(kelvin)),
                    above.name
                ),
            )
            .help("Set it under the gas of use, or leave the hydrogen carbonate to set it; expect the pH of use.")
            .related(above.at, "the gas"),
        );
        return;
    }
}

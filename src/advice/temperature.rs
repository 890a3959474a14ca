//! The pH between the temperatures of making and of use.

use super::Case;
use super::buffering::{buffering_total, ph_is_wanted};
use crate::evaluate::DEFAULT_TEMPERATURE_K;
use crate::finding::{Code, Finding, Fix};
use crate::model::{Action, GoalKind, Property, Recipe};
use crate::units::format;

/// A shift of the pH that a careful reviewer asks about where no limit is stated. Common practice, no source.
const SHIFT: f64 = 0.10;

/// The half-width that the recipe states for its pH; none where it states none.
pub(super) fn stated_half_width(recipe: &Recipe) -> Option<f64> {
    recipe.entries.iter().rev().find_map(|entry| {
        let goals = match &entry.action {
            Action::MakeUp(make_up) => &make_up.goals,
            Action::Pair(pair) => &pair.goals,
            _ => return None,
        };
        goals.iter().find_map(|goal| match goal.kind {
            GoalKind::Property { property: Property::Ph, low: Some(low), high: Some(high), .. } => Some(0.5 * (high - low)),
            _ => None,
        })
    })
}

/// Says that the pH is another one where the solution is used.
pub(super) fn temperature_shift(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let limit = stated_half_width(recipe).unwrap_or(SHIFT);
    for outcome in case.outcomes() {
        let Ok(made) = &outcome.finished else { continue };
        // A pH that was set for another temperature was set with the shift in mind.
        let for_use = outcome.set_points.iter().any(|point| point.elsewhere);
        // Under a gas the pH of use is another one than that of the closed beaker anyway.
        if for_use || outcome.above.is_some() || ph_is_wanted(recipe).is_none() && buffering_total(case, outcome) < 0.001 {
            continue;
        }
        let worst = outcome
            .uses
            .iter()
            .filter_map(|(kelvin, state)| state.as_ref().ok().map(|state| (*kelvin, state.pH())))
            .max_by(|one, other| (one.1 - made.pH()).abs().total_cmp(&(other.1 - made.pH()).abs()));
        let Some((kelvin, pH)) = worst else { continue };
        if (pH - made.pH()).abs() <= limit {
            continue;
        }
        let at = recipe
            .used_at
            .iter()
            .find(|used| (used.value - kelvin).abs() < 1e-9)
            .map_or(case.block.header_anchor(), |used| used.at);
        findings.push(
            Finding::new(
                Code::TemperatureShift,
                at,
                format!(
                    "At {} the pH is {}, {} than the {} at {} where it is made.",
                    format::temperature(kelvin),
                    format::ph(pH),
                    if pH > made.pH() {
                        format!("{:.2} higher", pH - made.pH())
                    } else {
                        format!("{:.2} lower", made.pH() - pH)
                    },
                    format::ph(made.pH()),
                    format::temperature(outcome.made_at_K)
                ),
            )
            .help(format!("Set the pH for the use: `to pH … at {}`.", format::temperature(kelvin))),
        );
        return;
    }
}

/// Says that a pH depends on a temperature that nothing states.
pub(super) fn temperature_not_stated(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    if recipe.made_at.is_some() || !matches!(case.block.body, crate::model::Body::Solution(_)) {
        return;
    }
    let Some(at) = ph_is_wanted(recipe) else { return };
    for outcome in case.outcomes() {
        let Ok(state) = &outcome.finished else { continue };
        let header = case.block.header_anchor();
        if case.context.lab.and_then(|lab| lab.room).is_none() {
            findings.push(
                Finding::new(
                    Code::TemperatureAssumed,
                    header,
                    format!("Nothing says at what temperature this is made; {} is assumed.", format::temperature(DEFAULT_TEMPERATURE_K)),
                )
                .help("Add a line such as `made at 22 °C`, or use a file with the lab.")
                .fix(Fix::line_below("Add `made at 25 °C`", 0, "    made at    25 °C")),
            );
            return;
        }
        let span = 2.0 * outcome.made_at_half_width_K;
        let shift = (state.dpH_dT_per_K() * span).abs();
        let limit = stated_half_width(recipe).unwrap_or(SHIFT);
        if shift > limit {
            let middle = format::temperature(outcome.made_at_K);
            findings.push(
                Finding::new(
                    Code::TemperatureNotStated,
                    at,
                    format!("Over the room's range of {span:.0} °C the pH moves by {shift:.2}, and nothing says where it is set."),
                )
                .help("Add a line that says at what temperature it is made.")
                .fix(Fix::line_below(format!("Add `made at {middle}`"), 0, format!("    made at    {middle}"))),
            );
            return;
        }
    }
}

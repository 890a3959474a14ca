//! Where and in how much the pH is set, and what happens to it afterwards.

use super::Case;
use crate::evaluate::{Outcome, Role};
use crate::finding::{Code, Finding};
use crate::model::{Action, Recipe};
use crate::units::{Dimension, format};

/// A move of the pH that matters where no limit is stated.
const MOVE: f64 = 0.10;

/// Set in less than this share of the final volume, the make-up is no longer a top-up. Common practice, no source.
const LEAST_SHARE: f64 = 0.60;

/// How far an author's estimate may be off; concentrated reagents vary by a tenth and more.
const ESTIMATE: f64 = 0.25;

/// Says that lines after the last setting move the pH, or that it was set in too little.
pub(super) fn moves_after_setting(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    for outcome in case.outcomes() {
        let (Some(point), Ok(finished)) = (outcome.set_points.last(), &outcome.finished) else { continue };
        if point.elsewhere {
            continue;
        }
        let moved = finished.pH() - point.state.pH();
        let limit = point.window.map_or(MOVE, |(low, high)| 0.5 * (high - low));
        if moved.abs() <= limit {
            continue;
        }
        let words = format!(
            "Set to {}, the pH is {} in the finished solution, {:.2} {}",
            format::ph(point.state.pH()),
            format::ph(finished.pH()),
            moved.abs(),
            if moved > 0.0 { "higher" } else { "lower" }
        );
        let share = point.state.volume_L / outcome.volume_L;
        let only_water_follows = only_make_up_follows(recipe, outcome, point.entry);
        let at = recipe.entries.get(point.entry).map_or(point.at, |entry| match &entry.action {
            Action::MakeUp(make_up) => make_up.goals.first().map_or(entry.at, |goal| goal.at),
            _ => entry.at,
        });
        findings.push(if share < LEAST_SHARE && only_water_follows {
            Finding::new(
                Code::SetInTooLittle,
                at,
                format!("{words}: it is set in {:.0} % of the final volume, and the make-up moves it.", 100.0 * share),
            )
            .help("Set the pH near the final volume, and top up.")
        } else {
            Finding::new(Code::MovesAfterSetting, at, format!("{words}: the lines below this one move it."))
                .help("Set the pH last, before the final top-up.")
        });
        return;
    }
}

fn only_make_up_follows(recipe: &Recipe, outcome: &Outcome, entry: usize) -> bool {
    outcome.lines.iter().filter(|line| line.entry > entry).all(|line| {
        line.role == Role::MakesUp || recipe.entries.get(line.entry).is_some_and(|entry| matches!(entry.action, Action::Divider(_)))
    })
}

/// Says that the liquid of the make-up was counted in when the pH was set.
pub(super) fn liquid_counted_in(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    for point in &outcome.set_points {
        let Some(make_up) = point.liquid_of.and_then(|entry| recipe.entries.get(entry)) else { continue };
        findings.push(
            Finding::new(
                Code::LiquidCountedIn,
                point.at,
                format!(
                    "No liquid stands above this line, so the pH is worked out with that of the make-up below, {} in all.",
                    format::volume(point.state.volume_L, 3)
                ),
            )
            .help("Write the water in which the pH is set as a line of its own, if it is less.")
            .related(make_up.at, "the make-up whose liquid is counted in"),
        );
    }
}

/// Says that the author's `about` is far from what is computed.
pub(super) fn about_differs(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    for line in outcome.lines.iter().filter(|line| line.role == Role::Adjusts) {
        let Some(Action::MakeUp(make_up)) = recipe.entries.get(line.entry).map(|entry| &entry.action) else { continue };
        let Some(about) = &make_up.qualifiers.about else { continue };
        if make_up.goals.iter().any(|goal| matches!(goal.kind, crate::model::GoalKind::ByEye(_))) {
            continue;
        }
        let computed = match about.value.dimension() {
            Dimension::Volume => line.volume_L,
            Dimension::Mass => Some(line.mass_kg),
            Dimension::Amount => line.amount_mol,
            _ => None,
        };
        let Some(computed) = computed else { continue };
        let estimate = about.value.value;
        if (computed - estimate).abs() <= ESTIMATE * computed.abs().max(estimate.abs()) {
            continue;
        }
        findings.push(
            Finding::new(
                Code::AboutDiffers,
                about.at,
                format!(
                    "It takes {}, not about {}.",
                    format::with_unit(computed, Some(about.value.unit)),
                    format::with_unit(estimate, Some(about.value.unit))
                ),
            )
            .help("Check the strength of what is added and the amounts above; the estimate may be from another strength.")
            .about(make_up.what.key.as_str()),
        );
    }
}

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
        // Where the beaker was warm or cold when it was set, the temperature is part of the matter.
        let apart = (finished.temperature_K - point.state.temperature_K).abs() > 0.5;
        let place = |kelvin: f64| if apart { format!(" at {}", format::temperature(kelvin)) } else { String::new() };
        let words = format!(
            "Set to {}{}, the pH is {} in the finished solution{}, {:.2} {}",
            format::ph(point.state.pH()),
            place(point.state.temperature_K),
            format::ph(finished.pH()),
            place(finished.temperature_K),
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
    for line in outcome.lines.iter().filter(|line| line.role == Role::Adjusts && !recipe.is_taken_over(line.at)) {
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

/// Says that a line takes more than its author allows.
pub(super) fn takes_too_much(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    for line in &outcome.lines {
        let (reference, at_most) = match recipe.entries.get(line.entry).map(|entry| &entry.action) {
            Some(Action::MakeUp(make_up)) => (&make_up.what, make_up.qualifiers.at_most),
            Some(Action::Add(addition)) => (&addition.what, addition.qualifiers.at_most),
            _ => continue,
        };
        let Some(at_most) = at_most else { continue };
        let taken = match at_most.value.dimension() {
            Dimension::Volume => line.volume_L,
            Dimension::Mass => Some(line.mass_kg),
            Dimension::Amount => line.amount_mol,
            _ => None,
        };
        if let Some(taken) = taken.filter(|taken| *taken > at_most.value.value * (1.0 + 1e-9)) {
            findings.push(
                Finding::new(
                    Code::TakesTooMuch,
                    at_most.at,
                    format!(
                        "It takes {}, more than the {} allowed.",
                        format::with_unit(taken, Some(at_most.value.unit)),
                        format::with_unit(at_most.value.value, Some(at_most.value.unit))
                    ),
                )
                .help("Use a stronger one, or allow more.")
                .about(reference.key.as_str()),
            );
        }
    }
}

/// An alternative must bring the same as the line above it, within this share. Common practice, no source.
const SAME: f64 = 0.01;

/// Says that an alternative line does not bring the same.
pub(super) fn alternative_differs(case: &Case, findings: &mut Vec<Finding>) {
    let Some(outcome) = case.outcomes().next() else { return };
    for (index, line) in outcome.lines.iter().enumerate().filter(|(_, line)| line.role == Role::Alternative) {
        let first = outcome.lines.iter().take(index).rev().find(|line| line.role != Role::Alternative);
        let Some(first) = first else { continue };
        // What both bring is compared; a counter-ion that only one has is a choice of the author's.
        let worst = first
            .per_kg
            .amounts_mol
            .iter()
            .filter_map(|(component, per_kg)| {
                let here = per_kg * first.mass_kg;
                let there = line.per_kg.amounts_mol.get(component)? * line.mass_kg;
                Some((*component, here, there))
            })
            .max_by(|one, other| (one.2 / one.1 - 1.0).abs().total_cmp(&(other.2 / other.1 - 1.0).abs()));
        let message = match worst {
            Some((_, here, there)) if (there / here - 1.0).abs() <= SAME => continue,
            Some((component, here, there)) => format!(
                "This brings {} of {}, the line above {}.",
                format::amount(there, 4),
                case.context.constituents.chemistry.component(component).map_or("", |component| component.name.as_str()),
                format::amount(here, 4)
            ),
            None => format!("{} brings nothing that {} brings.", line.name, first.name),
        };
        findings.push(
            Finding::new(Code::AlternativeDiffers, line.at, message)
                .help("An alternative brings the same amount; correct one of the two.")
                .related(first.at, "the line above"),
        );
    }
}

/// A found strength further from the computed one than this is a mistake in one of them.
const FOUND: f64 = 0.05;

/// Says that a found strength is far from the computed one.
pub(super) fn found_differs(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some((computed, found)) = case.outcomes().next().and_then(|outcome| outcome.found) else { return };
    let Some(entry) = recipe.entries.iter().find(|entry| matches!(entry.action, Action::Found { .. })) else { return };
    if (found / computed - 1.0).abs() > FOUND {
        findings.push(
            Finding::new(
                Code::FoundDiffers,
                entry.at,
                format!(
                    "The strength found is {}, {:.0} % from the {} that the recipe gives.",
                    format::concentration(found, 4),
                    100.0 * (found / computed - 1.0).abs(),
                    format::concentration(computed, 4)
                ),
            )
            .help("Check the weighing and the titration."),
        );
    }
}

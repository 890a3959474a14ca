//! Free ions that are not what a recipe can promise: near the equivalence of a chelator, or bound by one.

use super::Case;
use super::buffering::{buffering_total, is_chelator};
use crate::chemistry::{ComponentId, State};
use crate::evaluate::{LineOutcome, Outcome, Role, free_mol, total_mol};
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Action, Constituent, GoalKind, NameKey, Property, Recipe, Reference};
use crate::units::{Unit, format};

/// By how much a line is thought to be off.
const ERROR: f64 = 0.01;
/// Where the value follows a line no more than so many times as steeply as the line itself changes, nothing is steep.
const LEAST_GAIN: f64 = 5.0;

/// A free ion that the recipe expects or seeks, and how exactly.
struct Wanted<'a> {
    at: Anchor,
    reference: &'a Reference,
    temperature_K: f64,
    /// Width of the window in the base unit; none where a bare value is sought.
    window: Option<f64>,
    unit: Option<Unit>,
}

/// Says where 1 % of one line moves an expected free ion by more than its window.
pub(super) fn steep_target(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    for wanted in wanted(recipe, outcome) {
        let Some(constituent) = case.context.constituents.named(&wanted.reference.key) else { continue };
        let Some((line, change, value)) = steepest(outcome, constituent, wanted.temperature_K) else { continue };
        let limit = wanted.window.map_or(value, |width| width / of_concentration(wanted.unit, outcome, constituent));
        if change <= limit || change <= LEAST_GAIN * ERROR * value {
            continue;
        }
        let against = match wanted.window {
            Some(_) => format!("the window is {} wide", format::concentration(limit, 2)),
            None => format!("it is {}", format::concentration(value, 2)),
        };
        findings.push(
            Finding::new(
                Code::SteepTarget,
                wanted.at,
                format!(
                    "1 % of {} moves the free {} by {}; {against}.",
                    line.name,
                    wanted.reference.text,
                    format::concentration(change, 2)
                ),
            )
            .help("Stay further from the equivalence, use a chelator that binds more weakly, or measure the free ion and expect what was found.")
            .related(line.at, "the line that it hangs on"),
        );
    }
}

/// Base units of the window in one mol/L of the ion.
fn of_concentration(unit: Option<Unit>, outcome: &Outcome, constituent: &Constituent) -> f64 {
    use crate::units::Dimension as D;
    match unit.map(Unit::dimension) {
        Some(D::Molality) => outcome.volume_L / outcome.water_kg,
        Some(D::MassConcentration) => 1000.0 * constituent.molar_mass.unwrap_or(f64::NAN),
        _ => 1.0,
    }
}

fn wanted<'a>(recipe: &'a Recipe, outcome: &Outcome) -> Vec<Wanted<'a>> {
    let expected = recipe.expectations.iter().filter_map(|one| match (&one.property, one.low, one.high) {
        (Property::Free(reference), Some(low), Some(high)) if one.diluted.is_none() => Some(Wanted {
            at: one.at,
            reference,
            temperature_K: one.temperature.unwrap_or(outcome.made_at_K),
            window: Some(high - low),
            unit: one.unit,
        }),
        _ => None,
    });
    let sought = recipe.entries.iter().flat_map(|entry| match &entry.action {
        Action::MakeUp(make_up) => make_up.goals.as_slice(),
        Action::Pair(pair) => pair.goals.as_slice(),
        _ => &[],
    });
    let sought = sought.filter_map(|goal| match &goal.kind {
        GoalKind::Property { property: Property::Free(reference), low, high, unit, .. } if goal.diluted.is_none() => Some(Wanted {
            at: goal.at,
            reference,
            temperature_K: goal.temperature.map_or(outcome.made_at_K, |stated| stated.value),
            window: low.zip(*high).map(|(low, high)| high - low),
            unit: *unit,
        }),
        _ => None,
    });
    expected.chain(sought).collect()
}

/// The line of which 1 % moves a free ion most, by how much, and the ion itself, mol/L. A pH that is set is set again.
fn steepest<'a>(outcome: &'a Outcome, constituent: &Constituent, temperature_K: f64) -> Option<(&'a LineOutcome, f64, f64)> {
    let state = outcome.finished.as_ref().ok()?;
    let free = |state: &State| free_mol(state, constituent) / state.volume_L;
    let value = free(&state.at_temperature(temperature_K).ok()?);
    let with_error = |line: &LineOutcome, share: f64| -> Option<f64> {
        let mut mixture = outcome.mixture.clone();
        mixture.add(&line.per_kg, share * line.mass_kg);
        let changed = state.chemistry().solve(&mixture, state.temperature_K, state.settings()).ok()?;
        let changed = if outcome.set_points.is_empty() { changed } else { changed.moved_to_pH(state.pH()).ok()? };
        Some((free(&changed.at_temperature(temperature_K).ok()?) - value).abs())
    };
    let is_measured = |line: &&LineOutcome| matches!(line.role, Role::Stated | Role::OfPair) || (line.role == Role::Adjusts && brings(line, constituent.component));
    let lines = outcome.lines.iter().filter(is_measured).filter(|line| !line.per_kg.amounts_mol.is_empty());
    let changes = lines.filter_map(|line| Some((line, with_error(line, ERROR)?.max(with_error(line, -ERROR)?))));
    changes.max_by(|one, other| one.1.total_cmp(&other.1)).map(|(line, change)| (line, change, value))
}

fn brings(line: &LineOutcome, component: Option<ComponentId>) -> bool {
    component.is_some_and(|component| line.per_kg.amounts_mol.get(&component).is_some_and(|amount| *amount > 0.0))
}

/// Metals that enzymes and assays take as free ions. Trace metals (iron, copper, zinc) are kept in chelators on purpose.
const WANTED_FREE: [&str; 3] = ["magnesium", "calcium", "manganese(II)"];
/// Chelators with which calcium is buffered on purpose. Common practice, no source.
const CALCIUM_BUFFERS: [&str; 2] = ["EGTA", "BAPTA"];
/// A metal of which less than this share is free is bound.
const BOUND: f64 = 0.10;
/// A chelator that is a complex on purpose has as much as the metal, within this.
const EQUIMOLAR: f64 = 0.05;

/// Says where a chelator in excess takes a metal that the recipe adds.
pub(super) fn metal_bound(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    let Ok(state) = &outcome.finished else { return };
    let says_free = |metal: &NameKey| wanted(recipe, outcome).iter().any(|one| one.reference.key == *metal)
        || recipe.expectations.iter().any(|one| matches!(&one.property, Property::Free(reference) if reference.key == *metal));
    for name in WANTED_FREE {
        let key = NameKey::new(name);
        let Some(metal) = case.context.constituents.named(&key) else { continue };
        let total = total_mol(state, metal);
        let free = free_mol(state, metal);
        if total <= 0.0 || free >= BOUND * total || says_free(&key) {
            continue;
        }
        let Some((chelator, bound)) = strongest_binder(case, state, metal) else { continue };
        let held = state.mixture().amounts_mol.get(&chelator).copied().unwrap_or(0.0);
        let chelator_name = state.chemistry().component(chelator).map_or("", |component| component.name.as_str());
        // A solution of the chelator itself, and a complex made on purpose, are what they should be.
        let is_reagent = held / outcome.volume_L > buffering_total(case, outcome);
        let on_purpose = (held / total - 1.0).abs() <= EQUIMOLAR || (name == "calcium" && CALCIUM_BUFFERS.contains(&chelator_name));
        if bound < 0.5 * total || is_reagent || on_purpose {
            continue;
        }
        let line = outcome
            .lines
            .iter()
            .filter(|line| line.role != Role::Alternative && brings(line, metal.component) && !brings(line, Some(chelator)))
            .max_by(|one, other| one.mass_kg.total_cmp(&other.mass_kg));
        let Some(line) = line else { continue };
        findings.push(
            Finding::new(
                Code::MetalBound,
                line.at,
                format!(
                    "Of {} {name} only {} % is free: {} {chelator_name} binds it.",
                    format::concentration(total / outcome.volume_L, 2),
                    format::significant(100.0 * free / total, 1),
                    format::concentration(held / outcome.volume_L, 2),
                ),
            )
            .help(format!("Take less {chelator_name} than {name} or leave it out; if the metal is meant to be bound, say `expect free {name} …`."))
            .about(name),
        );
    }
}

/// The chelator that binds most of a metal, and how much, mol.
fn strongest_binder(case: &Case, state: &State, metal: &Constituent) -> Option<(ComponentId, f64)> {
    let metal = metal.component?;
    let bound_by = |chelator: ComponentId| -> f64 {
        let both = |parts: &[(ComponentId, u32)]| [metal, chelator].iter().all(|one| parts.iter().any(|(part, _)| part == one));
        let complexes = state.species().filter(|(id, _, _)| state.chemistry().species(*id).is_some_and(|species| both(&species.parts)));
        complexes.map(|(_, molality, _)| molality * state.water_kg).sum()
    };
    let chelators = state.mixture().amounts_mol.keys().copied().filter(|component| *component != metal && is_chelator(case, *component));
    chelators.map(|chelator| (chelator, bound_by(chelator))).max_by(|one, other| one.1.total_cmp(&other.1))
}

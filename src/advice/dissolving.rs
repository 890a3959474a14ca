//! Substances that do not dissolve: weighed in, and more than the solution takes up.

use super::Case;
use super::saturated::fold;
use crate::chemistry::State;
use crate::evaluate::{LineOutcome, Outcome, Role, SolidForm, solid_form};
use crate::finding::{Code, Finding};
use crate::model::{Action, Body, DefinitionKey, GoalKind, Recipe, Substance};
use crate::units::{Dimension, format};

/// Published solubilities and the activity model leave this much open, log₁₀.
const OPEN: f64 = 0.1;

/// A substance at less than this share of its solubility is not looked at further.
const FAR_FROM_IT: f64 = 0.3;

/// The substance that a key stands for.
fn substance<'a>(case: &Case<'a>, key: &DefinitionKey) -> Option<&'a Substance> {
    let definition = case.context.scope.all().find_map(|(_, _, found)| found.iter().find(|one| one.key == *key))?;
    match &definition.block.body {
        Body::Substance(substance) => Some(substance),
        _ => None,
    }
}

/// The solid form of a substance of which so much (mol) in so much (L) may be too much.
fn form(case: &Case, key: &DefinitionKey, amount_mol: f64, litres: f64) -> Option<SolidForm> {
    let substance = substance(case, key).filter(|substance| substance.form.as_deref() == Some("solid"))?;
    let molar_mass = substance.molar_mass?;
    let least = substance.solubility.iter().map(|(amount, _)| match amount.dimension() {
        Dimension::MassConcentration => amount.value / 1000.0 / molar_mass,
        Dimension::MassFraction => amount.value / molar_mass,
        Dimension::AmountConcentration | Dimension::Molality => amount.value,
        _ => f64::INFINITY,
    });
    let least = least.fold(f64::INFINITY, f64::min);
    (amount_mol / litres > FAR_FROM_IT * least).then(|| solid_form(key, substance, case.context)).flatten()
}

/// A substance of the solution that is beyond its solubility in the second state and was not in the first.
pub(super) fn beyond_solubility(case: &Case, outcome: &Outcome, first: &State, second: &State) -> Option<(String, f64)> {
    outcome.solutes.iter().find_map(|solute| {
        let form = form(case, &solute.definition, solute.amount_mol?, outcome.volume_L)?;
        let index = form.saturation_index(second).filter(|index| *index > OPEN)?;
        form.saturation_index(first).is_some_and(|index| index < OPEN).then(|| (solute.name.clone(), index))
    })
}

/// A solid that the finished solution, or the beaker where it is made up, does not dissolve.
pub(super) fn does_not_dissolve(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe().filter(|_| matches!(case.block.body, Body::Solution(_))) else { return };
    for outcome in case.outcomes() {
        let Ok(finished) = &outcome.finished else { continue };
        let before = findings.len();
        for line in outcome.lines.iter().filter(|line| line.volume_L.is_none() && matches!(line.role, Role::Stated | Role::OfPair)) {
            let Some(form) = line.amount_mol.and_then(|amount| form(case, &line.definition, amount, outcome.volume_L)) else { continue };
            if let Some((place, index)) = undissolved(case, recipe, outcome, line, &form, finished) {
                findings.push(
                    Finding::new(Code::DoesNotDissolve, line.at, format!("Not all of it dissolves: {place} is {} saturated with {}{}.", fold(index), line.name, published(case, line)))
                        .help("Take less, warm it, or bring in the acid or base that dissolves it before making up.")
                        .about(crate::model::NameKey::new(&line.name).as_str()),
                );
            }
        }
        if findings.len() > before {
            return;
        }
    }
}

/// Where a line's substance is left undissolved: at a make-up below it, or in the end.
fn undissolved(case: &Case, recipe: &Recipe, outcome: &Outcome, line: &LineOutcome, form: &SolidForm, finished: &State) -> Option<(String, f64)> {
    let made_up = outcome.stages.iter().filter(|stage| stage.entry >= line.entry && is_make_up(recipe, stage.entry)).find_map(|stage| {
        let state = case.context.constituents.chemistry.solve(&stage.mixture, stage.temperature_K, case.context.settings).ok()?;
        let index = form.saturation_index(&state).filter(|index| *index > OPEN)?;
        Some(("the beaker, when it is made up,".to_owned(), index))
    });
    let in_the_end = || {
        let index = form.saturation_index(finished).filter(|index| *index > OPEN)?;
        Some(("the finished solution".to_owned(), index))
    };
    in_the_end().or(made_up)
}

fn is_make_up(recipe: &Recipe, entry: usize) -> bool {
    let exact = |kind: &GoalKind| matches!(kind, GoalKind::Volume { about: false, .. } | GoalKind::Mass { about: false, .. });
    recipe.entries.get(entry).is_some_and(|entry| matches!(&entry.action, Action::MakeUp(make_up) if make_up.goals.iter().any(|goal| exact(&goal.kind))))
}

/// The published solubility nearest to the temperature of making, in words.
fn published(case: &Case, line: &LineOutcome) -> String {
    let made_at = case.outcomes().next().map_or(298.15, |outcome| outcome.made_at_K);
    let Some(Substance { solubility, .. }) = substance(case, &line.definition) else { return String::new() };
    let distance = |kelvin: &Option<f64>| kelvin.map_or(f64::INFINITY, |kelvin| (kelvin - made_at).abs());
    let nearest = solubility.iter().min_by(|one, other| distance(&one.1).total_cmp(&distance(&other.1)));
    nearest.map_or_else(String::new, |(amount, kelvin)| {
        let at = kelvin.map_or_else(String::new, |kelvin| format!(" at {}", format::temperature(kelvin)));
        format!(", of which {} dissolve in water{at}", format::with_unit(amount.value, Some(amount.unit)))
    })
}

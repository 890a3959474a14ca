//! The heat of dissolving and diluting, and the temperature that it leaves at the mark.

use super::super::Case;
use super::{DEFERS, capital};
use crate::evaluate::{LineOutcome, Outcome, Role};
use crate::finding::{Code, Finding};
use crate::model::{Action, Body, DefinitionKey, GoalKind, Recipe, Substance};
use crate::syntax::tree::BlockKind;
use crate::units::format;

/// Further from where it is made than this, a volume is not made up to a mark. Common practice, no source.
const OFF_K: f64 = 15.0;

/// Heat capacity of water, J/(kg·K), and of what is dissolved in it, a middle value. The temperature is an estimate.
const WATER_J_PER_KG_K: f64 = 4180.0;
const SOLUTE_J_PER_KG_K: f64 = 1200.0;

/// Says how hot or cold the solution is when it is made up to the mark, where nothing cools it before.
pub fn hot_when_made_up(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(mark) = mark(recipe) else { return };
    let brought = recipe
        .entries
        .iter()
        .enumerate()
        .filter(|(index, entry)| *index < mark && matches!(entry.action, Action::BringTo(_)))
        .map(|(index, _)| index)
        .next_back();
    for outcome in case.outcomes() {
        let Some((kelvin, line)) = warming(case, outcome, brought, mark) else { continue };
        if kelvin.abs() <= OFF_K {
            continue;
        }
        let at_K = outcome.made_at_K + kelvin;
        let boils = at_K > 373.0;
        let (course, reached) = match (kelvin > 0.0, boils) {
            (true, false) => ("warms", format!("to about {}", format::temperature(at_K))),
            (true, true) => ("warms", "to boiling".to_owned()),
            (false, _) => ("cools", format!("to about {}", format::temperature(at_K))),
        };
        let at = recipe.entries.get(mark).map_or(line.at, |entry| entry.at);
        findings.push(
            Finding::new(
                Code::HotWhenMadeUp,
                at,
                format!("{} {course} the solution {reached} while it dissolves or is diluted.", capital(&line.name)),
            )
            .help(format!(
                "Write `cool to` (or `warm to`) and the room's temperature above the make-up, and add the rest slowly. {DEFERS}"
            ))
            .related(line.at, "most of the heat is from this")
            .about(crate::model::NameKey::new(&line.name).as_str()),
        );
        return;
    }
}

/// Index of the last line that makes up to a volume.
fn mark(recipe: &Recipe) -> Option<usize> {
    let to_volume = |action: &Action| match action {
        Action::MakeUp(make_up) => make_up.goals.iter().any(|goal| matches!(goal.kind, GoalKind::Volume { about: false, .. })),
        _ => false,
    };
    recipe.entries.iter().rposition(|entry| to_volume(&entry.action))
}

/// Kelvin by which the beaker differs at the mark, and the line that brings most of it.
fn warming<'o>(case: &Case, outcome: &'o Outcome, brought: Option<usize>, mark: usize) -> Option<(f64, &'o LineOutcome)> {
    let lines: Vec<&LineOutcome> =
        outcome.lines.iter().filter(|line| line.role != Role::Alternative && line.entry <= mark).collect();
    let mass_kg: f64 = lines.iter().map(|line| line.mass_kg).sum();
    let water_kg: f64 = lines.iter().map(|line| line.mass_kg * line.per_kg.water_kg.max(0.0)).sum();
    let capacity = WATER_J_PER_KG_K * water_kg + SOLUTE_J_PER_KG_K * (mass_kg - water_kg).max(0.0);
    let mut released = 0.0;
    let mut most: Option<(f64, &LineOutcome)> = None;
    for line in lines.iter().filter(|line| brought.is_none_or(|index| line.entry > index)) {
        let Some(joules) = heat(case, line, mass_kg) else { continue };
        released -= joules;
        if most.is_none_or(|(other, _)| joules.abs() > other) {
            most = Some((joules.abs(), line));
        }
    }
    let (_, line) = most?;
    (capacity > 0.0).then_some((released / capacity, line))
}

/// Enthalpy of bringing what a line adds to the strength that it has in the whole, J.
fn heat(case: &Case, line: &LineOutcome, whole_kg: f64) -> Option<f64> {
    let stock = (case.context.stocks)(&line.definition).and_then(|evaluation| evaluation.outcome().cloned());
    let (key, amount_mol, pure_kg) = match &stock {
        Some(stock) => {
            let [solute] = stock.solutes.as_slice() else { return None };
            let factor = line.mass_kg / stock.mass_kg;
            (solute.definition.clone(), solute.amount_mol? * factor, solute.mass_kg * factor)
        }
        None => (line.definition.clone(), line.amount_mol?, 0.0),
    };
    let substance = substance(case, &key)?;
    let pure_kg = if stock.is_some() { pure_kg } else { amount_mol * substance.molar_mass? };
    if line.mass_kg <= 0.0 || whole_kg <= 0.0 {
        return None;
    }
    // A solid is not dissolved yet, whatever its purity.
    let is_solid = stock.is_none() && line.volume_L.is_none();
    let before = if is_solid { 0.0 } else { enthalpy(substance, pure_kg / line.mass_kg)? };
    let after = enthalpy(substance, pure_kg / whole_kg)?;
    Some(amount_mol * (after - before))
}

/// Enthalpy of one mole at a mass fraction, against the pure substance, J/mol.
fn enthalpy(substance: &Substance, share: f64) -> Option<f64> {
    if substance.heats_of_solution.is_empty() {
        return None;
    }
    let mut rows: Vec<(f64, f64)> = substance.heats_of_solution.iter().map(|(joules, at)| (at.unwrap_or(0.0), *joules)).collect();
    rows.push((1.0, 0.0));
    rows.sort_by(|one, other| one.0.total_cmp(&other.0));
    // A salt dissolves or does not; only what comes in strengths has rows between.
    if rows.len() == 2 {
        return rows.first().map(|(_, joules)| if share > 0.95 { 0.0 } else { *joules });
    }
    let first = rows.first()?;
    if share <= first.0 {
        return Some(first.1);
    }
    rows.windows(2).find_map(|pair| match pair {
        [(low, at_low), (high, at_high)] if share <= *high && high > low => {
            Some(at_low + (at_high - at_low) * (share - low) / (high - low))
        }
        _ => None,
    })
}

fn substance<'a>(case: &Case<'a>, key: &DefinitionKey) -> Option<&'a Substance> {
    let scope = case.context.scope;
    [&scope.own, &scope.built_in]
        .into_iter()
        .flat_map(|names| names.named(key.namespace, &key.name))
        .find(|definition| definition.key == *key && definition.block.kind() == Some(BlockKind::Substance))
        .and_then(|definition| match &definition.block.body {
            Body::Substance(substance) => Some(substance),
            _ => None,
        })
}

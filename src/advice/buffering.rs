//! Whether something holds the pH where a recipe sets or expects it.

use super::Case;
use super::buffer_choice::{BufferChoice, Wanted, buffer_choices};
use crate::chemistry::{ComponentId, State};
use crate::evaluate::Outcome;
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Action, GoalKind, NameKey, Property, Recipe};
use crate::units::format;

/// Below this share of the most that the buffering substances could give at their best pH, the pH is weakly held.
/// A third is common practice, no source: it is reached some 1.1 units away from the pKa.
const SHARE_OF_BEST: f64 = 1.0 / 3.0;

/// A solution that is to hold a pH should give at least this, mol/L per pH. Common practice, no source.
const LEAST_CAPACITY: f64 = 0.002;

/// Buffering substances below this total make no buffer, mol/L.
const LEAST_TOTAL: f64 = 0.001;

/// The greatest capacity that one mole of a monoprotic buffer can give: ln 10 / 4, at pH = pKa (Van Slyke 1922).
const BEST_PER_MOLE: f64 = std::f64::consts::LN_10 / 4.0;

/// Says that the capacity is small where a pH is set or expected.
pub(super) fn weak_buffering(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(at) = ph_is_wanted(recipe) else { return };
    for outcome in case.outcomes() {
        // A gas that keeps its pressure holds the pH by itself.
        let Some(state) = outcome.finished.as_ref().ok().filter(|_| outcome.above.is_none()) else { continue };
        let total = buffering_total(case, outcome);
        if total < LEAST_TOTAL {
            continue;
        }
        let capacity = state.buffer_capacity_mol_per_L();
        let best = BEST_PER_MOLE * total;
        if capacity >= SHARE_OF_BEST * best && capacity >= LEAST_CAPACITY {
            continue;
        }
        let per = |value: f64| format!("{} per pH", format::concentration(value, 2));
        findings.push(
            Finding::new(
                Code::WeakBuffering,
                at,
                format!(
                    "At pH {} the buffer capacity is {}; this much buffer gives up to {} near its pKa.",
                    format::ph(state.pH()),
                    per(capacity),
                    per(best)
                ),
            )
            .help(better_choice(case, recipe, outcome, state)),
        );
        return;
    }
}

/// How many better buffers are named.
const NAMED: usize = 3;

/// What would hold the pH better: other buffers by name, where some suit better than what is in the solution.
fn better_choice(case: &Case, recipe: &Recipe, outcome: &Outcome, state: &State) -> String {
    let present = outcome.mixture.amounts_mol.keys().copied().collect();
    let ionic_strength = Some(state.ionic_strength_mol_per_kg);
    let choices = Wanted::of(recipe, outcome.made_at_K, ionic_strength, present)
        .map(|wanted| buffer_choices(case.context.constituents, &wanted))
        .unwrap_or_default();
    let is_used = |choice: &BufferChoice| outcome.mixture.amounts_mol.contains_key(&choice.component);
    // Where what is used is among the nearest, only more of it helps.
    let better: Vec<String> = (choices.iter())
        .take_while(|choice| !is_used(choice))
        .filter(|choice| choice.conflicts.is_empty())
        .take(NAMED)
        .map(|choice| format!("{} (pKa {} here)", choice.name, format::fixed(choice.pKa, 2)))
        .collect();
    match better.as_slice() {
        [] => "Take more of the buffer, or another pH.".to_owned(),
        better => format!("Nearer to this pH are {}; or take more of the buffer, or another pH.", better.join(", ")),
    }
}

/// Where a recipe says which pH it wants; none where it wants none.
pub(super) fn ph_is_wanted(recipe: &Recipe) -> Option<Anchor> {
    let is_ph = |kind: &GoalKind| matches!(kind, GoalKind::Property { property: Property::Ph, .. });
    let set = recipe.entries.iter().rev().find_map(|entry| match &entry.action {
        Action::MakeUp(make_up) => make_up.goals.iter().find(|goal| is_ph(&goal.kind)).map(|goal| goal.at),
        Action::Pair(pair) => pair.goals.iter().find(|goal| is_ph(&goal.kind)).map(|goal| goal.at),
        _ => None,
    });
    let mut expected = recipe.expectations.iter().filter(|one| one.property == Property::Ph && one.diluted.is_none());
    set.or_else(|| expected.next().map(|expectation| expectation.at))
}

/// Total of what can take up or give off protons between pH 2 and 12, mol/L.
pub(super) fn buffering_total(case: &Case, outcome: &Outcome) -> f64 {
    let chemistry = &case.context.constituents.chemistry;
    outcome
        .mixture
        .amounts_mol
        .iter()
        .filter(|(component, _)| !is_chelator(case, **component))
        .filter(|(component, _)| {
            let mut steps: Vec<(i32, f64)> = chemistry
                .all_species()
                .filter(|(_, species)| species.parts.as_slice() == [(**component, 1)] && species.hydrogen >= 0)
                .map(|(_, species)| {
                    let beta: f64 = species
                        .log_beta
                        .iter()
                        .map(|(factor, id)| factor * chemistry.constant(*id).map_or(0.0, |constant| constant.log10_k(298.15)))
                        .sum();
                    (species.hydrogen, beta)
                })
                .collect();
            steps.sort_by_key(|(hydrogen, _)| *hydrogen);
            steps.windows(2).any(|pair| matches!(pair, [(_, low), (_, high)] if (2.0..=12.0).contains(&(high - low))))
        })
        .map(|(_, amount)| amount / outcome.volume_L)
        .sum()
}

/// A complex with calcium at least this strong makes a chelator, whose stocks are set to a pH to dissolve, not to buffer.
const CHELATOR_LOG_K: f64 = 7.2;

/// Whether a component binds calcium as chelators do.
pub(super) fn is_chelator(case: &Case, component: ComponentId) -> bool {
    let constituents = case.context.constituents;
    let Some(calcium) = constituents.named(&NameKey::new("calcium")).and_then(|calcium| calcium.component) else { return false };
    let chemistry = &constituents.chemistry;
    chemistry.all_species().any(|(_, species)| {
        let has = |wanted: ComponentId| species.parts.iter().any(|(part, _)| *part == wanted);
        let log_k = || {
            let constants = species.log_beta.iter();
            constants.map(|(factor, id)| factor * chemistry.constant(*id).map_or(0.0, |constant| constant.log10_k(298.15))).sum::<f64>()
        };
        species.hydrogen == 0 && has(component) && has(calcium) && component != calcium && log_k() >= CHELATOR_LOG_K
    })
}

//! Solids: what settles out of the finished solution, on the way to it, in the store and on freezing.

use super::Case;
use super::saturated::{Solid, fold, is_soluble, solids_beyond};
use crate::chemistry::{Forming, Phase, PhaseId, PhaseKind, State, phase_mass_kg, water};
use crate::evaluate::{LineOutcome, Outcome, solids_of};
use crate::finding::{Anchor, Code, Finding, Level};
use crate::model::{Action, Body, Recipe};
use crate::units::format;

/// Ten times as much as dissolves settles soon enough to be seen, log₁₀. Common practice, no source.
const TENFOLD: f64 = 1.0;

/// Twenty times as much settles even in the minutes that a beaker stands on the way, log₁₀. Common practice, no source: magnesium in
/// Tris base is twelvefold and stays clear, in ammonia it is thirtyfold and does not.
const ON_THE_WAY: f64 = 1.3;

/// What must be there for a salt to matter on freezing, mol/L. Common practice, no source.
const LEAST_FROZEN: f64 = 0.005;

/// With less water than this share of the mass, what freezes is a glass. Common practice, no source.
const LEAST_WATER: f64 = 0.75;

/// Beyond this ionic strength, mol/kg, a beaker on the way says nothing.
const STRONGEST: f64 = 6.0;

/// What settles out of the finished solution, where it is made and where it is used.
pub(super) fn may_precipitate(case: &Case, findings: &mut Vec<Finding>) {
    if !matches!(case.block.body, Body::Solution(_)) {
        return;
    }
    for outcome in case.outcomes() {
        let before = findings.len();
        let mut said: Vec<PhaseId> = Vec::new();
        let states = std::iter::once(&outcome.finished).chain(outcome.uses.iter().map(|(_, state)| state));
        for state in states.filter_map(|state| state.as_ref().ok()) {
            for solid in solids_beyond(state, 0.0) {
                if said.contains(&solid.id) {
                    continue;
                }
                said.push(solid.id);
                findings.push(finished_finding(case, outcome, state, &solid));
            }
        }
        if findings.len() > before {
            return;
        }
    }
}

fn finished_finding(case: &Case, outcome: &Outcome, state: &State, solid: &Solid) -> Finding {
    let line = last_bringer(outcome, solid.phase);
    let at = line.map_or(case.block.header_anchor(), |line| line.at);
    let place = format::temperature(state.temperature_K);
    let settles = settles(state, solid, outcome);
    let name = &solid.phase.name;
    let times = fold(solid.index);
    if hydrolyses(state, solid.phase) {
        return Finding::new(Code::MetalHydrolyses, at, format!("At {place} and pH {} the metal hydrolyses: the solution is {times} saturated with {name}{settles}.", format::ph(state.pH())))
            .help("Keep it in acid strong enough to hold the metal in solution, or bind it with a chelator.");
    }
    // What is weighed in and does not dissolve does not precipitate either.
    let itself = outcome.lines.iter().find(|line| line.volume_L.is_none() && line.mass_kg > 0.0 && solids_of(&line.per_kg, case.context.constituents).contains(&solid.id));
    if let Some(line) = itself {
        return Finding::new(Code::DoesNotDissolve, line.at, format!("Not all of it dissolves: at {place} the solution is {times} saturated with {name}{settles}."))
            .help("Take less, or say `q.s. … to saturation` and `filter` where a saturated solution is meant.")
            .about(crate::model::NameKey::new(&line.name).as_str());
    }
    let finding = Finding::new(Code::MayPrecipitate, at, format!("At {place} the solution is {times} saturated with {name}{settles}."));
    if solid.index < TENFOLD && !is_soluble(state, solid.phase) {
        return finding.at_level(Level::Hint).help("It may stay clear for long; do not warm, concentrate or seed it, and look before use.");
    }
    let finding = finding.help("Use less of what forms it, another pH, a counter-ion that stays in solution or a chelator; where it is meant, add `filter`.");
    if solid.index >= TENFOLD && solid.phase.kind == PhaseKind::Solid(Forming::AtOnce) { finding.at_level(Level::Error) } else { finding }
}

/// How much would settle, in words; nothing where that is not worked out.
fn settles(state: &State, solid: &Solid, outcome: &Outcome) -> String {
    let Ok(settled) = state.settled(Phase::forms) else { return String::new() };
    let same_ions = |id: PhaseId| state.chemistry().phase(id).is_some_and(|phase| phase.parts.iter().all(|part| solid.phase.parts.iter().any(|own| own.0 == part.0)));
    let mass: f64 = settled.solids.iter().filter(|(id, _)| same_ions(*id)).map(|(id, amount)| phase_mass_kg(state.chemistry(), *id, *amount)).sum();
    // In proportion to what the recipe makes.
    if mass > 0.0 && outcome.mass_kg > 0.0 { format!("; {} would settle in the end", format::mass(mass, 2)) } else { String::new() }
}

/// Whether a solid is what a metal makes of water by itself.
fn hydrolyses(state: &State, phase: &Phase) -> bool {
    let [(metal, _)] = phase.parts.as_slice() else { return false };
    let charge = state.chemistry().component(*metal).map_or(0, |component| component.charge);
    phase.hydrogen < 0 && charge > 1 && (charge > 2 || state.pH() < 7.0)
}

/// The last line that brings one of a solid's ions.
fn last_bringer<'a>(outcome: &'a Outcome, phase: &Phase) -> Option<&'a LineOutcome> {
    let brings = |line: &&LineOutcome| line.mass_kg > 0.0 && phase.parts.iter().any(|(part, _)| line.per_kg.amounts_mol.get(part).is_some_and(|amount| *amount > 0.0));
    outcome.lines.iter().rev().find(brings)
}

/// The finished solution is clear, and a beaker on the way to it is not.
pub(super) fn precipitates_in_transit(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe().filter(|_| matches!(case.block.body, Body::Solution(_))) else { return };
    if recipe.entries.iter().any(|entry| matches!(entry.action, Action::Filter)) {
        return;
    }
    let context = case.context;
    let chemistry = &context.constituents.chemistry;
    for outcome in case.outcomes() {
        let Ok(finished) = &outcome.finished else { continue };
        let in_the_end: Vec<PhaseId> = solids_beyond(finished, 0.0).into_iter().map(|solid| solid.id).collect();
        let Some((_, on_the_way)) = outcome.stages.split_last() else { continue };
        for stage in on_the_way {
            let has = |phase: &Phase| phase.forms() && phase.parts.iter().all(|(part, _)| stage.mixture.amounts_mol.get(part).is_some_and(|amount| *amount > 0.0));
            if stage.mixture.water_kg <= 0.0 || !chemistry.phases().any(|(_, phase)| has(phase)) {
                continue;
            }
            let Ok(state) = chemistry.solve(&stage.mixture, stage.temperature_K, context.settings) else { continue };
            if state.ionic_strength_mol_per_kg > STRONGEST {
                continue;
            }
            let Some(solid) = solids_beyond(&state, ON_THE_WAY).into_iter().find(|solid| !in_the_end.contains(&solid.id)) else { continue };
            findings.push(
                Finding::new(
                    Code::PrecipitatesInTransit,
                    stage.at,
                    format!("After this line the beaker is {} saturated with {}, at pH {}; the finished solution is not.", fold(solid.index), solid.phase.name, format::ph(state.pH())),
                )
                .help("Change the order: what keeps it in solution goes in first, or both parts are diluted before they meet."),
            );
            return;
        }
    }
}

/// Where a recipe is kept, K, with its line; frozen goods aside.
fn stores(recipe: &Recipe) -> impl Iterator<Item = (f64, Anchor)> + '_ {
    let ends = recipe.storage.iter().flat_map(|storage| [storage.low.unwrap_or(storage.high), storage.high].map(|kelvin| (kelvin, storage.at)));
    ends.filter(|(kelvin, _)| *kelvin >= water::ZERO_CELSIUS_K - 0.01)
}

/// What is clear where it is made and not where it is kept.
pub(super) fn crystallises_in_store(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe().filter(|_| matches!(case.block.body, Body::Solution(_))) else { return };
    for outcome in case.outcomes() {
        let Ok(finished) = &outcome.finished else { continue };
        for (kelvin, at) in stores(recipe) {
            if (kelvin - finished.temperature_K).abs() < 0.5 {
                continue;
            }
            let Ok(stored) = finished.at_temperature(kelvin) else { continue };
            let new = solids_beyond(&stored, TENFOLD).into_iter().find(|solid| finished.saturation_index(solid.id).is_some_and(|index| index < 0.0));
            let by_phase = new.map(|solid| (solid.phase.name.clone(), solid.index));
            let Some((name, index)) = by_phase.or_else(|| super::dissolving::beyond_solubility(case, outcome, finished, &stored)) else { continue };
            findings.push(
                Finding::new(
                    Code::CrystallisesInStore,
                    at,
                    format!("At {} the solution is {} saturated with {name}, which is in solution at {}.", format::temperature(kelvin), fold(index), format::temperature(finished.temperature_K)),
                )
                .help("Keep it warmer, make it weaker, or say that it is warmed and mixed until clear before use."),
            );
            return;
        }
    }
}

/// What freezes out first takes the pH with it.
pub(super) fn freeze_shift(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe().filter(|_| matches!(case.block.body, Body::Solution(_))) else { return };
    let frozen = recipe.storage.iter().find(|storage| storage.low.unwrap_or(storage.high) < water::ZERO_CELSIUS_K - 0.5);
    let Some(frozen) = frozen else { return };
    for outcome in case.outcomes() {
        let Ok(state) = &outcome.finished else { continue };
        if state.water_kg < LEAST_WATER * state.mass_kg || super::buffering::buffering_total(case, outcome) < LEAST_FROZEN {
            continue;
        }
        let enough = |phase: &Phase| phase.parts.iter().all(|(part, _)| outcome.mixture.amounts_mol.get(part).is_some_and(|amount| amount / outcome.volume_L >= LEAST_FROZEN));
        let out = case.context.constituents.chemistry.phases().find(|(_, phase)| phase.kind == PhaseKind::Solid(Forming::OnFreezing) && enough(phase));
        let Some((_, phase)) = out else { continue };
        findings.push(
            Finding::new(
                Code::FreezeShift,
                frozen.at,
                format!("On freezing {} crystallises first, and the pH of {} moves by units in the liquid that is left.", phase.name, format::ph(state.pH())),
            )
            .help("Freeze in another buffer (histidine, HEPES, potassium phosphate), freeze fast in small portions, or keep it at 2 °C to 8 °C."),
        );
        return;
    }
}

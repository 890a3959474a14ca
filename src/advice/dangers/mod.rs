//! What must not come together, what does not keep: the dangers of the libraries, held against what the vessel really holds.

mod heat;
mod presence;
mod unmodelled;
mod water;

use super::Case;
use crate::chemistry::State;
use crate::evaluate::{LineOutcome, Outcome, Question, Role, property_value};
use crate::finding::{Code, Finding};
use crate::model::{Action, Body, Danger, GoalKind, NameKey, Namespace, Recipe};
use crate::units::format;
use presence::{Beaker, Member, Present};

pub(super) use heat::hot_when_made_up;
pub(super) use unmodelled::unmodelled_matters;

/// Who has the last word on whatever can hurt.
const DEFERS: &str = "The safety data sheet, local rules and qualified staff decide.";

/// Words in the name of a container that keep light out.
const DARK: &[&str] = &["amber", "brown", "dark", "opaque", "foil", "black", "steel", "alumin", "wrapped"];

/// Dilute solutions are frozen below this, K. Common practice, no source.
const FROZEN_K: f64 = 269.0;

/// Every ten kelvin double the rate of most reactions. Common practice, no source.
const KELVIN_THAT_DOUBLE: f64 = 10.0;

/// Raises the dangers that a solution holds, each once.
pub(super) fn dangers(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    if !matches!(case.block.body, Body::Solution(_)) {
        return;
    }
    let scope = case.context.scope;
    let mut hidden = Vec::new();
    for (names, is_own) in [(&scope.own, true), (&scope.built_in, false)] {
        let mut found: Vec<(&str, &Danger)> = names
            .all()
            .filter(|(namespace, ..)| *namespace == Namespace::Danger)
            .flat_map(|(_, name, definitions)| definitions.iter().map(move |definition| (name.as_str(), definition)))
            .filter_map(|(name, definition)| match &definition.block.body {
                Body::Danger(danger) if definition.key.name.as_str() == name => Some((name, danger)),
                _ => None,
            })
            .collect();
        found.sort_by_key(|(name, _)| *name);
        for (name, danger) in found {
            if hidden.contains(&name) {
                continue;
            }
            if is_own {
                hidden.push(name);
            }
            if let Some(finding) = case.outcomes().find_map(|outcome| judge(case, recipe, outcome, danger)) {
                findings.push(finding);
            }
        }
    }
}

/// What a substance of the author's own is to be kept away from, by its block.
pub(super) fn keep_apart(case: &Case, findings: &mut Vec<Finding>) {
    if !matches!(case.block.body, Body::Solution(_)) {
        return;
    }
    let Some(outcome) = case.outcomes().next() else { return };
    for solute in &outcome.solutes {
        let own = case.context.scope.own.named(Namespace::Ingredient, &solute.definition.name);
        let Some(Body::Substance(substance)) = own.iter().find(|one| one.key == solute.definition).map(|one| &one.block.body) else { continue };
        let others = presence::members(case, &substance.keep_away_from);
        let Some(other) = others.iter().find(|other| other.is_in(outcome)) else { continue };
        let Some(line) = line_of(case, outcome, other) else { continue };
        findings.push(
            Finding::new(
                Code::DangerousTogether,
                line.at,
                format!("{} stands in one vessel with {}: its block says to keep away from {}.", capital(&solute.name), line.name, other.name),
            )
            .help(format!("Keep them apart, or correct the block. {DEFERS}"))
            .about(NameKey::new(&line.name).as_str()),
        );
    }
}

fn judge(case: &Case, recipe: &Recipe, outcome: &Outcome, danger: &Danger) -> Option<Finding> {
    let code = danger.raises?;
    let sides: Vec<Vec<Member>> = danger
        .sides
        .iter()
        .map(|side| presence::members(case, &side.names).into_iter().filter(|member| member.is_in(outcome)).collect())
        .collect();
    if sides.is_empty() || sides.iter().any(Vec::is_empty) {
        return None;
    }
    if code == Code::AcidBeforeWater {
        return water::acid_before_water(case, outcome, danger, &sides);
    }
    if code == Code::VolumeContracts && is_made_up_to_a_mark(recipe) {
        return None;
    }
    let met = |beaker: &Beaker| meets(case, danger, &sides, beaker);
    // A hazard that acts at once counts where a pH is set; what acts slowly, in what is kept.
    let at_once = !matches!(
        code,
        Code::DoesNotKeep | Code::LightSensitive | Code::AttacksGlass | Code::VolumeContracts | Code::SaltsOutInOrganic | Code::PhSetInOrganic
    );
    let finished = Beaker {
        mixture: &outcome.mixture,
        volume_L: outcome.volume_L,
        state: outcome.finished.as_ref().ok(),
        solutes: &outcome.solutes,
    };
    let set = |state: &State| met(&Beaker { mixture: state.mixture(), volume_L: state.volume_L, state: Some(state), solutes: &[] });
    let found = if code == Code::PhSetInOrganic {
        let point = outcome.set_points.iter().find(|point| set(&point.state).is_some())?;
        let present = set(&point.state)?;
        let mut finding = finding(case, outcome, danger, code, &present, None)?;
        finding.at = point.at;
        return Some(finding);
    } else {
        met(&finished)
            .map(|present| (present, finished.state.map(State::pH)))
            .or_else(|| at_once.then(|| outcome.set_points.iter().find_map(|point| set(&point.state).map(|present| (present, Some(point.state.pH()))))).flatten())
            .or_else(|| if danger.even_in_passing { in_passing(case, outcome, danger, &sides) } else { None })
    };
    let (present, ph) = found?;
    match code {
        Code::DoesNotKeep => does_not_keep(case, recipe, outcome, danger, &present, ph),
        Code::LightSensitive => {
            let storage = recipe.storage.iter().find(|storage| {
                let material = storage.material.as_deref().unwrap_or_default().to_lowercase();
                !storage.dark && !material.is_empty() && !DARK.iter().any(|word| material.contains(word))
            })?;
            Some(finding(case, outcome, danger, code, &present, None)?.related(storage.at, "kept like this"))
        }
        Code::AttacksGlass => {
            let storage = recipe.storage.iter().find(|storage| {
                storage.material.as_deref().is_some_and(|material| material.to_lowercase().contains("glass"))
            })?;
            Some(finding(case, outcome, danger, code, &present, ph)?.related(storage.at, "kept like this"))
        }
        _ => finding(case, outcome, danger, code, &present, ph),
    }
}

/// What of each side stands in a beaker; none where a side is missing or a condition fails.
fn meets<'m>(case: &Case, danger: &Danger, sides: &'m [Vec<Member>], beaker: &Beaker) -> Option<Vec<Present<'m>>> {
    let mut present = Vec::new();
    for (side, members) in danger.sides.iter().zip(sides) {
        present.push(presence::most(case, members, side.least.as_ref(), beaker)?);
    }
    let holds = danger.conditions.iter().all(|condition| {
        let Some(state) = beaker.state else { return false };
        let question = Question { property: &condition.property, unit: condition.unit, as_formula: None, says_temperature: false };
        property_value(state, &question, case.context).is_ok_and(|value| {
            condition.low.is_none_or(|low| value >= low) && condition.high.is_none_or(|high| value <= high)
        })
    });
    holds.then_some(present)
}

/// The first line after which a danger holds, though a later one ends it.
fn in_passing<'m>(case: &Case, outcome: &Outcome, danger: &Danger, sides: &'m [Vec<Member>]) -> Option<(Vec<Present<'m>>, Option<f64>)> {
    let mut mixture = crate::chemistry::Mixture::default();
    for line in outcome.lines.iter().filter(|line| line.role != Role::Alternative) {
        mixture.add(&line.per_kg, line.mass_kg);
        // A volume is not needed closely: a kilogram takes up a litre.
        let volume_L = mixture.mass_kg(&case.context.constituents.chemistry);
        let there = sides.iter().all(|members| members.iter().any(|member| member.is_in_mixture(&mixture)));
        if !there || mixture.water_kg <= 0.0 {
            continue;
        }
        let Ok(state) = case.context.constituents.chemistry.solve(&mixture, outcome.made_at_K, case.context.settings) else { continue };
        let beaker = Beaker { mixture: &mixture, volume_L, state: Some(&state), solutes: &[] };
        if let Some(present) = meets(case, danger, sides, &beaker) {
            return Some((present, Some(state.pH())));
        }
    }
    None
}

/// The line that brought a thing.
fn line_of<'o>(case: &Case, outcome: &'o Outcome, member: &Member) -> Option<&'o LineOutcome> {
    outcome.lines.iter().filter(|line| line.role != Role::Alternative).find(|line| member.is_brought_by(case, line))
}

fn finding(case: &Case, outcome: &Outcome, danger: &Danger, code: Code, present: &[Present], ph: Option<f64>) -> Option<Finding> {
    let mut lines: Vec<&LineOutcome> = Vec::new();
    for one in present {
        let line = line_of(case, outcome, one.member)?;
        if !lines.iter().any(|other| std::ptr::eq(*other, line)) {
            lines.push(line);
        }
    }
    // What stands together in one stock is reported there.
    if lines.len() == 1 && present.len() > 1 && danger.conditions.is_empty() {
        return None;
    }
    lines.sort_by_key(|line| line.entry);
    let last = *lines.last()?;
    let ph_matters = !danger.conditions.is_empty() || present.iter().any(|one| one.share.is_some());
    let at_ph = ph.filter(|_| ph_matters).map_or_else(String::new, |ph| format!(" at pH {}", format::ph(ph)));
    let because = &danger.because;
    let message = match present {
        [one] => match one.share {
            Some(share) => format!(
                "{} of {}{at_ph} is {}, {}: {because}.",
                format::percent(share, 2),
                last.name,
                one.member.name,
                format::concentration(one.amount_mol_per_L, 2)
            ),
            None => format!("{}{at_ph}: {because}.", capital(&last.name)),
        },
        _ => {
            let names: Vec<&str> = lines.iter().map(|line| line.name.as_str()).collect();
            format!("{} stand in one vessel{at_ph}: {because}.", capital(&joined(&names)))
        }
    };
    let advice = danger.advice.as_deref().unwrap_or_default();
    let help = if defers(code) { format!("{advice} {DEFERS}") } else { advice.to_owned() };
    let mut finding = Finding::new(code, last.at, message).help(help.trim().to_owned()).about(NameKey::new(&last.name).as_str());
    for line in lines.iter().rev().skip(1) {
        finding = finding.related(line.at, "meets this");
    }
    Some(finding)
}

/// `a, b and c`.
fn joined(names: &[&str]) -> String {
    match names {
        [] => String::new(),
        [one] => (*one).to_owned(),
        [first @ .., last] => format!("{} and {last}", first.join(", ")),
    }
}

/// A sentence begins with a capital, unless its first word has capitals or digits of its own.
fn capital(text: &str) -> String {
    let mut letters = text.chars();
    match letters.next() {
        Some(first) if first.is_ascii_lowercase() && letters.clone().next().is_some_and(|second| second.is_ascii_lowercase()) => {
            first.to_uppercase().chain(letters).collect()
        }
        _ => text.to_owned(),
    }
}

fn defers(code: Code) -> bool {
    matches!(
        code,
        Code::DangerousTogether | Code::ToxicGasFromAcid | Code::AcidBeforeWater | Code::DecomposesInAcid | Code::ReactsTogether | Code::HotWhenMadeUp
    )
}

/// Whether a recipe is made up to a volume.
fn is_made_up_to_a_mark(recipe: &Recipe) -> bool {
    recipe.entries.iter().any(|entry| match &entry.action {
        Action::MakeUp(make_up) => make_up.goals.iter().any(|goal| matches!(goal.kind, GoalKind::Volume { .. })),
        _ => false,
    })
}

/// Something kept longer than it lasts.
fn does_not_keep(case: &Case, recipe: &Recipe, outcome: &Outcome, danger: &Danger, present: &[Present], ph: Option<f64>) -> Option<Finding> {
    let line = line_of(case, outcome, present.first()?.member)?;
    let dividers_above = |line: usize| recipe.entries.iter().filter(|entry| matches!(entry.action, Action::Divider(_)) && entry.at.line < line).count();
    let stored = recipe.storage.iter().filter_map(|storage| Some((storage.duration?, storage.high, storage.at)));
    let place_K = recipe.storage.first().map_or(outcome.made_at_K, |storage| storage.high);
    let within = recipe.use_within.map(|within| (within.value, place_K, within.at));
    for (kept, at_K, at) in stored.chain(within) {
        // What is added after a divider is not kept with what stands above it; and what is frozen keeps: reactions in ice do
        // not follow the rule for liquids.
        if dividers_above(line.at.line) > dividers_above(at.line) || at_K <= FROZEN_K {
            continue;
        }
        // The row that was measured nearest to the storage temperature, carried there.
        let nearest = danger.keeps.iter().min_by(|one, other| {
            let off = |row: &(f64, Option<f64>)| row.1.map_or(0.0, |kelvin| (kelvin - at_K).abs());
            off(one).total_cmp(&off(other))
        })?;
        let warmer = nearest.1.map_or(0.0, |kelvin| at_K - kelvin);
        let life = nearest.0 * libm::exp2(-warmer / KELVIN_THAT_DOUBLE);
        if kept <= life * 1.05 {
            continue;
        }
        let at_ph = ph.filter(|_| !danger.conditions.is_empty()).map_or_else(String::new, |ph| format!(" and pH {}", format::ph(ph)));
        let message = format!(
            "{} lasts about {} at {}{at_ph}, and this is kept {}: {}.",
            capital(&line.name),
            super::stocks::duration(life),
            format::temperature(at_K),
            super::stocks::duration(kept),
            danger.because
        );
        return Some(
            Finding::new(Code::DoesNotKeep, at, message)
                .help(danger.advice.clone().unwrap_or_default())
                .related(line.at, "added here")
                .about(NameKey::new(&line.name).as_str()),
        );
    }
    None
}

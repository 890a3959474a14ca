//! What a stock, a concentrate or a bottle brings with it: keeping, dilution, label.

use super::{Case, User};
use crate::evaluate::{LineOutcome, Outcome, Role, table_density};
use crate::finding::{Anchor, Code, Finding, Place};
use crate::model::*;
use crate::syntax::tree::BlockKind;
use crate::units::{Dimension, format};

/// A shift on dilution that a careful reviewer asks about. Common practice, no source.
const DILUTION_SHIFT: f64 = 0.15;

/// A shift when salt is added that a careful reviewer asks about. Common practice, no source.
const SALT_SHIFT: f64 = 0.10;

/// Labels and density tables agree within this share; more is another strength.
const DENSITY: f64 = 0.006;

/// The definitions of the solutions and bottles that a line takes.
fn taken<'a>(case: &Case<'a>, reference: &Reference) -> Option<&'a Definition> {
    match case.context.scope_of(reference).find(Namespace::Ingredient, &reference.key, &reference.text) {
        Lookup::One(definition) => Some(definition),
        _ => None,
    }
}

/// Whether a line brings nothing but water.
fn is_water(line: &LineOutcome) -> bool {
    line.per_kg.amounts_mol.is_empty() && line.per_kg.inert_mass_kg == 0.0
}

/// How long a part of a recipe keeps, s; none where it does not say.
fn part_keeps(recipe: &Recipe, part: usize) -> Option<(f64, Anchor)> {
    let of_part = recipe.storage.iter().filter(|storage| storage.part == part);
    let stored = of_part.filter_map(|storage| storage.duration.map(|seconds| (seconds, storage.at)));
    let within = recipe.use_within.filter(|_| part == last_part(recipe)).map(|within| (within.value, within.at));
    stored.chain(within).min_by(|one, other| one.0.total_cmp(&other.0))
}

fn last_part(recipe: &Recipe) -> usize {
    recipe.entries.iter().filter(|entry| matches!(entry.action, Action::Divider(_))).count()
}

/// How long what goes in at a part has to keep, s: the longest keeping of that part and of those that it goes on into.
fn must_keep(recipe: &Recipe, part: usize) -> Option<(f64, Anchor)> {
    (part..=last_part(recipe)).filter_map(|part| part_keeps(recipe, part)).max_by(|one, other| one.0.total_cmp(&other.0))
}

/// How long a solution keeps in the state in which others take it, s.
fn keeps(recipe: &Recipe) -> Option<(f64, Anchor)> {
    (0..=last_part(recipe)).rev().find_map(|part| part_keeps(recipe, part))
}

pub(super) fn duration(seconds: f64) -> String {
    let days = seconds / 86_400.0;
    if days < 2.0 {
        format!("{} h", format::plain((seconds / 360.0).round() / 10.0))
    } else if days < 60.0 {
        format!("{} days", format::plain(days.round()))
    } else {
        format!("{} months", format::plain((days / 30.4).round()))
    }
}

/// A product kept longer than something in it.
pub(super) fn outlives_its_parts(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let mut at_part = 0;
    for entry in &recipe.entries {
        at_part += usize::from(matches!(entry.action, Action::Divider(_)));
        let Some((own, at)) = must_keep(recipe, at_part) else { continue };
        for reference in entry.action.ingredients() {
            let Some(definition) = taken(case, reference) else { continue };
            let Some((part, _)) = definition.block.recipe().and_then(keeps) else { continue };
            if own <= part * 1.001 {
                continue;
            }
            findings.push(
                Finding::new(
                    Code::OutlivesItsParts,
                    at,
                    format!("This keeps {}, but {} in it only {}.", duration(own), reference.text, duration(part)),
                )
                .help("Shorten the keeping, or say why the part holds longer in here.")
                .related(reference.at, "taken here")
                .about(reference.key.as_str()),
            );
        }
    }
}

/// A concentrate that is diluted by another factor than it says.
pub(super) fn fold_mismatch(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    let Some((reference, definition)) = only_stock(case, recipe, outcome) else { return };
    let Some(stated) = definition.block.recipe().and_then(|recipe| recipe.concentrate).map(|fold| fold.value).or_else(|| fold_in_name(&reference.text))
    else {
        return;
    };
    let Some(line) = outcome.lines.iter().find(|line| line.role == Role::Stated && line.definition == definition.key) else { return };
    let Some(litres) = line.volume_L.filter(|litres| *litres > 0.0) else { return };
    let fold = outcome.volume_L / litres;
    // Half strength and the like are said in the name of what is made; only near misses of the factor are reported.
    if (fold / stated - 1.0).abs() <= 0.02 {
        return;
    }
    findings.push(
        Finding::new(
            Code::FoldMismatch,
            line.at,
            format!("{} is diluted {}-fold here, but it is {}x.", reference.text, fold_words(fold), format::plain(stated)),
        )
        .help(format!("For the strength of use take {} of it.", format::volume(outcome.volume_L / stated, 3)))
        .about(reference.key.as_str()),
    );
}

/// A factor as people write it: three figures, and no zeros behind the point.
fn fold_words(fold: f64) -> String {
    let decimals = if fold < 9.995 { 2 } else if fold < 99.95 { 1 } else { 0 };
    let shown = format::fixed(fold, decimals);
    if shown.contains('.') { shown.trim_end_matches('0').trim_end_matches('.').to_owned() } else { shown }
}

/// `50x` at the end of a name: a factor.
fn fold_in_name(name: &str) -> Option<f64> {
    let word = name.split_whitespace().rev().find(|word| word.ends_with(['x', '×']))?;
    word.trim_end_matches(['x', '×']).parse().ok().filter(|fold: &f64| *fold > 1.0)
}

/// The one stock of a solution that is otherwise water.
fn only_stock<'a, 'b>(case: &Case<'a>, recipe: &'b Recipe, outcome: &Outcome) -> Option<(&'b Reference, &'a Definition)> {
    let mut found = None;
    for line in &outcome.lines {
        let entry = recipe.entries.get(line.entry)?;
        let reference = match &entry.action {
            Action::Add(addition) => &addition.what,
            Action::MakeUp(make_up) => &make_up.what,
            _ => return None,
        };
        if is_water(line) {
            continue;
        }
        let definition = taken(case, reference).filter(|definition| definition.block.kind() == Some(BlockKind::Solution))?;
        if found.replace((reference, definition)).is_some() {
            return None;
        }
    }
    found
}

/// The pH of a concentrate is another one when it is diluted as it says.
pub(super) fn dilution_shift(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(fold) = recipe.concentrate else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    let Ok(state) = &outcome.finished else { return };
    // Who sets or expects the pH of the diluted solution has seen the shift.
    let is_seen = recipe.entries.iter().any(|entry| entry.action.goals().iter().any(|goal| goal.diluted.is_some()))
        || recipe.expectations.iter().any(|one| one.property == Property::Ph && one.diluted.is_some());
    if is_seen || super::buffering::buffering_total(case, outcome) < 0.001 || fold.value <= 1.0 {
        return;
    }
    let Ok(diluted) = state.diluted_with((fold.value - 1.0) * outcome.volume_L) else { return };
    // At the strength of a concentrate the activity models part, and the finding says how far.
    let doubt = state.alternative_pH().map_or(String::new(), |other| {
        format!(" A second activity model gives {} for the concentrate, {:.2} apart.", format::ph(other), (other - state.pH()).abs())
    });
    push_dilution_shift(fold.at, fold.value, (state.pH(), diluted.pH()), &doubt, findings);
}

/// Says that the pH moves on dilution.
fn push_dilution_shift(at: Anchor, fold: f64, (before, after): (f64, f64), doubt: &str, findings: &mut Vec<Finding>) {
    if (after - before).abs() <= DILUTION_SHIFT {
        return;
    }
    findings.push(
        Finding::new(
            Code::DilutionShift,
            at,
            format!(
                "Diluted {}-fold the pH is {}, {:.2} {} than the {} of the concentrate.{doubt}",
                format::plain(fold),
                format::ph(after),
                (after - before).abs(),
                if after > before { "higher" } else { "lower" },
                format::ph(before)
            ),
        )
        .help(format!("Set the pH for the use: `to pH … diluted {}-fold`.", format::plain(fold))),
    );
}

/// The same for a stock that another solution of the library dilutes with water only.
pub(super) fn dilution_shift_by_use(case: &Case, users: &[User], findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let (Some(stock), Some(at)) = (case.outcomes().next(), super::buffering::ph_is_wanted(recipe)) else { return };
    let Ok(before) = &stock.finished else { return };
    // A concentrate says itself how it is diluted, and a pH set for a dilution was set with the shift in mind.
    if recipe.concentrate.is_some() || stock.set_points.iter().any(|point| point.elsewhere) {
        return;
    }
    let mut worst: Option<(f64, f64, &User)> = None;
    let Some(own) = &case.block.name else { return };
    for user in users {
        let Some(outcome) = user.evaluation.outcome() else { continue };
        let mut others = outcome.lines.iter().filter(|line| !is_water(line));
        let (Some(line), None) = (others.next(), others.next()) else { continue };
        if line.definition.file != case.file || line.definition.name != own.key {
            continue;
        }
        // Both at the temperature at which the stock's pH was set.
        let Some(after) = outcome.finished.as_ref().ok().and_then(|state| state.at_temperature(before.temperature_K).ok()) else {
            continue;
        };
        let fold = line.volume_L.map_or(1.0, |litres| outcome.volume_L / litres);
        if worst.is_none_or(|(_, pH, _)| (after.pH() - before.pH()).abs() > (pH - before.pH()).abs()) {
            worst = Some((fold, after.pH(), user));
        }
    }
    let Some((fold, after, user)) = worst.filter(|(_, after, _)| (after - before.pH()).abs() > DILUTION_SHIFT) else { return };
    let name = user.block.name.as_ref().map_or("", |name| name.text.as_str());
    findings.push(
        Finding::new(
            Code::DilutionShift,
            at,
            format!(
                "Set to pH {} here, it is {} when {name} dilutes it {}-fold.",
                format::ph(before.pH()),
                format::ph(after),
                fold_words(fold)
            ),
        )
        .help(format!("Set the pH for the use: `to pH … diluted {}-fold`.", fold_words(fold)))
        .related_at(
            Place::Block { file: user.file, key: NameKey::new(name).as_str().to_string(), anchor: user.block.header_anchor() },
            format!("{name} dilutes it"),
        ),
    );
}

/// Salt added to a buffer whose pH was set moves it.
pub(super) fn salt_shift(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    let Ok(after) = &outcome.finished else { return };
    if super::buffering::ph_is_wanted(recipe).is_some_and(|_| !outcome.set_points.is_empty()) {
        return;
    }
    let mut stocks = Vec::new();
    let mut salt = None;
    for line in &outcome.lines {
        let Some(definition) = case.context.scope.all().find_map(|(_, _, found)| found.iter().find(|one| one.key == line.definition)) else {
            return;
        };
        let is_water = is_water(line);
        if definition.block.kind() == Some(BlockKind::Solution) && line.mass_kg > 0.0 && !is_water {
            stocks.push((line, definition));
        } else if line.per_kg.hydrogen_mol.abs() < 1e-9 && !line.per_kg.amounts_mol.is_empty() {
            salt = Some(line);
        } else if !is_water {
            return;
        }
    }
    let ([(line, definition)], Some(salt)) = (stocks.as_slice(), salt) else { return };
    let sets_ph = definition.block.recipe().is_some_and(|recipe| super::buffering::ph_is_wanted(recipe).is_some());
    let Some(stock) = (case.context.stocks)(&definition.key).and_then(|evaluation| evaluation.outcome().cloned()) else { return };
    let Ok(before) = &stock.finished else { return };
    // A buffer thinned by more than a tenth is another matter, of which the dilution speaks.
    if !sets_ph || line.volume_L.is_none_or(|litres| litres < 0.9 * outcome.volume_L) {
        return;
    }
    let Ok(after) = after.at_temperature(before.temperature_K) else { return };
    let shift = after.pH() - before.pH();
    if shift.abs() <= SALT_SHIFT {
        return;
    }
    let doubt = after.alternative_pH().map_or(String::new(), |other| {
        format!(" A second activity model gives {}, {:.2} apart.", format::ph(other), (other - after.pH()).abs())
    });
    findings.push(
        Finding::new(
            Code::SaltShift,
            salt.at,
            format!(
                "With {} the pH of {} goes from {} to {}.{doubt}",
                salt.name,
                line.name,
                format::ph(before.pH()),
                format::ph(after.pH())
            ),
        )
        .help("Set the pH with the salt in, or expect the pH that it has then.")
        .related(line.at, "the buffer that was set"),
    );
}

/// A label's density that belongs to another strength.
pub(super) fn strength_density_disagree(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.own_recipe() else { return };
    let mut judge = |at: Anchor, density: f64, share: f64, reference: &Reference| {
        let Some(Body::Substance(substance)) = taken_substance(case, reference).map(|definition| &definition.block.body) else { return };
        let Some(expected) = table_density(substance, share) else { return };
        if (density / expected - 1.0).abs() <= DENSITY {
            return;
        }
        let fits = substance.aqueous.windows(2).find_map(|rows| match rows {
            [(low, low_density, _), (high, high_density, _)]
                if (density - low_density) * (density - high_density) <= 0.0 && low_density != high_density =>
            {
                Some(low + (high - low) * (density - low_density) / (high_density - low_density))
            }
            _ => None,
        });
        findings.push(
            Finding::new(
                Code::StrengthDensityDisagree,
                at,
                format!(
                    "{} % w/w {} has a density of {}, not {}.",
                    format::significant(100.0 * share, 3),
                    reference.text,
                    format::density(expected, 4),
                    format::density(density, 4)
                ),
            )
            .help(match fits {
                Some(share) => format!("That density belongs to {} % w/w; check the label.", format::significant(100.0 * share, 3)),
                None => "Check the label.".to_string(),
            })
            .about(reference.key.as_str()),
        );
    };
    for entry in &recipe.entries {
        let Action::Add(addition) = &entry.action else { continue };
        let Some(amount) = addition.amounts.first() else { continue };
        match (&case.block.body, recipe.density, addition.qualifiers.density, addition.what.strength) {
            (Body::Bottle(_), Some(density), ..) if recipe.entries.len() == 1 && amount.dimension() == Dimension::MassFraction => {
                judge(density.at, density.value, amount.value, &addition.what);
            }
            (_, _, Some(density), Some(Strength { kind: StrengthKind::Concentration(strength), .. }))
                if strength.dimension() == Dimension::MassFraction =>
            {
                judge(density.at, density.value, strength.value, &addition.what);
            }
            _ => {}
        }
    }
}

/// The substance of a name, though a bottle may bear the same.
fn taken_substance<'a>(case: &Case<'a>, reference: &Reference) -> Option<&'a Definition> {
    let scope = case.context.scope;
    [&scope.own, &scope.built_in]
        .into_iter()
        .flat_map(|names| names.named(Namespace::Ingredient, &reference.key))
        .find(|definition| definition.block.kind() == Some(BlockKind::Substance))
}

/// Says which bottle or solution stands for a strength and a name.
pub(super) fn stock_found(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    for line in outcome.lines.iter().filter(|line| !recipe.is_taken_over(line.at)) {
        let reference = match recipe.entries.get(line.entry).map(|entry| &entry.action) {
            Some(Action::Add(addition)) => &addition.what,
            Some(Action::MakeUp(make_up)) => match &make_up.alternative {
                // Of two titrants the one that was used.
                Some(other) if line.name == other.text => other,
                _ => &make_up.what,
            },
            _ => continue,
        };
        let Some(strength) = reference.strength else { continue };
        let found = case.context.scope.own.named(Namespace::Ingredient, &line.definition.name);
        let Some(definition) = found.iter().find(|definition| definition.key == line.definition) else { continue };
        if matches!(strength.kind, StrengthKind::Concentration(_))
            && matches!(definition.block.kind(), Some(BlockKind::Solution | BlockKind::Bottle))
            && definition.key.name != reference.key
        {
            findings.push(
                Finding::new(
                    Code::StockFound,
                    Anchor::new(reference.at.line, strength.span.to(reference.at.span)),
                    format!("{} is just that, and is taken.", definition.name()),
                )
                .help("Write its name to say so.")
                .related_at(crate::evaluate::place_of(definition), format!("{} is defined here", definition.name()))
                .about(reference.key.as_str())
                .fix(crate::finding::Fix::replace(
                    format!("Write {}", definition.name()),
                    Anchor::new(reference.at.line, strength.span.to(reference.at.span)),
                    crate::evaluate::written_form(definition.name()),
                )),
            );
        }
    }
}

//! Amounts that say the same thing twice, add up unseen, or are of the wrong kind.

use std::collections::BTreeMap;

use super::Case;
use super::buffering::ph_is_wanted;
use crate::evaluate::Role;
use crate::finding::{Anchor, Code, Finding, Fix};
use crate::model::*;
use crate::units::{Dimension, format};

/// An addition after the make-up that changes the volume by more than this share is no trace.
const ADDED_LATER: f64 = 0.01;

/// The additions of a recipe with their statements.
fn additions(recipe: &Recipe) -> impl Iterator<Item = (&Entry, &Addition)> {
    recipe.entries.iter().filter_map(|entry| match &entry.action {
        Action::Add(addition) => Some((entry, addition)),
        _ => None,
    })
}

/// The same substance twice by concentration.
pub(super) fn said_twice(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let mut seen: BTreeMap<&NameKey, (&Entry, &Addition)> = BTreeMap::new();
    for (entry, addition) in additions(recipe) {
        let Some(amount) = addition.amounts.first() else { continue };
        let is_concentration =
            matches!(amount.dimension(), Dimension::AmountConcentration | Dimension::Molality | Dimension::MassConcentration);
        if !is_concentration || matches!(case.block.body, Body::Bottle(_)) {
            continue;
        }
        let Some((first, earlier)) = seen.insert(&addition.what.key, (entry, addition)) else { continue };
        let mut finding = Finding::new(
            Code::SaidTwice,
            entry.at,
            format!("{} is stated twice as a concentration; each line brings its own.", addition.what.text),
        )
        .help("Write the sum on one line, or check the total with `expect total`.")
        .related(first.at, "the other line")
        .about(addition.what.key.as_str());
        if let (Some(one), Some(other)) = (earlier.amounts.first(), addition.amounts.first())
            && one.dimension() == other.dimension()
            && earlier.amounts.len() == 1
            && addition.amounts.len() == 1
        {
            let sum = format::plain(one.unit.from_base(one.value + other.value));
            let title = format!("Write {sum} {} on one line", one.unit.symbol());
            let at = Anchor::new(first.at.line, one.span);
            let mut fix = Fix::replace(title, at, format!("{sum} {}", one.unit.symbol()));
            fix.edits.push(crate::finding::Edit {
                place: crate::finding::EditPlace::WholeLine(entry.at.line),
                text: String::new(),
            });
            finding = finding.fix(fix);
        }
        findings.push(finding);
    }
}

/// The adjusting acid or base brings more of the very thing that was given as a concentration.
pub(super) fn adds_to_total(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    let chemistry = &case.context.constituents.chemistry;
    for adjusting in outcome.lines.iter().filter(|line| line.role == Role::Adjusts && line.mass_kg > 0.0) {
        for stated in outcome.lines.iter().filter(|line| line.role == Role::Stated) {
            let Some(Action::Add(addition)) = recipe.entries.get(stated.entry).map(|entry| &entry.action) else { continue };
            let is_concentration = addition.amounts.first().is_some_and(|amount| {
                matches!(amount.dimension(), Dimension::AmountConcentration | Dimension::Molality)
            });
            if !is_concentration {
                continue;
            }
            // What buffers, not the counter-ion: that is there in whatever amount the pH takes.
            let shared = adjusting.per_kg.amounts_mol.iter().find(|(component, amount)| {
                **amount > 0.0
                    && stated.per_kg.amounts_mol.get(component).is_some_and(|other| *other > 0.0)
                    && chemistry.all_species().any(|(_, species)| {
                        species.hydrogen > 0 && species.parts.as_slice() == [(**component, 1)]
                    })
            });
            let Some((component, per_kg)) = shared else { continue };
            let name = chemistry.component(*component).map_or("", |component| component.name.as_str());
            let total_is_expected = recipe.expectations.iter().any(|expectation| match &expectation.property {
                Property::Total(reference) => {
                    case.context.constituents.named(&reference.key).and_then(|one| one.component) == Some(*component)
                }
                _ => false,
            });
            if total_is_expected {
                continue;
            }
            let litres = outcome.volume_L;
            let brought = per_kg * adjusting.mass_kg / litres;
            let total = outcome.mixture.amounts_mol.get(component).copied().unwrap_or(0.0) / litres;
            findings.push(
                Finding::new(
                    Code::AddsToTotal,
                    adjusting.at,
                    format!(
                        "{} brings {} more {name}: the total is {}, not the {} stated.",
                        adjusting.name,
                        format::concentration(brought, 3),
                        format::concentration(total, 3),
                        format::concentration(total - brought, 3)
                    ),
                )
                .help("If the total is meant, write the two forms as a pair; else add `expect total`, which says so.")
                .related(stated.at, "stated as a concentration here")
                .about(addition.what.key.as_str()),
            );
        }
    }
}

/// A molality beside a make-up to volume.
pub(super) fn molality_made_up_to_volume(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let made_up = recipe.entries.iter().find(|entry| match &entry.action {
        Action::MakeUp(make_up) => make_up.goals.iter().any(|goal| matches!(goal.kind, GoalKind::Volume { .. })),
        _ => false,
    });
    let Some(made_up) = made_up else { return };
    for (entry, addition) in additions(recipe) {
        let Some(amount) = addition.amounts.first().filter(|amount| amount.dimension() == Dimension::Molality) else { continue };
        findings.push(
            Finding::new(
                Code::MolalityMadeUpToVolume,
                Anchor::new(entry.at.line, amount.span),
                format!("{} is per kilogram of water, but the solution is made up to a volume.", amount.unit.symbol()),
            )
            .help("Write mol/L if that is meant, or make up with a mass of water.")
            .related(made_up.at, "made up to a volume here")
            .about(addition.what.key.as_str()),
        );
    }
}

/// Additions after the solution was made up.
pub(super) fn added_after_volume(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    let is_volume = |entry: &Entry| match &entry.action {
        Action::MakeUp(make_up) => make_up.goals.iter().find_map(|goal| match goal.kind {
            GoalKind::Volume { litres, about: false, .. } => Some(litres),
            _ => None,
        }),
        _ => None,
    };
    let Some((index, mark)) = recipe.entries.iter().enumerate().rev().find_map(|(index, entry)| is_volume(entry).map(|litres| (index, litres)))
    else {
        return;
    };
    let divided = recipe.entries.iter().skip(index).any(|entry| matches!(entry.action, Action::Divider(_)));
    if divided || (outcome.volume_L - mark).abs() <= ADDED_LATER * mark {
        return;
    }
    let Some(later) = outcome.lines.iter().find(|line| line.entry > index) else { return };
    findings.push(
        Finding::new(
            Code::AddedAfterVolume,
            later.at,
            format!(
                "After making up to {} this brings the solution to {}.",
                format::volume(mark, 4),
                format::volume(outcome.volume_L, 4)
            ),
        )
        .help("Put the line above the make-up, or say `before use` if it is added later."),
    );
}

/// Two lines that take different things out of one stock.
pub(super) fn same_stock_twice(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let mut seen: BTreeMap<&NameKey, &Entry> = BTreeMap::new();
    for (entry, addition) in additions(recipe) {
        let Some(from) = &addition.qualifiers.from else { continue };
        if let Some(first) = seen.insert(&from.key, entry) {
            findings.push(
                Finding::new(
                    Code::SameStockTwice,
                    from.at,
                    format!("{} is taken from twice; each time everything else in it comes along.", from.text),
                )
                .help("Take one volume of the stock that serves both, or use two stocks.")
                .related(first.at, "taken from here too")
                .about(from.key.as_str()),
            );
        }
    }
}

/// A pair beside another pH target.
pub(super) fn ph_said_twice(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let is_ph = |goals: &[Goal]| goals.iter().any(|goal| matches!(goal.kind, GoalKind::Property { property: Property::Ph, .. }));
    let pairs: Vec<&Entry> =
        recipe.entries.iter().filter(|entry| matches!(&entry.action, Action::Pair(pair) if is_ph(&pair.goals))).collect();
    let set = recipe.entries.iter().find(|entry| matches!(&entry.action, Action::MakeUp(make_up) if is_ph(&make_up.goals)));
    let (Some(pair), Some(other)) = (pairs.first(), set.or_else(|| pairs.get(1).copied())) else { return };
    findings.push(
        Finding::new(Code::PhSaidTwice, other.at, "The pair already fixes the pH of the finished solution.")
            .help("Keep one of the two; check a pair with `expect pH`.")
            .related(pair.at, "the pair"),
    );
}

/// A volume that follows from mass and density because nothing is made up.
pub(super) fn volume_from_density(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.recipe() else { return };
    let Some(outcome) = case.outcomes().next() else { return };
    let liquids = outcome.lines.iter().filter(|line| line.volume_L.is_some()).count();
    if outcome.made_up || liquids < 2 || !matches!(case.block.body, Body::Solution(_)) || ph_is_wanted(recipe).is_none() && recipe.expectations.is_empty() {
        return;
    }
    findings.push(
        Finding::new(
            Code::VolumeFromDensity,
            case.block.header_anchor(),
            format!("Nothing is made up to a mark; by mass and density there is {}.", format::volume(outcome.volume_L, 4)),
        )
        .help("Volumes do not add; make up to a volume if it matters."),
    );
}

/// A volume fraction of a concentrated reagent that can be read in two ways.
pub(super) fn percent_of_what(case: &Case, findings: &mut Vec<Finding>) {
    let Some(recipe) = case.own_recipe() else { return };
    for (entry, addition) in additions(recipe) {
        let Some(amount) = addition.amounts.first().filter(|amount| amount.dimension() == Dimension::VolumeFraction) else { continue };
        if addition.qualifiers.from.is_some() || matches!(case.block.body, Body::Bottle(_)) {
            continue;
        }
        let Lookup::One(definition) = case.context.scope_of(&addition.what).find(Namespace::Ingredient, &addition.what.key, &addition.what.text) else {
            continue;
        };
        let Body::Bottle(_) = &definition.block.body else { continue };
        let Some(outcome) = (case.context.stocks)(&definition.key).and_then(|evaluation| evaluation.outcome().cloned()) else { continue };
        let [solute] = outcome.solutes.as_slice() else { continue };
        if solute.mass_kg >= 0.97 || !super::is_acid_or_base(case, &solute.definition) {
            continue;
        }
        let percent = amount.unit.from_base(amount.value);
        findings.push(
            Finding::new(
                Code::PercentOfWhat,
                Anchor::new(entry.at.line, amount.span),
                format!(
                    "{} {} can be of the bottle as bought, which holds {:.0} % of {}, or of pure {}; the bottle is taken.",
                    format::plain(percent),
                    amount.unit.symbol(),
                    100.0 * solute.mass_kg,
                    solute.name,
                    solute.name
                ),
            )
            .help("Write the volume of the bottle in mL, or an amount concentration.")
            .at_level(crate::finding::Level::Warning)
            .about(addition.what.key.as_str()),
        );
    }
}

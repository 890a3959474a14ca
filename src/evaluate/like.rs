//! `like` and `without`: a recipe made from another one's lines and its own.

use super::names::{ingredient, place_of};
use super::{Context, Refusal};
use crate::finding::{Anchor, Code, Finding};
use crate::model::*;

/// A chain of likenesses longer than this is a mistake; circles are told apart before.
const LONGEST_CHAIN: usize = 32;

/// The recipe with the lines of the one that it is like. Lines taken over stand at the `like` line.
///
/// # Errors
/// The other recipe is not there or cannot be read, or `without` names nothing that it has.
pub(super) fn with_likeness(recipe: &Recipe, context: &Context, depth: usize) -> Result<Recipe, Refusal> {
    let Some(reference) = &recipe.like else {
        return match recipe.without.first() {
            None => Ok(recipe.clone()),
            Some(left_out) => Err(Finding::new(
                Code::Unreadable,
                left_out.at,
                "`without` leaves out a line of the solution that this one is `like`, and this one is like none.",
            )
            .help("Add a `like` line, or remove this one.")
            .into()),
        };
    };
    let found = ingredient(reference, true, context)?;
    let other = match &found.definition.block.body {
        Body::Solution(other) if depth < LONGEST_CHAIN => other,
        _ => {
            return Err(Finding::new(Code::UnitOfWrongKind, reference.at, format!("{} is not a solution with a recipe.", reference.text))
                .help("Name a solution.")
                .related_at(place_of(found.definition), "defined here")
                .into());
        }
    };
    if !other.sound {
        return Err(super::ingredient_has_no_value(reference.at, &reference.text, &found.definition.key).into());
    }
    let base = with_likeness(other, context, depth + 1)
        .map_err(|_| Refusal::from(super::ingredient_has_no_value(reference.at, &reference.text, &found.definition.key)))?;
    let mut merged = recipe.clone();
    merged.entries = entries(recipe, &base, reference.at)?;
    merged.members = recipe.members.max(base.members);
    merged.made_at = recipe.made_at.or(base.made_at);
    merged.makes = recipe.makes.or(base.makes);
    merged.concentrate = recipe.concentrate.or(base.concentrate);
    merged.lab = recipe.lab.clone().or(base.lab);
    if recipe.atmosphere.is_none() {
        merged.gas_in_use_only = base.gas_in_use_only;
        merged.atmosphere = base.atmosphere.map(|gas| Stated { at: reference.at, ..gas });
    }
    merged.use_within = recipe.use_within.or(base.use_within);
    merged.ready_after = recipe.ready_after.or(base.ready_after);
    if recipe.used_at.is_empty() {
        merged.used_at = base.used_at.iter().map(|used| Stated { at: reference.at, ..*used }).collect();
    }
    if recipe.storage.is_empty() {
        merged.storage = base.storage.into_iter().map(|storage| Storage { at: reference.at, ..storage }).collect();
    }
    Ok(merged)
}

/// What an entry brings in, by name.
fn name_of(entry: &Entry) -> Option<&NameKey> {
    match &entry.action {
        Action::Add(addition) | Action::Alternative(addition) => Some(&addition.what.key),
        Action::MakeUp(make_up) => Some(&make_up.what.key),
        Action::AddAll(reference) => Some(&reference.key),
        Action::Pair(pair) => Some(&pair.first.key),
        _ => None,
    }
}

fn is_make_up(entry: &Entry) -> bool {
    match &entry.action {
        Action::MakeUp(make_up) => {
            make_up.goals.iter().any(|goal| matches!(goal.kind, GoalKind::Volume { .. } | GoalKind::Mass { .. }))
        }
        _ => false,
    }
}

/// The other's entries with this one's put in: in place of the line of the same name, else before the make-up.
fn entries(recipe: &Recipe, base: &Recipe, at: Anchor) -> Result<Vec<Entry>, Refusal> {
    let mut merged: Vec<(bool, Entry)> =
        base.entries.iter().map(|entry| (false, Entry { at, ..entry.clone() })).collect();
    for left_out in &recipe.without {
        let before = merged.len();
        merged.retain(|(_, entry)| name_of(entry) != Some(&left_out.key));
        if merged.len() == before {
            return Err(Finding::new(Code::UnknownName, left_out.at, format!("The solution that this one is like has no line for {}.", left_out.text))
                .help("Remove this line, or name an ingredient as it is written there.")
                .related(at, "like this one")
                .into());
        }
    }
    for entry in &recipe.entries {
        let same = merged.iter().position(|(own, old)| {
            !own && name_of(old).is_some() && name_of(old) == name_of(entry) && is_make_up(old) == is_make_up(entry)
        });
        match same.and_then(|index| merged.get_mut(index)) {
            Some(slot) => *slot = (true, entry.clone()),
            None => {
                let last = merged.iter().rposition(|(_, old)| is_make_up(old)).unwrap_or(merged.len());
                merged.insert(last, (true, entry.clone()));
            }
        }
    }
    Ok(merged.into_iter().map(|(_, entry)| entry).collect())
}

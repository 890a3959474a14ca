//! `like` and `without`: a recipe made from another one's lines and its own.

use super::names::{ingredient, place_of};
use super::{Context, Refusal};
use crate::finding::{Anchor, Code, Finding};
use crate::model::*;
use crate::text::FileId;

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
    let at = reference.at;
    if recipe.members > 1 && base.members > 1 && recipe.members != base.members {
        let message = format!("This solution has {} members, the one that it is like has {}.", recipe.members, base.members);
        return Err(Finding::new(Code::SaidTwiceDifferently, at, message)
            .help("Lists of one series go along in step; give them as many values.")
            .into());
    }
    let mut merged = recipe.clone();
    merged.entries = entries(recipe, &base, at, found.definition.key.file)?;
    merged.members = recipe.members.max(base.members);
    if recipe.members <= 1 {
        merged.series = base.series;
    }
    merged.made_at = recipe.made_at.or(here(base.made_at, at));
    merged.makes = recipe.makes.or(here(base.makes, at));
    merged.concentrate = recipe.concentrate.or(here(base.concentrate, at));
    if recipe.atmosphere.is_none() {
        merged.gas_in_use_only = base.gas_in_use_only;
        merged.atmosphere = here(base.atmosphere, at);
    }
    merged.use_within = recipe.use_within.or(here(base.use_within, at));
    merged.ready_after = recipe.ready_after.or(here(base.ready_after, at));
    merged.steps = base.steps.into_iter().map(|step| Stated { at, ..step }).chain(merged.steps).collect();
    merged.records = base.records.into_iter().map(|record| Stated { at, ..record }).chain(merged.records).collect();
    if recipe.used_at.is_empty() {
        merged.used_at = base.used_at.iter().map(|used| Stated { at, ..*used }).collect();
    }
    if recipe.storage.is_empty() {
        merged.storage = base.storage.into_iter().map(|storage| Storage { at, ..storage }).collect();
    }
    Ok(merged)
}

/// A condition that holds at the `like` line.
fn here<T>(stated: Option<Stated<T>>, at: Anchor) -> Option<Stated<T>> {
    stated.map(|stated| Stated { at, ..stated })
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
fn entries(recipe: &Recipe, base: &Recipe, at: Anchor, home: FileId) -> Result<Vec<Entry>, Refusal> {
    // A found strength is that of one batch, and this is another.
    let made = base.entries.iter().filter(|entry| !matches!(entry.action, Action::Found { .. }));
    let mut merged: Vec<(bool, Entry)> = made.map(|entry| (false, entry.taken_over(at, home))).collect();
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
    // What stands below a divider of this one's own is added last.
    let mut is_later = false;
    for entry in &recipe.entries {
        is_later |= matches!(entry.action, Action::Divider(_));
        let same = merged.iter().position(|(own, old)| {
            !own && name_of(old).is_some() && name_of(old) == name_of(entry) && is_make_up(old) == is_make_up(entry)
        });
        match same.and_then(|index| merged.get_mut(index)) {
            Some(slot) => *slot = (true, entry.clone()),
            None => {
                let mark = merged.iter().rposition(|(_, old)| is_make_up(old)).filter(|_| !is_later);
                let last = mark.unwrap_or(merged.len());
                merged.insert(last, (true, entry.clone()));
            }
        }
    }
    Ok(merged.into_iter().map(|(_, entry)| entry).collect())
}

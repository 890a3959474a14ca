//! The computed values of a recipe, as the features that show them ask for them.

use std::sync::Arc;

use crate::chemistry::State;
use crate::evaluate::{Evaluation, LineOutcome, Outcome, Role, Verdict};
use crate::model::{Addition, Block, Entry, GoalKind, MakeUp, Recipe};
use crate::text::FileId;
use crate::units::{Dimension, format};
use crate::workspace::Snapshot;

/// Below this buffer capacity, mol/L, the carbon dioxide of the air and traces on the glass decide the pH. Common practice,
/// no source: water in air takes up some ten micromoles of it per litre.
#[allow(non_upper_case_globals, reason = "units keep their spelling")]
const HARDLY_BUFFERED_mol_per_L: f64 = 1e-4;

/// A recipe with what came out of it.
#[derive(Clone, Copy, Debug)]
pub struct Values<'a> {
    /// The block.
    pub block: &'a Arc<Block>,
    /// What it says, with the lines of the solution that it is like.
    pub recipe: &'a Recipe,
    /// What came out of it.
    pub evaluation: &'a Evaluation,
}

impl<'a> Values<'a> {
    /// The values of a block that is a solution or a bottle and was evaluated.
    pub fn of(snapshot: &'a Snapshot, file: FileId, block_index: usize) -> Option<Self> {
        let block = snapshot.file(file)?.model.blocks.get(block_index)?;
        let evaluation = &snapshot.checked(file, block_index)?.evaluation;
        let recipe = evaluation.recipe.as_deref().or(block.recipe())?;
        Some(Values { block, recipe, evaluation })
    }

    /// The outcomes: one, or one for each member of a series. Empty unless every member has values.
    pub fn outcomes(&self) -> Vec<&'a Outcome> {
        let outcomes: Option<Vec<&Outcome>> = self.evaluation.members.iter().map(|member| member.outcome.as_deref()).collect();
        outcomes.unwrap_or_default()
    }

    /// The outcome of a recipe that is no series.
    pub fn single(&self) -> Option<&'a Outcome> {
        match self.outcomes().as_slice() {
            [one] => Some(one),
            _ => None,
        }
    }

    /// The entries that stand on lines of their own in the block, with their indices; not those of a solution that it is
    /// like.
    pub fn own_entries(&self) -> impl Iterator<Item = (usize, &'a Entry)> + use<'a> {
        let like = self.recipe.like.as_ref().map(|like| like.at.line);
        self.recipe.entries.iter().enumerate().filter(move |(_, entry)| Some(entry.at.line) != like)
    }

    /// The entry whose statement stands on a line of the block, with its index.
    pub fn entry_on(&self, line: usize) -> Option<(usize, &'a Entry)> {
        self.own_entries().find(|(_, entry)| entry.at.line == line)
    }

    /// What the members brought by an entry, in the order of the members.
    pub fn lines_of(&self, entry: usize) -> Vec<&'a LineOutcome> {
        self.outcomes().into_iter().flat_map(|outcome| outcome.lines.iter().filter(move |line| line.entry == entry)).collect()
    }

    /// The verdicts on the expectation of a line of the block.
    pub fn verdicts_on(&self, line: usize) -> Vec<&'a Verdict> {
        self.outcomes()
            .into_iter()
            .flat_map(|outcome| outcome.verdicts.iter().filter(move |verdict| verdict.at.line == line))
            .collect()
    }

    /// Whether a line's amount was worked out to reach a property, rather than to fill up.
    pub fn is_adjusted(&self, line: &LineOutcome) -> bool {
        line.role == Role::Adjusts
    }

    /// Whether a line states what it brings to the finished solution, so that what goes in is worked out.
    pub fn states_concentration(&self, addition: &Addition) -> bool {
        addition.qualifiers.from.is_some()
            || addition.amounts.first().is_some_and(|amount| {
                amount.is_concentration()
                    || matches!(
                        amount.dimension(),
                        Dimension::Amount | Dimension::Parts | Dimension::Fold | Dimension::EnzymeActivity
                    )
            })
    }
}

/// What is measured out of a thing: a volume of a liquid, a mass of a solid.
pub fn measured_out(line: &LineOutcome, digits: usize) -> String {
    match line.volume_L {
        Some(litres) => format::volume(litres, digits),
        None => format::mass(line.mass_kg, digits),
    }
}

/// What is measured out where the target of a make-up says so: a mass is filled up on the balance.
pub fn filled_up(line: &LineOutcome, make_up: &MakeUp, digits: usize) -> String {
    match make_up.goals.first().map(|goal| &goal.kind) {
        Some(GoalKind::Mass { .. }) => format::mass(line.mass_kg, digits),
        _ => measured_out(line, digits),
    }
}

/// Shown values of the members of a series: one where all are alike, else the first and the last, their unit once.
pub fn joined(shown: &[String]) -> Option<String> {
    let first = shown.first()?;
    let last = shown.last()?;
    if shown.iter().all(|one| one == first) {
        return Some(first.clone());
    }
    Some(match (first.split_once(' '), last.split_once(' ')) {
        (Some((number, unit)), Some((_, same))) if unit == same => format!("{number} to {last}"),
        _ => format!("{first} to {last}"),
    })
}

/// The pH of a state, to one decimal and as `about` where little holds it in place.
pub fn shown_ph(state: &State) -> String {
    if is_hardly_buffered(state) { format!("about {}", format::fixed(state.pH(), 1)) } else { format::ph(state.pH()) }
}

/// Whether next to nothing holds the pH in place.
pub fn is_hardly_buffered(state: &State) -> bool {
    state.buffer_capacity_mol_per_L() < HARDLY_BUFFERED_mol_per_L
}

/// The pH at the making, of one solution or from the first to the last of a series.
pub fn finished_ph(outcomes: &[&Outcome]) -> Option<String> {
    let shown: Option<Vec<String>> =
        outcomes.iter().map(|outcome| outcome.finished.as_ref().ok().map(shown_ph)).collect();
    joined(&shown?)
}

/// What became of an expectation: its value; the lowest to the highest, where it was judged at several temperatures and they
/// differ.
pub fn judged(verdicts: &[&Verdict]) -> Option<String> {
    let value = |verdict: &Verdict| verdict.value.map(|value| verdict.property.shown(value, verdict.unit));
    let values: Vec<String> = verdicts.iter().filter_map(|verdict| value(verdict)).collect();
    if values.len() != verdicts.len() {
        return None;
    }
    let by_value = |one: &&&Verdict, other: &&&Verdict| one.value.unwrap_or(0.0).total_cmp(&other.value.unwrap_or(0.0));
    let low = verdicts.iter().min_by(by_value).and_then(|verdict| value(verdict))?;
    let high = verdicts.iter().max_by(by_value).and_then(|verdict| value(verdict))?;
    joined(&[low, high])
}

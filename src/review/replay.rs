//! What each edit does alone: the old texts with that one edit made, worked out anew. What the sensitivities of the old state
//! predict for the same edit stands beside it, as a check from the other side.

use std::collections::{BTreeMap, BTreeSet};
use std::sync::Arc;

use super::changes::{Change, Place, Reason, Shift, VALUES, outcome};
use super::edits::{Owner, Planned, Step, additions, applied, is_prose};
use super::pairs::{Pair, renamed};
use super::values::{Measure, Renamed, values};
use crate::evaluate::Outcome;
use crate::syntax::tree::BlockKind;
use crate::text::{FileId, SourceText, Span};
use crate::workspace::{Snapshot, Workspace};

/// So many edits are replayed at most; with more of them a person is not helped by a share for each.
const MOST_EDITS: usize = 200;

/// What one edit does to a number.
#[derive(Clone, Debug, PartialEq)]
pub struct Share {
    /// Index of the edit.
    pub edit: usize,
    /// By how much it alone moves the number; none where the recipe has no values with it alone.
    pub amount: Option<f64>,
    /// What the sensitivities of the old state predict; none where they say nothing.
    pub predicted: Option<f64>,
}

/// Fills in the shares and reasons of the changes. Nothing is filled in, and it says so, where there are too many edits.
pub(super) fn replay(
    mut trial: Workspace,
    planned: &[Planned],
    changes: &mut [Change],
    pairs: &[Pair],
    old: &Arc<Snapshot>,
    new: &Arc<Snapshot>,
) -> bool {
    if planned.len() > MOST_EDITS {
        return false;
    }
    trial.read_only(&needed(planned, changes, old, new));
    let (texts, files) = additions(pairs, old, new);
    let whole: Vec<(FileId, Arc<SourceText>)> =
        files.iter().map(|(id, text)| (*id, Arc::new(SourceText::from(text.as_str())))).collect();
    let mut bench = Bench { trial, old: old.clone(), new: new.clone(), texts, whole };
    let with_additions = bench.with(&[]);
    // What is added must not change what was there; a name that now means two things does.
    let changes_nothing = changes.iter().filter_map(|change| change.old.as_ref()).all(|place| {
        outcome(old, place).is_none() || outcome(&with_additions, place).is_some()
    });
    let base = if changes_nothing {
        with_additions
    } else {
        bench.texts.clear();
        bench.take_back_whole();
        bench.with(&[])
    };
    let renamed = renamed(pairs, old, new);
    for (index, planned) in planned.iter().enumerate() {
        if planned.edit.new.as_ref().or(planned.edit.old.as_ref()).is_some_and(is_prose) {
            continue;
        }
        let snapshot = match &planned.step {
            Step::Texts(texts) => bench.with(texts),
            Step::Configuration(root, configuration) => {
                let before = bench.old.roots.get(root).map(|root| root.configuration.as_ref().clone()).unwrap_or_default();
                bench.trial.set_configuration(root, configuration.clone());
                let snapshot = bench.with(&[]);
                bench.trial.set_configuration(root, before);
                snapshot
            }
        };
        for change in changes.iter_mut() {
            if let Some(place) = change.old.clone().filter(|_| change.new.is_some()) {
                credit(change, &place, index, &planned.edit.owner, (&base, &snapshot), &renamed);
            }
        }
    }
    changes.iter_mut().for_each(close);
    true
}

/// The old state, in which edits are tried out.
struct Bench {
    trial: Workspace,
    old: Arc<Snapshot>,
    new: Arc<Snapshot>,
    /// Additions to files that were there.
    texts: Vec<(FileId, Span, String)>,
    /// Files that were not.
    whole: Vec<(FileId, Arc<SourceText>)>,
}

impl Bench {
    /// The old state with the additions and these replacements.
    fn with(&mut self, replacements: &[(FileId, Span, String)]) -> Arc<Snapshot> {
        let mut by_file: BTreeMap<FileId, Vec<(Span, &str)>> = BTreeMap::new();
        for (file, span, text) in self.texts.iter().chain(replacements) {
            by_file.entry(*file).or_default().push((*span, text));
        }
        let mut touched = Vec::new();
        for (id, replacements) in &by_file {
            if let Some(file) = self.old.files.get(id) {
                let text = applied(file.source.as_str(), replacements);
                self.trial.set_open_text(&file.path, Arc::new(SourceText::from(text.as_str())));
                touched.push(file.path.clone());
            }
        }
        for (id, text) in &self.whole {
            if let Some(file) = self.new.files.get(id) {
                self.trial.set_open_text(&file.path, text.clone());
            }
        }
        let snapshot = self.trial.snapshot();
        touched.iter().for_each(|path| self.trial.drop_open_text(path));
        snapshot
    }

    fn take_back_whole(&mut self) {
        for (id, _) in std::mem::take(&mut self.whole) {
            if let Some(file) = self.new.files.get(&id) {
                self.trial.drop_open_text(&file.path);
            }
        }
    }
}

/// The files that matter to the replay: those of changed solutions and edited lines, what they use or used, and all that the
/// chemistry of a root is made of.
fn needed(planned: &[Planned], changes: &[Change], old: &Snapshot, new: &Snapshot) -> BTreeSet<FileId> {
    let edited = planned.iter().filter_map(|planned| planned.edit.owner.at).map(|(file, _)| file);
    let changed = changes.iter().filter_map(|change| change.old.as_ref()).map(|place| place.file);
    let is_recipes_only = |file: &FileId| {
        let blocks = old.files.get(file).into_iter().flat_map(|file| &file.model.blocks);
        blocks.into_iter().all(|block| matches!(block.kind(), None | Some(BlockKind::Solution | BlockKind::Bottle | BlockKind::Lab)))
    };
    let chemistry = old.files.keys().filter(|file| !is_recipes_only(file)).copied();
    let mut needed: BTreeSet<FileId> = edited.chain(changed).chain(chemistry).collect();
    let mut next: Vec<FileId> = needed.iter().copied().collect();
    while let Some(file) = next.pop() {
        for used in old.files_used_by(file).into_iter().chain(new.files_used_by(file)) {
            if needed.insert(used) {
                next.push(used);
            }
        }
    }
    needed
}

/// Notes what an edit alone does to a solution.
fn credit(
    change: &mut Change,
    place: &Place,
    edit: usize,
    owner: &Owner,
    (base, tried): (&Snapshot, &Snapshot),
    renamed: &Renamed,
) {
    let (before, after) = (outcome(base, place), outcome(tried, place));
    if let (Some(before), Some(after)) = (before, after)
        && Arc::ptr_eq(before, after)
    {
        return;
    }
    let mut acts = before.is_some() != after.is_some();
    let (old_values, new_values) = (before.map(|found| values(found, renamed)), after.map(|found| values(found, renamed)));
    let find = |values: &Option<Vec<super::values::Value>>, name: &str| {
        values.as_ref()?.iter().find(|value| value.name == name).and_then(|value| value.value)
    };
    if let (Some(olds), Some(_)) = (&old_values, &new_values) {
        acts |= olds.iter().any(|value| match (value.value, find(&new_values, &value.name)) {
            (Some(one), Some(other)) => !value.measure.is_equal(one, other),
            (one, other) => one.is_some() != other.is_some(),
        });
    }
    for shift in change.shifts.iter_mut().filter(|shift| shift.name != VALUES) {
        match (find(&old_values, &shift.name), find(&new_values, &shift.name)) {
            (Some(one), Some(other)) if shift.measure.is_equal(one, other) => {}
            (Some(one), Some(other)) => {
                let predicted = before.zip(after).and_then(|(before, after)| predicted(shift, before, after));
                shift.shares.push(Share { edit, amount: Some(other - one), predicted });
            }
            (None, None) => {}
            _ if after.is_none() => shift.shares.push(Share { edit, amount: None, predicted: None }),
            _ => {}
        }
    }
    if acts {
        let reason = match owner.kind {
            None => Reason::Setting,
            Some(_) if owner.at == Some((place.file, place.block)) => Reason::OwnLines,
            Some(BlockKind::Solution | BlockKind::Bottle) => Reason::Stock(owner.name.clone()),
            Some(BlockKind::Lab) => Reason::Lab(owner.name.clone()),
            Some(BlockKind::Substance | BlockKind::Ion | BlockKind::Solid | BlockKind::Danger | BlockKind::Group) => Reason::Constant(owner.name.clone()),
        };
        if !change.reasons.contains(&reason) {
            change.reasons.push(reason);
        }
    }
}

/// What the derivatives of the old state say of a change of composition: of the pH, at the same temperature.
fn predicted(shift: &Shift, before: &Outcome, after: &Outcome) -> Option<f64> {
    let state = before.finished.as_ref().ok()?;
    if shift.measure != Measure::Ph || shift.name != "pH" || before.made_at_K != after.made_at_K {
        return None;
    }
    let mut direction = after.mixture.clone();
    direction.add(&before.mixture, -1.0);
    let predicted = state.pH_derivative(&direction);
    // Another chemistry is no change of composition.
    (predicted.is_finite() && after.mixture != before.mixture).then_some(predicted)
}

/// Sorts the shares, the largest first, and says what is left.
fn close(change: &mut Change) {
    change.reasons.sort();
    for shift in &mut change.shifts {
        let size = |share: &Share| share.amount.map_or(0.0, f64::abs);
        shift.shares.sort_by(|one, other| size(other).total_cmp(&size(one)).then(one.edit.cmp(&other.edit)));
        if let (Some(old), Some(new)) = (shift.old, shift.new) {
            let told: f64 = shift.shares.iter().filter_map(|share| share.amount).sum();
            shift.remainder = Some(new - old - told);
        }
    }
}

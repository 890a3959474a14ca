//! Two states of a library side by side: which solution became which, what came out differently and by how much, and which
//! edited line is responsible for how much of it. Data only; `report` writes it.

mod align;
mod changes;
mod edits;
mod pairs;
mod replay;
mod values;

pub use changes::{Change, FindingChange, Judged, Place, Reason, Shift, Told, VerdictChange};
pub use edits::{Edit, EditKind, EditedLine, Owner};
pub use replay::Share;
pub use values::Measure;

use std::sync::Arc;

use crate::workspace::{Snapshot, Workspace};

/// What became of a library.
#[derive(Clone, Debug, Default)]
pub struct Review {
    /// The solutions that changed, or that something they are made from changed for: in the order of their places, those that
    /// vanished last.
    pub changes: Vec<Change>,
    /// The edited lines, in the order of their places.
    pub edits: Vec<Edit>,
    /// Whether every edit was replayed; with very many of them none is.
    pub is_replayed: bool,
    /// How many solutions there are now.
    pub solutions: usize,
}

/// Compares two snapshots of one workspace. `trial` is that workspace as it was when `old` was taken; edits are tried out in it.
pub fn review(trial: Workspace, old: &Arc<Snapshot>, new: &Arc<Snapshot>) -> Review {
    let pairs = pairs::pairs(old, new);
    let mut changes = changes::changes(&pairs, old, new);
    let edits = edits::edits(&pairs, old, new);
    let is_replayed = replay::replay(trial, &edits, &mut changes, &pairs, old, new);
    Review { changes, edits: edits.into_iter().map(|planned| planned.edit).collect(), is_replayed, solutions: new.solutions().count() }
}

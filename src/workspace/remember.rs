//! What a recipe came to before the mistake that now stands in it, so that the editor need not blank the screen at every
//! half-written line.

use std::collections::HashMap;
use std::sync::Arc;

use super::snapshot::{FileState, Origin, Snapshot};
use crate::evaluate::Evaluation;
use crate::model::{Block, Body};
use crate::text::FileId;

/// The last version of a solution that had values. Its lines are those of its own block, not of the present text.
#[derive(Clone, Debug)]
pub struct Remembered {
    /// The block as it was.
    pub block: Arc<Block>,
    /// What came out of it.
    pub evaluation: Arc<Evaluation>,
}

/// For every solution of an open file that has no values now, its last version that had.
pub(super) fn remember(now: &Snapshot, last: Option<&Snapshot>) -> HashMap<(FileId, usize), Arc<Remembered>> {
    let Some(last) = last else { return HashMap::new() };
    let open = now.files.values().filter(|file| file.origin == Origin::Editor);
    let mut remembered = HashMap::new();
    for file in open {
        let Some(old) = last.files.get(&file.id) else { continue };
        for (index, block) in file.model.blocks.iter().enumerate() {
            if !matches!(block.body, Body::Solution(_)) || has_values(now, file.id, index) {
                continue;
            }
            let Some(before) = same_block(old, file, index) else { continue };
            let kept = match (has_values(last, file.id, before), old.model.blocks.get(before), last.checked(file.id, before)) {
                (true, Some(block), Some(checked)) => {
                    Some(Arc::new(Remembered { block: block.clone(), evaluation: checked.evaluation.clone() }))
                }
                _ => last.remembered(file.id, before).cloned(),
            };
            remembered.extend(kept.map(|kept| ((file.id, index), kept)));
        }
    }
    remembered
}

fn has_values(snapshot: &Snapshot, file: FileId, block: usize) -> bool {
    let checked = snapshot.checked(file, block);
    checked.is_some_and(|checked| {
        !checked.evaluation.members.is_empty() && checked.evaluation.members.iter().all(|member| member.outcome.is_some())
    })
}

/// Where a block stood before: by its name, else by its place among as many blocks.
fn same_block(old: &FileState, new: &FileState, index: usize) -> Option<usize> {
    let key = |block: &Arc<Block>| block.name.as_ref().map(|name| name.key.clone());
    let block = new.model.blocks.get(index)?;
    let named = |block: &Arc<Block>| matches!(block.body, Body::Solution(_)).then(|| key(block)).flatten();
    match named(block).and_then(|name| old.model.blocks.iter().position(|other| named(other).as_ref() == Some(&name))) {
        Some(found) => Some(found),
        None => (old.model.blocks.len() == new.model.blocks.len()).then_some(index),
    }
}

//! What the way from one snapshot to the next reached: the blocks that changed, and those that something they depend on
//! changed for.

use std::collections::BTreeSet;
use std::sync::Arc;

use super::snapshot::{Located, Snapshot};
use crate::text::FileId;

/// The blocks of `new` of which something else is known than `old` knew, as file and index. Both are snapshots of the same
/// workspace: evaluations that came out of the same inputs are shared, so whatever is not shared depends on a change.
pub fn reached(old: &Snapshot, new: &Snapshot) -> BTreeSet<(FileId, usize)> {
    let blocks = new.files.values().flat_map(|file| (0..file.model.blocks.len()).map(move |index| (file.id, index)));
    blocks.filter(|(file, index)| !is_untouched(old, new, *file, *index)).collect()
}

fn is_untouched(old: &Snapshot, new: &Snapshot, file: FileId, index: usize) -> bool {
    let (Some(before), Some(now)) = (old.files.get(&file), new.files.get(&file)) else { return false };
    let Some(block) = now.model.blocks.get(index) else { return false };
    let same = |candidate: Option<usize>| {
        candidate.filter(|at| before.model.blocks.get(*at).is_some_and(|other| Arc::ptr_eq(other, block)))
    };
    // At the same place, or wherever in the file it stood before.
    let Some(earlier) = same(Some(index)).or_else(|| before.model.blocks.iter().position(|other| Arc::ptr_eq(other, block))) else {
        return false;
    };
    let known = match (old.checked(file, earlier), new.checked(file, index)) {
        (Some(one), Some(other)) if Arc::ptr_eq(one, other) => true,
        // What has no values is looked at again whenever a name is missing; it is the same where the findings are.
        (Some(one), Some(other)) => {
            let is_without_values = other.evaluation.members.iter().all(|member| member.outcome.is_none());
            is_without_values && one.findings == other.findings
        }
        (None, None) => true,
        _ => false,
    };
    known && said(old, file, earlier).eq(said(new, file, index))
}

/// What is said of a block, free of its place.
fn said(snapshot: &Snapshot, file: FileId, block: usize) -> impl Iterator<Item = (&str, &str)> {
    let of_block = move |located: &&Located| located.block == block;
    let findings = snapshot.findings(file).iter().filter(of_block);
    findings.map(|located| (located.finding.level.word(), located.finding.message.as_str()))
}

//! A name that is unknown here and defined in another file of the library: the `use` line that makes it known.

use super::{ActionKind, CodeAction, FileEdit};
use crate::editor::file_renames::relative;
use crate::evaluate::written_form;
use crate::finding::{Code, Edit, EditPlace};
use crate::model::NameKey;
use crate::text::FileId;
use crate::workspace::{Located, Snapshot};

/// How many files are offered.
const OFFERED: usize = 4;

/// The files of the same root that define the name of an `unknown-name`, each with the line that uses it. The nearest come
/// first.
pub fn offers(snapshot: &Snapshot, file: FileId, index: usize, located: &Located) -> Vec<CodeAction> {
    let Some(state) = snapshot.files.get(&file).filter(|_| located.finding.code == Code::UnknownName) else { return Vec::new() };
    let written = located.span.of(state.source.as_str()).trim();
    let unquoted = written.strip_prefix('"').and_then(|rest| rest.strip_suffix('"')).unwrap_or(written);
    let key = NameKey::new(unquoted);
    let mut found: Vec<(String, String)> = Vec::new();
    for other in snapshot.files.values().filter(|other| other.id != file && other.root == state.root) {
        let named = other.model.blocks.iter().filter_map(|block| Some((block.name.as_ref()?, block)));
        let mut defining = named.filter(|(name, block)| name.key == key || block.also.iter().any(|also| also.key == key));
        if let (Some((name, _)), Some(path)) = (defining.next(), state.path.parent().and_then(|folder| relative(folder, &other.path))) {
            found.push((path, name.text.clone()));
        }
    }
    found.sort_by_key(|(path, _)| (path.matches('/').count(), path.clone()));
    let is_only = found.len() == 1;
    let action = |(path, name): (String, String)| {
        let edit = Edit { place: EditPlace::FileHead, text: format!("use \"{path}\"") };
        let (span, text) = snapshot.edit(file, located.block, &edit)?;
        Some(CodeAction {
            title: format!("Use {path}, where {} is defined", written_form(&name)),
            kind: ActionKind::QuickFix,
            edits: vec![FileEdit { file, span, text }],
            finding: Some((index, located.finding.code)),
            is_preferred: is_only && located.finding.fixes.is_empty(),
        })
    };
    found.into_iter().take(OFFERED).filter_map(action).collect()
}

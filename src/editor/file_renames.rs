//! The `use` lines that a renamed or moved file asks for, worked out before it moves.

use camino::{Utf8Path, Utf8PathBuf};

use super::code_actions::FileEdit;
use super::target::used_file;
use crate::finding::Anchor;
use crate::workspace::Snapshot;

/// The replacements that keep every `use` line leading where it leads now, once files or folders have the second paths
/// instead of the first. Paths are absolute; the replacements are in the files where they are now.
pub fn file_renames(snapshot: &Snapshot, renames: &[(Utf8PathBuf, Utf8PathBuf)]) -> Vec<FileEdit> {
    let mut files: Vec<_> = snapshot.files.values().collect();
    files.sort_by(|one, other| one.path.cmp(&other.path));
    let mut edits = Vec::new();
    for file in files {
        for used in &file.model.uses {
            let Some(target) = used_file(snapshot, file, &used.path).and_then(|target| snapshot.file(target)) else { continue };
            let (from, to) = (moved(&file.path, renames), moved(&target.path, renames));
            if from == file.path && to == target.path {
                continue;
            }
            let Some(written) = from.parent().and_then(|folder| relative(folder, &to)) else { continue };
            if written != used.path {
                let span = file.absolute(used.block, Anchor::new(used.path_at.line, used.path_at.span));
                edits.push(FileEdit { file: file.id, span, text: format!("\"{written}\"") });
            }
        }
    }
    edits
}

/// Where a file stands after the renaming, of itself or of a folder above it.
fn moved(path: &Utf8Path, renames: &[(Utf8PathBuf, Utf8PathBuf)]) -> Utf8PathBuf {
    let within = renames.iter().filter_map(|(old, new)| Some((old, new, path.strip_prefix(old).ok()?)));
    match within.max_by_key(|(old, ..)| old.as_str().len()) {
        Some((_, new, rest)) if rest.as_str().is_empty() => new.clone(),
        Some((_, new, rest)) => new.join(rest),
        None => path.to_owned(),
    }
}

/// The way from a folder to a file, with forward slashes; none between different disks.
pub(super) fn relative(folder: &Utf8Path, file: &Utf8Path) -> Option<String> {
    let here: Vec<_> = folder.components().collect();
    let there: Vec<_> = file.components().collect();
    let shared = here.iter().zip(&there).take_while(|(one, other)| one == other).count();
    if shared == 0 {
        return None;
    }
    let up = here.iter().skip(shared).map(|_| "..");
    let down = there.iter().skip(shared).map(|part| part.as_str());
    Some(up.chain(down).collect::<Vec<_>>().join("/"))
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::{applied, fixture};

    const TEXT: &str = "use \"parts/stocks.prep\"\nuse \"bench.prep\"\n‸\n//- parts/stocks.prep\nuse \"../bench.prep\"\n//- bench.prep\nlab Bench\n    room       20 °C to 22 °C\n";

    /// Every file's text after a renaming, in the order of the fixture.
    fn check(old: &str, new: &str) -> Vec<String> {
        let fixture = fixture(TEXT);
        let at = |path: &str| Utf8PathBuf::from(format!("/nowhere-at-all/{path}"));
        let edits = file_renames(&fixture.snapshot, &[(at(old), at(new))]);
        let text = |name: &str| {
            let file = fixture.snapshot.file_by_path(&at(name)).unwrap();
            let own = edits.iter().filter(|edit| edit.file == file.id).map(|edit| (edit.span, edit.text.clone()));
            applied(file.source.as_str(), own).lines().take(2).collect::<Vec<_>>().join("; ")
        };
        vec![text("main.prep"), text("parts/stocks.prep")]
    }

    #[test]
    fn lines_follow_a_renamed_file() {
        assert_eq!(check("bench.prep", "lab.prep"), ["use \"parts/stocks.prep\"; use \"lab.prep\"", "use \"../lab.prep\""]);
        assert_eq!(check("bench.prep", "parts/bench.prep"), ["use \"parts/stocks.prep\"; use \"parts/bench.prep\"", "use \"bench.prep\""]);
    }

    #[test]
    fn a_moved_file_still_finds_what_it_uses() {
        assert_eq!(check("parts/stocks.prep", "stocks.prep"), ["use \"stocks.prep\"; use \"bench.prep\"", "use \"bench.prep\""]);
    }

    #[test]
    fn lines_follow_a_renamed_folder() {
        assert_eq!(check("parts", "shelf/cold"), ["use \"shelf/cold/stocks.prep\"; use \"bench.prep\"", "use \"../../bench.prep\""]);
    }
}

//! Giving a thing another name, in its header and at every place that names it so.

use super::code_actions::FileEdit;
use super::references::{definition_at, references_in};
use super::target::{find, locate, place, target};
use crate::evaluate::written_form;
use crate::model::{Definition, NameKey};
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// A name that can be changed.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Rename {
    /// The characters under the cursor.
    pub span: Span,
    /// The name as it is now, without quotes.
    pub name: String,
}

/// Why a name is not changed: one sentence.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct RenameRefusal(pub String);

/// The name at an offset, where it can be changed.
///
/// # Errors
/// Why it cannot.
pub fn prepare_rename(snapshot: &Snapshot, file: FileId, offset: usize) -> Result<Rename, RenameRefusal> {
    let refusal = |words: &str| RenameRefusal(words.to_owned());
    let target = target(snapshot, file, offset).ok_or_else(|| refusal("There is no name here."))?;
    let definition = definition_at(snapshot, file, offset).ok_or_else(|| refusal("No single thing bears a name here."))?;
    if !snapshot.files.contains_key(&definition.key.file) {
        return Err(RenameRefusal(format!("{} belongs to the built-in library, which is not changed.", definition.name())));
    }
    let written = target.span.of(target.cursor.file.source.as_str());
    let name = unquoted(written);
    if NameKey::new(&name) != definition.key.name {
        return Err(RenameRefusal(format!("This is another name of {}; change the line that gives it.", definition.name())));
    }
    Ok(Rename { span: target.span, name })
}

/// The replacements that give the thing at an offset another name.
///
/// # Errors
/// Where the name is taken, or a reference would come to mean something else.
pub fn rename(snapshot: &Snapshot, file: FileId, offset: usize, new_name: &str) -> Result<Vec<FileEdit>, RenameRefusal> {
    prepare_rename(snapshot, file, offset)?;
    let new_name = unquoted(new_name.trim());
    if new_name.is_empty() || new_name.contains(['\n', '\r']) {
        return Err(RenameRefusal("A name is at least one letter on one line.".to_owned()));
    }
    let definition = definition_at(snapshot, file, offset).ok_or_else(|| RenameRefusal("There is no name here.".to_owned()))?;
    let new_key = NameKey::new(&new_name);
    let written = written_form(&new_name);
    let mut edits: Vec<FileEdit> = place(snapshot, &definition)
        .map(|(file, span, _)| FileEdit { file, span, text: written.clone() })
        .into_iter()
        .collect();
    refuse_collision(snapshot, definition.key.file, &definition, &new_key, &new_name)?;
    for state in snapshot.files.values() {
        let mentions = references_in(snapshot, state, &definition);
        // A reference by another spelling (`also`) stays as it is.
        let spelled: Vec<FileEdit> = mentions
            .into_iter()
            .filter(|one| NameKey::new(&unquoted(one.span.of(state.source.as_str()))) == definition.key.name)
            .map(|one| FileEdit { file: one.file, span: one.span, text: written.clone() })
            .collect();
        // The name may mean something where the thing is seen and not named: a later line there would be ambiguous.
        let sees_it = snapshot.scope(state.id).own.sources().contains(&definition.key.file);
        if sees_it && state.id != definition.key.file {
            refuse_collision(snapshot, state.id, &definition, &new_key, &new_name)?;
        }
        edits.extend(spelled);
    }
    edits.sort_by_key(|edit| (edit.file, edit.span));
    edits.dedup();
    Ok(edits)
}

/// Refuses a name that already means something where the renamed thing is seen.
fn refuse_collision(
    snapshot: &Snapshot,
    file: FileId,
    definition: &Definition,
    new_key: &NameKey,
    new_name: &str,
) -> Result<(), RenameRefusal> {
    let taken = find(snapshot, file, definition.key.namespace, new_key, new_name, false);
    match taken.iter().find(|other| other.key != definition.key) {
        None => Ok(()),
        Some(other) => {
            let place = locate(snapshot, other).map_or_else(String::new, |(file, _)| format!(" in {}", file.shown_path()));
            Err(RenameRefusal(format!("{new_name} already means {}{place}.", other.name())))
        }
    }
}

/// A name without its quotes, doubled ones undone.
fn unquoted(written: &str) -> String {
    match written.strip_prefix('"').and_then(|rest| rest.strip_suffix('"')) {
        Some(inside) => inside.replace("\"\"", "\""),
        None => written.to_owned(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::{applied, fixture};

    /// The text of the cursor's file after renaming, or the refusal.
    fn check(text: &str, new_name: &str) -> Result<String, String> {
        let fixture = fixture(text);
        let edits = rename(&fixture.snapshot, fixture.file, fixture.offset, new_name).map_err(|refusal| refusal.0)?;
        let own = edits.into_iter().filter(|edit| edit.file == fixture.file).map(|edit| (edit.span, edit.text));
        Ok(applied(&fixture.text, own))
    }

    #[test]
    fn header_and_references_change_together() {
        let text = "solution Sto‸ck\n    q.s.       water to 1 L\n\nsolution A\n    1 mL       stock\n    q.s.       water to 1 L\n";
        let expected = |header: &str, reference: &str| text.replace("Sto‸ck", header).replace("mL       stock", &format!("mL       {reference}"));
        assert_eq!(check(text, "Salt stock").unwrap(), expected("Salt stock", "Salt stock"));
        assert_eq!(check(text, "10x stock").unwrap(), expected("\"10x stock\"", "\"10x stock\""));
    }

    #[test]
    fn a_name_that_is_taken_where_the_thing_is_only_seen_is_refused() {
        let text = "solution Sto‸ck\n    q.s.       water to 1 L\n//- other.prep\nuse \"main.prep\"\nsolution Brine\n    q.s.       water to 1 L\n//- apart.prep\nsolution Rinse\n    q.s.       water to 1 L\n";
        assert!(check(text, "Brine").unwrap_err().contains("already means Brine in other.prep"));
        assert!(check(text, "Rinse").is_ok(), "a file that does not see it does not matter");
    }

    #[test]
    fn a_taken_name_and_the_library_are_refused() {
        let text = "solution Sto‸ck\n    q.s.       water to 1 L\n\nsolution A\n    1 mL       Stock\n    q.s.       water to 1 L\n";
        assert!(check(text, "A").unwrap_err().contains("already means A"));
        assert!(check(text, "sodium chloride").unwrap_err().contains("already means"));
        assert!(check("solution A\n    1 g        sodium chlo‸ride\n", "salt").unwrap_err().contains("built-in library"));
    }
}

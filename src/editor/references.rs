//! Where a thing is named.

use super::names::names;
use super::target::{Thing, defined_by, meanings, place, target};
use crate::model::{Definition, Namespace};
use crate::syntax::tree::Content;
use crate::text::{FileId, Span};
use crate::workspace::{FileState, Snapshot};

/// A place where a thing is named.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Occurrence {
    /// The file.
    pub file: FileId,
    /// The name's characters.
    pub span: Span,
    /// Whether the name is defined here rather than referred to.
    pub defines: bool,
}

/// The places of the user's files that name the thing at an offset, in the order of files and lines.
pub fn references(snapshot: &Snapshot, file: FileId, offset: usize, with_definition: bool) -> Vec<Occurrence> {
    let Some(definition) = definition_at(snapshot, file, offset) else { return Vec::new() };
    let mut files: Vec<_> = snapshot.files.values().collect();
    files.sort_by(|one, other| one.path.cmp(&other.path));
    let mut found: Vec<Occurrence> = Vec::new();
    if with_definition {
        found.extend(place(snapshot, &definition).map(|(file, span, _)| Occurrence { file, span, defines: true }));
    }
    for file in files {
        found.extend(references_in(snapshot, file, &definition));
    }
    found
}

/// The places of one file that name the thing at an offset.
pub fn document_highlight(snapshot: &Snapshot, file: FileId, offset: usize) -> Vec<Occurrence> {
    let Some((definition, state)) = definition_at(snapshot, file, offset).zip(snapshot.file(file)) else { return Vec::new() };
    let own = place(snapshot, &definition)
        .filter(|(of, ..)| *of == file)
        .map(|(file, span, _)| Occurrence { file, span, defines: true });
    let mut found: Vec<Occurrence> = own.into_iter().chain(references_in(snapshot, state, &definition)).collect();
    found.sort();
    found
}

/// The one thing that the cursor points at.
pub(super) fn definition_at(snapshot: &Snapshot, file: FileId, offset: usize) -> Option<Definition> {
    let target = target(snapshot, file, offset)?;
    match target.thing {
        Thing::Definition(block) => defined_by(target.cursor.file, block),
        Thing::Name { definitions, .. } => match definitions.as_slice() {
            [one] => Some(one.clone()),
            _ => None,
        },
        _ => None,
    }
}

/// The references of a file that mean a definition and nothing else.
pub(super) fn references_in(snapshot: &Snapshot, file: &FileState, definition: &Definition) -> Vec<Occurrence> {
    let mut found = Vec::new();
    for (index, placed) in file.tree.lines.iter().enumerate() {
        let Content::Statement(statement) = &placed.line.content else { continue };
        let kind = file.model.blocks.get(file.block_of_line(index).0).and_then(|block| block.kind());
        for name in names(statement, kind) {
            if !may_mean(name.namespace, definition) && !name.fallback.is_some_and(|fallback| may_mean(fallback, definition)) {
                continue;
            }
            let meanings = meanings(snapshot, file.id, &name);
            if let [one] = meanings.as_slice()
                && one.key == definition.key
                && one.block.kind() == definition.block.kind()
            {
                found.push(Occurrence { file: file.id, span: name.name.span.shifted(placed.start), defines: false });
            }
        }
    }
    found
}

/// Whether a name looked up in a namespace can mean a definition. Molecules are constituents defined by substances.
fn may_mean(namespace: Namespace, definition: &Definition) -> bool {
    namespace == definition.key.namespace
        || namespace == Namespace::Constituent && definition.key.namespace == Namespace::Ingredient
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    const TEXT: &str = "use \"stocks.prep\"\nsolution A\n    1 mL       Sto‸ck\n    2 mmol/L   sodium chloride, from stock\n    q.s.       water to 1 L\n//- stocks.prep\nsolution Stock\n    1 g        sodium chloride\n    q.s.       water to 1 L\n";

    #[test]
    fn every_place_that_names_a_thing_is_found() {
        let fixture = fixture(TEXT);
        let all = references(&fixture.snapshot, fixture.file, fixture.offset, true);
        let shown: Vec<(bool, String)> = all
            .iter()
            .map(|one| (one.defines, one.span.of(fixture.snapshot.file(one.file).unwrap().source.as_str()).to_owned()))
            .collect();
        assert_eq!(shown, [(true, "Stock".to_owned()), (false, "Stock".to_owned()), (false, "stock".to_owned())]);
        assert_eq!(references(&fixture.snapshot, fixture.file, fixture.offset, false).len(), 2);
        assert_eq!(document_highlight(&fixture.snapshot, fixture.file, fixture.offset).len(), 2);
    }
}

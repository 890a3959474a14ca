//! Every block of every file, by name.

use super::cursor::block_span;
use super::describe;
use super::document_symbols::SymbolKind;
use crate::model::NameKey;
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// A block found by name.
#[derive(Clone, Debug, PartialEq)]
pub struct WorkspaceSymbol {
    /// Its name.
    pub name: String,
    /// What stands beside the name.
    pub detail: String,
    /// What it is.
    pub kind: SymbolKind,
    /// The file.
    pub file: FileId,
    /// Its name's characters.
    pub name_span: Span,
    /// The whole block.
    pub span: Span,
}

/// The blocks of the user's files whose name holds every word of the query, in the order of files and lines.
pub fn workspace_symbols(snapshot: &Snapshot, query: &str) -> Vec<WorkspaceSymbol> {
    let key = NameKey::new(query);
    let words: Vec<&str> = key.as_str().split(' ').filter(|word| !word.is_empty()).collect();
    let mut files: Vec<_> = snapshot.files.values().collect();
    files.sort_by(|one, other| one.path.cmp(&other.path));
    let mut found = Vec::new();
    for file in files {
        for (index, block) in file.model.blocks.iter().enumerate() {
            let Some((kind, name)) = block.kind().zip(block.name.as_ref()) else { continue };
            let spelled = |name: &NameKey| words.iter().all(|word| name.as_str().contains(word));
            if spelled(&name.key) || block.also.iter().any(|also| spelled(&also.key)) {
                found.push(WorkspaceSymbol {
                    name: name.text.clone(),
                    detail: describe::detail(snapshot, file.id, index, block),
                    kind: SymbolKind::Block(kind),
                    file: file.id,
                    name_span: file.absolute(index, block.header_anchor()),
                    span: block_span(file, index),
                });
            }
        }
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    #[test]
    fn every_word_of_the_query_must_occur() {
        let fixture = fixture("solution Salt stock\nsolution Sugar stock\n//- other.prep\nbottle Salt\n");
        let names = |query: &str| -> Vec<String> { workspace_symbols(&fixture.snapshot, query).into_iter().map(|symbol| symbol.name).collect() };
        assert_eq!(names(""), ["Salt stock", "Sugar stock", "Salt"]);
        assert_eq!(names("stock sal"), ["Salt stock"]);
        assert_eq!(names("pepper"), [] as [&str; 0]);
    }
}

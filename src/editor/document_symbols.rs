//! The blocks of a file with what goes into them, as an outline.

use std::sync::Arc;

use super::cursor::{block_span, statement_span};
use super::describe;
use crate::model::{Action, Block, Entry};
use crate::syntax::tree::BlockKind;
use crate::text::{FileId, Span};
use crate::workspace::{FileState, Snapshot};

/// What an entry of the outline is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum SymbolKind {
    /// A block.
    Block(BlockKind),
    /// A line by which something goes in.
    Ingredient,
}

/// An entry of the outline.
#[derive(Clone, Debug, PartialEq)]
pub struct DocumentSymbol {
    /// Its name.
    pub name: String,
    /// What stands beside the name: the pH of a solution, the formula of a substance, the quantity of an ingredient.
    pub detail: String,
    /// What it is.
    pub kind: SymbolKind,
    /// The whole block or line.
    pub span: Span,
    /// Its name's characters.
    pub name_span: Span,
    /// What it holds.
    pub children: Vec<DocumentSymbol>,
}

/// The outline of a file.
pub fn document_symbols(snapshot: &Snapshot, file: FileId) -> Vec<DocumentSymbol> {
    let Some(state) = snapshot.file(file) else { return Vec::new() };
    let blocks = state.model.blocks.iter().enumerate();
    blocks
        .filter_map(|(index, block)| {
            let kind = block.kind()?;
            let span = block_span(state, index);
            let name_span = match &block.name {
                Some(_) => state.absolute(index, block.header_anchor()),
                None => Span::empty(span.start),
            };
            Some(DocumentSymbol {
                name: name_of(block),
                detail: describe::detail(snapshot, file, index, block),
                kind: SymbolKind::Block(kind),
                span: span.to(name_span),
                name_span,
                children: ingredients(state, index, block),
            })
        })
        .collect()
}

/// The name of a block; editors do not show entries without one.
fn name_of(block: &Block) -> String {
    match &block.name {
        Some(name) if !name.text.trim().is_empty() => name.text.clone(),
        _ => "(no name)".to_owned(),
    }
}

fn ingredients(state: &FileState, index: usize, block: &Arc<Block>) -> Vec<DocumentSymbol> {
    let entries = block.recipe().map_or(&[][..], |recipe| recipe.entries.as_slice());
    entries.iter().filter_map(|entry| ingredient(state, index, block, entry)).collect()
}

fn ingredient(state: &FileState, index: usize, block: &Arc<Block>, entry: &Entry) -> Option<DocumentSymbol> {
    let (first, last) = match &entry.action {
        Action::Add(addition) | Action::Alternative(addition) => (&addition.what, &addition.what),
        Action::Pair(pair) => (&pair.first, &pair.second),
        Action::MakeUp(make_up) => (&make_up.what, &make_up.what),
        Action::AddAll(reference) => (reference, reference),
        _ => return None,
    };
    let line = block.lines.get(entry.at.line)?;
    let statement = statement_span(line);
    let name_span = Span::new(first.at.span.start, last.at.span.end);
    let before = Span::new(statement.start, name_span.start).of(&line.text).trim();
    let start = state.absolute(index, entry.at).start - entry.at.span.start;
    Some(DocumentSymbol {
        name: name_span.of(&line.text).to_owned(),
        detail: before.split_whitespace().collect::<Vec<_>>().join(" "),
        kind: SymbolKind::Ingredient,
        span: statement.shifted(start).to(name_span.shifted(start)),
        name_span: name_span.shifted(start),
        children: Vec::new(),
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::editor::fixture::fixture;

    #[test]
    fn blocks_hold_their_ingredients() {
        let fixture = fixture("# Ours\nsolution A\n    made at    25 °C\n    2.0 g      sodium chloride # salt\n    q.s.       water to 1 L\n\n# Next\nsubstance S\n    formula    NaCl\n    gives      sodium, chloride\n");
        let symbols = document_symbols(&fixture.snapshot, fixture.file);
        let shown: Vec<String> = symbols
            .iter()
            .flat_map(|block| {
                let children = block.children.iter().map(|child| format!("  {} | {} | {}", child.name, child.detail, child.span.of(&fixture.text)));
                std::iter::once(format!("{} | {}", block.name, block.detail)).chain(children)
            })
            .collect();
        let [a, salt, water, s] = shown.as_slice() else { panic!("{shown:#?}") };
        assert!(a.starts_with("A | pH about 7"), "{a}");
        assert_eq!(salt, "  sodium chloride | 2.0 g | 2.0 g      sodium chloride");
        assert_eq!(water, "  water | q.s. | q.s.       water to 1 L");
        assert_eq!(s, "S | NaCl, 58.44 g/mol");
        assert!(symbols[0].span.of(&fixture.text).ends_with("to 1 L"));
    }
}

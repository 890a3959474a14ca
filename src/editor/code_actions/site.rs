//! Where a change of a recipe is asked for: the line, the recipe, and what came out of it.

use super::{ActionKind, CodeAction, FileEdit};
use crate::editor::cursor::Cursor;
use crate::editor::values::Values;
use crate::evaluate::{LineOutcome, Outcome};
use crate::finding::{Edit, EditPlace};
use crate::model::{Addition, Definition, NameKey, Namespace};
use crate::syntax::tree::Content;
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// The line under the cursor with its recipe.
pub struct Site<'a> {
    /// Everything known.
    pub snapshot: &'a Snapshot,
    /// The file.
    pub file: FileId,
    /// Where the cursor stands.
    pub cursor: Cursor<'a>,
    /// The recipe's values.
    pub values: Values<'a>,
    /// What came out, of a recipe that is no series.
    pub outcome: &'a Outcome,
}

impl<'a> Site<'a> {
    /// The site at an offset; nothing in recipes without values, which no change could be worked out from, and in series.
    pub fn new(snapshot: &'a Snapshot, file: FileId, offset: usize) -> Option<Self> {
        let cursor = Cursor::new(snapshot, file, offset)?;
        let values = Values::of(snapshot, file, cursor.block_index)?;
        Some(Site { snapshot, file, outcome: values.single()?, cursor, values })
    }

    /// Whether the cursor stands on the recipe's header.
    pub fn is_on_header(&self) -> bool {
        self.cursor.line_index == 0 && self.cursor.block.name.is_some()
    }

    /// The line's one outcome.
    pub fn line_of(&self, entry: usize) -> Option<&'a LineOutcome> {
        let mut lines = self.outcome.lines.iter().filter(|line| line.entry == entry);
        lines.next().filter(|_| lines.next().is_none())
    }

    /// A change of this file. Spans are of the cursor's line.
    pub fn on_line(&self, kind: ActionKind, title: String, edits: Vec<(Span, String)>) -> CodeAction {
        let edits = edits.into_iter().map(|(span, text)| (self.cursor.absolute(span), text)).collect();
        self.action(kind, title, edits)
    }

    /// A change of this file. Spans are of the file.
    pub fn action(&self, kind: ActionKind, title: String, edits: Vec<(Span, String)>) -> CodeAction {
        let edits = edits.into_iter().map(|(span, text)| FileEdit { file: self.file, span, text }).collect();
        CodeAction { title, kind, edits, finding: None, is_preferred: false }
    }

    /// A line inserted below the last statement of the recipe, as a replacement in the file.
    pub fn line_at_end(&self, text: String) -> Option<(Span, String)> {
        let last = self.cursor.block.lines.iter().rposition(|line| matches!(line.content, Content::Statement(_)))?;
        self.below(last, text)
    }

    /// A line inserted below a line of the recipe, as a replacement in the file.
    pub fn below(&self, line: usize, text: String) -> Option<(Span, String)> {
        self.snapshot.edit(self.file, self.cursor.block_index, &Edit { place: EditPlace::LineBelow(line), text })
    }

    /// A line of the recipe taken away, as a replacement in the file.
    pub fn without_line(&self, line: usize) -> Option<(Span, String)> {
        self.snapshot.edit(self.file, self.cursor.block_index, &Edit { place: EditPlace::WholeLine(line), text: String::new() })
    }

    /// The one thing of this name that goes into recipes of this file.
    pub fn ingredient(&self, key: &NameKey, text: &str) -> Option<Definition> {
        match crate::editor::target::find(self.snapshot, self.file, Namespace::Ingredient, key, text, true).as_slice() {
            [one] => Some(one.clone()),
            _ => None,
        }
    }

    /// Every substance that can be named in this file, once, in the order of names.
    pub fn substances(&self) -> Vec<Definition> {
        let scope = self.snapshot.scope(self.file);
        let mut found: Vec<Definition> = Vec::new();
        for (namespace, name, definitions) in scope.all() {
            if let ([one], Namespace::Ingredient) = (definitions, namespace)
                && one.key.name == *name
                && matches!(one.block.body, crate::model::Body::Substance(_))
            {
                found.push(one.clone());
            }
        }
        found.sort_by(|one, other| one.key.name.as_str().cmp(other.key.name.as_str()));
        found.dedup_by(|one, other| one.key.name == other.key.name);
        found
    }
}

/// Where the one plain amount of a line stands.
pub fn only_amount(addition: &Addition) -> Option<Span> {
    match addition.amounts.as_slice() {
        [amount] if addition.as_formula.is_none() && addition.qualifiers.from.is_none() && !addition.about => Some(amount.span),
        _ => None,
    }
}

/// A statement's first part filled up to the column where the next stands.
pub fn column(first: &str) -> String {
    format!("    {first:<10} ")
}

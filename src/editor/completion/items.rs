//! The list that completion fills.

use super::{CompletionItem, CompletionKind, Completions};
use crate::model::NameKey;
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;

/// How many items are offered at once.
const LIMIT: usize = 200;

/// The items found so far.
pub struct Items<'a> {
    /// Everything known.
    pub snapshot: &'a Snapshot,
    /// The file.
    pub file: FileId,
    /// The cursor.
    offset: usize,
    items: Vec<CompletionItem>,
}

/// What an item is, before it is placed.
pub struct Draft {
    /// What is listed.
    pub label: String,
    /// What is inserted.
    pub insert: String,
    /// Other spellings by which it may have been begun.
    pub spellings: Vec<String>,
    /// What it is.
    pub kind: CompletionKind,
    /// A few words beside it.
    pub detail: String,
    /// A sentence about it.
    pub documentation: String,
    /// Its place in the order; items of equal rank are ordered by label.
    pub rank: u32,
}

impl Draft {
    /// An item that is inserted as it is listed.
    pub fn plain(label: impl Into<String>, kind: CompletionKind, rank: u32) -> Self {
        let label = label.into();
        Draft {
            insert: label.clone(),
            label,
            spellings: Vec::new(),
            kind,
            detail: String::new(),
            documentation: String::new(),
            rank,
        }
    }
}

impl<'a> Items<'a> {
    /// An empty list.
    pub fn new(snapshot: &'a Snapshot, file: FileId, offset: usize) -> Self {
        Items { snapshot, file, offset, items: Vec::new() }
    }

    /// Adds an item in place of a span, where what was typed of it so far begins it or occurs in it.
    pub fn add(&mut self, span: Span, draft: Draft) {
        let spellings = std::iter::once(draft.label.as_str()).chain(draft.spellings.iter().map(String::as_str));
        let Some((closeness, filter)) = self.closeness(span, spellings) else { return };
        let item = CompletionItem {
            span,
            sort: format!("{:03}{closeness}{}", draft.rank, draft.label.to_lowercase()),
            filter,
            label: draft.label,
            insert: draft.insert,
            kind: draft.kind,
            detail: draft.detail,
            documentation: draft.documentation,
        };
        // The same thing is offered once, in place of the most that was begun.
        if !self.items.iter().any(|other| other.insert == item.insert) {
            self.items.push(item);
        }
    }

    /// Whether what was typed of a span so far may become one of these spellings.
    pub fn is_begun<'s>(&self, span: Span, spellings: impl IntoIterator<Item = &'s str>) -> bool {
        self.closeness(span, spellings).is_some()
    }

    /// How close what was typed of a span is to the nearest of some spellings (0 it begins with it, 1 words of it do, 2 it
    /// holds it), and that spelling.
    fn closeness<'s>(&self, span: Span, spellings: impl IntoIterator<Item = &'s str>) -> Option<(u8, String)> {
        let typed = NameKey::new(self.typed(span).trim());
        let typed = typed.as_str();
        let judged = spellings.into_iter().filter_map(|spelling| {
            let key = NameKey::new(spelling);
            let key = key.as_str();
            let close = if key.starts_with(typed) {
                0
            } else if typed.split(' ').all(|word| key.split([' ', '-']).any(|part| part.starts_with(word))) {
                1
            } else if typed.split(' ').all(|word| key.contains(word)) {
                2
            } else {
                return None;
            };
            Some((close, spelling.to_owned()))
        });
        judged.min_by_key(|(close, _)| *close)
    }

    /// What stands between the beginning of a span and the cursor.
    fn typed(&self, span: Span) -> String {
        let text = self.snapshot.file(self.file).map_or("", |file| file.source.as_str());
        let end = self.offset.clamp(span.start, span.end.max(span.start));
        Span::new(span.start, end).of(text).trim_start_matches('"').to_owned()
    }

    /// The list in order.
    pub fn finish(mut self) -> Completions {
        self.items.sort_by(|one, other| one.sort.cmp(&other.sort));
        let is_incomplete = self.items.len() > LIMIT;
        self.items.truncate(LIMIT);
        Completions { items: self.items, is_incomplete }
    }
}

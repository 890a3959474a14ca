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
        let typed = self.typed(span);
        let Some((closeness, filter)) = closeness(&typed, &draft) else { return };
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
        if !self.items.iter().any(|other| other.insert == item.insert && other.span == item.span) {
            self.items.push(item);
        }
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

/// How close a draft is to what was typed (0 begins with it, 1 a word of it does, 2 holds it), and the spelling that is.
fn closeness(typed: &str, draft: &Draft) -> Option<(u8, String)> {
    let typed = NameKey::new(typed.trim());
    let typed = typed.as_str();
    let spellings = std::iter::once(&draft.label).chain(&draft.spellings);
    let judged = spellings.filter_map(|spelling| {
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
        Some((close, spelling.clone()))
    });
    judged.min_by_key(|(close, _)| *close)
}

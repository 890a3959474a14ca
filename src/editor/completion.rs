//! What can be written at an offset: the tree's gap or part there decides, its written form is inserted.

mod items;
mod names;
mod parts;

use super::cursor::Cursor;
use super::names::names;
use crate::syntax::tree::{Content, Expected, Statement, Token, TokenKind};
use crate::text::{FileId, Span};
use crate::workspace::Snapshot;
use items::Items;

/// What is offered.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Completions {
    /// The items, the likeliest first.
    pub items: Vec<CompletionItem>,
    /// Whether more would be offered once more is typed.
    pub is_incomplete: bool,
}

/// Something that can be written.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct CompletionItem {
    /// The characters that it replaces: the whole of what was begun, back to its start.
    pub span: Span,
    /// What is listed.
    pub label: String,
    /// What is inserted.
    pub insert: String,
    /// What the editor compares with the characters before the cursor; another spelling where that was begun.
    pub filter: String,
    /// What it is.
    pub kind: CompletionKind,
    /// A few words beside it.
    pub detail: String,
    /// A sentence about it.
    pub documentation: String,
    /// By which the items are ordered.
    pub sort: String,
}

/// What an item is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum CompletionKind {
    /// A word of the language.
    Keyword,
    /// A solution.
    Solution,
    /// A bottle.
    Bottle,
    /// A substance.
    Substance,
    /// An ion or molecule in solution.
    Constituent,
    /// A solid phase.
    Solid,
    /// A lab.
    Lab,
    /// A unit.
    Unit,
    /// A property.
    Property,
    /// A finding's code.
    Code,
    /// A file.
    File,
    /// A value.
    Value,
}

/// What can be written at an offset.
pub fn completion(snapshot: &Snapshot, file: FileId, offset: usize) -> Completions {
    let Some(state) = snapshot.file(file) else { return Completions::default() };
    let offset = state.source.clamp(offset);
    let mut items = Items::new(snapshot, file, offset);
    match Cursor::new(snapshot, file, offset) {
        // Behind the last line break a new line begins that the tree does not hold.
        Some(cursor) if cursor.at >= cursor.line.text.len() && cursor.line.text.ends_with(['\n', '\r']) => {
            parts::statements(&mut items, cursor.block.role, Span::empty(offset));
        }
        Some(cursor) => at_cursor(&cursor, &mut items),
        None => parts::statements(&mut items, crate::model::BlockRole::Head, Span::empty(offset)),
    }
    items.finish()
}

fn at_cursor(cursor: &Cursor, items: &mut Items) {
    if is_in_text(cursor) {
        return;
    }
    if let Some(span) = beginning(cursor) {
        parts::statements(items, cursor.block.role, span);
        if matches!(cursor.line.content, Content::Junk(_) | Content::Blank) {
            return;
        }
    }
    let Some(statement) = cursor.statement() else { return };
    if let Some(name) = name_before(cursor, statement) {
        let span = cursor.absolute(Span::new(name.start, name.end.max(cursor.at)));
        names::at(items, cursor, statement, span);
    }
    for (expected, gap) in gaps(cursor) {
        part(items, cursor, statement, expected, cursor.absolute(gap));
    }
    if let Some((expected, span)) = begun(cursor) {
        part(items, cursor, statement, expected, cursor.absolute(span));
    }
}

/// Whether the cursor stands in a comment or in free text.
fn is_in_text(cursor: &Cursor) -> bool {
    let at = cursor.at;
    cursor.line.tokens.iter().any(|token| match token.kind {
        TokenKind::Comment => token.span.start < at && at <= token.span.end,
        TokenKind::Text => token.span.touches(at),
        _ => false,
    })
}

/// The first word of the line up to the cursor, where the cursor still stands in it.
fn beginning(cursor: &Cursor) -> Option<Span> {
    let before = cursor.line.text.get(..cursor.at)?;
    let typed = before.trim_start();
    let start = before.len() - typed.len();
    let is_word = typed.chars().all(|letter| letter.is_alphabetic() || matches!(letter, ' ' | '.' | '-'));
    if !is_word || typed.starts_with(' ') {
        return None;
    }
    let first_number_or_name = cursor.line.tokens.iter().find(|token| {
        !matches!(token.kind, TokenKind::Keyword | TokenKind::Missing(_) | TokenKind::Bad | TokenKind::Property)
    });
    match first_number_or_name {
        // `made at ` is still the beginning; `used at 4` and `like Tid` are not.
        Some(token) if token.span.start < cursor.at => None,
        _ if typed.ends_with(' ') && !matches!(cursor.line.content, Content::Junk(_)) => None,
        _ => Some(cursor.absolute(Span::new(start, cursor.at))),
    }
}

/// The name that the cursor stands in, or right behind, blanks between included.
fn name_before(cursor: &Cursor, statement: &Statement) -> Option<Span> {
    let blank = |span: Span| cursor.text(span).chars().all(|letter| matches!(letter, ' ' | '\t'));
    names(statement, cursor.block.kind()).into_iter().map(|name| name.name.span).find(|span| {
        span.start <= cursor.at && (cursor.at <= span.end || blank(Span::new(span.end, cursor.at)))
    })
}

/// The gaps at the cursor or before it with blanks between, with what belongs there.
fn gaps<'a>(cursor: &'a Cursor) -> impl Iterator<Item = (Expected, Span)> + 'a {
    cursor.line.tokens.iter().filter_map(|token| match token.kind {
        TokenKind::Missing(expected) if is_near(cursor, token.span.start) => Some((expected, Span::empty(cursor.at))),
        _ => None,
    })
}

/// Whether only blanks stand between a place and the cursor.
fn is_near(cursor: &Cursor, place: usize) -> bool {
    let between = Span::new(place.min(cursor.at), place.max(cursor.at));
    cursor.text(between).chars().all(|letter| matches!(letter, ' ' | '\t'))
}

/// A part other than a name that the cursor stands in or right behind: what belongs there, and its characters.
fn begun(cursor: &Cursor) -> Option<(Expected, Span)> {
    let mut before: Option<Token> = None;
    for token in &cursor.line.tokens {
        if token.span.start < cursor.at && cursor.at <= token.span.end {
            let expected = match token.kind {
                TokenKind::Unit => Expected::Unit,
                TokenKind::Property => Expected::Property,
                TokenKind::Code => Expected::Code,
                TokenKind::Path => Expected::Path,
                TokenKind::Keyword if before.is_some_and(|before| before.kind == TokenKind::Separator) => Expected::Qualifier,
                TokenKind::Bad => match before.map(|before| before.kind) {
                    Some(TokenKind::Number) => Expected::Unit,
                    Some(TokenKind::Separator) => Expected::Qualifier,
                    Some(TokenKind::Keyword) => after_keyword(cursor, before?)?,
                    _ => return None,
                },
                _ => return None,
            };
            return Some((expected, token.span));
        }
        if !matches!(token.kind, TokenKind::Missing(_)) {
            before = Some(*token);
        }
    }
    None
}

/// What is begun behind a keyword and cannot be read yet.
fn after_keyword(cursor: &Cursor, keyword: Token) -> Option<Expected> {
    Some(match (cursor.text(keyword.span), cursor.statement()?) {
        ("expect", _) => Expected::Property,
        ("to", Statement::QuantumSatis(_) | Statement::Pair(_) | Statement::Ingredient(_)) => Expected::Target,
        ("accept", _) => Expected::Code,
        ("use", _) => Expected::Path,
        ("under", _) => Expected::Gas,
        _ => return None,
    })
}

/// Offers what belongs into a gap or a begun part.
fn part(items: &mut Items, cursor: &Cursor, statement: &Statement, expected: Expected, span: Span) {
    match expected {
        Expected::IngredientName | Expected::SolutionName | Expected::ConstituentName | Expected::LabName => {
            names::of_kind(items, cursor, expected, span);
        }
        Expected::NewName | Expected::Text | Expected::Number | Expected::Formula | Expected::Other => {}
        Expected::Quantity => {}
        Expected::Unit => parts::units(items, cursor, statement, span),
        Expected::To => parts::to(items, statement, span),
        Expected::Target => parts::targets(items, cursor, span),
        Expected::Property => parts::properties(items, span),
        Expected::Range => parts::ranges(items, cursor, statement, span),
        Expected::Temperature => parts::temperatures(items, cursor, span),
        Expected::Duration => {}
        Expected::Qualifier => parts::qualifiers(items, statement, span),
        Expected::Path => parts::paths(items, cursor, span),
        Expected::Code => parts::codes(items, cursor, span),
        Expected::Because => parts::word(items, "because", span),
        Expected::Gas => parts::gases(items, span),
    }
}

//! From what pest found in a line to the typed line: tokens, gaps and faults are collected here.

mod conditions;
mod constants;
mod dangers;
mod definitions;
mod expectations;
mod gases;
mod junk;
mod labs;
mod names;
mod quantities;
mod solution;
mod statements;
mod targets;
mod texts;
mod tokens;

use super::grammar::{Rule, parse_line};
use super::scanner::is_space;
use super::tree::*;
use crate::text::Span;

pub(super) use junk::{FIRST_WORDS, MORE_FIRST_WORDS};
pub(super) use names::{can_stand_bare, quoted};

/// A node of pest's tree.
type Node<'t> = pest::iterators::Pair<'t, Rule>;

/// The longest logical line that is read, in bytes.
const LONGEST_LINE: usize = 10_000;

/// The line of a text. `first` says whether it is the first of its file, where a byte order mark may stand.
pub(super) fn line(text: &str, first: bool) -> Line {
    let mut builder = Builder::new(text);
    let content = builder.content(first);
    Line {
        text: text.to_owned(),
        indented: text.starts_with(is_space),
        content,
        tokens: builder.tokens,
        faults: builder.faults,
    }
}

/// Collects tokens and faults of one line while its statement is built.
struct Builder<'t> {
    text: &'t str,
    tokens: Vec<Token>,
    faults: Vec<Fault>,
    /// Text that no rule could read and that stands where the last part of the statement (or of a part after a comma)
    /// should be. Whoever misses a part there claims it.
    leftover: Option<Span>,
}

impl<'t> Builder<'t> {
    fn new(text: &'t str) -> Self {
        Builder { text, tokens: Vec::new(), faults: Vec::new(), leftover: None }
    }

    fn content(&mut self, first: bool) -> Content {
        if self.text.len() > LONGEST_LINE {
            return self.too_long();
        }
        let Some(parsed) = parse_line(self.text) else { return self.too_long() };
        let content = self.parsed(parsed);
        self.check_characters(first);
        self.fill_tokens();
        self.faults.sort_by_key(|fault| (fault.span.start, fault.span.end));
        content
    }

    fn too_long(&mut self) -> Content {
        let whole = Span::new(0, self.text.trim_end_matches(['\r', '\n']).len());
        self.token(TokenKind::Bad, whole);
        self.fault(whole, FaultKind::TooLong);
        Content::Junk(whole)
    }

    fn parsed(&mut self, line: Node<'t>) -> Content {
        let mut content = Content::Blank;
        let rest: Vec<Span> = children(&line, Rule::unexpected).map(|node| span(&node)).collect();
        self.leftover = rest.first().copied();
        for node in line.into_inner() {
            match node.as_rule() {
                Rule::comment => self.token(TokenKind::Comment, span(&node)),
                Rule::bullet => {
                    let place = span(&node);
                    self.token(TokenKind::Bad, place);
                    self.fault_with(place, FaultKind::Unexpected, vec![reading(place, "", "without the bullet")]);
                }
                Rule::statement => {
                    if let Some(inner) = node.into_inner().next() {
                        content = Content::Statement(self.statement(inner));
                    }
                }
                Rule::junk => content = self.junk(span(&node)),
                _ => {}
            }
        }
        let unclaimed = self.leftover.take();
        for place in rest.into_iter().enumerate().filter_map(|(at, place)| (at > 0 || unclaimed.is_some()).then_some(place)) {
            self.unexpected(place);
        }
        content
    }

    fn unexpected(&mut self, place: Span) {
        let comma_only = place.of(self.text).trim() == ",";
        self.token(TokenKind::Bad, place);
        if comma_only {
            self.fault_with(place, FaultKind::NothingAfterComma, vec![reading(place, "", "without the comma")]);
        } else {
            self.fault(place, FaultKind::Unexpected);
        }
    }

    fn token(&mut self, kind: TokenKind, place: Span) {
        self.tokens.push(Token { kind, span: place });
    }

    fn fault(&mut self, place: Span, kind: FaultKind) {
        self.fault_with(place, kind, Vec::new());
    }

    fn fault_with(&mut self, place: Span, kind: FaultKind, readings: Vec<Reading>) {
        self.faults.push(Fault { span: place, kind, readings });
    }

    fn of(&self, place: Span) -> &'t str {
        self.text.get(place.start..place.end).unwrap_or_default()
    }

    /// The offset after the white space that begins at `offset`: where the next part stands or would stand.
    fn after_spaces(&self, offset: usize) -> usize {
        let rest = self.text.get(offset..).unwrap_or_default();
        offset + rest.len() - rest.trim_start_matches(is_space).len()
    }

    /// A part that is not there: what could not be read in its place, or a gap.
    fn absent<T>(&mut self, after: usize, expected: Expected) -> Slot<T> {
        let at = self.after_spaces(after);
        if let Some(place) = self.leftover.filter(|place| place.start == at && !place.is_empty()) {
            self.leftover = None;
            self.token(TokenKind::Bad, place);
            self.fault(place, unreadable(expected));
            return Slot::Bad(place);
        }
        Slot::Missing(self.gap(after, expected))
    }

    /// Marks a gap and reports it.
    fn gap(&mut self, after: usize, expected: Expected) -> usize {
        let at = self.after_spaces(after);
        self.token(TokenKind::Missing(expected), Span::empty(at));
        self.fault(Span::empty(at), FaultKind::Missing(expected));
        at
    }

    /// Builds a part after a comma: `read` sees the part's own leftover instead of the statement's.
    fn part<R>(&mut self, node: &Node<'t>, read: impl FnOnce(&mut Self) -> R) -> R {
        let outer = self.leftover.take();
        self.leftover = child(node, Rule::excess).map(|excess| span(&excess));
        let built = read(self);
        if let Some(place) = self.leftover.take() {
            self.token(TokenKind::Bad, place);
            self.fault(place, FaultKind::Unexpected);
        }
        self.leftover = outer;
        built
    }
}

/// The fault of text that stands where `expected` should.
fn unreadable(expected: Expected) -> FaultKind {
    match expected {
        Expected::IngredientName
        | Expected::SolutionName
        | Expected::ConstituentName
        | Expected::LabName
        | Expected::NewName => FaultKind::BadName,
        Expected::Quantity | Expected::Unit | Expected::Temperature | Expected::Duration | Expected::Gas => FaultKind::BadQuantity,
        Expected::Number => FaultKind::BadNumber,
        Expected::Target => FaultKind::BadTarget,
        Expected::Property => FaultKind::UnknownProperty,
        Expected::Range => FaultKind::BadRange,
        Expected::Qualifier => FaultKind::UnknownQualifier,
        Expected::Formula => FaultKind::BadFormula,
        Expected::To | Expected::Path | Expected::Text | Expected::Code | Expected::Because | Expected::Other => FaultKind::Unexpected,
    }
}

fn reading(place: Span, text: impl Into<String>, meaning: impl Into<String>) -> Reading {
    Reading { span: place, text: text.into(), meaning: meaning.into() }
}

fn span(node: &Node<'_>) -> Span {
    let place = node.as_span();
    Span::new(place.start(), place.end())
}

fn child<'t>(node: &Node<'t>, rule: Rule) -> Option<Node<'t>> {
    node.clone().into_inner().find(|inner| inner.as_rule() == rule)
}

fn children<'t>(node: &Node<'t>, rule: Rule) -> impl Iterator<Item = Node<'t>> {
    node.clone().into_inner().filter(move |inner| inner.as_rule() == rule)
}

fn has(node: &Node<'_>, rule: Rule) -> bool {
    child(node, rule).is_some()
}

/// Where the readable part of a node ends: before the text that could not be read.
fn end_of(node: &Node<'_>) -> usize {
    child(node, Rule::excess).map_or(span(node).end, |excess| excess.as_span().start())
}

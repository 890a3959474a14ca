//! The parts of which statements are made: slots, names, texts, numbers, quantities.

use crate::text::Span;
use crate::units::Unit;

/// A part of a statement that may be missing or unreadable.
#[derive(Clone, Debug, PartialEq)]
pub enum Slot<T> {
    /// It is there.
    Given(T),
    /// Nothing stands at this offset.
    Missing(usize),
    /// Something stands there that cannot be read; a fault says why.
    Bad(Span),
}

impl<T> Slot<T> {
    /// The part, where it is there.
    pub fn given(&self) -> Option<&T> {
        match self {
            Slot::Given(part) => Some(part),
            Slot::Missing(_) | Slot::Bad(_) => None,
        }
    }
}

/// A name as written: unquoted text with runs of white space kept, or the inside of quotes (doubled quotes undone).
#[derive(Clone, Debug, PartialEq)]
pub struct Name {
    /// Its place, quotes included.
    pub span: Span,
    /// The name itself.
    pub text: String,
    /// Whether it stands in quotes.
    pub quoted: bool,
}

/// A piece of free text, trimmed.
#[derive(Clone, Debug, PartialEq)]
pub struct Text {
    /// Its place.
    pub span: Span,
    /// The text.
    pub text: String,
}

/// A number as written. Its digits are `span` of the line's text.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Number {
    /// Its place.
    pub span: Span,
    /// Its value, finite.
    pub value: f64,
}

/// A number with a unit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Quantity {
    /// From the number's first digit to the unit's last character.
    pub span: Span,
    /// The number.
    pub number: Number,
    /// The unit.
    pub unit: Unit,
    /// Where the unit stands (of a list or range with one unit at its end: there).
    pub unit_span: Span,
}

/// What stands after `±`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tolerance {
    /// From the sign to the end.
    pub span: Span,
    /// The half-width: a quantity, a percentage (unit with dimension `Percent`), or a bare number (pH).
    pub half_width: Number,
    /// Its unit; none for a bare number.
    pub unit: Option<Unit>,
}

/// A chemical formula as written, and its parse.
#[derive(Clone, Debug, PartialEq)]
pub struct FormulaText {
    /// Its place.
    pub span: Span,
    /// As written.
    pub text: String,
}

/// One or two temperatures.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct TemperatureRange {
    /// Its place.
    pub span: Span,
    /// The lower one.
    pub low: Quantity,
    /// The upper one; equal to `low` where one is given.
    pub high: Quantity,
}

//! A quantity as it stands on a line, and what it is in other units.

use super::cursor::Cursor;
use crate::syntax::tree::{Token, TokenKind};
use crate::text::Span;
use crate::units::{Dimension, Unit, format};

/// A number with its unit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Written {
    /// From the number to the unit, within the line.
    pub span: Span,
    /// In the base unit.
    pub base: f64,
    /// The unit.
    pub unit: Unit,
}

/// The quantity that a number or unit under the cursor belongs to. In a list or range the unit may stand further on.
pub fn quantity_at(cursor: &Cursor, token: Token) -> Option<Written> {
    let tokens = &cursor.line.tokens;
    let at = tokens.iter().position(|one| *one == token)?;
    let (number, unit) = match token.kind {
        TokenKind::Number => (token, unit_behind(cursor, at)?),
        TokenKind::Unit => (*tokens.get(..at)?.iter().rev().find(|one| one.kind == TokenKind::Number)?, token),
        _ => return None,
    };
    let value: f64 = cursor.text(number.span).chars().filter(|letter| !letter.is_whitespace()).collect::<String>().parse().ok()?;
    let parsed = Unit::parse(cursor.text(unit.span))?;
    Some(Written { span: number.span.to(unit.span), base: parsed.to_base(value), unit: parsed })
}

/// The unit that a number has, beyond further numbers of its list or range.
fn unit_behind(cursor: &Cursor, number: usize) -> Option<Token> {
    for token in cursor.line.tokens.get(number + 1..)? {
        match token.kind {
            TokenKind::Unit => return Some(*token),
            TokenKind::Number | TokenKind::Separator | TokenKind::Operator => {}
            TokenKind::Keyword if cursor.text(token.span) == "to" => {}
            _ => return None,
        }
    }
    None
}

/// The quantity in other units of its dimension, at most three, those that read well.
pub fn conversions(written: &Written) -> Vec<String> {
    let dimension = written.unit.dimension();
    if dimension == Dimension::Temperature {
        let other = if written.unit.symbol() == "K" { "°C" } else { "K" };
        return Unit::parse(other).map(|unit| format!("{} {other}", format::fixed(unit.from_base(written.base), 2))).into_iter().collect();
    }
    let mut shown: Vec<(f64, String)> = Unit::of(dimension)
        .filter(|unit| *unit != written.unit && !matches!(unit.symbol(), "M" | "mM" | "µM" | "nM"))
        .map(|unit| (unit.from_base(written.base), unit))
        .filter(|(value, _)| (0.01..10_000.0).contains(&value.abs()))
        .map(|(value, unit)| (value, format!("{} {}", format::plain(value), unit.symbol())))
        .collect();
    // The number nearest to ten reads best.
    shown.sort_by(|(one, _), (other, _)| distance(*one).total_cmp(&distance(*other)));
    shown.into_iter().map(|(_, text)| text).take(3).collect()
}

fn distance(value: f64) -> f64 {
    (value.abs().log10() - 1.0).abs()
}

/// The quantity as an amount, a mass or a concentration of the other kind, by molar mass (kg/mol).
pub fn by_molar_mass(written: &Written, kg_per_mol: f64) -> Option<String> {
    Some(match written.unit.dimension() {
        Dimension::Mass => format::amount(written.base / kg_per_mol, 4),
        Dimension::Amount => format::mass(written.base * kg_per_mol, 4),
        Dimension::AmountConcentration => format::mass_concentration(1000.0 * written.base * kg_per_mol, 4),
        Dimension::MassConcentration => format::concentration(written.base / 1000.0 / kg_per_mol, 4),
        Dimension::Molality => format!("{} of water", format::readable(written.base * kg_per_mol, Dimension::MassFraction, 4)),
        _ => return None,
    })
}

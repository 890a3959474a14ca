//! A recipe for more or less: masses, volumes and amounts, their targets and tolerances times one factor; all else stays.

use super::site::Site;
use super::{ActionKind, CodeAction};
use crate::syntax::tree::{Content, Statement, TokenKind};
use crate::text::Span;
use crate::units::{Dimension, Unit, format};

/// How much is offered to be made, in words and as a factor.
const FACTORS: &[(&str, f64)] = &[("Make half as much", 0.5), ("Make twice as much", 2.0), ("Make ten times as much", 10.0)];

/// On the header of a solution, the recipe for another amount.
pub fn offers(site: &Site) -> Vec<CodeAction> {
    if !site.is_on_header() {
        return Vec::new();
    }
    let action = |(title, factor): &(&str, f64)| {
        let edits = scaled(site, *factor);
        (!edits.is_empty()).then(|| site.action(ActionKind::Rewrite, (*title).to_owned(), edits))
    };
    FACTORS.iter().filter_map(action).collect()
}

fn scaled(site: &Site, factor: f64) -> Vec<(Span, String)> {
    let first = site.cursor.file.model.first_lines.get(site.cursor.block_index).copied().unwrap_or(0);
    let mut edits = Vec::new();
    for (index, line) in site.cursor.block.lines.iter().enumerate() {
        let Content::Statement(statement) = &line.content else { continue };
        let is_scaled = matches!(
            statement,
            Statement::Ingredient(_) | Statement::Or(_) | Statement::QuantumSatis(_) | Statement::Pair(_) | Statement::Makes(_)
        );
        if !is_scaled {
            continue;
        }
        let start = site.cursor.file.line_start(first + index);
        // Numbers that wait for their unit: a range or a series carries it once.
        let mut waiting: Vec<Span> = Vec::new();
        for token in &line.tokens {
            match token.kind {
                TokenKind::Number => waiting.push(token.span),
                TokenKind::Unit => {
                    let dimension = Unit::parse(token.span.of(&line.text)).map(Unit::dimension);
                    let numbers = std::mem::take(&mut waiting).into_iter();
                    if matches!(dimension, Some(Dimension::Mass | Dimension::Volume | Dimension::Amount)) {
                        edits.extend(numbers.filter_map(|span| {
                            Some((span.shifted(start), times(span.of(&line.text), factor)?))
                        }));
                    }
                }
                TokenKind::Name | TokenKind::Keyword | TokenKind::Property => waiting.clear(),
                _ => {}
            }
        }
    }
    edits
}

/// A written number times a factor, with all its digits: `2.5` doubled is `5.0`, halved `1.25`.
fn times(written: &str, factor: f64) -> Option<String> {
    let value: f64 = written.parse().ok()?;
    let decimals = written.split_once('.').map_or(0, |(_, decimals)| decimals.len());
    let product = value * factor;
    let exact = (decimals..decimals + 3).find(|decimals| {
        let steps = product * 10f64.powi(i32::try_from(*decimals).unwrap_or(0));
        (steps - steps.round()).abs() < 1e-6
    })?;
    Some(format::fixed(product, exact))
}

#[cfg(test)]
mod tests {
    use super::times;

    #[test]
    fn no_digit_is_lost() {
        let doubled = |written: &str| times(written, 2.0).unwrap();
        assert_eq!([doubled("2.5"), doubled("500"), doubled("0.2922")], ["5.0", "1000", "0.5844"]);
        let halved = |written: &str| times(written, 0.5).unwrap();
        assert_eq!([halved("2.5"), halved("1"), halved("3.12")], ["1.25", "0.5", "1.56"]);
        assert_eq!(times("0.05", 10.0).unwrap(), "0.50");
    }
}

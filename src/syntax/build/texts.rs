//! Free text, fields between commas, documents and formulas.

use super::*;
use crate::syntax::formula;

impl<'t> Builder<'t> {
    /// The text of a node that runs to the line's end, or a gap.
    pub(super) fn text_in(&mut self, node: &Node<'t>, after: usize) -> Slot<Text> {
        match child(node, Rule::text) {
            Some(text) => Slot::Given(self.text_at(span(&text))),
            None => self.absent(after, Expected::Text),
        }
    }

    /// The text of a node that runs to the next comma, or a gap.
    pub(super) fn field_in(&mut self, node: &Node<'t>, after: usize) -> Slot<Text> {
        match child(node, Rule::field) {
            Some(field) => Slot::Given(self.text_at(span(&field))),
            None => self.absent(after, Expected::Text),
        }
    }

    pub(super) fn text_at(&mut self, place: Span) -> Text {
        self.token(TokenKind::Text, place);
        Text { span: place, text: self.of(place).to_owned() }
    }

    pub(super) fn document(&mut self, node: &Node<'t>) -> Statement {
        let code = self.field_in(node, span(node).start + "document".len());
        let mut revision = None;
        let mut effective = None;
        for part in children(node, Rule::document_part) {
            self.part(&part, |builder| {
                if let Some(inner) = child(&part, Rule::revision) {
                    revision = Some(builder.field_in(&inner, span(&inner).end));
                } else if let Some(inner) = child(&part, Rule::effective) {
                    effective = Some(builder.field_in(&inner, span(&inner).end));
                } else if let Some(nothing) = child(&part, Rule::nothing) {
                    builder.nothing_after_comma(&nothing);
                }
            });
        }
        Statement::Document(Document { code, revision, effective })
    }

    /// A formula, checked to be one.
    pub(super) fn formula_at(&mut self, place: Span) -> Slot<FormulaText> {
        let written = self.of(place);
        match formula::parse(written) {
            Ok(_) => {
                self.token(TokenKind::Formula, place);
                Slot::Given(FormulaText { span: place, text: written.to_owned() })
            }
            Err(error) => {
                self.token(TokenKind::Bad, place);
                let spot = error.span.shifted(place.start);
                self.fault(if spot.is_empty() { place } else { spot }, FaultKind::BadFormula);
                Slot::Bad(place)
            }
        }
    }

    /// `CAS 77-86-1`.
    pub(super) fn cas(&mut self, node: &Node<'t>) -> Statement {
        let Some(field) = child(node, Rule::field) else {
            return Statement::Cas(self.absent(span(node).end, Expected::Text));
        };
        let place = span(&field);
        let written = self.of(place);
        if is_registry_number(written) {
            return Statement::Cas(Slot::Given(self.text_at(place)));
        }
        self.token(TokenKind::Bad, place);
        let plain: String = written.chars().map(|letter| if matches!(letter, '–' | '‑' | '‐' | '−' | '—') { '-' } else { letter }).collect();
        let readings = if is_registry_number(&plain) { vec![reading(place, plain, "")] } else { Vec::new() };
        self.fault_with(place, FaultKind::BadNumber, readings);
        Statement::Cas(Slot::Bad(place))
    }
}

/// Two to seven digits, two digits and a check digit: the sum of the digits, each times its place from the right, modulo
/// ten (CAS, "CAS Registry Number verification").
fn is_registry_number(written: &str) -> bool {
    let parts: Vec<&str> = written.split('-').collect();
    let [head, middle, check] = parts.as_slice() else { return false };
    let digits = format!("{head}{middle}");
    if !(2..=7).contains(&head.len()) || middle.len() != 2 || !digits.bytes().all(|byte| byte.is_ascii_digit()) {
        return false;
    }
    let sum: u32 = digits.bytes().rev().zip(1u32..).map(|(digit, place)| u32::from(digit - b'0') * place).sum();
    check.parse::<u32>().is_ok_and(|check| check == sum % 10) && check.len() == 1
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn registry_numbers_carry_a_check_digit() {
        // Water and tris(hydroxymethyl)aminomethane.
        assert!(is_registry_number("7732-18-5"));
        assert!(is_registry_number("77-86-1"));
        assert!(!is_registry_number("7732-18-4"));
        assert!(!is_registry_number("77–86–1"));
    }
}

//! What must hold, what was found, what was judged: `expect`, `standardise`, `found`, `accept`.

use super::quantities::STRENGTH;
use super::targets::{Conditions, RangeOrSeries};
use super::*;
use crate::syntax::spelling::nearest;
use crate::units::Dimension;

impl<'t> Builder<'t> {
    pub(super) fn expect(&mut self, node: &Node<'t>) -> Statement {
        let end = span(node).end;
        let Some(property_node) = child(node, Rule::property) else {
            let property = match child(node, Rule::bad_property) {
                Some(bad) => self.unknown_property(&bad),
                None => self.absent(end, Expected::Property),
            };
            let range = match child(node, Rule::range) {
                Some(range) => self.range_of_nothing(&range),
                None => Slot::Missing(self.after_spaces(end)),
            };
            let Conditions { as_formula, at, diluted } = self.conditions(node);
            return Statement::Expect(Expect { property, range, as_formula, at, diluted });
        };
        let property = self.property(&property_node);
        let range = match child(node, Rule::range) {
            Some(range_node) => match self.range(&range_node, &property.kind) {
                RangeOrSeries::Range(Slot::Given(Range::Exactly(bound))) => {
                    let written = self.of(bound.span);
                    let readings = ["at least", "at most"]
                        .iter()
                        .map(|word| reading(bound.span, format!("{word} {written}"), ""))
                        .collect();
                    self.fault_with(bound.span, FaultKind::BadRange, readings);
                    Slot::Bad(bound.span)
                }
                RangeOrSeries::Range(range) => range,
                RangeOrSeries::Series(_) => {
                    self.fault(span(&range_node), FaultKind::BadRange);
                    Slot::Bad(span(&range_node))
                }
            },
            None => self.absent(span(&property_node).end, Expected::Range),
        };
        let Conditions { as_formula, at, diluted } = self.conditions(node);
        Statement::Expect(Expect { property: Slot::Given(property), range, as_formula, at, diluted })
    }

    fn unknown_property(&mut self, node: &Node<'t>) -> Slot<Property> {
        const PROPERTIES: [&str; 12] = [
            "pH", "ionic strength", "buffer capacity", "osmolality", "conductivity", "density", "water activity",
            "alkalinity", "hardness",
            "total", "free", "saturation index of",
        ];
        let place = span(node);
        let written = self.of(place);
        self.token(TokenKind::Bad, place);
        let mut readings = Vec::new();
        if let Some(word) = nearest(written, PROPERTIES) {
            readings.push(reading(place, word, ""));
        } else if let Some(first) = written.split(is_space).next()
            && let Some(word) = nearest(first, PROPERTIES)
        {
            readings.push(reading(Span::new(place.start, place.start + first.len()), word, ""));
        } else if written.eq_ignore_ascii_case("osmolarity") {
            readings.push(reading(place, "osmolality", "per kilogram of water"));
        } else if crate::syntax::build::names::begins_a_name(written) {
            readings.push(reading(place, format!("total {written}"), "in all forms"));
            readings.push(reading(place, format!("free {written}"), "alone or with hydrogen"));
        }
        self.fault_with(place, FaultKind::UnknownProperty, readings);
        Slot::Bad(place)
    }

    /// The range of a property that is none: nothing can be said of it but its numbers.
    fn range_of_nothing(&mut self, node: &Node<'t>) -> Slot<Range> {
        for quantity in node.clone().into_inner().flat_map(|inner| children(&inner, Rule::quantity).collect::<Vec<_>>()) {
            if let Some(number) = child(&quantity, Rule::number) {
                self.token(TokenKind::Number, span(&number));
            }
            if let Some(unit) = child(&quantity, Rule::unit) {
                self.token(TokenKind::Unit, span(&unit));
            }
        }
        Slot::Bad(span(node))
    }

    pub(super) fn found(&mut self, node: &Node<'t>) -> Statement {
        let end = span(node).end;
        let strength = self.quantity_in(node, node.as_span().start() + "found".len(), STRENGTH, Expected::Quantity);
        let name = match (child(node, Rule::name), &strength) {
            (Some(name), _) => self.name(&name),
            (None, Slot::Missing(at)) => Slot::Missing(*at),
            (None, _) => self.absent(end, Expected::IngredientName),
        };
        let wanted = super::quantities::Wanted {
            fits: |dimension| dimension.is_strength() || dimension == Dimension::Percent,
            words: "a concentration or a percentage",
        };
        let mut tolerance = child(node, Rule::tolerance).and_then(|tolerance| self.tolerance(&tolerance, wanted, false));
        for part in children(node, Rule::found_part) {
            self.part(&part, |builder| {
                if let Some(written) = child(&part, Rule::tolerance) {
                    tolerance = builder.tolerance(&written, wanted, false);
                } else if let Some(nothing) = child(&part, Rule::nothing) {
                    builder.nothing_after_comma(&nothing);
                }
            });
        }
        Statement::Found(Found { strength, name, tolerance })
    }

    pub(super) fn accept(&mut self, node: &Node<'t>) -> Statement {
        let start = span(node).start + "accept".len();
        let code = self.code_in(node, start);
        let on = child(node, Rule::accept_on).map(|on| {
            match child(&on, Rule::quoted).or(child(&on, Rule::judged_name)) {
                Some(name) => self.name_at(span(&name), TokenKind::Name),
                None => self.absent(span(&on).end, Expected::IngredientName),
            }
        });
        let because = match child(node, Rule::accept_because) {
            Some(because) => self.text_in(&because, span(&because).end),
            None if matches!(code, Slot::Missing(_)) => Slot::Missing(self.after_spaces(span(node).end)),
            None => self.absent(span(node).end, Expected::Because),
        };
        Statement::Accept(Accept { code, on, because })
    }
}

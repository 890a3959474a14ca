//! `under air`, `under 5 % CO2, moist`.

use super::quantities::GAS;
use super::*;
use crate::units::Dimension;

impl<'t> Builder<'t> {
    pub(super) fn under(&mut self, node: &Node<'t>) -> Statement {
        Statement::Under(match child(node, Rule::gas) {
            Some(gas) => self.gas(&gas),
            None => self.absent(span(node).end, Expected::Gas),
        })
    }

    pub(super) fn gas(&mut self, node: &Node<'t>) -> Slot<Gas> {
        let place = span(node);
        let moist = has(node, Rule::moist);
        if let Some(nothing) = child(node, Rule::nothing) {
            self.nothing_after_comma(&nothing);
        }
        let Some(quantity_node) = child(node, Rule::quantity) else {
            return Slot::Given(Gas { span: place, kind: GasKind::Air, moist });
        };
        let quantity = self.quantity(&quantity_node, GAS, false);
        let of = self.name_in(node, span(&quantity_node).end, Expected::ConstituentName);
        match quantity {
            Slot::Given(quantity) if quantity.unit.dimension() == Dimension::Percent && quantity.number.value > 100.0 => {
                self.fault(quantity.span, FaultKind::OutOfBounds("at most 100 %".to_owned()));
                Slot::Bad(place)
            }
            Slot::Given(quantity) => Slot::Given(Gas { span: place, kind: GasKind::Part { quantity, of }, moist }),
            _ => Slot::Bad(place),
        }
    }
}

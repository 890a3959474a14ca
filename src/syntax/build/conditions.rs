//! Where a solution is made, used and kept, and what stands above it.

use super::quantities::{DURATION, TEMPERATURE};
use super::*;

impl<'t> Builder<'t> {
    /// The only quantity of a statement, a temperature.
    pub(super) fn temperature(&mut self, node: &Node<'t>) -> Slot<Quantity> {
        let slot = self.quantity_in(node, span(node).end, TEMPERATURE, Expected::Temperature);
        self.above_absolute_zero(slot)
    }

    fn above_absolute_zero(&mut self, slot: Slot<Quantity>) -> Slot<Quantity> {
        match slot {
            Slot::Given(quantity) if quantity.unit.to_base(quantity.number.value) < 0.0 => {
                self.fault(quantity.span, FaultKind::OutOfBounds("not below absolute zero".to_owned()));
                Slot::Bad(quantity.span)
            }
            slot => slot,
        }
    }

    /// The only quantity of a statement, a duration.
    pub(super) fn duration(&mut self, node: &Node<'t>) -> Slot<Quantity> {
        self.quantity_in(node, span(node).end, DURATION, Expected::Duration)
    }

    pub(super) fn used_at(&mut self, node: &Node<'t>) -> Statement {
        let quantities: Vec<Node<'t>> = children(node, Rule::quantity).collect();
        let is_range = has(node, Rule::to);
        let end = span(node).end;
        let temperatures = match quantities.as_slice() {
            [] => vec![self.absent(end, Expected::Temperature)],
            [from, to] if is_range => {
                let (low, high) = self.range_of(from, to, TEMPERATURE, true);
                vec![low, high]
            }
            [from] if is_range => {
                let low = self.quantity(from, TEMPERATURE, true);
                let after = child(node, Rule::to).map_or(end, |to| span(&to).end);
                vec![low, self.absent(after, Expected::Temperature)]
            }
            several => self.temperatures(several),
        };
        for nothing in children(node, Rule::nothing) {
            self.nothing_after_comma(&nothing);
        }
        let says_under = self.of(span(node)).split(is_space).any(|word| word.eq_ignore_ascii_case("under"));
        let under = match child(node, Rule::gas) {
            Some(gas) => Some(self.gas(&gas)),
            None if says_under => Some(self.absent(end, Expected::Gas)),
            None => None,
        };
        Statement::UsedAt(UsedAt { temperatures, is_range, under })
    }

    /// A list of temperatures that may carry its unit once, at its end.
    fn temperatures(&mut self, nodes: &[Node<'t>]) -> Vec<Slot<Quantity>> {
        let mut carried = None;
        let mut slots = Vec::new();
        for node in nodes.iter().rev() {
            let slot = match (has(node, Rule::unit), carried) {
                (false, Some((unit, unit_span))) => match child(node, Rule::number).and_then(|number| self.number(&number, true)) {
                    Some(number) => Slot::Given(Quantity { span: span(node), number, unit, unit_span }),
                    None => Slot::Bad(span(node)),
                },
                _ => self.quantity(node, TEMPERATURE, true),
            };
            if let Slot::Given(quantity) = &slot {
                carried = Some((quantity.unit, quantity.unit_span));
            }
            slots.push(self.above_absolute_zero(slot));
        }
        slots.reverse();
        slots
    }

    pub(super) fn stored_at(&mut self, node: &Node<'t>) -> Statement {
        let quantities: Vec<Node<'t>> = children(node, Rule::quantity).collect();
        let end = child(node, Rule::stored_for)
            .or(child(node, Rule::stored_part))
            .map_or(span(node).end, |next| span(&next).start);
        let (from, to) = match quantities.as_slice() {
            [from, to] => {
                let (low, high) = self.range_of(from, to, TEMPERATURE, true);
                (low, Some(high))
            }
            [from] if has(node, Rule::to) => {
                let low = self.quantity(from, TEMPERATURE, true);
                let after = child(node, Rule::to).map_or(end, |to| span(&to).end);
                (low, Some(self.absent(after, Expected::Temperature)))
            }
            [from, ..] => (self.quantity(from, TEMPERATURE, true), None),
            [] => (self.absent(end, Expected::Temperature), None),
        };
        let from = self.above_absolute_zero(from);
        let duration = child(node, Rule::stored_for).map(|stored_for| self.duration(&stored_for));
        let mut material = None;
        let mut dark = false;
        for part in children(node, Rule::stored_part) {
            self.part(&part, |builder| {
                if has(&part, Rule::in_the_dark) {
                    dark = true;
                } else if let Some(inner) = child(&part, Rule::in_material) {
                    if let Slot::Given(text) = builder.field_in(&inner, span(&inner).end) {
                        material = Some(text);
                    }
                } else if let Some(nothing) = child(&part, Rule::nothing) {
                    builder.nothing_after_comma(&nothing);
                }
            });
        }
        Statement::StoredAt(StoredAt { below: has(node, Rule::below), from, to, duration, material, dark })
    }
}

//! What a lab block says: room, balances, ware, meters.

use super::quantities::{MASS, PERCENT, TEMPERATURE, VOLUME, Wanted};
use super::*;
use crate::units::Dimension;

const OF_MASS: Wanted =
    Wanted { fits: |dimension| matches!(dimension, Dimension::Mass | Dimension::Percent), words: "a mass or a percentage" };
const OF_VOLUME: Wanted =
    Wanted { fits: |dimension| matches!(dimension, Dimension::Volume | Dimension::Percent), words: "a volume or a percentage" };
const OF_CONDUCTIVITY: Wanted = Wanted {
    fits: |dimension| matches!(dimension, Dimension::Conductivity | Dimension::Percent),
    words: "a percentage or a conductivity",
};
const OF_OSMOLALITY: Wanted = Wanted {
    fits: |dimension| matches!(dimension, Dimension::Osmolality | Dimension::Percent),
    words: "an osmolality or a percentage",
};
const OF_PH: Wanted = Wanted { fits: |_| false, words: "a number without a unit" };

impl<'t> Builder<'t> {
    pub(super) fn room(&mut self, node: &Node<'t>) -> Statement {
        Statement::Room(self.temperature_range(node, span(node).end))
    }

    pub(super) fn balance(&mut self, node: &Node<'t>) -> Statement {
        let start = span(node).start + "balance".len();
        let readability = match child(node, Rule::readability) {
            Some(readability) => self.quantity_in(&readability, span(&readability).end, MASS, Expected::Quantity),
            None => self.absent(start, Expected::Quantity),
        };
        let mut least = None;
        let mut greatest = None;
        let mut tolerance = None;
        for part in children(node, Rule::balance_part) {
            self.part(&part, |builder| {
                let quantities: Vec<Node<'t>> = children(&part, Rule::quantity).collect();
                match quantities.as_slice() {
                    [from, to] => {
                        if let (Slot::Given(low), Slot::Given(high)) = builder.range_of(from, to, MASS, false) {
                            least = Some(low);
                            greatest = Some(high);
                        }
                    }
                    [only] => {
                        if let Slot::Given(capacity) = builder.quantity(only, MASS, false) {
                            greatest = Some(capacity);
                        }
                        if has(&part, Rule::to) {
                            builder.gap(end_of(&part), Expected::Quantity);
                        }
                    }
                    _ => {
                        if let Some(written) = child(&part, Rule::tolerance) {
                            tolerance = builder.tolerance(&written, OF_MASS, false);
                        } else if let Some(nothing) = child(&part, Rule::nothing) {
                            builder.nothing_after_comma(&nothing);
                        }
                    }
                }
            });
        }
        Statement::Balance(match readability {
            Slot::Given(readability) => Slot::Given(Balance { readability, least, greatest, tolerance }),
            Slot::Missing(at) => Slot::Missing(at),
            Slot::Bad(place) => Slot::Bad(place),
        })
    }

    pub(super) fn ware_line(&mut self, node: &Node<'t>) -> Statement {
        let kind_span = child(node, Rule::ware_kind).map_or(span(node), |kind| span(&kind));
        let kind = match self.of(kind_span).to_lowercase().as_str() {
            "cylinder" => WareKind::Cylinder,
            "pipette" => WareKind::Pipette,
            "burette" => WareKind::Burette,
            "vessel" => WareKind::Vessel,
            _ => WareKind::Flask,
        };
        // `class A` before the first or after the last piece is said of all of them.
        let mut all_class_a = has(node, Rule::class_a);
        let mut wares: Vec<Ware> = Vec::new();
        for piece in children(node, Rule::ware) {
            let found = self.part(&piece, |builder| builder.ware(&piece));
            match found {
                Piece::Ware(ware) => wares.push(ware),
                Piece::ClassA => all_class_a = true,
                Piece::Unreadable => {}
            }
        }
        if !has(node, Rule::ware) || wares.is_empty() && span(node).end == kind_span.end {
            let _: Slot<Ware> = self.absent(span(node).end, Expected::Quantity);
        }
        if all_class_a {
            for ware in &mut wares {
                ware.class_a = true;
            }
        }
        Statement::Ware(WareLine { kind, wares })
    }

    fn ware(&mut self, node: &Node<'t>) -> Piece {
        if let Some(nothing) = child(node, Rule::nothing) {
            self.nothing_after_comma(&nothing);
            return Piece::Unreadable;
        }
        let quantities: Vec<Node<'t>> = children(node, Rule::quantity).collect();
        let (volume, up_to) = match quantities.as_slice() {
            [from, to] => match self.range_of(from, to, VOLUME, false) {
                (Slot::Given(low), Slot::Given(high)) => (Slot::Given(low), Some(high)),
                _ => (Slot::Bad(span(node)), None),
            },
            [only] => {
                let volume = self.quantity(only, VOLUME, false);
                if has(node, Rule::to) {
                    self.gap(end_of(node), Expected::Quantity);
                }
                (volume, None)
            }
            _ if has(node, Rule::class_a) => return Piece::ClassA,
            _ => return Piece::Unreadable,
        };
        let tolerance = child(node, Rule::tolerance).and_then(|tolerance| self.tolerance(&tolerance, OF_VOLUME, false));
        match volume {
            Slot::Given(volume) => {
                let place = Span::new(span(node).start, end_of(node));
                Piece::Ware(Ware { span: place, volume, up_to, tolerance, class_a: has(node, Rule::class_a) })
            }
            _ => Piece::Unreadable,
        }
    }

    pub(super) fn meter(&mut self, node: &Node<'t>) -> Statement {
        let kind_span = child(node, Rule::meter_kind).map_or(span(node), |kind| span(&kind));
        let word = self.of(kind_span).to_lowercase();
        let (kind, wanted) = if word.starts_with("ph") {
            (MeterKind::Ph, OF_PH)
        } else if word.starts_with("conductivity") {
            (MeterKind::Conductivity, OF_CONDUCTIVITY)
        } else {
            (MeterKind::Osmometer, OF_OSMOLALITY)
        };
        if !word.ends_with("meter") {
            self.gap(kind_span.end, Expected::Other);
            return Statement::Meter(Meter {
                kind,
                tolerance: Slot::Missing(self.after_spaces(kind_span.end)),
                reference: None,
                compensation: None,
            });
        }
        let tolerance = match child(node, Rule::tolerance) {
            Some(tolerance) => match self.tolerance(&tolerance, wanted, kind == MeterKind::Ph) {
                Some(tolerance) => Slot::Given(tolerance),
                None => Slot::Bad(span(&tolerance)),
            },
            None => {
                let after = kind_span.end;
                self.absent(after, Expected::Quantity)
            }
        };
        let mut reference = None;
        let mut compensation = None;
        for part in children(node, Rule::meter_part) {
            self.part(&part, |builder| {
                if let Some(inner) = child(&part, Rule::m_reference) {
                    reference = Some(builder.quantity_in(&inner, span(&inner).end, TEMPERATURE, Expected::Temperature));
                } else if let Some(inner) = child(&part, Rule::m_compensation) {
                    compensation = Some(builder.quantity_in(&inner, span(&inner).end, PERCENT, Expected::Quantity));
                } else if let Some(nothing) = child(&part, Rule::nothing) {
                    builder.nothing_after_comma(&nothing);
                }
            });
        }
        Statement::Meter(Meter { kind, tolerance, reference, compensation })
    }
}

/// What stands between two commas of a line of ware.
#[allow(clippy::large_enum_variant, reason = "it lives for one step of a loop")]
enum Piece {
    Ware(Ware),
    ClassA,
    Unreadable,
}

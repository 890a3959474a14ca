//! Labs: from statements to equipment in base units.

use std::sync::Arc;

use super::quantities::half_width;
use super::{Lowering, statement_span, statements};
use crate::finding::Anchor;
use crate::model::{Balance, ConductivityMeter, Lab, Stated, Ware};
use crate::syntax::tree::{Line, MeterKind, Quantity, Statement};
use crate::units::Unit;

impl Lowering {
    pub(super) fn lab(&mut self, lines: &[Arc<Line>]) -> Lab {
        let base = |quantity: &Quantity| quantity.unit.to_base(quantity.number.value);
        let mut lab = Lab::default();
        for (index, line, statement) in statements(lines) {
            match statement {
                Statement::Room(slot) => {
                    lab.room = slot.given().map(|range| Stated {
                        value: (base(&range.low), base(&range.high)),
                        at: Anchor::new(index, statement_span(line)),
                    });
                }
                Statement::Balance(slot) => lab.balances.extend(slot.given().map(|balance| Balance {
                    readability: base(&balance.readability),
                    least: balance.least.as_ref().map(base),
                    greatest: balance.greatest.as_ref().map(base),
                })),
                Statement::Ware(given) => lab.wares.extend(given.wares.iter().map(|ware| Ware {
                    kind: given.kind,
                    volume: base(&ware.volume),
                    up_to: ware.up_to.as_ref().map(base),
                    tolerance: ware.tolerance.as_ref().map(|given| half_width(given, Some(ware.volume.unit))),
                    class_a: ware.class_a,
                })),
                Statement::Meter(meter) => {
                    if meter.kind == MeterKind::Conductivity
                        && let Some(reference) = meter.reference.as_ref().and_then(|slot| slot.given())
                    {
                        lab.conductivity_meter = Some(ConductivityMeter {
                            reference_K: base(reference),
                            compensation_per_K: meter.compensation.as_ref().and_then(|slot| slot.given()).map(base),
                        });
                    }
                    lab.meters.extend(meter.tolerance.given().map(|tolerance| {
                    let beside: Option<Unit> = match meter.kind {
                        MeterKind::Ph => None,
                        MeterKind::Conductivity | MeterKind::Osmometer => tolerance.unit,
                    };
                    (meter.kind, half_width(tolerance, beside))
                    }));
                }
                _ => {}
            }
        }
        lab
    }
}

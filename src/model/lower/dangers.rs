//! Dangers and groups: from statements to what meets what.

use std::sync::Arc;

use super::quantities::{amount, base_value};
use super::lines::expectation;
use super::{Lowering, defined_name, reference, statement_span, statements};
use crate::finding::{Anchor, Code, Finding};
use crate::model::*;
use crate::syntax::tree::{Line, Statement};
use crate::units::Dimension;

/// The findings that a danger can raise.
const RAISED: [Code; 13] = [
    Code::DangerousTogether,
    Code::ToxicGasFromAcid,
    Code::AcidBeforeWater,
    Code::DecomposesInAcid,
    Code::DoesNotKeep,
    Code::ReactsTogether,
    Code::RedoxNotComputed,
    Code::BileSaltGels,
    Code::SaltsOutInOrganic,
    Code::PhSetInOrganic,
    Code::VolumeContracts,
    Code::LightSensitive,
    Code::AttacksGlass,
];

impl Lowering {
    pub(super) fn danger(&mut self, lines: &[Arc<Line>]) -> Danger {
        let mut danger = Danger::default();
        for (index, line, statement) in statements(lines) {
            let at = Anchor::new(index, statement_span(line));
            match statement {
                Statement::Also(names) => self.also.extend(names.iter().map(defined_name)),
                Statement::With(side) => danger.sides.push(Side {
                    names: side.names.iter().map(|name| reference(index, name)).collect(),
                    least: side.least.as_ref().and_then(|slot| slot.given()).map(amount),
                }),
                Statement::While(given) => danger.conditions.extend(expectation(index, at, given)),
                Statement::EvenInPassing => danger.even_in_passing = true,
                Statement::Keeps(keeps) => {
                    let kelvin = keeps.at.as_ref().and_then(|at| base_value(at, Dimension::Temperature));
                    danger.keeps.extend(base_value(&keeps.duration, Dimension::Time).map(|seconds| (seconds, kelvin)));
                }
                Statement::Raises(slot) => {
                    let Some(text) = slot.given() else { continue };
                    danger.raises = Code::from_name(&text.text).filter(|code| RAISED.contains(code));
                    if danger.raises.is_none() {
                        let names: Vec<&str> = RAISED.iter().map(|code| code.name()).collect();
                        self.findings.push(
                            Finding::new(
                                Code::BadDefinition,
                                Anchor::new(index, text.span),
                                format!("No danger raises {}.", text.text),
                            )
                            .help(format!("Write one of {}.", names.join(", "))),
                        );
                    }
                }
                Statement::Because(slot) => danger.because = slot.given().map(|text| text.text.clone()).unwrap_or_default(),
                Statement::Advice(slot) => danger.advice = slot.given().map(|text| text.text.clone()),
                Statement::InsteadOfTheBuiltIn => danger.instead = true,
                Statement::Source(slot) => danger.source = slot.given().map(|text| text.text.clone()),
                _ => {}
            }
        }
        danger
    }

    pub(super) fn group(&mut self, lines: &[Arc<Line>]) -> Group {
        let mut group = Group::default();
        for (index, _, statement) in statements(lines) {
            match statement {
                Statement::Also(names) => self.also.extend(names.iter().map(defined_name)),
                Statement::Holds(names) => group.holds.extend(names.iter().map(|name| reference(index, name))),
                Statement::InsteadOfTheBuiltIn => group.instead = true,
                Statement::Source(slot) => group.source = slot.given().map(|text| text.text.clone()),
                _ => {}
            }
        }
        group
    }
}

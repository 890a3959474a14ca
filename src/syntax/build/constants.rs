//! Constants: values with uncertainties, temperature equations, and the parts after their commas.

use super::quantities::{IONIC_STRENGTH, TEMPERATURE, Wanted};
use super::*;
use crate::units::Dimension;

macro_rules! of_dimension {
    ($words:literal, $($dimension:ident)|+) => {
        Some(Wanted { fits: |dimension| matches!(dimension, $(Dimension::$dimension)|+), words: $words })
    };
}

/// The unit that a constant takes; `None` for a number without unit (pKa, log K).
pub(super) type UnitOfConstant = Option<Wanted>;

pub(super) const ENTHALPY: UnitOfConstant = of_dimension!("a molar energy, as in 3.6 kJ/mol", MolarEnergy);
pub(super) const HEAT_CAPACITY: UnitOfConstant =
    of_dimension!("a molar heat capacity, as in -230 J/(mol·K)", MolarHeatCapacity);
pub(super) const INTERACTION: UnitOfConstant = of_dimension!("kg/mol", MassPerAmount);
pub(super) const MOLAR_MASS: UnitOfConstant = of_dimension!("a molar mass, as in 1228 g/mol", MassPerAmount);
pub(super) const MOLAR_CONDUCTIVITY: UnitOfConstant = of_dimension!("a molar conductivity, in S·cm²/mol", MolarConductivity);
pub(super) const MOLAR_VOLUME: UnitOfConstant = of_dimension!("a molar volume, in cm³/mol", MolarVolume);
pub(super) const LOGARITHM: UnitOfConstant = None;

impl<'t> Builder<'t> {
    /// `pKa 7.198 ± 0.002, of …`.
    pub(super) fn constant(&mut self, node: &Node<'t>, unit: UnitOfConstant) -> Constant {
        let value = self.value_in(node, unit, before_parts(node, Rule::constant_part));
        Constant { value, parts: self.constant_parts(node, Rule::constant_part) }
    }

    fn value_in(&mut self, node: &Node<'t>, unit: UnitOfConstant, after: usize) -> Slot<Value> {
        match child(node, Rule::value) {
            Some(value) => self.value(&value, unit),
            None => self.absent(after, Expected::Number),
        }
    }

    /// A value that must be a number, not an equation.
    pub(super) fn measured_in(&mut self, node: &Node<'t>, unit: UnitOfConstant, after: usize) -> Slot<Measured> {
        match self.value_in(node, unit, after) {
            Slot::Given(Value::Measured(measured)) => Slot::Given(measured),
            Slot::Given(Value::Equation(equation)) => {
                self.fault(equation.span, FaultKind::BadNumber);
                Slot::Bad(equation.span)
            }
            Slot::Missing(at) => Slot::Missing(at),
            Slot::Bad(place) => Slot::Bad(place),
        }
    }

    fn value(&mut self, node: &Node<'t>, unit: UnitOfConstant) -> Slot<Value> {
        let terms: Vec<Node<'t>> = children(node, Rule::term).collect();
        let is_equation = terms.len() > 1
            || terms.iter().any(|term| has(term, Rule::over_t) || has(term, Rule::ln_t) || has(term, Rule::times_t));
        if is_equation {
            return match self.equation(node) {
                Some(equation) => Slot::Given(Value::Equation(equation)),
                None => Slot::Bad(span(node)),
            };
        }
        match self.measured(node, unit) {
            Some(measured) => Slot::Given(Value::Measured(measured)),
            None => Slot::Bad(span(node)),
        }
    }

    fn measured(&mut self, node: &Node<'t>, unit: UnitOfConstant) -> Option<Measured> {
        let place = span(node);
        let digits = child(&child(node, Rule::term)?, Rule::unsigned)?;
        let sign = child(node, Rule::esign).map(|sign| span(&sign));
        let number_place = sign.map_or(span(&digits), |sign| sign.to(span(&digits)));
        let number = if number_place.len() == span(&digits).len() + sign.map_or(0, Span::len) {
            self.number_at(number_place, true)
        } else {
            // A sign set apart from its number.
            let text = self.of(number_place).split(is_space).collect::<String>();
            self.token(TokenKind::Bad, number_place);
            self.fault_with(number_place, FaultKind::BadNumber, vec![reading(number_place, text, "")]);
            None
        };
        let unit_node = child(node, Rule::unit);
        let found = match (&unit_node, unit) {
            (Some(written), Some(wanted)) => Some(self.unit(written, number_place, wanted)?),
            (Some(written), None) => {
                self.token(TokenKind::Bad, span(written));
                self.fault(span(written), FaultKind::WrongKindOfUnit("a number without a unit".to_owned()));
                return None;
            }
            (None, Some(_)) => {
                self.token(TokenKind::Missing(Expected::Unit), Span::empty(number_place.end));
                self.fault(number_place, FaultKind::UnitMissing);
                return None;
            }
            (None, None) => None,
        };
        let uncertainty = match child(node, Rule::tolerance) {
            Some(tolerance) => {
                let wanted = unit.unwrap_or(super::quantities::ANY_UNIT);
                let half_width = self.tolerance(&tolerance, wanted, true)?;
                Some(match (half_width.unit, found) {
                    // The uncertainty is kept in the unit of the value.
                    (Some(own), Some(of_value)) => of_value.difference_from_base(own.difference_to_base(half_width.half_width.value)),
                    _ => half_width.half_width.value,
                })
            }
            None => None,
        };
        Some(Measured { span: place, number: number?, unit: found, uncertainty })
    }

    /// `3404.71/T - 14.8435 + 0.032786 T ± 0.003`, T in kelvin; each kind of term once.
    fn equation(&mut self, node: &Node<'t>) -> Option<Equation> {
        let place = span(node);
        let mut equation = Equation { span: place, a: 0.0, b: 0.0, c: 0.0, d: 0.0, uncertainty: None };
        let mut negative = false;
        let mut seen = Vec::new();
        for inner in node.clone().into_inner() {
            match inner.as_rule() {
                Rule::esign => negative = self.of(span(&inner)) != "+",
                Rule::term => {
                    let digits = child(&inner, Rule::unsigned)?;
                    let number = self.number_at(span(&digits), false)?;
                    let value = if std::mem::take(&mut negative) { -number.value } else { number.value };
                    let kind = inner.clone().into_inner().nth(1).map(|kind| kind.as_rule());
                    let coefficient = match kind {
                        Some(Rule::over_t) => &mut equation.a,
                        Some(Rule::times_t) => &mut equation.c,
                        Some(Rule::ln_t) => &mut equation.d,
                        _ => &mut equation.b,
                    };
                    *coefficient = value;
                    if seen.contains(&kind) {
                        self.fault(span(&inner), FaultKind::BadNumber);
                        return None;
                    }
                    seen.push(kind);
                }
                Rule::unit => {
                    self.token(TokenKind::Bad, span(&inner));
                    self.fault(span(&inner), FaultKind::WrongKindOfUnit("a number without a unit".to_owned()));
                    return None;
                }
                Rule::tolerance => {
                    equation.uncertainty =
                        self.tolerance(&inner, super::quantities::ANY_UNIT, true).map(|tolerance| tolerance.half_width.value);
                }
                _ => {}
            }
        }
        Some(equation)
    }

    /// The parts after the commas of a constant.
    pub(super) fn constant_parts(&mut self, node: &Node<'t>, rule: Rule) -> Vec<ConstantPart> {
        children(node, rule)
            .map(|part| ConstantPart { span: span(&part), kind: self.constant_part(&part) })
            .collect()
    }

    fn constant_part(&mut self, node: &Node<'t>) -> ConstantPartKind {
        let Some(inner) = node.clone().into_inner().find(|inner| inner.as_rule() != Rule::excess) else {
            self.unknown_part(node);
            return ConstantPartKind::Unreadable;
        };
        self.part(node, |builder| {
            let end = span(&inner).end;
            match inner.as_rule() {
                Rule::c_of => ConstantPartKind::Of(builder.name_in(&inner, end, Expected::ConstituentName)),
                Rule::c_named => ConstantPartKind::Named(builder.definition_in(&inner, end)),
                Rule::c_itself => ConstantPartKind::Itself(builder.number_in(&inner, end)),
                Rule::c_enthalpy => ConstantPartKind::Enthalpy(builder.measured_in(&inner, ENTHALPY, end)),
                Rule::c_heat_capacity => ConstantPartKind::HeatCapacity(builder.measured_in(&inner, HEAT_CAPACITY, end)),
                Rule::c_log_k => ConstantPartKind::LogK(builder.value_in(&inner, LOGARITHM, end)),
                Rule::c_at_ionic_strength => ConstantPartKind::AtIonicStrength(builder.quantity_in(
                    &inner,
                    end,
                    IONIC_STRENGTH,
                    Expected::Quantity,
                )),
                Rule::c_at => ConstantPartKind::At(builder.quantity_in(&inner, end, TEMPERATURE, Expected::Temperature)),
                Rule::c_range => ConstantPartKind::Range(builder.temperature_range(&inner, end)),
                Rule::c_source => ConstantPartKind::Source(builder.field_in(&inner, end)),
                Rule::c_partner => match child(&inner, Rule::counted) {
                    Some(counted) => ConstantPartKind::Partner(builder.counted(&counted)),
                    None => ConstantPartKind::Unreadable,
                },
                _ => {
                    builder.nothing_after_comma(&inner);
                    ConstantPartKind::Unreadable
                }
            }
        })
    }

    fn unknown_part(&mut self, node: &Node<'t>) {
        const WORDS: [&str; 9] =
            ["of", "enthalpy", "heat capacity", "log K", "source", "named", "itself", "from", "at ionic strength"];
        let place = span(node);
        self.token(TokenKind::Bad, place);
        let first = self.of(place).split(is_space).next().unwrap_or_default();
        let readings = crate::syntax::spelling::nearest(first, WORDS)
            .map(|word| reading(Span::new(place.start, place.start + first.len()), word, ""))
            .into_iter()
            .collect();
        self.fault_with(place, FaultKind::UnknownQualifier, readings);
    }

    fn number_in(&mut self, node: &Node<'t>, after: usize) -> Slot<Number> {
        match child(node, Rule::number) {
            Some(number) => match self.number(&number, false) {
                Some(number) => Slot::Given(number),
                None => Slot::Bad(span(&number)),
            },
            None => self.absent(after, Expected::Number),
        }
    }

    /// `2 hydrogen`, `sodium`.
    pub(super) fn counted(&mut self, node: &Node<'t>) -> Given {
        let end = span(node).end;
        let Some(number) = child(node, Rule::number) else {
            return Given { count: 1.0, count_span: None, name: self.name_in(node, end, Expected::ConstituentName) };
        };
        let count = self.number(&number, true);
        let name = self.name_in(node, end, Expected::ConstituentName);
        Given {
            count: count.map_or(1.0, |count| count.value),
            count_span: Some(span(&number)),
            // A count that cannot be read must not pass for one.
            name: if count.is_some() { name } else { Slot::Bad(span(node)) },
        }
    }

    /// `complex with 2 hydrogen, itself 3, named …, log K …`.
    pub(super) fn complex(&mut self, node: &Node<'t>) -> Statement {
        let partner = match child(node, Rule::counted) {
            Some(counted) => Slot::Given(self.counted(&counted)),
            None => self.absent(before_parts(node, Rule::complex_part), Expected::ConstituentName),
        };
        Statement::ComplexWith(Complex { partner, parts: self.constant_parts(node, Rule::complex_part) })
    }

    /// `interaction with NAME, VALUE`.
    pub(super) fn interaction(&mut self, node: &Node<'t>) -> Statement {
        let after_name = child(node, Rule::value)
            .or(child(node, Rule::constant_part))
            .map_or(span(node).end, |next| span(&next).start);
        let partner = self.name_in(node, after_name, Expected::ConstituentName);
        let value = match partner {
            Slot::Missing(at) if !has(node, Rule::value) => Slot::Missing(at),
            _ => self.measured_in(node, INTERACTION, before_parts(node, Rule::constant_part)),
        };
        let parts = self.constant_parts(node, Rule::constant_part);
        Statement::InteractionWith(Partnered { partner, value, parts })
    }

    /// One or two temperatures, of which the last may carry the unit of both.
    pub(super) fn temperature_range(&mut self, node: &Node<'t>, after: usize) -> Slot<TemperatureRange> {
        let quantities: Vec<Node<'t>> = children(node, Rule::quantity).collect();
        match quantities.as_slice() {
            [from, to] => match self.range_of(from, to, TEMPERATURE, true) {
                (Slot::Given(low), Slot::Given(high)) => {
                    Slot::Given(TemperatureRange { span: span(from).to(span(to)), low, high })
                }
                _ => Slot::Bad(span(from).to(span(to))),
            },
            [only] => {
                let low = self.quantity(only, TEMPERATURE, true);
                match low {
                    Slot::Given(_) if has(node, Rule::to) => self.absent(span(node).end, Expected::Temperature),
                    Slot::Given(low) => Slot::Given(TemperatureRange { span: low.span, low, high: low }),
                    _ => Slot::Bad(span(only)),
                }
            }
            _ => self.absent(after, Expected::Temperature),
        }
    }
}

/// Where the parts after commas begin, or the node ends.
pub(super) fn before_parts(node: &Node<'_>, rule: Rule) -> usize {
    child(node, rule).map_or(span(node).end, |part| {
        // Before the comma that opens the part.
        let inside = node.as_str().get(..part.as_span().start().saturating_sub(node.as_span().start())).unwrap_or_default();
        node.as_span().start() + inside.rfind(',').unwrap_or(inside.len())
    })
}

//! Numbers, units, quantities and tolerances.

use super::names::StrengthOrName;
use super::*;
use crate::syntax::number::{self, Misread};
use crate::syntax::spelling::{is_disguised_unit, wrong_unit};
use crate::units::{Dimension, Unit};

/// Which units fit a place, and how a person would say so.
#[derive(Clone, Copy)]
pub(super) struct Wanted {
    pub(super) fits: fn(Dimension) -> bool,
    pub(super) words: &'static str,
}

macro_rules! wanted {
    ($name:ident, $words:literal, $($dimension:ident)|+) => {
        pub(super) const $name: Wanted =
            Wanted { fits: |dimension| matches!(dimension, $(Dimension::$dimension)|+), words: $words };
    };
}

pub(super) const INGREDIENT: Wanted = Wanted {
    fits: Dimension::opens_an_ingredient,
    words: "a mass, a volume, an amount or a concentration",
};
pub(super) const STRENGTH: Wanted = Wanted { fits: Dimension::is_strength, words: "a concentration" };
wanted!(TEMPERATURE, "a temperature, as in 22 °C", Temperature);
wanted!(DURATION, "a duration, as in 4 weeks", Time);
wanted!(EXTENT, "a volume or a mass", Volume | Mass);
wanted!(PERCENT, "a percentage, as in 99.5 %", Percent);
wanted!(DENSITY, "a density, as in 1.159 g/mL", MassConcentration);
wanted!(MASS, "a mass", Mass);
wanted!(VOLUME, "a volume", Volume);
wanted!(MASS_OR_VOLUME, "a mass or a volume", Mass | Volume | Amount | Count);
wanted!(GAS, "a percentage or a pressure, as in 5 % or 4 kPa", Percent | Pressure);
wanted!(ACTIVITY, "an enzyme activity, as in 250 U/µL", EnzymeActivityConcentration | EnzymeActivity);
wanted!(IONIC_STRENGTH, "an amount concentration or a molality", AmountConcentration | Molality);
wanted!(SOLUBILITY, "a concentration or a content", MassConcentration | AmountConcentration | Molality | MassFraction);
pub(super) const ANY_UNIT: Wanted = Wanted { fits: |_| true, words: "a unit" };

impl<'t> Builder<'t> {
    /// A number, or nothing where it cannot be read; a fault says why.
    pub(super) fn number(&mut self, node: &Node<'t>, signed: bool) -> Option<Number> {
        self.number_at(span(node), signed)
    }

    pub(super) fn number_at(&mut self, place: Span, signed: bool) -> Option<Number> {
        let written = self.of(place);
        let sign = written.chars().next().filter(|first| matches!(first, '+' | '-' | '−' | '–' | '—'));
        if let Some(sign) = sign.filter(|_| !signed) {
            let without = written.get(sign.len_utf8()..).unwrap_or_default();
            self.token(TokenKind::Bad, place);
            self.fault_with(place, FaultKind::SignedQuantity, vec![reading(place, without, "without a sign")]);
            return None;
        }
        match if signed { number::read_signed(written) } else { number::read(written) } {
            Ok(value) => {
                self.token(TokenKind::Number, place);
                Some(Number { span: place, value })
            }
            Err(Misread { kind, readings }) => {
                self.token(TokenKind::Bad, place);
                let readings = readings.into_iter().map(|(text, meaning)| reading(place, text, meaning)).collect();
                self.fault_with(place, kind, readings);
                None
            }
        }
    }

    /// The unit of a node, where it is one that fits.
    pub(super) fn unit(&mut self, node: &Node<'t>, number: Span, wanted: Wanted) -> Option<Unit> {
        let place = span(node);
        let written = self.of(place);
        match Unit::parse(written) {
            Some(unit) if (wanted.fits)(unit.dimension()) => {
                self.token(TokenKind::Unit, place);
                Some(unit)
            }
            Some(unit) => {
                self.token(TokenKind::Bad, place);
                let of_what: Vec<Reading> = ["% w/w", "% w/v", "% v/v"]
                    .iter()
                    .filter(|symbol| Unit::parse(symbol).is_some_and(|unit| (wanted.fits)(unit.dimension())))
                    .map(|symbol| reading(place, *symbol, percent_meaning(symbol)))
                    .collect();
                if unit.dimension() == Dimension::Percent && !of_what.is_empty() {
                    self.fault_with(place, FaultKind::BarePercent, of_what);
                } else {
                    self.fault(place, FaultKind::WrongKindOfUnit(wanted.words.to_owned()));
                }
                None
            }
            None => {
                self.token(TokenKind::Bad, place);
                self.unknown_unit(place, number, wanted);
                None
            }
        }
    }

    fn unknown_unit(&mut self, place: Span, number: Span, wanted: Wanted) {
        let written = self.of(place);
        if is_disguised_unit(written) {
            // The fault of the letter says it all.
            return;
        }
        let Some(wrong) = wrong_unit(written) else {
            self.fault(place, FaultKind::UnknownUnit);
            return;
        };
        let value = number::read(self.of(number)).ok();
        let mut readings = Vec::new();
        for alternative in wrong.readings {
            let fits = Unit::parse(&alternative.unit).is_none_or(|unit| (wanted.fits)(unit.dimension()));
            match (alternative.number, value) {
                _ if !fits => {}
                (None, _) => readings.push(reading(place, alternative.unit, alternative.meaning)),
                (Some(factor), Some(value)) => {
                    let text = format!("{} {}", shortest(value * factor), alternative.unit);
                    readings.push(reading(number.to(place), text, alternative.meaning));
                }
                (Some(_), None) => {}
            }
        }
        self.fault_with(place, wrong.kind, readings);
    }

    /// A quantity with a unit that fits.
    pub(super) fn quantity(&mut self, node: &Node<'t>, wanted: Wanted, signed: bool) -> Slot<Quantity> {
        let place = span(node);
        let Some(number_node) = child(node, Rule::number) else { return Slot::Bad(place) };
        let number_place = span(&number_node);
        let Some(unit_node) = child(node, Rule::unit) else {
            if self.number(&number_node, signed).is_some() {
                self.unit_missing(number_place);
            }
            return Slot::Bad(place);
        };
        let number = self.number(&number_node, signed);
        let unit = self.unit(&unit_node, number_place, wanted);
        match (number, unit) {
            (Some(number), Some(unit)) => {
                Slot::Given(Quantity { span: place, number, unit, unit_span: span(&unit_node) })
            }
            _ => Slot::Bad(place),
        }
    }

    fn unit_missing(&mut self, number: Span) {
        self.token(TokenKind::Missing(Expected::Unit), Span::empty(number.end));
        self.fault(number, FaultKind::UnitMissing);
    }

    /// The quantity among a node's children, or the gap after `after`.
    pub(super) fn quantity_in(
        &mut self,
        node: &Node<'t>,
        after: usize,
        wanted: Wanted,
        expected: Expected,
    ) -> Slot<Quantity> {
        match child(node, Rule::quantity) {
            Some(quantity) => self.quantity(&quantity, wanted, signs_are_lawful(expected)),
            None => self.absent(after, expected),
        }
    }

    /// Two quantities of which the last may carry the unit of both: `18 to 25 °C`. A range that does not rise is a fault.
    pub(super) fn range_of(
        &mut self,
        from: &Node<'t>,
        to: &Node<'t>,
        wanted: Wanted,
        signed: bool,
    ) -> (Slot<Quantity>, Slot<Quantity>) {
        let low = if has(from, Rule::unit) { self.quantity(from, wanted, signed) } else { Slot::Bad(span(from)) };
        let number = match child(from, Rule::number) {
            Some(number) if !has(from, Rule::unit) => self.number(&number, signed),
            _ => None,
        };
        let high = self.quantity(to, wanted, signed);
        let low = match (&high, number) {
            (Slot::Given(high), Some(number)) => Slot::Given(Quantity {
                span: span(from),
                number,
                unit: high.unit,
                unit_span: high.unit_span,
            }),
            _ => low,
        };
        if let (Slot::Given(low), Slot::Given(high)) = (&low, &high)
            && low.unit.dimension() == high.unit.dimension()
            && low.unit.to_base(low.number.value) >= high.unit.to_base(high.number.value)
        {
            self.fault(span(from).to(span(to)), FaultKind::RangeDoesNotRise);
        }
        (low, high)
    }

    /// `± 0.01 g`, `± 1 %`; without a unit only where `bare` allows it.
    pub(super) fn tolerance(&mut self, node: &Node<'t>, wanted: Wanted, bare: bool) -> Option<Tolerance> {
        let place = span(node);
        let sign = self.of(place);
        if sign.starts_with("+-") {
            let sign = Span::new(place.start, place.start + 2);
            self.fault_with(sign, FaultKind::WrittenForm, vec![reading(sign, "±", "")]);
        }
        let Some(quantity) = child(node, Rule::quantity) else {
            self.gap(place.end, Expected::Quantity);
            return None;
        };
        let number_node = child(&quantity, Rule::number)?;
        let number = self.number(&number_node, false);
        match child(&quantity, Rule::unit) {
            Some(unit_node) => {
                let unit = self.unit(&unit_node, span(&number_node), wanted)?;
                Some(Tolerance { span: place, half_width: number?, unit: Some(unit) })
            }
            None if bare => Some(Tolerance { span: place, half_width: number?, unit: None }),
            None => {
                if number.is_some() {
                    self.unit_missing(span(&number_node));
                }
                None
            }
        }
    }

    /// A strength before a name, or the discovery that the number does not belong there.
    /// `whole` reaches from the number to the end of the name.
    pub(super) fn strength(&mut self, node: &Node<'t>, whole: Span) -> StrengthOrName {
        let place = span(node);
        let Some(number_node) = child(node, Rule::number) else { return StrengthOrName::Strength(Slot::Bad(place)) };
        let number_place = span(&number_node);
        let as_name = || vec![reading(whole, super::names::quoted(self.of(whole)), "a name")];
        let Some(unit_node) = child(node, Rule::unit) else {
            let readings = as_name();
            self.token(TokenKind::Bad, number_place);
            self.fault_with(number_place, FaultKind::SecondNumber, readings);
            return StrengthOrName::Strength(Slot::Bad(place));
        };
        let written = self.of(span(&unit_node));
        match Unit::parse(written) {
            Some(unit) if unit.dimension().is_strength() || unit.dimension() == Dimension::Percent => {
                let number = self.number(&number_node, false);
                let unit = self.unit(&unit_node, number_place, STRENGTH);
                let slot = match (number, unit) {
                    (Some(number), Some(unit)) => {
                        Slot::Given(Strength::Quantity(Quantity { span: place, number, unit, unit_span: span(&unit_node) }))
                    }
                    _ => Slot::Bad(place),
                };
                StrengthOrName::Strength(slot)
            }
            Some(_) => {
                let readings = as_name();
                self.token(TokenKind::Bad, place);
                self.fault_with(place, FaultKind::SecondNumber, readings);
                StrengthOrName::Strength(Slot::Bad(place))
            }
            None if is_disguised_unit(written) || wrong_unit(written).is_some() => {
                self.number(&number_node, false);
                self.unit(&unit_node, number_place, STRENGTH);
                StrengthOrName::Strength(Slot::Bad(place))
            }
            None => {
                let readings = as_name();
                if number::read(self.of(number_place)).is_ok() {
                    self.token(TokenKind::Bad, number_place);
                    self.fault_with(number_place, FaultKind::SecondNumber, readings);
                } else {
                    self.number(&number_node, false);
                }
                StrengthOrName::NameBegins(span(&unit_node).start)
            }
        }
    }

    /// Whether the word where a unit should stand is rather the beginning of a name: `5 sodium chloride`.
    pub(super) fn unit_is_a_name(&self, quantity: &Node<'t>) -> Option<(Span, usize)> {
        let number = child(quantity, Rule::number)?;
        let unit = child(quantity, Rule::unit)?;
        let written = self.of(span(&unit));
        let is_word = written.chars().count() >= 4 && written.chars().all(|letter| letter.is_alphabetic() || letter == '-');
        let is_apart = span(&number).end < span(&unit).start;
        let unknown = Unit::parse(written).is_none() && wrong_unit(written).is_none() && !is_disguised_unit(written);
        let is_ratio = self.of(span(&number)).contains(':');
        ((is_word || is_ratio) && is_apart && unknown).then(|| (span(&number), span(&unit).start))
    }

    /// Reports a number that has no unit because a name follows it.
    pub(super) fn number_without_unit(&mut self, number: Span) {
        if let Some((one, many)) = self.of(number).split_once(':')
            && let (Ok(one), Ok(many)) = (one.parse::<f64>(), many.parse::<f64>())
            && one < many
        {
            let share = |whole: f64| format!("{} mL/L", crate::units::format::significant(1000.0 * one / whole, 3));
            let readings = vec![
                reading(number, share(many), "one volume in so many altogether"),
                reading(number, share(one + many), "one volume and so many of water"),
            ];
            self.token(TokenKind::Bad, number);
            self.fault_with(number, FaultKind::OneInHowMany, readings);
        } else if self.number_at(number, false).is_some() {
            self.unit_missing(number);
        }
    }
}

/// Temperatures may have a sign; quantities may not.
fn signs_are_lawful(expected: Expected) -> bool {
    matches!(expected, Expected::Temperature)
}

fn percent_meaning(symbol: &str) -> &'static str {
    match symbol {
        "% w/w" => "mass in mass",
        "% w/v" => "grams in 100 mL",
        _ => "volume in volume",
    }
}

/// A number as a person would write it, free of the last binary digits.
fn shortest(value: f64) -> String {
    let rounded = crate::units::format::significant(value, 12);
    if rounded.contains('e') {
        return rounded;
    }
    match rounded.split_once('.') {
        Some((whole, decimals)) => match decimals.trim_end_matches('0') {
            "" => whole.to_owned(),
            decimals => format!("{whole}.{decimals}"),
        },
        None => rounded,
    }
}

//! Properties, ranges, targets, and the conditions under which they hold.

use super::quantities::{ANY_UNIT, EXTENT, TEMPERATURE, Wanted};
use super::*;
use crate::units::{Dimension, Unit};

/// A range, or the list of values of a series.
pub(super) enum RangeOrSeries {
    /// A range, a single value among them.
    Range(Slot<Range>),
    /// At least two values.
    Series(Vec<Bound>),
}

/// `as P`, `at 4 °C`, `diluted 10-fold`.
#[derive(Default)]
pub(super) struct Conditions {
    pub(super) as_formula: Option<Slot<FormulaText>>,
    pub(super) at: Option<Slot<Quantity>>,
    pub(super) diluted: Option<Dilution>,
}

impl<'t> Builder<'t> {
    pub(super) fn target(&mut self, node: &Node<'t>) -> Slot<Target> {
        let Some(inner) = node.clone().into_inner().next() else { return self.absent(span(node).end, Expected::Target) };
        let place = span(&inner);
        let kind = match inner.as_rule() {
            Rule::by_eye => {
                let inside = self.of(place).trim_matches('"').replace("\"\"", "\"");
                self.token(TokenKind::Text, place);
                Some(TargetKind::ByEye(Text { span: place, text: inside }))
            }
            Rule::saturation => Some(TargetKind::Saturation),
            Rule::property_target => child(&inner, Rule::property).map(|property_node| {
                let property = self.property(&property_node);
                match child(&inner, Rule::range) {
                    Some(range) => match self.range(&range, &property.kind) {
                        RangeOrSeries::Range(range) => TargetKind::Property { property, range },
                        RangeOrSeries::Series(values) => TargetKind::Series { property, values },
                    },
                    None => {
                        let range = self.absent(place.end, Expected::Range);
                        TargetKind::Property { property, range }
                    }
                }
            }),
            Rule::extent => self.extent(&inner),
            _ => {
                self.token(TokenKind::Bad, place);
                let readings = self.target_readings(place);
                self.fault_with(place, FaultKind::BadTarget, readings);
                None
            }
        };
        let conditions = self.conditions(node);
        let Conditions { mut as_formula, at, diluted } = conditions;
        let is_property = matches!(kind, Some(TargetKind::Property { .. } | TargetKind::Series { .. }));
        if let Some(stray) = as_formula.take_if(|_| !is_property) {
            let at = match stray {
                Slot::Given(formula) => formula.span,
                Slot::Bad(place) => place,
                Slot::Missing(at) => Span::empty(at),
            };
            self.fault(at, FaultKind::Unexpected);
        }
        match kind {
            Some(kind) => Slot::Given(Target { span: span(node), kind, as_formula, at, diluted }),
            None => Slot::Bad(span(node)),
        }
    }

    fn target_readings(&self, place: Span) -> Vec<Reading> {
        let written = self.of(place);
        let first = written.split(is_space).next().unwrap_or_default();
        let properties = [
            "ionic strength", "osmolality", "conductivity", "density", "water activity", "alkalinity", "hardness", "saturation", "pH",
        ];
        crate::syntax::spelling::nearest(first, properties)
            .map(|word| reading(Span::new(place.start, place.start + first.len()), word, ""))
            .into_iter()
            .collect()
    }

    fn extent(&mut self, node: &Node<'t>) -> Option<TargetKind> {
        let about = child(node, Rule::about);
        if let Some(about) = &about {
            self.token(TokenKind::Keyword, span(about));
            if self.of(span(about)) != "about" {
                self.fault_with(span(about), FaultKind::WrittenForm, vec![reading(span(about), "about ", "")]);
            }
        }
        let quantity = child(node, Rule::quantity).map(|quantity| self.quantity(&quantity, EXTENT, false));
        let wanted = Wanted {
            fits: |dimension| matches!(dimension, Dimension::Volume | Dimension::Mass | Dimension::Percent),
            words: "a volume, a mass or a percentage",
        };
        let tolerance = child(node, Rule::tolerance).and_then(|tolerance| self.tolerance(&tolerance, wanted, false));
        match quantity {
            Some(Slot::Given(quantity)) => Some(TargetKind::Extent { about: about.is_some(), quantity, tolerance }),
            _ => None,
        }
    }

    pub(super) fn property(&mut self, node: &Node<'t>) -> Property {
        let place = span(node);
        let Some(inner) = node.clone().into_inner().next() else {
            return Property { span: place, kind: PropertyKind::Ph };
        };
        let word = match inner.as_rule() {
            Rule::named_property => inner.clone().into_inner().next().map_or(place, |word| span(&word)),
            _ => place,
        };
        let spoken = self.of(word).split(is_space).filter(|word| !word.is_empty()).collect::<Vec<_>>().join(" ");
        self.token(TokenKind::Property, word);
        let lower = spoken.to_lowercase();
        let written = if lower == "ph" { "pH" } else { lower.as_str() };
        if spoken != written {
            self.fault_with(word, FaultKind::WrittenForm, vec![reading(word, written, "")]);
        }
        let kind = match written {
            "pH" => PropertyKind::Ph,
            "ionic strength" => PropertyKind::IonicStrength,
            "buffer capacity" => PropertyKind::BufferCapacity,
            "osmolality" => PropertyKind::Osmolality,
            "conductivity" => PropertyKind::Conductivity,
            "density" => PropertyKind::Density,
            "water activity" => PropertyKind::WaterActivity,
            "alkalinity" => PropertyKind::Alkalinity,
            "hardness" => PropertyKind::Hardness,
            "total" => PropertyKind::Total(self.measured_name(&inner, word.end, Expected::ConstituentName)),
            "free" => PropertyKind::Free(self.measured_name(&inner, word.end, Expected::ConstituentName)),
            saturation => {
                if saturation != "saturation index of" {
                    // `saturation of X` may be a ratio or its logarithm: the written form says which.
                    self.fault_with(word, FaultKind::UnknownProperty, vec![reading(word, "saturation index of", "")]);
                }
                PropertyKind::SaturationIndex(self.measured_name(&inner, word.end, Expected::ConstituentName))
            }
        };
        Property { span: place, kind }
    }

    fn measured_name(&mut self, node: &Node<'t>, after: usize, expected: Expected) -> Slot<Name> {
        match child(node, Rule::quoted).or(child(node, Rule::measured_name)) {
            Some(name) => self.name_at(span(&name), TokenKind::Name),
            None => self.absent(after, expected),
        }
    }

    pub(super) fn range(&mut self, node: &Node<'t>, property: &PropertyKind) -> RangeOrSeries {
        let place = span(node);
        let Some(inner) = node.clone().into_inner().next() else {
            return RangeOrSeries::Range(self.absent(place.end, Expected::Range));
        };
        let quantities: Vec<Node<'t>> = children(&inner, Rule::quantity).collect();
        let range = match (inner.as_rule(), quantities.as_slice()) {
            (Rule::at_least, [bound]) => self.bound(bound, property, None).map(Range::AtLeast),
            (Rule::at_most, [bound]) => self.bound(bound, property, None).map(Range::AtMost),
            (Rule::at_least | Rule::at_most, _) => {
                return RangeOrSeries::Range(self.absent(place.end, Expected::Number));
            }
            (Rule::span_range, [value]) => match child(&inner, Rule::tolerance) {
                Some(tolerance) => self.plus_minus(value, &tolerance, property),
                None if has(&inner, Rule::to) => {
                    let _ = self.bound_without_unit(value, property);
                    return RangeOrSeries::Range(self.absent(place.end, Expected::Number));
                }
                None => self.bound(value, property, None).map(Range::Exactly),
            },
            (Rule::span_range, [from, to]) if has(&inner, Rule::to) => self.between(from, to, property),
            (Rule::span_range, values) => {
                let count = values.len();
                let series = self.series(values, property);
                if series.len() == count {
                    return RangeOrSeries::Series(series);
                }
                None
            }
            _ => {
                self.bad_range(place, property);
                None
            }
        };
        RangeOrSeries::Range(range.map_or(Slot::Bad(place), Slot::Given))
    }

    fn bad_range(&mut self, place: Span, property: &PropertyKind) {
        let written = self.of(place);
        self.token(TokenKind::Bad, place);
        let bare = written.trim_start_matches(['=', ':', '<', '>', '≤', '≥', '~', '≈']).trim();
        let is_number = crate::syntax::number::read(bare).is_ok();
        let readings = match written.chars().next() {
            Some('=' | ':') if is_number => vec![reading(place, format!(" {bare}"), "")],
            Some('>' | '≥') if is_number => vec![reading(place, format!("at least {bare}"), "")],
            Some('<' | '≤') if is_number => vec![reading(place, format!("at most {bare}"), "")],
            Some('~' | '≈') if is_number && matches!(property, PropertyKind::Ph) => {
                vec![reading(place, format!("{bare} ± 0.1"), "")]
            }
            _ => Vec::new(),
        };
        self.fault_with(place, FaultKind::BadRange, readings);
    }

    fn between(&mut self, from: &Node<'t>, to: &Node<'t>, property: &PropertyKind) -> Option<Range> {
        if wanted(property).is_some() && !has(from, Rule::unit) && !has(to, Rule::unit) {
            // One fault, at the bound that should carry the unit of both.
            let _ = self.bound_without_unit(from, property);
            return self.bound(to, property, None).map(Range::Exactly);
        }
        let high = self.bound(to, property, None);
        let low = match &high {
            Some(high) if !has(from, Rule::unit) => self.bound(from, property, high.unit),
            _ => self.bound(from, property, None),
        };
        let (low, high) = (low?, high?);
        let value = |bound: &Bound| bound.unit.map_or(bound.number.value, |unit| unit.to_base(bound.number.value));
        let comparable = low.unit.map(Unit::dimension) == high.unit.map(Unit::dimension);
        if comparable && value(&low) >= value(&high) {
            self.fault(low.span.to(high.span), FaultKind::RangeDoesNotRise);
            return None;
        }
        Some(Range::Between(low, high))
    }

    fn plus_minus(&mut self, value: &Node<'t>, tolerance: &Node<'t>, property: &PropertyKind) -> Option<Range> {
        let wanted = wanted(property);
        let bare = wanted.is_none();
        let half_width = self.tolerance(tolerance, wanted.map_or(ANY_UNIT, |(_, with_percent)| with_percent), bare);
        let carried = half_width.and_then(|tolerance| tolerance.unit).filter(|unit| unit.dimension() != Dimension::Percent);
        if let (None, Some(unit)) = (wanted, carried) {
            self.fault(half_width?.span, FaultKind::WrongKindOfUnit(format!("no unit ({unit} has no place here)")));
            return None;
        }
        let bound = if has(value, Rule::unit) { self.bound(value, property, None) } else { self.bound(value, property, carried) };
        Some(Range::PlusMinus(bound?, half_width?))
    }

    fn series(&mut self, values: &[Node<'t>], property: &PropertyKind) -> Vec<Bound> {
        let mut carried = None;
        let mut series = Vec::new();
        for value in values.iter().rev() {
            let bound = if has(value, Rule::unit) { self.bound(value, property, None) } else { self.bound(value, property, carried) };
            carried = bound.and_then(|bound| bound.unit).or(carried);
            series.extend(bound);
        }
        series.reverse();
        series
    }

    /// A bound of a range of this property. `carried` is the unit that stands elsewhere in the range.
    fn bound(&mut self, node: &Node<'t>, property: &PropertyKind, carried: Option<Unit>) -> Option<Bound> {
        let number_node = child(node, Rule::number)?;
        let number_place = span(&number_node);
        let Some((wanted, _)) = wanted(property) else { return self.bound_without_unit(node, property) };
        let number = self.number(&number_node, false);
        let unit = match child(node, Rule::unit) {
            Some(unit) => Some(self.unit(&unit, number_place, wanted)?),
            None => carried,
        };
        if number.is_some() && unit.is_none() {
            self.token(TokenKind::Missing(Expected::Unit), Span::empty(number_place.end));
            self.fault(number_place, FaultKind::UnitMissing);
            return None;
        }
        Some(Bound { span: span(node), number: number?, unit })
    }

    /// A bound as far as its number goes; of a property without unit, the whole bound.
    fn bound_without_unit(&mut self, node: &Node<'t>, property: &PropertyKind) -> Option<Bound> {
        let number_node = child(node, Rule::number)?;
        let unitless = wanted(property).is_none();
        let number = self.number(&number_node, unitless);
        if let Some(unit) = child(node, Rule::unit) {
            if unitless {
                self.token(TokenKind::Bad, span(&unit));
                self.fault(span(&unit), FaultKind::WrongKindOfUnit("a number without a unit".to_owned()));
                return None;
            }
            self.unit(&unit, span(&number_node), ANY_UNIT);
        }
        let number = number?;
        if matches!(property, PropertyKind::Ph) && !(-2.0..=16.0).contains(&number.value) {
            self.fault(number.span, FaultKind::OutOfBounds("a pH lies between −2 and 16".to_owned()));
            return None;
        }
        Some(Bound { span: span(node), number, unit: None })
    }

    /// The conditions among a node's children; the second of a kind is a fault.
    pub(super) fn conditions(&mut self, node: &Node<'t>) -> Conditions {
        let mut found = Conditions::default();
        for condition in node.clone().into_inner() {
            let place = span(&condition);
            let twice = match condition.as_rule() {
                Rule::condition_as => {
                    let formula = match child(&condition, Rule::formula) {
                        Some(formula) => self.formula_at(span(&formula)),
                        None => self.absent(place.end, Expected::Formula),
                    };
                    found.as_formula.replace(formula).is_some()
                }
                Rule::condition_at => {
                    let at = self.quantity_in(&condition, place.end, TEMPERATURE, Expected::Temperature);
                    found.at.replace(at).is_some()
                }
                Rule::condition_diluted => {
                    let dilution = self.dilution(&condition);
                    found.diluted.replace(dilution).is_some()
                }
                _ => false,
            };
            if twice {
                self.fault(place, FaultKind::Unexpected);
            }
        }
        found
    }

    fn dilution(&mut self, node: &Node<'t>) -> Dilution {
        let place = span(node);
        let after_word = place.start + "diluted".len();
        let fold = match child(node, Rule::number) {
            Some(number_node) => {
                let number = self.number(&number_node, false);
                match (number, child(node, Rule::fold)) {
                    (Some(number), Some(fold)) if number.value >= 1.0 => {
                        self.token(TokenKind::Unit, span(&fold));
                        if self.of(span(&fold)) != "-fold" {
                            self.fault_with(span(&fold), FaultKind::WrittenForm, vec![reading(span(&fold), "-fold", "")]);
                        }
                        Slot::Given(number)
                    }
                    (Some(number), Some(fold)) => {
                        self.token(TokenKind::Unit, span(&fold));
                        self.fault(number.span, FaultKind::OutOfBounds("at least 1-fold".to_owned()));
                        Slot::Bad(number.span)
                    }
                    (Some(number), None) => {
                        let whole = format!("{}-fold", self.of(number.span));
                        self.fault_with(number.span, FaultKind::UnitMissing, vec![reading(number.span, whole, "")]);
                        Slot::Bad(number.span)
                    }
                    (None, _) => Slot::Bad(span(&number_node)),
                }
            }
            None => self.absent(after_word, Expected::Number),
        };
        let says_with = self.of(place).split(is_space).any(|word| word.eq_ignore_ascii_case("with"));
        let with = match child(node, Rule::dilution_name) {
            Some(name) => Some(self.name_at(span(&name), TokenKind::Name)),
            None if says_with => Some(self.absent(place.end, Expected::IngredientName)),
            None => None,
        };
        Dilution { span: place, fold, with }
    }
}

/// The units of a property, alone and with per cent (for tolerances); none for a property without unit.
fn wanted(property: &PropertyKind) -> Option<(Wanted, Wanted)> {
    macro_rules! units {
        ($words:literal, $($dimension:ident)|+) => {
            Some((
                Wanted { fits: |dimension| matches!(dimension, $(Dimension::$dimension)|+), words: $words },
                Wanted { fits: |dimension| matches!(dimension, Dimension::Percent | $(Dimension::$dimension)|+), words: $words },
            ))
        };
    }
    match property {
        PropertyKind::Ph | PropertyKind::WaterActivity | PropertyKind::SaturationIndex(_) => None,
        PropertyKind::IonicStrength => units!("an amount concentration or a molality, as in 150 mmol/L", AmountConcentration | Molality),
        PropertyKind::BufferCapacity => {
            units!("an amount concentration (per unit of pH), as in 8 mmol/L", AmountConcentration | Molality)
        }
        PropertyKind::Osmolality => units!("an osmolality, as in 290 mosmol/kg", Osmolality),
        PropertyKind::Conductivity => units!("a conductivity, as in 15 mS/cm", Conductivity),
        PropertyKind::Density => units!("a density, as in 1.02 g/mL", MassConcentration),
        PropertyKind::Alkalinity | PropertyKind::Hardness => {
            units!("mmol/L (eq), °dH, mmol/L, or mg/L as CaCO3", EquivalentConcentration | AmountConcentration | MassConcentration)
        }
        PropertyKind::Total(_) => units!(
            "a concentration, a molality or a content",
            AmountConcentration | Molality | MassConcentration | MassFraction | VolumeFraction
        ),
        PropertyKind::Free(_) => units!("a concentration or a molality", AmountConcentration | Molality | MassConcentration),
    }
}

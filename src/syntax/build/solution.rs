//! What goes into a solution: ingredients, pairs, `q.s.` lines and their qualifiers.

use super::quantities::{DENSITY, DURATION, EXTENT, INGREDIENT, MASS_OR_VOLUME, PERCENT, TEMPERATURE, Wanted};
use super::*;
use crate::units::Unit;

/// What the tolerance of an ingredient may be given in: its own kind of unit, or per cent.
const TOLERANCE: Wanted = Wanted {
    fits: |dimension| dimension.opens_an_ingredient() || dimension == crate::units::Dimension::Percent,
    words: "a mass, a volume, an amount, a concentration or a percentage",
};

impl<'t> Builder<'t> {
    /// A line that opens with a quantity, or with `about`.
    pub(super) fn amount_line(&mut self, node: &Node<'t>) -> Statement {
        if let Some(pair_part) = child(node, Rule::pair_part) {
            return Statement::Pair(self.pair(node, &pair_part));
        }
        Statement::Ingredient(self.ingredient(node))
    }

    /// `or QUANTITY NAME`.
    pub(super) fn or_line(&mut self, node: &Node<'t>) -> Statement {
        match child(node, Rule::amount_line) {
            Some(line) => Statement::Or(self.ingredient(&line)),
            None => {
                let amounts = self.absent(span(node).end, Expected::Quantity);
                Statement::Or(Ingredient {
                    about: false,
                    name: Slot::Missing(self.after_spaces(span(node).end)),
                    amounts,
                    as_formula: None,
                    strength: None,
                    qualifiers: Vec::new(),
                })
            }
        }
    }

    fn ingredient(&mut self, node: &Node<'t>) -> Ingredient {
        let about = self.about(node);
        let thing_node = child(node, Rule::thing);
        let after = thing_node.as_ref().map_or(span(node).end, |thing| span(thing).start);
        let amounts_node = child(node, Rule::amounts);
        let word_for_unit = amounts_node
            .as_ref()
            .and_then(|amounts| children(amounts, Rule::quantity).last())
            .and_then(|last| self.unit_is_a_name(&last));
        let (amounts, strength, name) = match (word_for_unit, amounts_node, thing_node) {
            (Some((number, start)), Some(amounts), thing) => {
                self.number_without_unit(number);
                let end = thing.map_or(span(&amounts).end, |thing| span(&thing).end.max(span(&amounts).end));
                let name = self.name_at(Span::new(start, end), TokenKind::Name);
                (Slot::Bad(number), None, name)
            }
            (None, Some(amounts), thing) => {
                let amounts = self.amounts(&amounts);
                let (strength, name) = match thing {
                    Some(thing) => self.thing(&thing, after),
                    None => (None, self.absent(after, Expected::IngredientName)),
                };
                (amounts, strength, name)
            }
            (_, None, thing) => {
                // `about` alone: what is missing first is the quantity, whatever follows.
                let amounts = Slot::Missing(self.gap(after, Expected::Quantity));
                let (strength, name) = match thing.filter(|thing| !span(thing).is_empty()) {
                    Some(thing) => self.thing(&thing, after),
                    None => (None, Slot::Missing(self.after_spaces(after))),
                };
                (amounts, strength, name)
            }
        };
        let as_formula = self.as_formula(node);
        if let Some(target) = child(node, Rule::to_part) {
            self.stray_target(&target, &name);
        }
        let mut qualifiers = self.tolerances(node);
        qualifiers.extend(self.qualifiers(node));
        Ingredient { about, amounts, as_formula, strength, name, qualifiers }
    }

    /// A target on a line that takes none: the line was to be a pair, or a `q.s.` line.
    fn stray_target(&mut self, node: &Node<'t>, name: &Slot<Name>) {
        let start = self.after_spaces(span(node).start);
        let place = Span::new(start, span(node).end);
        self.token(TokenKind::Bad, place);
        if matches!(name, Slot::Bad(_)) {
            // The name's own fault comes first: with its reading the line may be a pair.
            return;
        }
        let mut readings = Vec::new();
        if let Slot::Given(name) = name
            && !name.quoted
            && let Some(at) = name.text.find('/')
        {
            let slash = Span::new(name.span.start + at, name.span.start + at + 1);
            readings.push(reading(slash, " / ", "two forms of a pair"));
        }
        self.fault_with(place, FaultKind::Unexpected, readings);
    }

    fn about(&mut self, node: &Node<'t>) -> bool {
        let Some(about) = child(node, Rule::about) else { return false };
        let place = span(&about);
        self.token(TokenKind::Keyword, place);
        if self.of(place) != "about" {
            let space = if self.text.get(place.end..).is_some_and(|rest| rest.starts_with(is_space)) { "" } else { " " };
            self.fault_with(place, FaultKind::WrittenForm, vec![reading(place, format!("about{space}"), "")]);
        }
        true
    }

    fn as_formula(&mut self, node: &Node<'t>) -> Option<Slot<FormulaText>> {
        let as_node = child(node, Rule::as_formula)?;
        Some(match child(&as_node, Rule::formula) {
            Some(formula) => self.formula_at(span(&formula)),
            None => self.absent(span(&as_node).end, Expected::Formula),
        })
    }

    /// The quantities that open a line; a list or a range may carry its unit once, at its end.
    fn amounts(&mut self, node: &Node<'t>) -> Slot<Amounts> {
        let quantities: Vec<Node<'t>> = children(node, Rule::quantity).collect();
        if has(node, Rule::to)
            && let [from, to] = quantities.as_slice()
        {
            return match self.range_of(from, to, INGREDIENT, false) {
                (Slot::Given(low), Slot::Given(high)) => Slot::Given(Amounts::Range(low, high)),
                _ => Slot::Bad(span(node)),
            };
        }
        if let [only] = quantities.as_slice() {
            return match self.quantity(only, INGREDIENT, false) {
                Slot::Given(quantity) => Slot::Given(Amounts::One(quantity)),
                Slot::Missing(at) => Slot::Missing(at),
                Slot::Bad(place) => Slot::Bad(place),
            };
        }
        let mut series = Vec::new();
        let mut carried: Option<(Unit, Span)> = None;
        let count = quantities.len();
        for quantity in quantities.iter().rev() {
            let place = span(quantity);
            if let (false, Some((unit, unit_span))) = (has(quantity, Rule::unit), carried) {
                if let Some(number) = child(quantity, Rule::number).and_then(|number| self.number(&number, false)) {
                    series.push(Quantity { span: place, number, unit, unit_span });
                }
                continue;
            }
            if let Slot::Given(given) = self.quantity(quantity, INGREDIENT, false) {
                carried = Some((given.unit, given.unit_span));
                series.push(given);
            }
        }
        series.reverse();
        if series.len() == count { Slot::Given(Amounts::Series(series)) } else { Slot::Bad(span(node)) }
    }

    fn pair(&mut self, node: &Node<'t>, pair_part: &Node<'t>) -> Pair {
        for rule in [Rule::about, Rule::as_formula] {
            if let Some(stray) = child(node, rule) {
                self.token(TokenKind::Bad, span(&stray));
                self.fault(span(&stray), FaultKind::Unexpected);
            }
        }
        let first_node = child(node, Rule::thing);
        let amount = match child(node, Rule::amounts) {
            Some(amounts) => match self.amounts(&amounts) {
                Slot::Given(Amounts::One(quantity)) => Slot::Given(quantity),
                Slot::Given(_) => {
                    self.fault(span(&amounts), FaultKind::BadQuantity);
                    Slot::Bad(span(&amounts))
                }
                Slot::Missing(at) => Slot::Missing(at),
                Slot::Bad(place) => Slot::Bad(place),
            },
            None => Slot::Missing(self.gap(span(node).start, Expected::Quantity)),
        };
        let start = span(pair_part).start;
        let (first_strength, first) = match first_node {
            Some(thing) => self.thing(&thing, span(&thing).start),
            None => (None, Slot::Missing(self.gap(start, Expected::IngredientName))),
        };
        let (second_strength, second) = match child(pair_part, Rule::thing) {
            Some(thing) => self.thing(&thing, span(&thing).start),
            None => (None, self.absent(span(pair_part).end, Expected::IngredientName)),
        };
        let target = self.target_in(node, span(pair_part).end);
        let mut qualifiers = self.tolerances(node);
        qualifiers.extend(self.qualifiers(node));
        for qualifier in &qualifiers {
            let stands_here = matches!(
                qualifier.kind,
                QualifierKind::Tolerance(_) | QualifierKind::About(_) | QualifierKind::Unreadable
            );
            if !stands_here {
                self.faults.push(Fault { span: qualifier.span, kind: FaultKind::MisplacedQualifier, readings: Vec::new() });
            }
        }
        Pair { amount, first_strength, first, second_strength, second, target, qualifiers }
    }

    /// `to TARGET` among a node's children; `after` is where it would stand.
    fn target_in(&mut self, node: &Node<'t>, after: usize) -> Slot<Target> {
        match child(node, Rule::to_part) {
            Some(to_part) => match child(&to_part, Rule::target) {
                Some(target) => self.target(&target),
                None => self.absent(span(&to_part).end, Expected::Target),
            },
            None => self.absent(after, Expected::To),
        }
    }

    pub(super) fn quantum_satis(&mut self, node: &Node<'t>) -> Statement {
        if let Some(qs) = child(node, Rule::qs) {
            let place = span(&qs);
            self.token(TokenKind::Keyword, place);
            if self.of(place) != "q.s." {
                self.fault_with(place, FaultKind::WrittenForm, vec![reading(place, "q.s.", "")]);
            }
        }
        if let Some(statement) = self.made_up_with_ad(node) {
            return statement;
        }
        let thing = child(node, Rule::thing);
        let with_part = child(node, Rule::with_part);
        let after_word = child(node, Rule::qs).map_or(span(node).start, |qs| span(&qs).end);
        let (strength, name) = match (&thing, &with_part) {
            (Some(thing), _) if !span(thing).is_empty() => self.thing(thing, after_word),
            (_, Some(with_part)) => (None, self.with_name(node, with_part)),
            _ => (None, self.absent(after_word, Expected::IngredientName)),
        };
        if let (Some(with_part), Some(thing)) = (&with_part, &thing)
            && !span(thing).is_empty()
        {
            let place = Span::new(self.after_spaces(span(with_part).start), span(with_part).end);
            self.token(TokenKind::Bad, place);
            self.fault(place, FaultKind::Unexpected);
        }
        let alternative = child(node, Rule::or_part).map(|or_part| match child(&or_part, Rule::thing) {
            Some(thing) => self.thing(&thing, span(&thing).start),
            None => (None, self.absent(span(&or_part).end, Expected::IngredientName)),
        });
        let after = child(node, Rule::or_part)
            .or(thing)
            .map_or(after_word, |last| span(&last).end.max(after_word));
        let target = self.target_in(node, after);
        let qualifiers = self.qualifiers(node);
        Statement::QuantumSatis(QuantumSatis { strength, name, alternative, target, qualifiers })
    }

    /// `q.s. to 1 L with water`: the name in another place.
    fn with_name(&mut self, node: &Node<'t>, with_part: &Node<'t>) -> Slot<Name> {
        let Some(name_node) = child(with_part, Rule::name) else {
            return self.absent(span(with_part).end, Expected::IngredientName);
        };
        let start = self.after_spaces(span(with_part).start);
        let word = Span::new(start, start + "with".len());
        let target = child(node, Rule::to_part).map_or("", |to_part| self.of(span(&to_part)).trim());
        let whole = Span::new(span(node).start, span(with_part).end);
        let text = format!("q.s. {} {target}", self.of(span(&name_node)));
        self.fault_with(word, FaultKind::Unexpected, vec![reading(whole, text, "")]);
        self.name(&name_node)
    }

    /// `q.s. water ad 1 L`, `q.s. ad 1 L`: the pharmacist's word for `to`.
    fn made_up_with_ad(&mut self, node: &Node<'t>) -> Option<Statement> {
        if has(node, Rule::to_part) {
            return None;
        }
        let name = child(&child(node, Rule::thing)?, Rule::name)?;
        let place = span(&name);
        let written = self.of(place);
        let at = if written.starts_with("ad ") { 0 } else { written.find(" ad ")? + 1 };
        let word = Span::new(place.start + at, place.start + at + 2);
        let name = if at == 0 {
            Slot::Missing(self.gap(place.start, Expected::IngredientName))
        } else {
            self.name_at(Span::new(place.start, place.start + at - 1), TokenKind::Name)
        };
        self.token(TokenKind::Bad, word);
        self.fault_with(word, FaultKind::Missing(Expected::To), vec![reading(word, "to", "")]);
        let rest = Span::new(self.after_spaces(word.end), place.end);
        self.token(TokenKind::Bad, rest);
        let qualifiers = self.qualifiers(node);
        Some(Statement::QuantumSatis(QuantumSatis {
            strength: None,
            name,
            alternative: None,
            target: Slot::Bad(rest),
            qualifiers,
        }))
    }

    /// `all NAME`.
    pub(super) fn all(&mut self, node: &Node<'t>) -> Statement {
        Statement::All(self.name_in(node, span(node).end, Expected::SolutionName))
    }

    /// Tolerances that stand on the line itself, beside quantity or name.
    fn tolerances(&mut self, node: &Node<'t>) -> Vec<Qualifier> {
        children(node, Rule::tolerance)
            .map(|tolerance| Qualifier { span: span(&tolerance), kind: self.tolerance_qualifier(&tolerance) })
            .collect()
    }

    fn tolerance_qualifier(&mut self, node: &Node<'t>) -> QualifierKind {
        match self.tolerance(node, TOLERANCE, false) {
            Some(tolerance) => QualifierKind::Tolerance(tolerance),
            None => QualifierKind::Unreadable,
        }
    }

    fn qualifiers(&mut self, node: &Node<'t>) -> Vec<Qualifier> {
        children(node, Rule::qualifier)
            .map(|qualifier| {
                let place = span(&qualifier);
                Qualifier { span: place, kind: self.qualifier(&qualifier) }
            })
            .collect()
    }

    fn qualifier(&mut self, node: &Node<'t>) -> QualifierKind {
        let Some(inner) = node.clone().into_inner().find(|inner| inner.as_rule() != Rule::excess) else {
            self.unknown_qualifier(node);
            return QualifierKind::Unreadable;
        };
        self.part(node, |builder| {
            let end = span(&inner).end;
            match inner.as_rule() {
                Rule::q_tolerance => match child(&inner, Rule::tolerance) {
                    Some(tolerance) => builder.tolerance_qualifier(&tolerance),
                    None => QualifierKind::Unreadable,
                },
                Rule::q_purity => QualifierKind::Purity(builder.percentage(&inner, end)),
                Rule::q_water => QualifierKind::Water(builder.percentage(&inner, end)),
                Rule::q_dried => builder.dried(&inner),
                Rule::q_density => QualifierKind::Density(builder.quantity_in(&inner, end, DENSITY, Expected::Quantity)),
                Rule::q_from => QualifierKind::From(builder.name_in(&inner, end, Expected::IngredientName)),
                Rule::q_about => {
                    builder.about(&inner);
                    QualifierKind::About(builder.quantity_in(&inner, end, MASS_OR_VOLUME, Expected::Quantity))
                }
                Rule::q_at_most => QualifierKind::AtMost(builder.quantity_in(&inner, end, EXTENT, Expected::Quantity)),
                Rule::q_by_weight => {
                    if !builder.of(span(&inner)).to_lowercase().ends_with("weight") {
                        let _: Slot<Name> = builder.absent(end, Expected::Other);
                        return QualifierKind::Unreadable;
                    }
                    QualifierKind::ByWeight
                }
                Rule::q_at => QualifierKind::At(builder.quantity_in(&inner, end, TEMPERATURE, Expected::Temperature)),
                Rule::q_grade => QualifierKind::Grade(builder.field_in(&inner, end)),
                Rule::q_lot => QualifierKind::Lot(builder.field_in(&inner, end)),
                _ => {
                    builder.nothing_after_comma(&inner);
                    QualifierKind::Unreadable
                }
            }
        })
    }

    /// A comma with nothing behind it. The gap takes a qualifier.
    pub(super) fn nothing_after_comma(&mut self, node: &Node<'t>) {
        let at = span(node).start;
        let before = self.text.get(..at).unwrap_or_default();
        let comma = before.rfind(',').unwrap_or(at);
        self.token(TokenKind::Missing(Expected::Qualifier), Span::empty(at));
        let place = Span::new(comma, (comma + 1).min(self.text.len()));
        self.fault_with(place, FaultKind::NothingAfterComma, vec![reading(place, "", "without the comma")]);
    }

    fn unknown_qualifier(&mut self, node: &Node<'t>) {
        const WORDS: [&str; 10] =
            ["purity", "water", "dried", "density", "from", "about", "by weight", "grade", "lot", "at most"];
        let place = span(node);
        let written = self.of(place);
        self.token(TokenKind::Bad, place);
        let mut readings = Vec::new();
        let first = written.split(is_space).next().unwrap_or_default();
        if let Some(word) = crate::syntax::spelling::nearest(first, WORDS) {
            readings.push(reading(Span::new(place.start, place.start + first.len()), word, ""));
        }
        if let Some(rest) = written.strip_suffix(" grade") {
            readings.push(reading(place, format!("grade {rest}"), ""));
        }
        if first.starts_with(|digit: char| digit.is_ascii_digit()) && written.ends_with('%') {
            readings.push(reading(place, format!("purity {written}"), ""));
        }
        // The comma may belong to the name that stands just before.
        let name = self.tokens.iter().rev().nth(1).filter(|token| token.kind == TokenKind::Name && token.span.end <= place.start);
        if let Some(whole) = name.map(|name| name.span.to(place)).filter(|whole| !self.of(*whole).contains(['\n', '\r', '"'])) {
            readings.push(reading(whole, super::names::quoted(self.of(whole)), "one name"));
        }
        self.fault_with(place, FaultKind::UnknownQualifier, readings);
    }

    /// A percentage of at most 100.
    pub(super) fn percentage(&mut self, node: &Node<'t>, after: usize) -> Slot<Quantity> {
        let slot = self.quantity_in(node, after, PERCENT, Expected::Quantity);
        match slot {
            Slot::Given(quantity) if quantity.number.value > 100.0 => {
                self.fault(quantity.span, FaultKind::OutOfBounds("at most 100 %".to_owned()));
                Slot::Bad(quantity.span)
            }
            slot => slot,
        }
    }

    fn dried(&mut self, node: &Node<'t>) -> QualifierKind {
        let quantities: Vec<Node<'t>> = children(node, Rule::quantity).collect();
        let says_for = self.of(span(node)).split(is_space).any(|word| word.eq_ignore_ascii_case("for"));
        let mut quantities = quantities.iter();
        let temperature = match quantities.next() {
            Some(quantity) => self.quantity(quantity, TEMPERATURE, true),
            None => self.absent(span(node).end, Expected::Temperature),
        };
        let duration = match quantities.next() {
            Some(quantity) => Some(self.quantity(quantity, DURATION, false)),
            None if says_for => Some(self.absent(span(node).end, Expected::Duration)),
            None => None,
        };
        QualifierKind::DriedAt { temperature, duration }
    }
}

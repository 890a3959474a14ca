//! Headers, paths, and what substances, bottles and ions are: lists of names, counts, densities.

use super::constants::before_parts;
use super::quantities::{ACTIVITY, DENSITY, SOLUBILITY, TEMPERATURE, Wanted};
use super::*;
use crate::units::Dimension;

impl<'t> Builder<'t> {
    pub(super) fn header(&mut self, node: &Node<'t>) -> Statement {
        let kind_span = child(node, Rule::header_kind).map_or(span(node), |kind| span(&kind));
        let kind = match self.of(kind_span).to_lowercase().as_str() {
            "bottle" => BlockKind::Bottle,
            "substance" => BlockKind::Substance,
            "ion" => BlockKind::Ion,
            "solid" => BlockKind::Solid,
            "danger" => BlockKind::Danger,
            "group" => BlockKind::Group,
            "lab" => BlockKind::Lab,
            _ => BlockKind::Solution,
        };
        let name = match child(node, Rule::header_name) {
            Some(name) => self.definition(&name),
            None => self.absent(kind_span.end, Expected::NewName),
        };
        Statement::Header(Header { kind, kind_span, name })
    }

    /// The name among a node's children, which this line defines.
    pub(super) fn definition_in(&mut self, node: &Node<'t>, after: usize) -> Slot<Name> {
        match child(node, Rule::name) {
            Some(name) => self.name_at(span(&name), TokenKind::Definition),
            None => self.absent(after, Expected::NewName),
        }
    }

    /// `forms slowly`.
    pub(super) fn forms(&mut self, node: &Node<'t>) -> Statement {
        let Some(how) = child(node, Rule::forms_how) else {
            return Statement::Forms(self.absent(span(node).end, Expected::Other));
        };
        let words = self.of(span(&how)).to_lowercase();
        Statement::Forms(Slot::Given(match words.split(is_space).next() {
            Some("at") => FormsHow::AtOnce,
            Some("on") => FormsHow::OnFreezing,
            Some("in") => FormsHow::InPassing,
            _ => FormsHow::Slowly,
        }))
    }

    pub(super) fn use_path(&mut self, node: &Node<'t>) -> Statement {
        Statement::Use(match child(node, Rule::path) {
            Some(path) => self.path(&path),
            None => self.absent(span(node).end, Expected::Path),
        })
    }

    pub(super) fn language(&mut self, node: &Node<'t>) -> Statement {
        Statement::Language(match child(node, Rule::number) {
            Some(number) => match self.number(&number, false) {
                Some(number) => Slot::Given(number),
                None => Slot::Bad(span(&number)),
            },
            None => self.absent(span(node).end, Expected::Number),
        })
    }

    /// A list of names; `kind` says whether they are defined here or referred to.
    pub(super) fn name_list(&mut self, node: &Node<'t>, kind: TokenKind, expected: Expected) -> Vec<Name> {
        let mut names = Vec::new();
        for inner in node.clone().into_inner() {
            match inner.as_rule() {
                Rule::name => {
                    if let Slot::Given(name) = self.name_at(span(&inner), kind) {
                        names.push(name);
                    }
                }
                Rule::nothing => self.nothing_after_comma(&inner),
                _ => {}
            }
        }
        if !has(node, Rule::name) {
            let _: Slot<Name> = self.absent(span(node).end, expected);
        }
        names
    }

    pub(super) fn gives(&mut self, node: &Node<'t>) -> Statement {
        let mut given = Vec::new();
        for inner in node.clone().into_inner() {
            match inner.as_rule() {
                Rule::counted => given.push(self.counted(&inner)),
                Rule::nothing => self.nothing_after_comma(&inner),
                _ => {}
            }
        }
        if !has(node, Rule::counted) {
            let _: Slot<Name> = self.absent(span(node).end, Expected::ConstituentName);
        }
        Statement::Gives(given)
    }

    pub(super) fn hazards(&mut self, node: &Node<'t>) -> Statement {
        let mut codes = Vec::new();
        for inner in node.clone().into_inner() {
            match inner.as_rule() {
                Rule::field if is_hazard_code(self.of(span(&inner))) => codes.push(self.text_at(span(&inner))),
                Rule::field => {
                    let place = span(&inner);
                    let written = self.of(place);
                    self.token(TokenKind::Bad, place);
                    let words: Vec<&str> = written.split(is_space).filter(|word| !word.is_empty()).collect();
                    let readings = if words.iter().all(|word| is_hazard_code(word)) {
                        vec![reading(place, words.join(", "), "")]
                    } else if is_hazard_code(&written.to_uppercase()) {
                        vec![reading(place, written.to_uppercase(), "")]
                    } else {
                        Vec::new()
                    };
                    self.fault_with(place, FaultKind::Unexpected, readings);
                }
                Rule::nothing => self.nothing_after_comma(&inner),
                _ => {}
            }
        }
        if !has(node, Rule::field) {
            let _: Slot<Text> = self.absent(span(node).end, Expected::Code);
        }
        Statement::Hazard(codes)
    }

    pub(super) fn form(&mut self, node: &Node<'t>) -> Statement {
        let Some(field) = child(node, Rule::field) else {
            return Statement::Form(self.absent(span(node).end, Expected::Text));
        };
        let place = span(&field);
        let written = self.of(place);
        if matches!(written, "solid" | "liquid" | "gas") {
            self.token(TokenKind::Keyword, place);
            return Statement::Form(Slot::Given(Text { span: place, text: written.to_owned() }));
        }
        self.token(TokenKind::Bad, place);
        let readings = crate::syntax::spelling::nearest(written, ["solid", "liquid", "gas"])
            .map(|word| reading(place, word, ""))
            .into_iter()
            .collect();
        self.fault_with(place, FaultKind::Unexpected, readings);
        Statement::Form(Slot::Bad(place))
    }

    pub(super) fn formula_line(&mut self, node: &Node<'t>) -> Statement {
        Statement::Formula(match child(node, Rule::text) {
            Some(text) => self.formula_at(span(&text)),
            None => self.absent(span(node).end, Expected::Formula),
        })
    }

    /// `charge -3`: a whole number with a sign.
    pub(super) fn charge(&mut self, node: &Node<'t>) -> Statement {
        let Some(field) = child(node, Rule::field) else {
            return Statement::Charge(self.absent(span(node).end, Expected::Number));
        };
        let place = span(&field);
        let written = self.of(place);
        let flipped = written.strip_suffix(['-', '−', '+']).filter(|digits| digits.chars().all(|digit| digit.is_ascii_digit()));
        if let Some(digits) = flipped {
            let sign = if written.ends_with('+') { "" } else { "-" };
            let digits = if digits.is_empty() { "1" } else { digits };
            self.token(TokenKind::Bad, place);
            self.fault_with(place, FaultKind::BadNumber, vec![reading(place, format!("{sign}{digits}"), "")]);
            return Statement::Charge(Slot::Bad(place));
        }
        Statement::Charge(match self.number_at(place, true) {
            Some(number) if number.value.fract() != 0.0 || number.value.abs() > 20.0 => {
                self.fault(place, FaultKind::OutOfBounds("a whole number from −20 to 20".to_owned()));
                Slot::Bad(place)
            }
            Some(number) => Slot::Given(number),
            None => Slot::Bad(place),
        })
    }

    pub(super) fn density(&mut self, node: &Node<'t>) -> Statement {
        let end = child(node, Rule::at_part).map_or(before_parts(node, Rule::constant_part), |at| span(&at).start);
        let value = self.quantity_in(node, end, DENSITY, Expected::Quantity);
        let wanted = Wanted {
            fits: |dimension| matches!(dimension, Dimension::MassConcentration | Dimension::Percent),
            words: "a density or a percentage",
        };
        let tolerance = child(node, Rule::tolerance).and_then(|tolerance| self.tolerance(&tolerance, wanted, false));
        let at = self.at_part(node);
        let parts = self.constant_parts(node, Rule::constant_part);
        Statement::Density(Density { value, tolerance, at, parts })
    }

    pub(super) fn at_part(&mut self, node: &Node<'t>) -> Option<Slot<Quantity>> {
        let at = child(node, Rule::at_part)?;
        Some(self.quantity_in(&at, span(&at).end, TEMPERATURE, Expected::Temperature))
    }

    pub(super) fn aqueous(&mut self, node: &Node<'t>) -> Statement {
        let density_node = child(node, Rule::aqueous_density);
        let strength = match child(node, Rule::quantity) {
            Some(quantity) => self.quantity(&quantity, SOLUBILITY, false),
            None => self.absent(node.as_span().start() + "aqueous".len(), Expected::Quantity),
        };
        let density = match density_node {
            Some(density) => self.quantity_in(&density, span(&density).end, DENSITY, Expected::Quantity),
            None if matches!(strength, Slot::Missing(_)) => Slot::Missing(self.after_spaces(span(node).end)),
            None => self.absent(before_parts(node, Rule::constant_part), Expected::Other),
        };
        let at = self.at_part(node);
        let parts = self.constant_parts(node, Rule::constant_part);
        Statement::Aqueous(Aqueous { strength, density, at, parts })
    }

    pub(super) fn solubility(&mut self, node: &Node<'t>) -> Statement {
        let end = child(node, Rule::at_part).map_or(before_parts(node, Rule::constant_part), |at| span(&at).start);
        let value = self.quantity_in(node, end, SOLUBILITY, Expected::Quantity);
        let at = self.at_part(node);
        let parts = self.constant_parts(node, Rule::constant_part);
        Statement::Solubility(Solubility { value, at, parts })
    }

    pub(super) fn activity(&mut self, node: &Node<'t>) -> Statement {
        Statement::Activity(self.quantity_in(node, span(node).end, ACTIVITY, Expected::Quantity))
    }
}

/// `H314`, `H360FD`, `EUH031`: the codes of the GHS hazard statements.
fn is_hazard_code(written: &str) -> bool {
    let digits = written.strip_prefix("EUH").or_else(|| written.strip_prefix('H')).unwrap_or_default();
    let number: String = digits.chars().take_while(char::is_ascii_digit).collect();
    number.len() == 3 && digits.chars().skip(3).all(|letter| letter.is_ascii_alphabetic())
}

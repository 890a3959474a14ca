//! What must not come together: the sides of a danger, how long things keep, the finding that is raised, heats of solution.

use super::constants::{ENTHALPY, before_parts};
use super::quantities::{DURATION, SOLUBILITY, Wanted};
use super::*;
use crate::units::Dimension;

const LEAST: Wanted = Wanted {
    fits: |dimension| {
        matches!(
            dimension,
            Dimension::AmountConcentration | Dimension::MassConcentration | Dimension::VolumeFraction | Dimension::MassFraction
        )
    },
    words: "a concentration",
};

impl<'t> Builder<'t> {
    /// `with NAME, NAME, at least QUANTITY`.
    pub(super) fn side(&mut self, node: &Node<'t>) -> Statement {
        let names = self.name_list(node, TokenKind::Name, Expected::ConstituentName);
        let least = child(node, Rule::at_least).map(|least| self.quantity_in(&least, span(&least).end, LEAST, Expected::Quantity));
        Statement::With(Side { names, least })
    }

    /// `keeps DURATION at T`.
    pub(super) fn keeps(&mut self, node: &Node<'t>) -> Statement {
        let end = child(node, Rule::at_part).map_or(span(node).end, |at| span(&at).start);
        let duration = self.quantity_in(node, end, DURATION, Expected::Duration);
        Statement::Keeps(Keeps { duration, at: self.at_part(node) })
    }

    /// `heat of solution VALUE at STRENGTH`.
    pub(super) fn heat_of_solution(&mut self, node: &Node<'t>) -> Statement {
        let end = child(node, Rule::at_part).map_or(before_parts(node, Rule::constant_part), |at| span(&at).start);
        let value = self.measured_in(node, ENTHALPY, end);
        let at = child(node, Rule::at_part).map(|at| self.quantity_in(&at, span(&at).end, SOLUBILITY, Expected::Quantity));
        let parts = self.constant_parts(node, Rule::constant_part);
        Statement::HeatOfSolution(HeatOfSolution { value, at, parts })
    }

    /// The finding code among a node's children.
    pub(super) fn code_in(&mut self, node: &Node<'t>, after: usize) -> Slot<Text> {
        let Some(code) = child(node, Rule::code) else { return self.absent(after, Expected::Code) };
        let place = span(&code);
        let written = self.of(place);
        let is_code = written.starts_with(|letter: char| letter.is_ascii_lowercase())
            && written.chars().all(|letter| letter.is_ascii_lowercase() || letter.is_ascii_digit() || letter == '-');
        if is_code {
            self.token(TokenKind::Code, place);
            return Slot::Given(Text { span: place, text: written.to_owned() });
        }
        self.token(TokenKind::Bad, place);
        let lower = written.to_lowercase();
        self.fault_with(place, FaultKind::Unexpected, vec![reading(place, lower, "")]);
        Slot::Bad(place)
    }
}

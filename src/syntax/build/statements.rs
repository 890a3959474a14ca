//! Which statement a node is.

use super::constants::{LOGARITHM, MOLAR_CONDUCTIVITY, MOLAR_MASS, MOLAR_VOLUME};
use super::quantities::MASS_OR_VOLUME;
use super::*;

impl<'t> Builder<'t> {
    pub(super) fn statement(&mut self, node: Node<'t>) -> Statement {
        let end = span(&node).end;
        match node.as_rule() {
            Rule::amount_line => self.amount_line(&node),
            Rule::or_line => self.or_line(&node),
            Rule::qs_line => self.quantum_satis(&node),
            Rule::all => self.all(&node),
            Rule::makes => Statement::Makes(self.quantity_in(&node, end, MASS_OR_VOLUME, Expected::Quantity)),
            Rule::cool => Statement::CoolTo(self.temperature(&node)),
            Rule::warm => Statement::WarmTo(self.temperature(&node)),
            Rule::drive_off => Statement::DriveOff(self.name_in(&node, end, Expected::ConstituentName)),
            Rule::filter => Statement::Filter,
            Rule::wait => Statement::Wait(self.duration(&node)),
            Rule::before_use => {
                self.second_word(&node, Rule::before_word);
                Statement::BeforeUse
            }
            Rule::after_autoclaving => {
                self.second_word(&node, Rule::after_word);
                Statement::AfterAutoclaving
            }
            Rule::made_at => Statement::MadeAt(self.temperature(&node)),
            Rule::used_at => self.used_at(&node),
            Rule::stored => self.stored_at(&node),
            Rule::ready => Statement::ReadyAfter(self.duration(&node)),
            Rule::use_within => Statement::UseWithin(self.duration(&node)),
            Rule::sealed => Statement::Sealed,
            Rule::open => Statement::Open,
            Rule::under => self.under(&node),
            Rule::in_lab => Statement::In(self.name_in(&node, end, Expected::LabName)),
            Rule::like => Statement::Like(self.name_in(&node, end, Expected::SolutionName)),
            Rule::without => Statement::Without(self.name_in(&node, end, Expected::IngredientName)),
            Rule::concentrate => self.concentrate(&node),
            Rule::expect => self.expect(&node),
            Rule::standardise => Statement::StandardiseAgainst(self.name_in(&node, end, Expected::IngredientName)),
            Rule::found => self.found(&node),
            Rule::accept => self.accept(&node),
            Rule::step => Statement::Step(self.text_in(&node, end)),
            Rule::record => Statement::Record(self.text_in(&node, end)),
            Rule::note => Statement::Note(self.text_in(&node, end)),
            Rule::source => Statement::Source(self.text_in(&node, end)),
            Rule::supplier => Statement::Supplier(self.text_in(&node, end)),
            Rule::expires => Statement::Expires(self.text_in(&node, end)),
            Rule::document => self.document(&node),
            Rule::header => self.header(&node),
            Rule::use_path => self.use_path(&node),
            Rule::language => self.language(&node),
            Rule::instead => {
                self.second_word(&node, Rule::instead_words);
                Statement::InsteadOfTheBuiltIn
            }
            Rule::also => Statement::Also(self.name_list(&node, TokenKind::Definition, Expected::NewName)),
            Rule::keep_away => Statement::KeepAwayFrom(self.name_list(&node, TokenKind::Name, Expected::IngredientName)),
            Rule::cas => self.cas(&node),
            Rule::formula_line => self.formula_line(&node),
            Rule::charge => self.charge(&node),
            Rule::molar_mass => Statement::MolarMass(self.measured_in(&node, MOLAR_MASS, end)),
            Rule::molar => {
                self.gap(end, Expected::Other);
                Statement::MolarMass(Slot::Missing(self.after_spaces(end)))
            }
            Rule::gives => self.gives(&node),
            Rule::form => self.form(&node),
            Rule::density => self.density(&node),
            Rule::aqueous => self.aqueous(&node),
            Rule::solubility => self.solubility(&node),
            Rule::activity => self.activity(&node),
            Rule::hazard => self.hazards(&node),
            Rule::heat_of_solution => self.heat_of_solution(&node),
            Rule::inert => Statement::Inert,
            Rule::pka => Statement::Pka(self.constant(&node, LOGARITHM)),
            Rule::log_ksp => Statement::LogKsp(self.constant(&node, LOGARITHM)),
            Rule::log_kh => Statement::LogKh(self.constant(&node, LOGARITHM)),
            Rule::forms => self.forms(&node),
            Rule::complex => self.complex(&node),
            Rule::interaction => self.interaction(&node),
            Rule::molar_conductivity => Statement::MolarConductivity(self.constant(&node, MOLAR_CONDUCTIVITY)),
            Rule::molar_volume => Statement::MolarVolume(self.constant(&node, MOLAR_VOLUME)),
            Rule::holds => Statement::Holds(self.name_list(&node, TokenKind::Name, Expected::ConstituentName)),
            Rule::with_line => self.side(&node),
            Rule::while_line => match self.expect(&node) {
                Statement::Expect(condition) => Statement::While(condition),
                other => other,
            },
            Rule::even => {
                self.second_word(&node, Rule::even_words);
                Statement::EvenInPassing
            }
            Rule::keeps => self.keeps(&node),
            Rule::raises => Statement::Raises(self.code_in(&node, end)),
            Rule::because => Statement::Because(self.text_in(&node, end)),
            Rule::advice => Statement::Advice(self.text_in(&node, end)),
            Rule::room => self.room(&node),
            Rule::balance => self.balance(&node),
            Rule::ware_line => self.ware_line(&node),
            Rule::meter => self.meter(&node),
            // The grammar has no other statement.
            _ => Statement::Note(Slot::Bad(span(&node))),
        }
    }

    /// The rest of a statement of several words, half typed.
    fn second_word(&mut self, node: &Node<'t>, rule: Rule) {
        if !has(node, rule) {
            let _: Slot<Text> = self.absent(span(node).end, Expected::Other);
        }
    }

    /// `concentrate 50x`.
    fn concentrate(&mut self, node: &Node<'t>) -> Statement {
        let Some(number_node) = child(node, Rule::number) else {
            return Statement::Concentrate(self.absent(span(node).end, Expected::Number));
        };
        let number = self.number(&number_node, false);
        let fold = child(node, Rule::fold);
        if let Some(fold) = &fold {
            let place = span(fold);
            self.token(TokenKind::Unit, place);
            if self.of(place).trim() != "x" {
                self.fault_with(place, FaultKind::WrittenForm, vec![reading(place, "x", "")]);
            }
        }
        Statement::Concentrate(match (number, fold) {
            (Some(number), Some(_)) if number.value > 0.0 => Slot::Given(number),
            (Some(number), None) => {
                let text = format!("{}x", self.of(number.span));
                self.fault_with(number.span, FaultKind::UnitMissing, vec![reading(number.span, text, "")]);
                Slot::Bad(number.span)
            }
            _ => Slot::Bad(span(&number_node)),
        })
    }
}

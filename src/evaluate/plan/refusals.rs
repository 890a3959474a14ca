//! What is said of an amount that cannot be told.

use super::Planner;
use crate::evaluate::goods::Goods;
use crate::evaluate::names::{self, ingredient};
use crate::evaluate::Refusal;
use crate::finding::{Anchor, Code, Finding, Fix};
use crate::model::{Addition, Reference};
use crate::text::Span;
use crate::units::format;

impl Planner<'_, '_> {
    /// `2 % v/v nitric acid`: of the concentrated acid as it is sold, or of pure acid?
    pub(super) fn percent_of_what(&self, addition: &Addition) -> Finding {
        Finding::new(
            Code::PercentOfWhat,
            addition.what.at,
            format!("{} by volume can be of the acid as it is sold, or of pure {}.", addition.what.text, addition.what.text),
        )
        .help("Name the bottle, or write an amount concentration.")
        .about(addition.what.key.as_str())
    }

    pub(super) fn strength_not_stated(&self, reference: &Reference) -> Finding {
        let strongest = ingredient(reference, true, self.context)
            .ok()
            .and_then(|found| found.substance().and_then(|substance| substance.aqueous.last().copied()));
        let mut finding = Finding::new(
            Code::StrengthNotStated,
            reference.at,
            format!("{} comes in many strengths, and this line does not say which.", reference.text),
        )
        .help("Write the strength before the name, or name a bottle of your library.")
        .about(reference.key.as_str());
        if let Some((share, ..)) = strongest {
            let strength = format!("{} % w/w", format::plain(100.0 * share));
            finding = finding.fix(Fix::replace(
                format!("Write `{strength} {}`", reference.text),
                Anchor::new(reference.at.line, Span::empty(reference.at.span.start)),
                format!("{strength} "),
            ));
        }
        finding
    }

    pub(super) fn no_amount(&self, addition: &Addition, goods: &Goods) -> Refusal {
        let name = &addition.what.text;
        let (message, help) = if goods.stock.is_some() {
            (
                format!("{name} holds several substances, so an amount of it in mol says nothing."),
                "Name the substance and take it `from` the stock, or state a volume.",
            )
        } else {
            (format!("The molar mass of {name} is not known, so neither is its amount in mol."), "State a mass, or its `molar mass`.")
        };
        let mut finding = Finding::new(Code::UnitOfWrongKind, addition.what.at, message).help(help);
        if goods.stock.is_some() {
            for solute in &goods.solutes {
                finding = finding.fix(Fix::replace(
                    format!("Write {}, from {name}", solute.name),
                    addition.what.at,
                    format!("{}, from {}", names::written_form(&solute.name), names::written_form(name)),
                ));
            }
        }
        finding.into()
    }

    pub(super) fn purity_of_a_solution(&self, addition: &Addition, is_bottle: bool) -> Finding {
        let at = addition.qualifiers.purity.map_or(self.at, |purity| purity.at);
        Finding::new(
            Code::PurityOfASolution,
            at,
            format!("A purity has no meaning here: {} is a {}.", addition.what.text, if is_bottle { "bottle" } else { "solution" }),
        )
        .help("State the purity where the substance itself is weighed.")
    }
}

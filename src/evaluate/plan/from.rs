//! `from`: an amount of a substance, taken as a volume of a stock that holds it.

use super::{Dose, Planner, Work};
use crate::chemistry::ComponentId;
use crate::evaluate::goods::Goods;
use crate::evaluate::names::ingredient;
use crate::evaluate::property::as_formula_factor;
use crate::evaluate::Refusal;
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Addition, Amount, Qualifiers, Reference};
use crate::units::Dimension;

impl Planner<'_, '_> {
    /// An amount of a substance, taken as a volume of a stock that holds it.
    pub(super) fn taken_from(&self, addition: &Addition, amount: &Amount, from: &Reference) -> Result<Work, Refusal> {
        let stock = self.goods(from, true, &Qualifiers::default())?;
        if addition.qualifiers.purity.is_some() || addition.qualifiers.water.is_some() || addition.what.strength.is_some() {
            return Err(self.purity_of_a_solution(addition, false).into());
        }
        let stated = match amount.dimension() {
            // `% v/v` of a bottle counts the bottle as bought.
            Dimension::VolumeFraction => Some(Dose::PerLitre(self.mass_of_stock(from, &stock, amount.value)?)),
            Dimension::Volume => Some(Dose::Fixed(self.mass_of_stock(from, &stock, amount.value)?)),
            _ => None,
        };
        let wanted = match ingredient(&addition.what, false, self.context) {
            Ok(_) => self.goods(&addition.what, false, &Qualifiers::default()).map(Some),
            Err(refusal) => {
                // `ATP`, `EGTA`, `phosphate` mean the total, however many salts bear the name.
                if self.context.constituents.named(&addition.what.key).is_some() { Ok(None) } else { Err(refusal) }
            }
        }?;
        let (share, molar_mass) = self.held(&addition.what, wanted.as_ref(), &stock, from)?;
        let dose = match stated {
            Some(dose) => dose,
            None => {
                let kg_per_mol = 1.0 / share;
                let per_mass = |kg: f64| molar_mass.map(|molar_mass| kg / molar_mass * kg_per_mol);
                let known = match amount.dimension() {
                    Dimension::Amount => Some(Dose::Fixed(amount.value * kg_per_mol)),
                    Dimension::AmountConcentration => Some(Dose::PerLitre(amount.value * kg_per_mol)),
                    Dimension::Molality => Some(Dose::PerKgWater(amount.value * kg_per_mol)),
                    Dimension::Mass => per_mass(amount.value).map(Dose::Fixed),
                    Dimension::MassConcentration => match (&addition.as_formula, self.substance_formula(&addition.what)) {
                        (Some(formula), Some(own)) => as_formula_factor(&formula.value, &own)
                            .map(|mol_per_gram| Dose::PerLitre(amount.value * mol_per_gram * kg_per_mol)),
                        (Some(_), None) => None,
                        (None, _) => per_mass(amount.value / 1000.0).map(Dose::PerLitre),
                    },
                    Dimension::MassFraction => per_mass(amount.value).map(Dose::PerKg),
                    _ => None,
                };
                known.ok_or_else(|| {
                    Refusal::from(
                        Finding::new(
                            Code::UnitOfWrongKind,
                            Anchor::new(self.at.line, amount.span),
                            format!("This unit does not say how much {} is taken from {}.", addition.what.text, from.text),
                        )
                        .help("State an amount, a concentration or a mass."),
                    )
                })?
            }
        };
        // The line speaks of the substance; what is measured out is the stock.
        let solute = wanted
            .and_then(|goods| goods.solute)
            .map(|(key, ..)| (key, share, molar_mass.unwrap_or(0.0) * share))
            .or(Some((stock.definition.clone(), share, 0.0)));
        Ok(Work::Add { goods: Goods { solute, ..stock }, dose })
    }

    /// Mass of a volume of the stock itself, kg.
    fn mass_of_stock(&self, from: &Reference, stock: &Goods, litres: f64) -> Result<f64, Refusal> {
        stock.mass_of_litres(litres).ok_or_else(|| {
            Finding::new(Code::UnitOfWrongKind, from.at, format!("{} is no liquid, so no volume of it is taken.", from.text))
                .help("Name a solution or a bottle after `from`.")
                .into()
        })
    }

    /// How much of a substance a kilogram of a stock can give, mol, matched by what the substance gives in water.
    fn held(
        &self,
        what: &Reference,
        wanted: Option<&Goods>,
        stock: &Goods,
        from: &Reference,
    ) -> Result<(f64, Option<f64>), Refusal> {
        let nothing = || -> Refusal {
            Finding::new(Code::UnknownName, what.at, format!("{} holds no {}.", from.text, what.text))
                .help("Take it from a stock that holds it.")
                .related(from.at, "the stock")
                .into()
        };
        let available = |component: &ComponentId| stock.per_kg.amounts_mol.get(component).copied().unwrap_or(0.0);
        let (moles, molar_mass) = match wanted {
            Some(goods) => {
                let (_, per_kg, _) = goods.solute.clone().ok_or_else(nothing)?;
                let least = goods
                    .per_kg
                    .amounts_mol
                    .iter()
                    .map(|(component, amount)| available(component) * per_kg / amount)
                    .fold(f64::INFINITY, f64::min);
                // Acids and bases are not matched by their counter-ion's proton.
                (least, Some(1.0 / per_kg))
            }
            None => {
                let constituent = self.context.constituents.named(&what.key).ok_or_else(nothing)?;
                (constituent.component.as_ref().map_or(0.0, available), constituent.molar_mass)
            }
        };
        if moles.is_finite() && moles > 0.0 { Ok((moles, molar_mass)) } else { Err(nothing()) }
    }
}

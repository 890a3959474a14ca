//! An ingredient line: how much of the goods its quantity means.

use super::{Dose, Planner, Work, pick};
use crate::evaluate::goods::Goods;
use crate::evaluate::names::{self, ingredient};
use crate::evaluate::property::as_formula_factor;
use crate::evaluate::Refusal;
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Action, Addition, Amount, Reference};
use crate::syntax::formula::Formula;
use crate::units::Dimension;

impl Planner<'_, '_> {
    pub(super) fn addition(&self, addition: &Addition) -> Result<Work, Refusal> {
        let amount = pick(&addition.amounts, self.index).ok_or_else(Refusal::reported)?;
        if let Some(from) = &addition.qualifiers.from {
            return self.taken_from(addition, amount, from);
        }
        let as_bought = matches!(
            amount.dimension(),
            Dimension::Mass | Dimension::Volume | Dimension::VolumeFraction | Dimension::Parts | Dimension::Fold
        ) || matches!(amount.dimension(), Dimension::EnzymeActivity | Dimension::EnzymeActivityConcentration);
        let goods = self.goods(&addition.what, as_bought, &addition.qualifiers)?;
        if let Some(from) = goods.stock.as_ref().filter(|_| addition.qualifiers.purity.is_some()) {
            return Err(self.purity_of_a_solution(addition, from.is_bottle).into());
        }
        let dose = self.dose(addition, amount, &goods)?;
        Ok(Work::Add { goods, dose })
    }

    /// How much of the goods a line means, kg.
    fn dose(&self, addition: &Addition, amount: &Amount, goods: &Goods) -> Result<Dose, Refusal> {
        let value = amount.value;
        let kg_per_mol = || match &goods.solute {
            Some((_, moles, _)) if *moles > 0.0 => Ok(1.0 / moles),
            _ => Err(self.no_amount(addition, goods)),
        };
        // A mass concentration is of the thing named: pure substance, or the stock as a whole.
        let kg_per_pure_kg = || match (&goods.solute, &goods.stock) {
            (Some((_, _, share)), None) if *share > 0.0 => 1.0 / share,
            _ => 1.0,
        };
        let by_formula = |grams_per: f64| -> Result<f64, Refusal> {
            match &addition.as_formula {
                None => Ok(grams_per / 1000.0 * kg_per_pure_kg()),
                Some(formula) => {
                    let substance = self.substance_formula(&addition.what);
                    match substance.as_ref().and_then(|own| as_formula_factor(&formula.value, own)) {
                        // mol of substance per gram of the formula it is reported as
                        Some(mol_per_gram) => Ok(grams_per * mol_per_gram * kg_per_mol()?),
                        None => Err(Finding::new(
                            Code::BadFormula,
                            formula.at,
                            format!("{} holds nothing that could be reported so.", addition.what.text),
                        )
                        .help("Report it as an element or a group that it holds.")
                        .into()),
                    }
                }
            }
        };
        Ok(match amount.dimension() {
            Dimension::Mass => match &addition.as_formula {
                None => Dose::Fixed(value),
                Some(_) => Dose::Fixed(by_formula(1000.0 * value)?),
            },
            Dimension::Volume => Dose::Fixed(self.mass_of_litres(addition, goods, value)?),
            Dimension::Amount => Dose::Fixed(value * kg_per_mol()?),
            Dimension::AmountConcentration => Dose::PerLitre(value * kg_per_mol()?),
            Dimension::Molality => Dose::PerKgWater(value * kg_per_mol()?),
            Dimension::MassConcentration => Dose::PerLitre(by_formula(value)?),
            Dimension::MassFraction => Dose::PerKg(value * kg_per_pure_kg()),
            Dimension::VolumeFraction => Dose::PerLitre(self.mass_of_litres(addition, goods, value)?),
            Dimension::Fold => match goods.stock.as_ref().and_then(|stock| stock.concentrate) {
                Some(concentrate) if concentrate > 0.0 => {
                    Dose::PerLitre(self.mass_of_litres(addition, goods, value / concentrate)?)
                }
                _ => {
                    return Err(Finding::new(
                        Code::UnitOfWrongKind,
                        Anchor::new(self.at.line, amount.span),
                        format!("{} does not say how many times stronger than used it is.", addition.what.text),
                    )
                    .help("Add `concentrate 10x` to its recipe, or state a volume here.")
                    .into());
                }
            },
            Dimension::Parts => match self.litres_per_part() {
                Some(litres) => Dose::Fixed(self.mass_of_litres(addition, goods, value * litres)?),
                None => {
                    return Err(Finding::new(
                        Code::NoExtent,
                        Anchor::new(self.at.line, amount.span),
                        "Parts do not say how much is made.",
                    )
                    .help("Add a line such as `makes 2 L`.")
                    .into());
                }
            },
            Dimension::EnzymeActivity | Dimension::EnzymeActivityConcentration => {
                let activity = self.activity_of(&addition.what);
                match activity {
                    Some(units_per_litre) if units_per_litre > 0.0 => {
                        let kg = self.mass_of_litres(addition, goods, value / units_per_litre)?;
                        if amount.dimension() == Dimension::EnzymeActivity { Dose::Fixed(kg) } else { Dose::PerLitre(kg) }
                    }
                    _ => {
                        return Err(Finding::new(
                            Code::UnitOfWrongKind,
                            Anchor::new(self.at.line, amount.span),
                            format!("The activity of {} is not stated.", addition.what.text),
                        )
                        .help("Give its bottle a line such as `activity 250 U/µL`, or state a volume or mass.")
                        .into());
                    }
                }
            }
            Dimension::Count => {
                // What a tablet or a vial holds is not said; the sheet says that it is not counted.
                Dose::Fixed(0.0)
            }
            _ => {
                return Err(Finding::new(
                    Code::UnitOfWrongKind,
                    Anchor::new(self.at.line, amount.span),
                    "This unit does not say how much goes in.",
                )
                .help("State a mass, a volume, an amount or a concentration.")
                .into());
            }
        })
    }

    fn litres_per_part(&self) -> Option<f64> {
        let makes = self.recipe.makes.filter(|makes| makes.value.dimension() == Dimension::Volume)?;
        let parts: f64 = self
            .recipe
            .entries
            .iter()
            .filter_map(|entry| match &entry.action {
                Action::Add(addition) => pick(&addition.amounts, self.index),
                _ => None,
            })
            .filter(|amount| amount.dimension() == Dimension::Parts)
            .map(|amount| amount.value)
            .sum();
        (parts > 0.0).then(|| makes.value.value / parts)
    }

    fn activity_of(&self, reference: &Reference) -> Option<f64> {
        let found = ingredient(reference, true, self.context).ok()?;
        found.definition.block.recipe()?.activity.map(|activity| activity.value)
    }

    pub(super) fn substance_formula(&self, reference: &Reference) -> Option<Formula> {
        let found = ingredient(reference, false, self.context).ok()?;
        found.substance()?.formula.as_ref().map(|(_, formula)| formula.clone())
    }

    pub(super) fn mass_of_litres(&self, addition: &Addition, goods: &Goods, litres: f64) -> Result<f64, Refusal> {
        if let Some(kg) = goods.mass_of_litres(litres)
            && !self.strength_is_missing(addition)
        {
            return Ok(kg);
        }
        let name = &addition.what.text;
        if self.strength_is_missing(addition) {
            let is_share = addition.amounts.first().is_some_and(|amount| amount.dimension() == Dimension::VolumeFraction);
            return Err(if is_share { self.percent_of_what(addition) } else { self.strength_not_stated(&addition.what) }.into());
        }
        Err(Finding::new(
            Code::UnitOfWrongKind,
            addition.what.at,
            format!("A volume of {name} says nothing: it is a solid, or its density is not known."),
        )
        .help("State a mass, or a strength such as `1 mol/L` before the name, or a `density`.")
        .about(addition.what.key.as_str())
        .into())
    }

    /// Acids, bases and ammonia are sold as solutions of many strengths; a volume of one needs its strength.
    fn strength_is_missing(&self, addition: &Addition) -> bool {
        if addition.what.strength.is_some() || addition.qualifiers.density.is_some() {
            return false;
        }
        let Ok(found) = ingredient(&addition.what, true, self.context) else { return false };
        found.substance().is_some_and(names::comes_in_strengths)
    }
}

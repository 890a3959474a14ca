//! `q.s.`: what is filled up to, set or adjusted.

use super::{Extent, Planner, Work, pick};
use crate::evaluate::goods::Goods;
use crate::evaluate::names::{self, ingredient};
use crate::evaluate::Refusal;
use crate::evaluate::solubility::solid_form;
use crate::finding::{Anchor, Code, Finding};
use crate::model::{GoalKind, MakeUp, Property, Reference};
use crate::units::Dimension;

impl Planner<'_, '_> {
    pub(super) fn make_up(&self, make_up: &MakeUp) -> Result<Work, Refusal> {
        let goal = pick(&make_up.goals, self.index).ok_or_else(Refusal::reported)?;
        let goods = self.goods(&make_up.what, true, &make_up.qualifiers)?;
        match &goal.kind {
            GoalKind::Volume { litres, .. } => {
                if goods.density.is_none() {
                    return Err(self.no_liquid(&make_up.what).into());
                }
                Ok(Work::FillTo { goods, extent: Extent::Litres(*litres) })
            }
            GoalKind::Mass { kilograms, .. } => Ok(Work::FillTo { goods, extent: Extent::Kilograms(*kilograms) }),
            GoalKind::Property { property: Property::Ph, aim, low, high, .. } => {
                let mut titrants = vec![goods];
                if let Some(other) = &make_up.alternative {
                    titrants.push(self.goods(other, true, &make_up.qualifiers)?);
                }
                for (titrant, reference) in
                    titrants.iter().zip(std::iter::once(&make_up.what).chain(&make_up.alternative))
                {
                    if titrant.stock.is_none()
                        && reference.strength.is_none()
                        && ingredient(reference, true, self.context)
                            .is_ok_and(|found| found.substance().is_some_and(names::is_sold_in_solution_only))
                    {
                        return Err(self.strength_not_stated(reference).into());
                    }
                }
                let window = low.zip(*high);
                Ok(Work::SetPh { titrants, goal: goal.clone(), aim: *aim, window, liquid: None })
            }
            GoalKind::Property { .. } => Ok(Work::Adjust { goods, goal: goal.clone() }),
            GoalKind::ByEye(_) => match &make_up.qualifiers.about {
                Some(about) => {
                    let mass_kg = match about.value.dimension() {
                        Dimension::Mass => Some(about.value.value),
                        Dimension::Volume => goods.mass_of_litres(about.value.value),
                        _ => None,
                    };
                    match mass_kg {
                        Some(mass_kg) => Ok(Work::ByEye { goods, mass_kg }),
                        None => Err(self.no_liquid(&make_up.what).into()),
                    }
                }
                None => Err(Finding::new(
                    Code::IncompleteLine,
                    goal.at,
                    "How much it takes by eye cannot be computed.",
                )
                .help("Add an estimate: `, about 5 mL`.")
                .into()),
            },
            GoalKind::Saturation => self.saturate(&make_up.what, goods, goal.at),
        }
    }

    /// As much of a substance as dissolves.
    fn saturate(&self, what: &Reference, goods: Goods, at: Anchor) -> Result<Work, Refusal> {
        let found = ingredient(what, false, self.context)?;
        let form = match (found.substance(), &goods.stock, &what.strength) {
            (Some(substance), None, None) => solid_form(&found.definition.key, substance, self.context),
            _ => None,
        };
        form.map(|form| Work::Saturate { goods, form: Box::new(form) }).ok_or_else(|| {
            Finding::new(Code::TargetOutOfReach, at, format!("How much of {} dissolves is not known.", what.text))
                .help("State an amount, or give its block a `solubility`, or a `solid` block with its `log Ksp`.")
                .about(what.key.as_str())
                .into()
        })
    }

    /// The gas that leaves; none where nothing is known of it as a gas.
    pub(super) fn drive_off(&self, reference: &Reference) -> Result<Option<Work>, Refusal> {
        let found = ingredient(reference, false, self.context)?;
        Ok(self.context.constituents.phases.gas(&found.definition.key).map(Work::DriveOff))
    }

    fn no_liquid(&self, reference: &Reference) -> Finding {
        Finding::new(
            Code::UnitOfWrongKind,
            reference.at,
            format!("{} is no liquid, so nothing is made up to a volume with it.", reference.text),
        )
        .help("Make up with water, another liquid or a solution.")
    }
}

//! A recipe with its names resolved and its amounts as rules: how much of what, given how much is made.

mod amounts;
mod from;
mod make_up;
mod pair;
mod refusals;

use super::goods::{Goods, goods};
use super::names::ingredient;
use super::solubility::SolidForm;
use super::{Context, Refusal};
use crate::chemistry::PhaseId;
use crate::finding::{Anchor, Code, Finding};
use crate::model::*;

/// One planned action.
pub struct Planned {
    /// Index of the entry in the recipe.
    pub entry: usize,
    /// Its statement.
    pub at: Anchor,
    /// Which part of the recipe it belongs to, counted by dividers.
    pub part: usize,
    /// What is done.
    pub work: Work,
}

/// The kinds of work.
pub enum Work {
    /// So much goes in.
    Add {
        /// Of this.
        goods: Goods,
        /// So much, kg.
        dose: Dose,
    },
    /// So much of this could go in instead of the line above.
    Instead {
        /// Of this.
        goods: Goods,
        /// So much, kg.
        dose: Dose,
    },
    /// Two forms, split to meet the goal in the finished solution.
    Pair {
        /// The members.
        members: [Goods; 2],
        /// Mass of each member per unit of the total: mol shared per kg, or kg per litre.
        kg_per_unit: [f64; 2],
        /// The total, in mol shared or litres.
        total: Dose,
        /// What is met.
        goal: Goal,
    },
    /// As much as brings the beaker to a volume (L) or mass (kg).
    FillTo {
        /// Of this.
        goods: Goods,
        /// How much there is then.
        extent: Extent,
    },
    /// As much as brings the beaker to a pH.
    SetPh {
        /// One or two titrants.
        titrants: Vec<Goods>,
        /// The goal.
        goal: Goal,
        /// Aim.
        aim: f64,
        /// The author's window.
        window: Option<(f64, f64)>,
        /// The planned make-up whose liquid counts as present.
        liquid: Option<usize>,
    },
    /// As much as brings a property of the finished solution to a value.
    Adjust {
        /// Of this.
        goods: Goods,
        /// Which property, at which value.
        goal: Goal,
    },
    /// So much, as the author estimates; met by eye.
    ByEye {
        /// Of this.
        goods: Goods,
        /// So much, kg.
        mass_kg: f64,
    },
    /// As much as the beaker dissolves.
    Saturate {
        /// Of this.
        goods: Goods,
        /// When it is saturated with it.
        form: Box<SolidForm>,
    },
    /// The beaker is brought to a temperature, K.
    BringTo(f64),
    /// A gas leaves the beaker.
    DriveOff(PhaseId),
    /// What has settled is filtered off.
    Filter,
    /// What stands below is added later.
    Divider,
}

/// An extent to fill up to.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Extent {
    /// Litres.
    Litres(f64),
    /// Kilograms.
    Kilograms(f64),
}

/// How much, given how much is made in the end.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Dose {
    /// So much.
    Fixed(f64),
    /// So much per litre of the finished part.
    PerLitre(f64),
    /// So much per kilogram of all water in the finished part.
    PerKgWater(f64),
    /// So much per kilogram of the finished part.
    PerKg(f64),
}

/// How much a part comes to.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Finals {
    /// Volume, L.
    pub litres: f64,
    /// All water, kg.
    pub water_kg: f64,
    /// Mass, kg.
    pub kilograms: f64,
}

impl Dose {
    /// The dose of a part that comes to so much.
    pub fn of(self, finals: &Finals) -> f64 {
        match self {
            Dose::Fixed(value) => value,
            Dose::PerLitre(value) => value * finals.litres,
            Dose::PerKgWater(value) => value * finals.water_kg,
            Dose::PerKg(value) => value * finals.kilograms,
        }
    }
}

/// The member of a list that goes with the series' index; a single value goes with all.
fn pick<T>(list: &[T], index: usize) -> Option<&T> {
    if list.len() == 1 { list.first() } else { list.get(index) }
}

/// Plans a recipe. All lines are looked at, so that every mistake is found in one go.
pub fn plan(recipe: &Recipe, index: usize, temperature_K: f64, context: &Context) -> Result<Vec<Planned>, Refusal> {
    let mut planned = Vec::new();
    let mut findings = Vec::new();
    let mut failed = false;
    let mut part = 0;
    for (number, entry) in recipe.entries.iter().enumerate() {
        let planner = Planner { recipe, index, temperature_K, context, at: entry.at };
        let work = match &entry.action {
            Action::Add(addition) => planner.addition(addition),
            Action::Pair(pair) => planner.pair(pair),
            Action::MakeUp(make_up) => planner.make_up(make_up),
            Action::AddAll(reference) => planner.all(reference),
            Action::Divider(_) => {
                part += 1;
                Ok(Work::Divider)
            }
            Action::Alternative(addition) => planner.addition(addition).map(|work| match work {
                Work::Add { goods, dose } => Work::Instead { goods, dose },
                other => other,
            }),
            Action::BringTo(kelvin) => Ok(Work::BringTo(*kelvin)),
            Action::DriveOff(reference) => match planner.drive_off(reference) {
                Ok(Some(work)) => Ok(work),
                // Nothing is known of it as a gas, and the advice says so.
                Ok(None) => continue,
                Err(refusal) => Err(refusal),
            },
            Action::Filter => Ok(Work::Filter),
            // What is worked out is what time brings about.
            Action::Wait(_) | Action::Found { .. } => continue,
        };
        match work {
            Ok(work) => planned.push(Planned { entry: number, at: entry.at, part, work }),
            Err(refusal) => {
                failed = true;
                findings.extend(refusal.into_findings());
            }
        }
    }
    if failed {
        return Err(Refusal::several(findings));
    }
    count_liquids_in(&mut planned);
    Ok(planned)
}

/// Where a pH is set and no line above brings water or a solution, the liquid of the next make-up counts as present.
fn count_liquids_in(planned: &mut [Planned]) {
    for index in 0..planned.len() {
        let above = planned.iter().take(index).any(|line| match &line.work {
            Work::Add { goods, dose: Dose::Fixed(_), .. } => goods.per_kg.water_kg > 0.3 && goods.is_liquid,
            Work::FillTo { .. } => true,
            _ => false,
        });
        let next = planned.iter().enumerate().skip(index + 1).find_map(|(below, line)| {
            matches!(line.work, Work::FillTo { .. }).then_some(below)
        });
        if let Some(Planned { work: Work::SetPh { liquid, .. }, .. }) = planned.get_mut(index)
            && !above
        {
            *liquid = next;
        }
    }
}

/// What the planning of a line needs.
struct Planner<'a, 'b> {
    recipe: &'b Recipe,
    index: usize,
    temperature_K: f64,
    context: &'b Context<'a>,
    at: Anchor,
}

impl Planner<'_, '_> {
    fn goods(&self, reference: &Reference, as_bought: bool, qualifiers: &Qualifiers) -> Result<Goods, Refusal> {
        let found = ingredient(reference, as_bought, self.context)?;
        goods(reference, &found, qualifiers, self.temperature_K, self.context)
    }

    fn all(&self, reference: &Reference) -> Result<Work, Refusal> {
        let goods = self.goods(reference, true, &Qualifiers::default())?;
        let Some(stock) = &goods.stock else {
            return Err(Finding::new(
                Code::UnitMissing,
                reference.at,
                format!("{} is no solution of this library, so it has no batch that could go in whole.", reference.text),
            )
            .help("State how much goes in.")
            .into());
        };
        let dose = Dose::Fixed(stock.outcome.mass_kg);
        Ok(Work::Add { goods, dose })
    }
}

/// Volume of goods measured out, L; none for solids.
pub fn litres_of(goods: &Goods, mass_kg: f64) -> Option<f64> {
    goods.density.map(|density| 1000.0 * mass_kg / density)
}

//! A recipe with its names resolved and its amounts as rules: how much of what, given how much is made.

use super::goods::{Goods, goods};
use super::names::{self, ingredient};
use super::property::as_formula_factor;
use super::{Context, Refusal};
use crate::chemistry::ComponentId;
use crate::finding::{Anchor, Code, Finding, Fix};
use crate::model::*;
use crate::units::Dimension;

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

/// The written value that tells a member of a series from the others.
pub fn series_value(recipe: &Recipe, index: usize) -> Option<String> {
    recipe.entries.iter().find_map(|entry| match &entry.action {
        Action::Add(addition) if addition.amounts.len() > 1 => addition.amounts.get(index).map(|amount| {
            format!("{} {}", crate::units::format::plain(amount.unit.from_base(amount.value)), amount.unit.symbol())
        }),
        Action::MakeUp(make_up) if make_up.goals.len() > 1 => make_up.goals.get(index).and_then(|goal| match &goal.kind {
            GoalKind::Property { property, aim, unit, .. } => Some(match unit {
                None => format!("{} {}", property.words(), crate::units::format::plain(*aim)),
                Some(unit) => {
                    format!("{} {} {}", property.words(), crate::units::format::plain(unit.from_base(*aim)), unit.symbol())
                }
            }),
            _ => None,
        }),
        _ => None,
    })
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
            // A change of the beaker is not worked out yet, and the advice says so.
            Action::BringTo(_)
            | Action::DriveOff(_)
            | Action::Filter
            | Action::Wait(_)
            | Action::Found { .. } => continue,
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

    fn addition(&self, addition: &Addition) -> Result<Work, Refusal> {
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
                // A tablet or vial brings its stated mass, where there is one; its content is not modelled.
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

    fn substance_formula(&self, reference: &Reference) -> Option<crate::syntax::formula::Formula> {
        let found = ingredient(reference, false, self.context).ok()?;
        found.substance()?.formula.as_ref().map(|(_, formula)| formula.clone())
    }

    fn mass_of_litres(&self, addition: &Addition, goods: &Goods, litres: f64) -> Result<f64, Refusal> {
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

    /// `2 % v/v nitric acid`: of the concentrated acid as it is sold, or of pure acid?
    fn percent_of_what(&self, addition: &Addition) -> Finding {
        Finding::new(
            Code::PercentOfWhat,
            addition.what.at,
            format!("{} by volume can be of the acid as it is sold, or of pure {}.", addition.what.text, addition.what.text),
        )
        .help("Name the bottle, or write an amount concentration.")
        .about(addition.what.key.as_str())
    }

    fn strength_not_stated(&self, reference: &Reference) -> Finding {
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
            let strength = format!("{} % w/w", crate::units::format::plain(100.0 * share));
            finding = finding.fix(Fix::replace(
                format!("Write `{strength} {}`", reference.text),
                Anchor::new(reference.at.line, crate::text::Span::empty(reference.at.span.start)),
                format!("{strength} "),
            ));
        }
        finding
    }

    fn no_amount(&self, addition: &Addition, goods: &Goods) -> Refusal {
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

    fn purity_of_a_solution(&self, addition: &Addition, is_bottle: bool) -> Finding {
        let at = addition.qualifiers.purity.map_or(self.at, |purity| purity.at);
        Finding::new(
            Code::PurityOfASolution,
            at,
            format!("A purity has no meaning here: {} is a {}.", addition.what.text, if is_bottle { "bottle" } else { "solution" }),
        )
        .help("State the purity where the substance itself is weighed.")
    }

    /// An amount of a substance, taken as a volume of a stock that holds it.
    fn taken_from(&self, addition: &Addition, amount: &Amount, from: &Reference) -> Result<Work, Refusal> {
        let stock = self.goods(from, true, &Qualifiers::default())?;
        if addition.qualifiers.purity.is_some() || addition.qualifiers.water.is_some() || addition.what.strength.is_some() {
            return Err(self.purity_of_a_solution(addition, false).into());
        }
        let stated = match amount.dimension() {
            // `% v/v` of a bottle counts the bottle as bought.
            Dimension::VolumeFraction => Some(Dose::PerLitre(self.mass_of_litres(addition, &stock, amount.value)?)),
            Dimension::Volume => Some(Dose::Fixed(self.mass_of_litres(addition, &stock, amount.value)?)),
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

    fn make_up(&self, make_up: &MakeUp) -> Result<Work, Refusal> {
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
            GoalKind::Saturation => Err(Finding::new(
                Code::NotEvaluatedYet,
                goal.at,
                "Saturation is read, but not worked out yet; the solution has no values.",
            )
            .at_level(crate::finding::Level::Hint)
            .into()),
        }
    }

    fn no_liquid(&self, reference: &Reference) -> Finding {
        Finding::new(
            Code::UnitOfWrongKind,
            reference.at,
            format!("{} is no liquid, so nothing is made up to a volume with it.", reference.text),
        )
        .help("Make up with water, another liquid or a solution.")
    }

    fn pair(&self, pair: &Pair) -> Result<Work, Refusal> {
        let goal = pick(&pair.goals, self.index).ok_or_else(Refusal::reported)?.clone();
        let none = Qualifiers::default();
        let is_volume = pair.amount.dimension() == Dimension::Volume;
        let members = [self.goods(&pair.first, is_volume, &none)?, self.goods(&pair.second, is_volume, &none)?];
        if is_volume {
            let [Some(first), Some(second)] = [members[0].density, members[1].density] else {
                return Err(self.not_a_pair(pair, "their volumes are not known").into());
            };
            return Ok(Work::Pair {
                members,
                kg_per_unit: [first / 1000.0, second / 1000.0],
                total: Dose::Fixed(pair.amount.value),
                goal,
            });
        }
        let Some(shared) = self.shared(&members) else {
            return Err(self.not_a_pair(pair, "they share nothing that differs by protons only").into());
        };
        let per_unit = |goods: &Goods| goods.per_kg.amounts_mol.get(&shared).map_or(f64::INFINITY, |moles| 1.0 / moles);
        let total = match pair.amount.dimension() {
            Dimension::Amount => Dose::Fixed(pair.amount.value),
            Dimension::AmountConcentration => Dose::PerLitre(pair.amount.value),
            Dimension::Molality => Dose::PerKgWater(pair.amount.value),
            _ => {
                return Err(Finding::new(
                    Code::UnitOfWrongKind,
                    Anchor::new(self.at.line, pair.amount.span),
                    "A pair needs its total as an amount: mol, mol/L or mol/kg.",
                )
                .help("State the total in mmol/L, or the volume of two solutions.")
                .into());
            }
        };
        let kg_per_unit = [per_unit(&members[0]), per_unit(&members[1])];
        Ok(Work::Pair { members, kg_per_unit, total, goal })
    }

    /// The component that both members give and that differs between them by protons only.
    fn shared(&self, members: &[Goods; 2]) -> Option<ComponentId> {
        let chemistry = &self.context.constituents.chemistry;
        let [first, second] = members;
        let protonates = |component: &ComponentId| {
            chemistry.all_species().any(|(_, species)| {
                species.hydrogen > 0 && species.parts.len() == 1 && species.parts.iter().all(|(part, _)| part == component)
            })
        };
        let mut shared = first
            .per_kg
            .amounts_mol
            .iter()
            .filter(|(component, amount)| {
                **amount > 0.0
                    && second.per_kg.amounts_mol.get(component).is_some_and(|other| *other > 0.0)
                    && protonates(component)
            })
            .map(|(component, _)| *component);
        let one = shared.next()?;
        if shared.next().is_some() {
            return None;
        }
        let protons = |goods: &Goods| {
            goods.per_kg.amounts_mol.get(&one).map_or(0.0, |amount| goods.per_kg.hydrogen_mol / amount)
        };
        ((protons(first) - protons(second)).abs() > 1e-6).then_some(one)
    }

    fn not_a_pair(&self, pair: &Pair, why: &str) -> Finding {
        Finding::new(
            Code::NotAPair,
            Anchor::new(self.at.line, pair.first.at.span.to(pair.second.at.span)),
            format!("{} and {} are not a pair: {why}.", pair.first.text, pair.second.text),
        )
        .help("State one of them by amount and bring the other in with `q.s. … to pH`.")
    }
}

/// Volume of goods measured out, L; none for solids.
pub fn litres_of(goods: &Goods, mass_kg: f64) -> Option<f64> {
    goods.density.map(|density| 1000.0 * mass_kg / density)
}

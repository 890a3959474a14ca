//! The bench: what the beaker holds line by line, with everything that the recipe leaves to be worked out.

mod finished;
mod outcome;
mod ph;
mod refusals;
mod saturation;
mod settle;
mod volume;

use std::cell::RefCell;

use super::beaker::Beaker;
use super::found;
use super::goods::state_of;
use super::plan::{Dose, Finals, Planned, Work, plan};
use super::property::{PropertyValue, Question, property_value};
use super::verdicts::verdicts;
use super::{Context, Outcome, Refusal, SetPoint, Stage};
use crate::chemistry::targets::{TargetFailure, find_root};
use crate::chemistry::{Mixture, State};
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Action, Block, Goal, GoalKind, Property, Recipe};
pub(super) use volume::diluted;

/// A pH is met when it is as near as this.
const PH_TOLERANCE: f64 = 1e-9;

/// How much more than the beaker holds is tried before a target counts as out of reach.
const MOST_TITRANT: f64 = 200.0;

/// What a run through the lines gave.
#[derive(Clone, Debug, Default)]
struct Run {
    beaker: Beaker,
    /// Masses taken, for each planned line: one, or two of a pair; which titrant, for two.
    masses: Vec<[f64; 2]>,
    set_points: Vec<SetPoint>,
    parts: Vec<(usize, Beaker)>,
    finals: Vec<Finals>,
    stages: Vec<Stage>,
}

/// Evaluates a solution.
pub(super) fn evaluate(
    block: &Block,
    recipe: &Recipe,
    index: usize,
    context: &Context,
    findings: &mut Vec<Finding>,
) -> Result<Outcome, Refusal> {
    let (temperature_K, half_width_K) = context.made_at_K(recipe);
    let plan = plan(recipe, index, temperature_K, context)?;
    let bench = Bench { recipe, plan: &plan, temperature_K, context, taken: RefCell::new(vec![None; plan.len()]) };
    bench.has_extent(block)?;
    let mut unknowns = vec![0.0; plan.len()];
    let run = bench.meet_finished_goals(&mut unknowns)?;
    let mut outcome = bench.outcome(run, half_width_K);
    for entry in &recipe.entries {
        if let Action::Found { what, strength, .. } = &entry.action {
            found::take_over(&mut outcome, what, strength, context)?;
        }
    }
    verdicts(recipe, outcome, context, findings)
}

/// A goal of the finished solution, and the planned line whose amount meets it.
struct Sought<'b> {
    number: usize,
    line: &'b Planned,
    goal: &'b Goal,
    property: &'b Property,
    aim: f64,
    is_pair: bool,
}

struct Bench<'a, 'b> {
    recipe: &'b Recipe,
    plan: &'b [Planned],
    temperature_K: f64,
    context: &'b Context<'a>,
    /// Which titrant a line that sets the pH last took and how much, kg: the next run needs nearly the same.
    taken: RefCell<Vec<Option<(usize, f64)>>>,
}

impl Bench<'_, '_> {
    /// A recipe must say how much is made, and in what.
    fn has_extent(&self, block: &Block) -> Result<(), Refusal> {
        let at = block.header_anchor();
        let mut has_liquid = false;
        let mut has_extent = false;
        for line in self.plan {
            match &line.work {
                Work::Add { goods, dose, .. } => {
                    has_extent |= matches!(dose, Dose::Fixed(mass) if *mass > 0.0);
                    has_liquid |= goods.is_liquid;
                }
                Work::Pair { members, total, .. } => {
                    has_extent |= matches!(total, Dose::Fixed(_));
                    has_liquid |= members.iter().any(|goods| goods.is_liquid);
                }
                Work::FillTo { goods, .. } => {
                    has_extent = true;
                    has_liquid |= goods.density.is_some() || goods.is_liquid;
                }
                Work::SetPh { titrants, .. } => has_liquid |= titrants.iter().any(|goods| goods.is_liquid),
                Work::Adjust { goods, .. } | Work::ByEye { goods, .. } => has_liquid |= goods.is_liquid,
                Work::Divider | Work::Instead { .. } | Work::Saturate { .. } | Work::BringTo(_) | Work::DriveOff(_) | Work::Filter => {}
            }
        }
        if self.plan.is_empty() || !has_extent {
            return Err(Finding::new(Code::NoExtent, at, "The recipe does not say how much is made.")
                .help("Add a line such as `q.s. water to 1 L`, or state a volume, a mass or an amount.")
                .into());
        }
        if !has_liquid {
            return Err(Finding::new(Code::NoSolvent, at, "The recipe names nothing that its substances are dissolved in.")
                .help("Add a line such as `q.s. water to 1 L`.")
                .into());
        }
        Ok(())
    }

    fn root(
        &self,
        f: impl FnMut(f64) -> Result<f64, Refusal>,
        low: f64,
        high: f64,
        tolerance: f64,
        at: Anchor,
    ) -> Result<f64, Refusal> {
        match find_root(f, low, high, tolerance, 200) {
            Ok(root) => Ok(root.x),
            Err(TargetFailure::Evaluation(refusal)) => Err(refusal),
            Err(TargetFailure::NotBracketed { .. } | TargetFailure::NotFinite | TargetFailure::Steps { .. }) => {
                Err(Finding::new(Code::NoSolutionFound, at, "The search for this amount did not come to an end.")
                    .help("Check the amounts; a number may be off by a factor of a thousand.")
                    .into())
            }
        }
    }

    /// One run through the lines, given how much each part comes to.
    fn run(&self, finals: &[Finals], unknowns: &[f64]) -> Result<Run, Refusal> {
        let mut run = Run::default();
        let mut beaker = Beaker::default();
        for (number, line) in self.plan.iter().enumerate() {
            let of_part = finals.get(line.part).copied().unwrap_or_default();
            let unknown = unknowns.get(number).copied().unwrap_or(0.0);
            let mut masses = [0.0, 0.0];
            match &line.work {
                Work::Add { goods, dose, .. } => {
                    masses[0] = dose.of(&of_part);
                    beaker.add(goods, masses[0]);
                }
                Work::Instead { dose, .. } => masses[0] = dose.of(&of_part),
                Work::Pair { members, kg_per_unit, total, .. } => {
                    let total = total.of(&of_part);
                    masses = [total * (1.0 - unknown) * kg_per_unit[0], total * unknown * kg_per_unit[1]];
                    beaker.add(&members[0], masses[0]);
                    beaker.add(&members[1], masses[1]);
                }
                Work::Adjust { goods, .. } => {
                    masses[0] = unknown;
                    beaker.add(goods, unknown);
                }
                Work::ByEye { goods, mass_kg } => {
                    masses[0] = *mass_kg;
                    beaker.add(goods, *mass_kg);
                }
                Work::FillTo { goods, extent } => {
                    masses[0] = self.fill(&beaker, goods, *extent, line.at)?;
                    beaker.add(goods, masses[0]);
                }
                Work::SetPh { titrants, goal, aim, window, liquid } => {
                    let (which, mass, point) = self.set(&beaker, titrants, goal, *aim, *window, *liquid, number)?;
                    if let (Some(slot), Some(titrant)) = (masses.get_mut(which), titrants.get(which)) {
                        *slot = mass;
                        beaker.add(titrant, mass);
                    }
                    run.set_points.push(point);
                }
                Work::Saturate { goods, form } => {
                    masses[0] = self.saturate(&beaker, goods, form, line)?;
                    beaker.add(goods, masses[0]);
                }
                Work::BringTo(kelvin) => beaker.temperature_K = Some(*kelvin),
                Work::DriveOff(gas) => {
                    let temperature_K = self.temperature_of(&beaker);
                    beaker
                        .drive_off(*gas, line.entry, line.at, temperature_K, self.context)
                        .map_err(|failure| Refusal::of_chemistry(line.at, &failure))?;
                }
                Work::Filter => {
                    let temperature_K = self.temperature_of(&beaker);
                    beaker
                        .filter(line.entry, line.at, temperature_K, self.context)
                        .map_err(|failure| Refusal::of_chemistry(line.at, &failure))?;
                }
                Work::Divider => {
                    run.finals.push(self.finals_of(&beaker, line.at)?);
                    run.parts.push((line.entry, beaker.clone()));
                }
            }
            run.masses.push(masses);
            run.stages.push(Stage {
                entry: line.entry,
                at: line.at,
                mixture: beaker.mixture.clone(),
                temperature_K: self.temperature_of(&beaker),
            });
        }
        let at = self.plan.last().map_or(Anchor::default(), |line| line.at);
        run.finals.push(self.finals_of(&beaker, at)?);
        run.beaker = beaker;
        Ok(run)
    }

    fn finals_of(&self, beaker: &Beaker, at: Anchor) -> Result<Finals, Refusal> {
        let litres = self.volume(&beaker.mixture, self.temperature_K, at)?;
        Ok(Finals { litres, water_kg: beaker.water_kg, kilograms: beaker.kilograms })
    }

    /// The value of a goal's property in a mixture, at the goal's own temperature (else this one, K) and dilution.
    fn value(&self, mixture: &Mixture, goal: &Goal, property: &Property, at: Anchor, temperature_K: f64) -> Result<f64, Refusal> {
        let mut mixture = mixture.clone();
        if let Some(dilution) = &goal.diluted {
            mixture = diluted(&mixture, dilution.fold, dilution.with.as_ref(), temperature_K, self.context)?;
        }
        let temperature_K = goal.temperature.map_or(temperature_K, |stated| stated.value);
        let state = state_of(&mixture, temperature_K, self.context).map_err(|failure| Refusal::of_chemistry(at, &failure))?;
        let unit = match &goal.kind {
            GoalKind::Property { unit, .. } => *unit,
            _ => None,
        };
        let question = Question {
            property,
            unit,
            as_formula: goal.as_formula.as_ref(),
            says_temperature: goal.temperature.is_some(),
        };
        match property_value(&state, &question, self.context) {
            // Nothing of the solid's ions is there yet.
            Err(PropertyValue::Absent(_)) => Ok(saturation::ABSENT),
            value => value.map_err(|why| Refusal::from(why.finding(goal.at))),
        }
    }

    fn state(&self, beaker: &Beaker, at: Anchor) -> Result<State, Refusal> {
        state_of(&beaker.mixture, self.temperature_of(beaker), self.context).map_err(|failure| Refusal::of_chemistry(at, &failure))
    }
}

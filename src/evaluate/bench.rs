//! The bench: what the beaker holds line by line, with everything that the recipe leaves to be worked out.

use super::goods::{Goods, scaled, state_of, volume_of};
use super::names::ingredient;
use super::plan::{Dose, Extent, Finals, Planned, Work, litres_of, plan};
use super::property::property_value;
use super::verdicts::verdicts;
use super::found;
use super::{Context, LineOutcome, Outcome, PartOutcome, Refusal, Role, SetPoint, Solute};
use crate::chemistry::targets::{TargetFailure, find_root};
use crate::chemistry::{Mixture, State, water};
use crate::finding::{Anchor, Code, Finding};
use crate::model::{Action, Block, Goal, GoalKind, Property, Qualifiers, Recipe};
use crate::units::format;

/// Rounds of settling how much is made; each closes in by a factor of ten or more.
const MAX_ROUNDS: usize = 80;

/// A pH is met when it is as near as this.
const PH_TOLERANCE: f64 = 1e-9;

/// How much more than the beaker holds is tried before a target counts as out of reach.
const MOST_TITRANT: f64 = 200.0;

/// The beaker after some lines.
#[derive(Clone, Debug, Default)]
struct Beaker {
    mixture: Mixture,
    kilograms: f64,
    water_kg: f64,
}

impl Beaker {
    fn add(&mut self, goods: &Goods, mass_kg: f64) {
        self.mixture.add(&goods.per_kg, mass_kg);
        self.kilograms += mass_kg;
        self.water_kg += mass_kg * goods.water_kg;
    }
}

/// What a run through the lines gave.
#[derive(Clone, Debug, Default)]
struct Run {
    beaker: Beaker,
    /// Masses taken, for each planned line: one, or two of a pair; which titrant, for two.
    masses: Vec<[f64; 2]>,
    set_points: Vec<SetPoint>,
    parts: Vec<(usize, Beaker)>,
    finals: Vec<Finals>,
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
    let bench = Bench { plan: &plan, temperature_K, context };
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
    plan: &'b [Planned],
    temperature_K: f64,
    context: &'b Context<'a>,
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
                Work::Divider | Work::Instead { .. } => {}
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

    /// Finds the amounts that only the finished solution can tell (pairs, properties), all together.
    fn meet_finished_goals(&self, unknowns: &mut [f64]) -> Result<Run, Refusal> {
        let mut sought = Vec::new();
        for (number, line) in self.plan.iter().enumerate() {
            let (Work::Pair { goal, .. } | Work::Adjust { goal, .. }) = &line.work else { continue };
            let GoalKind::Property { property, aim, .. } = &goal.kind else {
                return Err(Finding::new(Code::Unreadable, goal.at, "A pair is split to meet a property, not a volume or mass.")
                    .help("Write the pH, or another property, that the finished solution must have.")
                    .into());
            };
            let is_pair = matches!(line.work, Work::Pair { .. });
            sought.push(Sought { number, line, goal, property, aim: *aim, is_pair });
        }
        if sought.is_empty() {
            return self.settle(unknowns);
        }
        // One after the other, and again until none moves the others: they are coupled by the ionic strength only.
        let mut last = vec![f64::NAN; sought.len()];
        for round in 0..MAX_ROUNDS {
            let mut moved = 0.0f64;
            for (one, last) in sought.iter().zip(last.iter_mut()) {
                let guess = if last.is_finite() { Some(*last) } else { None };
                let x = self.meet(one, guess, unknowns)?;
                moved = moved.max(if last.is_finite() { (x - *last).abs() / x.abs().max(1e-12) } else { f64::INFINITY });
                *last = x;
            }
            if sought.len() == 1 || moved < 1e-12 || (round > 20 && moved < 1e-9) {
                return self.settle(unknowns);
            }
        }
        let at = sought.first().map_or(Anchor::default(), |one| one.line.at);
        Err(Finding::new(Code::NoSolutionFound, at, "The amounts that the finished solution must have work against each other.")
            .help("Drop one of the targets.")
            .into())
    }

    /// Meets one goal of the finished solution while the other unknowns stay. `guess` is where it was met before.
    fn meet(&self, one: &Sought, guess: Option<f64>, unknowns: &mut [f64]) -> Result<f64, Refusal> {
        let Sought { number, line, goal, property, aim, is_pair } = *one;
        let mut miss = |x: f64| -> Result<f64, Refusal> {
            if let Some(slot) = unknowns.get_mut(number) {
                *slot = x;
            }
            let run = self.settle(unknowns)?;
            Ok(self.value(&run.beaker.mixture, goal, property, line.at)? - aim)
        };
        let x = if is_pair {
            match guess.map(|guess| self.bracket(&mut miss, guess, 1.0)).transpose()?.flatten() {
                Some((low, high)) => self.root(&mut miss, low, high, 1e-14, line.at)?,
                None => {
                    let (at_zero, at_one) = (miss(0.0)?, miss(1.0)?);
                    if at_zero.abs() > PH_TOLERANCE && at_one.abs() > PH_TOLERANCE && (at_zero > 0.0) == (at_one > 0.0) {
                        return Err(self.pair_out_of_reach(line, goal, property, aim + at_zero, aim + at_one));
                    }
                    self.root(&mut miss, 0.0, 1.0, 1e-14, line.at)?
                }
            }
        } else {
            let at_zero = miss(0.0)?;
            if at_zero > 1e-12 * aim.abs() {
                return Err(self.already_passed(goal, property, aim + at_zero));
            }
            let scale = self.plan_mass();
            let bracket = guess.map(|guess| self.bracket(&mut miss, guess, f64::INFINITY)).transpose()?.flatten();
            let (low, high) = match bracket {
                Some(bracket) => bracket,
                None => {
                    let (mut low, mut high, mut reached) = (0.0, 1e-5 * scale, aim + at_zero);
                    loop {
                        let at_high = miss(high)?;
                        reached = if at_high.is_finite() { aim + at_high } else { reached };
                        if at_high >= 0.0 {
                            break (low, high);
                        }
                        // The property grows nearly in step with the amount, so two points tell where to look next.
                        let slope = (at_high - at_zero) / high;
                        let next = if slope > 0.0 { -at_zero / slope * 1.02 } else { f64::INFINITY };
                        (low, high) = (high, next.clamp(2.0 * high, 1000.0 * high));
                        if high > MOST_TITRANT * scale {
                            return Err(self.adjust_out_of_reach(goal, property, reached));
                        }
                    }
                }
            };
            self.root(&mut miss, low, high, 1e-14 * high, line.at)?
        };
        miss(x)?;
        Ok(x)
    }

    /// A narrow bracket around a guess, widened until the sign changes; none where it does not.
    fn bracket(
        &self,
        miss: &mut impl FnMut(f64) -> Result<f64, Refusal>,
        guess: f64,
        most: f64,
    ) -> Result<Option<(f64, f64)>, Refusal> {
        let mut width = 1e-6;
        for _ in 0..6 {
            let (low, high) = (guess * (1.0 - width), (guess * (1.0 + width)).min(most));
            let (at_low, at_high) = (miss(low)?, miss(high)?);
            if (at_low > 0.0) != (at_high > 0.0) {
                return Ok(Some((low, high)));
            }
            width *= 30.0;
            if width > 0.9 {
                break;
            }
        }
        Ok(None)
    }

    /// About how much the recipe comes to, kg.
    fn plan_mass(&self) -> f64 {
        let parts = self.plan.last().map_or(0, |line| line.part);
        self.first_guess(parts).kilograms.max(1e-9)
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

    /// Runs the lines until how much is made comes out as what was put in.
    fn settle(&self, unknowns: &[f64]) -> Result<Run, Refusal> {
        let parts = self.plan.last().map_or(1, |line| line.part + 1);
        let mut finals: Vec<Finals> = (0..parts).map(|part| self.first_guess(part)).collect();
        let depends = self.plan.iter().any(|line| match &line.work {
            Work::Add { dose, .. } | Work::Pair { total: dose, .. } => !matches!(dose, Dose::Fixed(_)),
            _ => false,
        });
        let mut last_change = f64::INFINITY;
        for _ in 0..MAX_ROUNDS {
            let run = self.run(&finals, unknowns)?;
            let change = run
                .finals
                .iter()
                .zip(&finals)
                .map(|(new, old)| {
                    let relative = |new: f64, old: f64| ((new - old) / new.abs().max(1e-30)).abs();
                    relative(new.litres, old.litres)
                        .max(relative(new.water_kg, old.water_kg))
                        .max(relative(new.kilograms, old.kilograms))
                })
                .fold(0.0, f64::max);
            // Rounding keeps the last digits moving; once they no longer settle further they are as good as they get.
            if !depends || change < 1e-12 || (change < 1e-9 && change >= last_change) {
                return Ok(run);
            }
            last_change = change;
            finals = run.finals;
        }
        let at = self.plan.first().map_or(Anchor::default(), |line| line.at);
        Err(Finding::new(Code::NoSolutionFound, at, "How much is made cannot be settled: the concentrations leave no room for the liquid.")
            .help("Check the concentrations, or add a make-up line.")
            .into())
    }

    fn first_guess(&self, part: usize) -> Finals {
        let mut kilograms = 0.0;
        for line in self.plan.iter().filter(|line| line.part <= part) {
            match &line.work {
                Work::Add { dose: Dose::Fixed(mass), .. } => kilograms += mass,
                Work::FillTo { extent: Extent::Litres(litres), .. } => kilograms = *litres,
                Work::FillTo { extent: Extent::Kilograms(mass), .. } => kilograms = *mass,
                _ => {}
            }
        }
        Finals { litres: kilograms, water_kg: 0.97 * kilograms, kilograms }
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
                    let (which, mass, point) = self.set(&beaker, titrants, goal, *aim, *window, *liquid, line)?;
                    if let (Some(slot), Some(titrant)) = (masses.get_mut(which), titrants.get(which)) {
                        *slot = mass;
                        beaker.add(titrant, mass);
                    }
                    run.set_points.push(point);
                }
                Work::Divider => {
                    run.finals.push(self.finals_of(&beaker, line.at)?);
                    run.parts.push((line.entry, beaker.clone()));
                }
            }
            run.masses.push(masses);
        }
        let at = self.plan.last().map_or(Anchor::default(), |line| line.at);
        run.finals.push(self.finals_of(&beaker, at)?);
        run.beaker = beaker;
        Ok(run)
    }

    fn finals_of(&self, beaker: &Beaker, at: Anchor) -> Result<Finals, Refusal> {
        let litres = self.volume(&beaker.mixture, at)?;
        Ok(Finals { litres, water_kg: beaker.water_kg, kilograms: beaker.kilograms })
    }

    fn volume(&self, mixture: &Mixture, at: Anchor) -> Result<f64, Refusal> {
        volume_of(mixture, self.temperature_K, self.context).ok_or_else(|| {
            Finding::new(Code::NoSolutionFound, at, "The volume of the beaker at this line cannot be worked out.")
                .help("Check the amounts; a number may be off by a factor of a thousand.")
                .into()
        })
    }

    /// How much of the goods brings the beaker to an extent, kg.
    fn fill(&self, beaker: &Beaker, goods: &Goods, extent: Extent, at: Anchor) -> Result<f64, Refusal> {
        match extent {
            Extent::Kilograms(kilograms) => {
                let missing = kilograms - beaker.kilograms;
                if missing < -1e-9 * kilograms {
                    let (holds, mark) = (format::mass(beaker.kilograms, 4), format::mass(kilograms, 4));
                    return Err(overfull(at, &holds, &mark));
                }
                Ok(missing.max(0.0))
            }
            Extent::Litres(litres) => {
                let density = goods.density.unwrap_or(1000.0) / 1000.0;
                let before = if beaker.kilograms > 0.0 { self.volume(&beaker.mixture, at)? } else { 0.0 };
                // A beaker at its mark within a ten-thousandth is full.
                if before > litres * 1.0001 {
                    return Err(overfull(at, &format::volume(before, 4), &format::volume(litres, 4)));
                }
                let mut mass = (litres - before).max(0.0) * density;
                for _ in 0..40 {
                    let mut filled = beaker.mixture.clone();
                    filled.add(&goods.per_kg, mass);
                    let miss = litres - self.volume(&filled, at)?;
                    let next = (mass + miss * density).max(0.0);
                    if (next - mass).abs() <= 1e-12 * litres {
                        return Ok(next);
                    }
                    mass = next;
                }
                Ok(mass)
            }
        }
    }

    /// The beaker with the liquid of a later make-up counted in.
    fn with_liquid(&self, beaker: &Beaker, liquid: Option<usize>) -> Result<Beaker, Refusal> {
        let Some(Planned { at, work: Work::FillTo { goods, extent }, .. }) = liquid.and_then(|index| self.plan.get(index))
        else {
            return Ok(beaker.clone());
        };
        let mut filled = beaker.clone();
        let mass = self.fill(beaker, goods, *extent, *at)?;
        filled.add(goods, mass);
        Ok(filled)
    }

    /// The value of a goal's property in a mixture, at the goal's own temperature and dilution.
    fn value(&self, mixture: &Mixture, goal: &Goal, property: &Property, at: Anchor) -> Result<f64, Refusal> {
        let mut mixture = mixture.clone();
        if let Some(dilution) = &goal.diluted {
            mixture = diluted(&mixture, dilution.fold, dilution.with.as_ref(), self.temperature_K, self.context)?;
        }
        let temperature_K = goal.temperature.map_or(self.temperature_K, |stated| stated.value);
        let state = state_of(&mixture, temperature_K, self.context).map_err(|failure| Refusal::of_chemistry(at, &failure))?;
        let unit = match &goal.kind {
            GoalKind::Property { unit, .. } => *unit,
            _ => None,
        };
        property_value(&state, property, unit, None, self.context)
            .map_err(|why| Refusal::from(why.finding(goal.at)))
    }

    /// Finds the titrant and its mass that bring the beaker to a pH.
    #[allow(clippy::too_many_arguments, reason = "all of them are what the line says")]
    fn set(
        &self,
        beaker: &Beaker,
        titrants: &[Goods],
        goal: &Goal,
        aim: f64,
        window: Option<(f64, f64)>,
        liquid: Option<usize>,
        line: &Planned,
    ) -> Result<(usize, f64, SetPoint), Refusal> {
        if beaker.kilograms <= 0.0 && liquid.is_none() {
            return Err(self.nothing_to_set(line));
        }
        let with = |titrant: &Goods, mass: f64| -> Result<Beaker, Refusal> {
            let mut beaker = beaker.clone();
            beaker.add(titrant, mass);
            self.with_liquid(&beaker, liquid)
        };
        let Some(first) = titrants.first() else { return Err(Refusal::reported()) };
        let start = with(first, 0.0)?;
        if start.mixture.water_kg <= 0.0 {
            return Err(self.nothing_to_set(line));
        }
        let before = self.value(&start.mixture, goal, &Property::Ph, line.at)?;
        let start_state = self.state(&start, line.at)?;
        let point = |state: State| SetPoint {
            entry: line.entry,
            at: line.at,
            aim,
            window,
            pH_before: before,
            state,
            liquid_of: liquid.and_then(|index| self.plan.get(index)).map(|line| line.entry),
            elsewhere: goal.temperature.is_some() || goal.diluted.is_some(),
        };
        if (before - aim).abs() <= PH_TOLERANCE {
            return Ok((0, 0.0, point(start_state)));
        }
        let upwards = aim > before;
        let sensitivity = start_state.sensitivity();
        // Which way a titrant goes is asked of the beaker; one that does not move it at all is asked by its own pH.
        let goes_up = |titrant: &Goods| {
            let slope = sensitivity.pH_derivative(&titrant.per_kg);
            if slope.abs() > 1e-12 { slope > 0.0 } else { self.own_ph(titrant).is_some_and(|own| own > before) }
        };
        let Some((which, titrant)) = titrants.iter().enumerate().find(|(_, titrant)| goes_up(titrant) == upwards) else {
            return Err(self.wrong_way(line, goal, titrants, before, aim));
        };
        let miss = |mass: f64| -> Result<f64, Refusal> {
            let beaker = with(titrant, mass)?;
            Ok(self.value(&beaker.mixture, goal, &Property::Ph, line.at)? - aim)
        };
        let scale = start.kilograms;
        let (mut low, mut high, mut furthest) = (0.0, 1e-4 * scale, before);
        loop {
            match miss(high) {
                Ok(value) if (value >= 0.0) == upwards => break,
                Ok(value) if high <= MOST_TITRANT * scale => {
                    furthest = value + aim;
                    (low, high) = (high, 3.0 * high);
                }
                _ => return Err(self.out_of_reach(line, goal, titrant, before, aim, furthest)),
            }
        }
        let mass = self.root(miss, low, high, 1e-13 * high, line.at)?;
        let state = self.state(&with(titrant, mass)?, line.at)?;
        Ok((which, mass, point(state)))
    }

    fn state(&self, beaker: &Beaker, at: Anchor) -> Result<State, Refusal> {
        state_of(&beaker.mixture, self.temperature_K, self.context).map_err(|failure| Refusal::of_chemistry(at, &failure))
    }

    /// pH of a titrant by itself, or of a solid in a little water.
    fn own_ph(&self, titrant: &Goods) -> Option<f64> {
        let mut mixture = titrant.per_kg.clone();
        if mixture.water_kg < 0.1 {
            mixture.water_kg += 10.0;
        }
        state_of(&mixture, self.temperature_K, self.context).ok().map(|state| state.pH())
    }

    fn nothing_to_set(&self, line: &Planned) -> Refusal {
        Finding::new(Code::NoSolvent, line.at, "There is no liquid in the beaker whose pH could be set.")
            .help("Write the water above this line, or make up to a volume or mass below it.")
            .into()
    }

    fn wrong_way(&self, line: &Planned, goal: &Goal, titrants: &[Goods], before: f64, aim: f64) -> Refusal {
        let names: Vec<&str> = titrants.iter().map(|titrant| titrant.name.as_str()).collect();
        let (direction, needed) = if aim > before { ("lowers", "base") } else { ("raises", "acid") };
        Finding::new(
            Code::WrongWayTitrant,
            goal.at,
            format!(
                "Before this line the pH is {before:.2}; {} {direction} it, so pH {} is not reached.",
                super::names::listed(&names),
                format::plain(aim)
            ),
        )
        .help(format!("Adjust with {} {needed} instead, or change what is above.", if needed == "base" { "a" } else { "an" }))
        .related(line.at, "the line that adjusts")
        .into()
    }

    fn out_of_reach(&self, line: &Planned, goal: &Goal, titrant: &Goods, before: f64, aim: f64, furthest: f64) -> Refusal {
        Finding::new(
            Code::TargetOutOfReach,
            goal.at,
            format!(
                "{} takes the pH from {before:.2} to {furthest:.2} and no further, so pH {} is not reached.",
                titrant.name,
                format::plain(aim)
            ),
        )
        .help(if aim > before { "Use a stronger base." } else { "Use a stronger acid." })
        .related(line.at, "the line that adjusts")
        .into()
    }

    fn pair_out_of_reach(&self, line: &Planned, goal: &Goal, property: &Property, one: f64, other: f64) -> Refusal {
        let unit = unit_of(goal);
        let (low, high) = (one.min(other), one.max(other));
        Finding::new(
            Code::TargetOutOfReach,
            goal.at,
            format!(
                "The two members reach {} {} to {}, not {}.",
                property.words(),
                format::with_unit(low, unit),
                format::with_unit(high, unit),
                format::with_unit(aim_of(goal), unit)
            ),
        )
        .help("Choose another pair, or another target.")
        .related(line.at, "the pair")
        .into()
    }

    fn already_passed(&self, goal: &Goal, property: &Property, value: f64) -> Refusal {
        let unit = unit_of(goal);
        Finding::new(
            Code::TargetAlreadyPassed,
            goal.at,
            format!(
                "Without this line the {} is already {}, more than {}.",
                property.words(),
                format::with_unit(value, unit),
                format::with_unit(aim_of(goal), unit)
            ),
        )
        .help("Raise the target, or lower what the other lines bring.")
        .into()
    }

    fn adjust_out_of_reach(&self, goal: &Goal, property: &Property, reached: f64) -> Refusal {
        let unit = unit_of(goal);
        Finding::new(
            Code::TargetOutOfReach,
            goal.at,
            format!(
                "However much goes in, the {} comes to {} and not to {}.",
                property.words(),
                format::with_unit(reached, unit),
                format::with_unit(aim_of(goal), unit)
            ),
        )
        .help("Adjust with something that brings more of it.")
        .into()
    }

    /// What the run amounts to.
    fn outcome(&self, run: Run, made_at_half_width_K: f64) -> Outcome {
        let Run { beaker, masses, set_points, parts, finals } = run;
        let finals_of_all = finals.last().copied().unwrap_or_default();
        let mut lines = Vec::new();
        let mut solutes: Vec<Solute> = Vec::new();
        let mut take = |line: &Planned, goods: &Goods, mass_kg: f64, role: Role| {
            let amount_mol = goods.solute.as_ref().map(|(_, moles, _)| moles * mass_kg);
            for solute in goods.solutes.iter().filter(|_| role != Role::Alternative) {
                let solute = scaled(solute, mass_kg);
                match solutes.iter_mut().find(|known| known.definition == solute.definition) {
                    Some(known) => {
                        known.mass_kg += solute.mass_kg;
                        known.amount_mol = known.amount_mol.zip(solute.amount_mol).map(|(one, other)| one + other);
                    }
                    None => solutes.push(solute),
                }
            }
            lines.push(LineOutcome {
                entry: line.entry,
                at: line.at,
                name: goods.name.clone(),
                definition: goods.definition.clone(),
                role,
                mass_kg,
                volume_L: litres_of(goods, mass_kg),
                amount_mol,
                concentration_mol_per_L: amount_mol.map(|amount| amount / finals_of_all.litres),
                per_kg: goods.per_kg.clone(),
            });
        };
        let mut made_up = false;
        for (line, masses) in self.plan.iter().zip(&masses) {
            match &line.work {
                Work::Add { goods, .. } => take(line, goods, masses[0], Role::Stated),
                Work::Instead { goods, .. } => take(line, goods, masses[0], Role::Alternative),
                Work::Pair { members, .. } => {
                    take(line, &members[0], masses[0], Role::OfPair);
                    take(line, &members[1], masses[1], Role::OfPair);
                }
                Work::FillTo { goods, .. } => {
                    made_up = true;
                    take(line, goods, masses[0], Role::MakesUp);
                }
                Work::Adjust { goods, .. } | Work::ByEye { goods, .. } => take(line, goods, masses[0], Role::Adjusts),
                Work::SetPh { titrants, .. } => {
                    let which = usize::from(masses[1] > 0.0);
                    if let (Some(titrant), Some(mass)) = (titrants.get(which), masses.get(which)) {
                        take(line, titrant, *mass, Role::Adjusts);
                    }
                }
                Work::Divider => {}
            }
        }
        Outcome {
            made_at_K: self.temperature_K,
            made_at_half_width_K,
            finished: state_of(&beaker.mixture, self.temperature_K, self.context),
            mass_kg: beaker.kilograms,
            water_kg: beaker.water_kg,
            mixture: beaker.mixture,
            volume_L: finals_of_all.litres,
            lines,
            set_points,
            parts: parts
                .into_iter()
                .zip(&finals)
                .map(|((entry, beaker), finals)| PartOutcome {
                    entry,
                    state: state_of(&beaker.mixture, self.temperature_K, self.context),
                    mixture: beaker.mixture,
                    volume_L: finals.litres,
                })
                .collect(),
            uses: Vec::new(),
            verdicts: Vec::new(),
            solutes,
            found: None,
            made_up,
        }
    }
}

fn unit_of(goal: &Goal) -> Option<crate::units::Unit> {
    match &goal.kind {
        GoalKind::Property { unit, .. } => *unit,
        _ => None,
    }
}

fn aim_of(goal: &Goal) -> f64 {
    match &goal.kind {
        GoalKind::Property { aim, .. } => *aim,
        _ => f64::NAN,
    }
}

fn overfull(at: Anchor, holds: &str, mark: &str) -> Refusal {
    Finding::new(Code::Overfull, at, format!("The beaker already holds {holds} at this line, more than {mark}."))
        .help("Begin with less liquid, use stronger stocks, or make more.")
        .into()
}

/// One volume of a mixture made up to `fold` volumes with water, or with another solution, closed, at the temperature of
/// making.
pub(super) fn diluted(
    mixture: &Mixture,
    fold: f64,
    with: Option<&crate::model::Reference>,
    temperature_K: f64,
    context: &Context,
) -> Result<Mixture, Refusal> {
    let fail = |message: &str| -> Refusal {
        Finding::new(Code::NoSolutionFound, with.map_or(Anchor::default(), |with| with.at), message.to_string()).into()
    };
    let volume = volume_of(mixture, temperature_K, context).ok_or_else(|| fail("The solution's volume is not known, so it cannot be diluted."))?;
    let (diluent, density) = match with {
        None => (Mixture::water(1.0), water::density_kg_per_m3(temperature_K) / 1000.0),
        Some(reference) => {
            let found = ingredient(reference, true, context)?;
            let goods = super::goods::goods(reference, &found, &Qualifiers::default(), temperature_K, context)?;
            let density = goods.density.ok_or_else(|| fail("What it is diluted with is no liquid."))?;
            (goods.per_kg, density / 1000.0)
        }
    };
    let target = fold * volume;
    let mut mass = (target - volume) * density;
    for _ in 0..40 {
        let mut filled = mixture.clone();
        filled.add(&diluent, mass);
        let now = volume_of(&filled, temperature_K, context).ok_or_else(|| fail("The diluted solution's volume is not known."))?;
        let next = (mass + (target - now) * density).max(0.0);
        if (next - mass).abs() <= 1e-13 * target {
            return Ok(filled);
        }
        mass = next;
    }
    let mut filled = mixture.clone();
    filled.add(&diluent, mass);
    Ok(filled)
}

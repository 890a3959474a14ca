//! The titrant and its amount that bring the beaker to a pH.

use super::{Bench, MOST_TITRANT, PH_TOLERANCE};
use crate::chemistry::State;
use crate::evaluate::beaker::Beaker;
use crate::evaluate::goods::{Goods, state_of};
use crate::evaluate::plan::{Planned, Work};
use crate::evaluate::{Refusal, SetPoint};
use crate::model::{Goal, Property};

impl Bench<'_, '_> {
    /// Finds the titrant and its mass that bring the beaker to a pH.
    #[allow(clippy::too_many_arguments, reason = "all of them are what the line says")]
    pub(super) fn set(
        &self,
        beaker: &Beaker,
        titrants: &[Goods],
        goal: &Goal,
        aim: f64,
        window: Option<(f64, f64)>,
        liquid: Option<usize>,
        number: usize,
    ) -> Result<(usize, f64, SetPoint), Refusal> {
        let Some(line) = self.plan.get(number) else { return Err(Refusal::reported()) };
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
        let temperature_K = self.temperature_of(beaker);
        let before = self.value(&start.mixture, goal, &Property::Ph, line.at, temperature_K)?;
        let start_state = self.state(&start, line.at)?;
        let on_the_meter = start_state.pH();
        let point = |state: State| SetPoint {
            entry: line.entry,
            at: line.at,
            aim,
            window,
            // What the meter reads before anything is added.
            pH_before: on_the_meter,
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
            Ok(self.value(&beaker.mixture, goal, &Property::Ph, line.at, temperature_K)? - aim)
        };
        let near = self.taken.borrow().get(number).copied().flatten().filter(|(last, _)| *last == which);
        let (low, high) = match near.and_then(|(_, mass)| narrow(mass, &miss)) {
            Some(bracket) => bracket,
            None => {
                let scale = start.kilograms;
                let (mut low, mut high, mut furthest) = (0.0, 1e-4 * scale, before);
                loop {
                    match miss(high) {
                        Ok(value) if (value >= 0.0) == upwards => break (low, high),
                        Ok(value) if high <= MOST_TITRANT * scale => {
                            furthest = value + aim;
                            (low, high) = (high, 3.0 * high);
                        }
                        _ => return Err(self.out_of_reach(line, goal, titrant, before, aim, furthest)),
                    }
                }
            }
        };
        let mass = self.root(miss, low, high, 1e-13 * high, line.at)?;
        if let Some(slot) = self.taken.borrow_mut().get_mut(number) {
            *slot = Some((which, mass));
        }
        let state = self.state(&with(titrant, mass)?, line.at)?;
        Ok((which, mass, point(state)))
    }

    /// pH of a titrant by itself, or of a solid in a little water.
    pub(super) fn own_ph(&self, titrant: &Goods) -> Option<f64> {
        let mut mixture = titrant.per_kg.clone();
        if mixture.water_kg < 0.1 {
            mixture.water_kg += 10.0;
        }
        state_of(&mixture, self.temperature_K, self.context).ok().map(|state| state.pH())
    }

    /// The beaker with the liquid of a later make-up counted in.
    pub(super) fn with_liquid(&self, beaker: &Beaker, liquid: Option<usize>) -> Result<Beaker, Refusal> {
        let Some(Planned { at, work: Work::FillTo { goods, extent }, .. }) = liquid.and_then(|index| self.plan.get(index))
        else {
            return Ok(beaker.clone());
        };
        let mut filled = beaker.clone();
        let mass = self.fill(beaker, goods, *extent, *at)?;
        filled.add(goods, mass);
        Ok(filled)
    }
}

/// A narrow bracket around a mass that was right before; none where what is missed does not change its sign there.
fn narrow(mass: f64, miss: &dyn Fn(f64) -> Result<f64, Refusal>) -> Option<(f64, f64)> {
    [1e-6, 1e-3, 0.03].into_iter().find_map(|width| {
        let (low, high) = (mass * (1.0 - width), mass * (1.0 + width));
        let (at_low, at_high) = (miss(low).ok()?, miss(high).ok()?);
        ((at_low > 0.0) != (at_high > 0.0)).then_some((low, high))
    })
}

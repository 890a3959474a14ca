//! Amounts that only the finished solution can tell: pairs, and what is added up to a property.

use super::settle::{SETTLED, flattened, minus_unity, scaled, surplus};
use super::{Bench, MOST_TITRANT, PH_TOLERANCE, Run, Sought};
use crate::chemistry::coupled::find_coupled_roots;
use crate::evaluate::Refusal;
use crate::evaluate::plan::Work;
use crate::finding::{Anchor, Code, Finding};
use crate::model::GoalKind;

/// How well an amount is met at first sight, relative to it.
const ROUGHLY: f64 = 1e-4;

/// How well an amount is met in the end, relative to it.
const EXACTLY: f64 = 1e-14;

/// Rounds in which amounts are met one after the other, where they are not met all together.
const MAX_ROUNDS: usize = 80;

impl Bench<'_, '_> {
    /// Finds the amounts that only the finished solution can tell (pairs, properties), all together.
    pub(super) fn meet_finished_goals(&self, unknowns: &mut [f64]) -> Result<Run, Refusal> {
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
            return self.settle(unknowns, SETTLED);
        }
        // Roughly and one after the other at first, which tells what is out of reach; then exactly and all together.
        for one in &sought {
            self.meet(one, None, ROUGHLY, unknowns)?;
        }
        let roughly = unknowns.to_vec();
        if let Some(run) = self.meet_together(&sought, unknowns) {
            return Ok(run);
        }
        unknowns.copy_from_slice(&roughly);
        self.meet_in_turn(&sought, unknowns)
    }

    /// Meets all goals together, and settles how much is made with them, from where they are roughly met; none where that does
    /// not come to an end.
    fn meet_together(&self, sought: &[Sought], unknowns: &mut [f64]) -> Option<Run> {
        let start = self.settle(unknowns, ROUGHLY).ok()?;
        let amounts = sought.iter().map(|one| unknowns.get(one.number).copied().unwrap_or(0.0).abs().max(1e-12));
        let scale: Vec<f64> = amounts.chain(flattened(&start.finals)).collect();
        let count = sought.len();
        let mut last = None;
        let mut miss = |x: &[f64]| -> Result<Vec<f64>, Refusal> {
            for ((one, x), scale) in sought.iter().zip(x).zip(&scale) {
                if let Some(slot) = unknowns.get_mut(one.number) {
                    *slot = x * scale;
                }
            }
            let (finals, finals_scale) = (x.get(count..).unwrap_or_default(), scale.get(count..).unwrap_or_default());
            let run = self.run(&scaled(finals, finals_scale), unknowns)?;
            let mut y = Vec::with_capacity(scale.len());
            for one in sought {
                let size = if one.aim == 0.0 { 1.0 } else { one.aim.abs() };
                y.push((self.value(&run.beaker.mixture, one.goal, one.property, one.line.at, self.temperature_K)? - one.aim) / size);
            }
            y.extend(surplus(&run.finals, finals, finals_scale));
            last = Some(run);
            Ok(y)
        };
        let x = vec![1.0; scale.len()];
        let here = miss(&x).ok()?;
        let mut slopes = vec![vec![0.0; scale.len()]; count];
        slopes.extend(minus_unity(scale.len() - count, count));
        for column in 0..count {
            let mut aside = x.clone();
            aside.iter_mut().skip(column).take(1).for_each(|x| *x += ROUGHLY);
            let there = miss(&aside).ok()?;
            for (row, (there, here)) in slopes.iter_mut().zip(there.iter().zip(&here)) {
                row.iter_mut().skip(column).take(1).for_each(|slope| *slope += (there - here) / ROUGHLY);
            }
        }
        find_coupled_roots(miss, x, &slopes, SETTLED, 40).ok().flatten()?;
        last
    }

    /// Meets one goal after the other, and again until none moves the others.
    fn meet_in_turn(&self, sought: &[Sought], unknowns: &mut [f64]) -> Result<Run, Refusal> {
        let mut last = vec![f64::NAN; sought.len()];
        for round in 0..MAX_ROUNDS {
            let mut moved = 0.0f64;
            for (one, last) in sought.iter().zip(last.iter_mut()) {
                let guess = if last.is_finite() { Some(*last) } else { None };
                let x = self.meet(one, guess, EXACTLY, unknowns)?;
                moved = moved.max(if last.is_finite() { (x - *last).abs() / x.abs().max(1e-12) } else { f64::INFINITY });
                *last = x;
            }
            if sought.len() == 1 || moved < 1e-12 || (round > 20 && moved < 1e-9) {
                return self.settle(unknowns, SETTLED);
            }
        }
        let at = sought.first().map_or(Anchor::default(), |one| one.line.at);
        Err(Finding::new(Code::NoSolutionFound, at, "The amounts that the finished solution must have work against each other.")
            .help("Drop one of the targets.")
            .into())
    }

    /// Meets one goal of the finished solution while the other unknowns stay. `guess` is where it was met before.
    fn meet(&self, one: &Sought, guess: Option<f64>, tolerance: f64, unknowns: &mut [f64]) -> Result<f64, Refusal> {
        let Sought { number, line, goal, property, aim, is_pair } = *one;
        let mut miss = |x: f64| -> Result<f64, Refusal> {
            if let Some(slot) = unknowns.get_mut(number) {
                *slot = x;
            }
            let run = self.settle(unknowns, 0.01 * tolerance.max(100.0 * SETTLED))?;
            Ok(self.value(&run.beaker.mixture, goal, property, line.at, self.temperature_K)? - aim)
        };
        let x = if is_pair {
            match guess.map(|guess| self.bracket(&mut miss, guess, 1.0)).transpose()?.flatten() {
                Some((low, high)) => self.root(&mut miss, low, high, tolerance, line.at)?,
                None => {
                    let (at_zero, at_one) = (miss(0.0)?, miss(1.0)?);
                    if at_zero.abs() > PH_TOLERANCE && at_one.abs() > PH_TOLERANCE && (at_zero > 0.0) == (at_one > 0.0) {
                        return Err(self.pair_out_of_reach(line, goal, property, aim + at_zero, aim + at_one));
                    }
                    self.root(&mut miss, 0.0, 1.0, tolerance, line.at)?
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
            self.root(&mut miss, low, high, tolerance * high, line.at)?
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
}

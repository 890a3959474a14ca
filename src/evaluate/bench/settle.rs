//! How much is made, where lines depend on it: the recipe is run until what comes out is what was put in.

use super::{Bench, Run};
use crate::chemistry::coupled::find_coupled_roots;
use crate::evaluate::Refusal;
use crate::evaluate::plan::{Dose, Extent, Finals, Work};
use crate::finding::{Anchor, Code, Finding};

/// Rounds of settling how much is made; each closes in by a factor of ten or more.
const MAX_ROUNDS: usize = 80;

/// Rounds after which the next guess is no longer just what came out, but what the change suggests.
const PLAIN_ROUNDS: usize = 2;

/// How well a solution settles that is to be shown, relative to how much is made.
pub(super) const SETTLED: f64 = 1e-12;

impl Bench<'_, '_> {
    /// Runs the lines until how much is made comes out as what was put in, within a relative tolerance.
    pub(super) fn settle(&self, unknowns: &[f64], tolerance: f64) -> Result<Run, Refusal> {
        let parts = self.plan.last().map_or(1, |line| line.part + 1);
        let mut finals: Vec<Finals> = (0..parts).map(|part| self.first_guess(part)).collect();
        let depends = self.plan.iter().any(|line| match &line.work {
            Work::Add { dose, .. } | Work::Pair { total: dose, .. } => !matches!(dose, Dose::Fixed(_)),
            _ => false,
        });
        let mut last_change = f64::INFINITY;
        for round in 0..MAX_ROUNDS {
            let run = self.run(&finals, unknowns)?;
            let change = largest_change(&run.finals, &finals);
            // Rounding keeps the last digits moving; once they no longer settle further they are as good as they get.
            if !depends || change < tolerance || (change < 1e-9 && change >= last_change) {
                return Ok(run);
            }
            last_change = change;
            finals = run.finals;
            if round + 1 == PLAIN_ROUNDS
                && let Some(run) = self.settle_by_slopes(&finals, unknowns, tolerance)
            {
                return Ok(run);
            }
        }
        let at = self.plan.first().map_or(Anchor::default(), |line| line.at);
        Err(Finding::new(Code::NoSolutionFound, at, "How much is made cannot be settled: the concentrations leave no room for the liquid.")
            .help("Check the concentrations, or add a make-up line.")
            .into())
    }

    /// The same from a good guess, in a few runs; none where it does not come to an end.
    fn settle_by_slopes(&self, guess: &[Finals], unknowns: &[f64], tolerance: f64) -> Option<Run> {
        let scale = flattened(guess);
        let mut last = None;
        let miss = |x: &[f64]| -> Result<Vec<f64>, Refusal> {
            let run = self.run(&scaled(x, &scale), unknowns)?;
            let y = surplus(&run.finals, x, &scale);
            last = Some(run);
            Ok(y)
        };
        let slopes = minus_unity(scale.len(), 0);
        find_coupled_roots(miss, vec![1.0; scale.len()], &slopes, tolerance, 20).ok().flatten()?;
        last
    }

    /// A first guess of how much a part comes to.
    pub(super) fn first_guess(&self, part: usize) -> Finals {
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
}

/// The largest relative change from one round to the next.
fn largest_change(new: &[Finals], old: &[Finals]) -> f64 {
    let relative = |new: f64, old: f64| ((new - old) / new.abs().max(1e-30)).abs();
    let changes = flattened(new).into_iter().zip(flattened(old)).map(|(new, old)| relative(new, old));
    changes.fold(0.0, f64::max)
}

/// How much each part comes to, as a list of numbers.
pub(super) fn flattened(finals: &[Finals]) -> Vec<f64> {
    finals.iter().flat_map(|of_part| [of_part.litres, of_part.water_kg, of_part.kilograms]).map(|x| x.max(1e-30)).collect()
}

/// How much each part comes to, from numbers in units of `scale`.
pub(super) fn scaled(x: &[f64], scale: &[f64]) -> Vec<Finals> {
    let values: Vec<f64> = x.iter().zip(scale).map(|(x, scale)| x * scale).collect();
    values
        .chunks_exact(3)
        .map(|of_part| match of_part {
            &[litres, water_kg, kilograms] => Finals { litres, water_kg, kilograms },
            _ => Finals::default(),
        })
        .collect()
}

/// By how much what came out exceeds what was put in, in units of `scale`.
pub(super) fn surplus(came_out: &[Finals], put_in: &[f64], scale: &[f64]) -> Vec<f64> {
    flattened(came_out).iter().zip(put_in).zip(scale).map(|((out, x), scale)| out / scale - x).collect()
}

/// Slopes of numbers whose surplus falls as fast as they rise, after `before` columns of others.
pub(super) fn minus_unity(size: usize, before: usize) -> Vec<Vec<f64>> {
    (0..size)
        .map(|row| (0..before + size).map(|column| if column == before + row { -1.0 } else { 0.0 }).collect())
        .collect()
}

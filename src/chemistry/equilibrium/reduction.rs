//! A system with phases beside the solution: a solid at saturation, a gas at a pressure.
//!
//! Such a phase fixes the product of the activities of what it dissolves to. Each takes one component out of the unknowns: its activity
//! follows from the others, and its balance from them tells how much of the phase there is. What is left is a system like any other,
//! with counts that need not be whole or positive.

use super::newton;
use super::system::{Point, System};
use super::{Limits, descent};
use crate::chemistry::{ActivityModel, Chemistry, ComponentId, Failure, Mixture};

/// A phase: what it dissolves to, and ln of the product of their activities in equilibrium.
pub(crate) struct Bound<'a> {
    pub parts: &'a [(ComponentId, u32)],
    pub hydrogen: i32,
    pub water: f64,
    pub ln_product: f64,
}

/// A phase in terms of what the phases before it leave unknown.
struct Elimination {
    /// Balance whose component it takes out.
    pivot: usize,
    counts: Vec<f64>,
    water: f64,
    ln_product: f64,
    /// How much of each phase before it was taken off.
    shares: Vec<f64>,
}

impl Elimination {
    /// Takes the component out of a row; returns the factor.
    fn clear(&self, row: &mut [f64], water: &mut f64) -> f64 {
        let factor = row[self.pivot] / self.counts[self.pivot];
        if factor != 0.0 {
            row.iter_mut().zip(&self.counts).for_each(|(entry, count)| *entry -= factor * count);
            row[self.pivot] = 0.0;
            *water -= factor * self.water;
        }
        factor
    }
}

/// A system with its phases, and what is left of it.
pub(crate) struct Reduction {
    whole: System,
    eliminations: Vec<Elimination>,
    /// Balances that are left, as those of the whole.
    kept: Vec<usize>,
    rest: System,
}

/// The liquid: the balances' sums (mol) and the free point over the species of the whole.
pub(crate) struct Solution {
    /// Hydrogen in solution, mol.
    pub hydrogen_mol: f64,
    /// Each component in solution, mol.
    pub amounts_mol: Vec<(ComponentId, f64)>,
    /// Water in solution, free or bound in its species, mol.
    pub water_mol: f64,
    /// The point, in the unknowns of the whole.
    pub point: Point,
    /// The whole system.
    pub system: System,
}

impl Reduction {
    /// Sets a system with phases up; `None` where one of them consists of the others.
    pub fn new(
        chemistry: &Chemistry,
        mixture: &Mixture,
        temperature_K: f64,
        model: ActivityModel,
        bounds: &[Bound],
    ) -> Result<Option<Self>, Failure> {
        let needed: Vec<ComponentId> = bounds.iter().flat_map(|bound| bound.parts).map(|(part, _)| *part).collect();
        let whole = System::with_components(chemistry, mixture, temperature_K, model, &needed)?;
        let columns = whole.totals_mol.len();
        let mut eliminations: Vec<Elimination> = Vec::new();
        for bound in bounds {
            let mut counts = vec![0.0; columns];
            counts[0] = f64::from(bound.hydrogen);
            for (part, count) in bound.parts {
                let Some(at) = whole.components.iter().position(|id| id == part) else { return Ok(None) };
                counts[at + 1] += f64::from(*count);
            }
            let (mut water, mut ln_product) = (bound.water, bound.ln_product);
            let mut shares = Vec::new();
            for earlier in &eliminations {
                let factor = earlier.clear(&mut counts, &mut water);
                ln_product -= factor * earlier.ln_product;
                shares.push(factor);
            }
            // The largest count loses least to rounding; hydrogen stays, for every species knows it.
            let pivot = (1..columns).max_by(|&a, &b| counts[a].abs().total_cmp(&counts[b].abs()).then(b.cmp(&a)));
            match pivot.filter(|&pivot| counts[pivot].abs() > 1e-9) {
                Some(pivot) => eliminations.push(Elimination { pivot, counts, water, ln_product, shares }),
                None => return Ok(None),
            }
        }
        let kept: Vec<usize> = (0..columns).filter(|column| eliminations.iter().all(|e| e.pivot != *column)).collect();
        let rest = whole.reduced(&kept, |row, water| {
            eliminations.iter().map(|elimination| elimination.clear(row, water) * elimination.ln_product).sum()
        });
        Ok(Some(Self { whole, eliminations, kept, rest }))
    }

    /// Solves from the point of another system on the same mixture: the solution, the amount of each phase (mol) and the Newton steps.
    pub fn solve(self, from: &System, start: &Point, limits: Limits) -> Result<(Solution, Vec<f64>, usize), Failure> {
        let mut budget = limits.steps;
        let mut point = self.start(from, start);
        let warm = point.clone();
        let found = self.direct(&mut point, &mut budget) || {
            // Without the activity coefficients of a solution that may be far from this one.
            point = warm;
            point.ln_gamma.iter_mut().for_each(|g| *g = 0.0);
            point.ln_water_activity = 0.0;
            self.direct(&mut point, &mut budget)
        };
        if !found {
            let residual = self.rest.residual(&point);
            let steps = limits.steps.saturating_sub(budget);
            return Err(Failure::NotConverged { steps, residual: if residual.is_finite() { residual } else { f64::MAX } });
        }
        let (solution, amounts) = self.finish(point);
        Ok((solution, amounts, limits.steps - budget))
    }

    fn direct(&self, point: &mut Point, budget: &mut usize) -> bool {
        for round in 0..6 {
            for _ in 0..1 + 3 * round {
                if !descent::settle(&self.rest, point, budget) {
                    return false;
                }
                self.rest.renew_activities(point, if round < 2 { 1.0 } else { 0.5 });
            }
            let mut trial = point.clone();
            if newton::finish(&self.rest, &mut trial, budget) {
                *point = trial;
                return true;
            }
        }
        false
    }

    /// What is known of the other system's point, as a point of the rest.
    fn start(&self, from: &System, start: &Point) -> Point {
        let rows = self.rest.species.len();
        let mut ln_activity = vec![start.ln_activity[0]];
        for id in &self.rest.components {
            let known = from.components.iter().position(|other| other == id).map(|at| start.ln_activity[at + 1]);
            ln_activity.push(known.unwrap_or(-10.0));
        }
        let mut ln_gamma = vec![0.0; rows];
        for (entry, id) in ln_gamma.iter_mut().zip(&self.rest.species) {
            if let Some(row) = from.species.iter().position(|other| other == id) {
                *entry = start.ln_gamma[row];
            }
        }
        Point {
            ln_activity,
            ln_molality: vec![-700.0; rows],
            molality: vec![0.0; rows],
            ln_gamma,
            ln_water_activity: start.ln_water_activity,
            water_kg: start.water_kg,
        }
    }

    /// The solution in the terms of the whole, and the amounts of the phases.
    fn finish(self, point: Point) -> (Solution, Vec<f64>) {
        let Self { whole, eliminations, kept, .. } = self;
        let (sums, _) = whole.balances(&point.molality);
        let mut dissolved: Vec<f64> = sums.iter().map(|sum| sum * point.water_kg).collect();
        // What the phases hold is what the solution does not.
        let mut missing: Vec<f64> = whole.totals_mol.iter().zip(&dissolved).map(|(total, sum)| total - sum).collect();
        let mut water = 0.0;
        let mut amounts: Vec<f64> = eliminations.iter().map(|elimination| elimination.clear(&mut missing, &mut water)).collect();
        for later in (0..eliminations.len()).rev() {
            for (earlier, share) in eliminations[later].shares.iter().enumerate() {
                amounts[earlier] -= share * amounts[later];
            }
        }
        // The activities of what was taken out follow from the last phase to the first.
        let mut ln_activity = vec![0.0; whole.totals_mol.len()];
        for (column, value) in kept.iter().zip(&point.ln_activity) {
            ln_activity[*column] = *value;
        }
        for elimination in eliminations.iter().rev() {
            let others: f64 = elimination.counts.iter().zip(&ln_activity).enumerate()
                .filter(|(column, _)| *column != elimination.pivot)
                .map(|(_, (count, activity))| count * activity)
                .sum();
            ln_activity[elimination.pivot] =
                (elimination.ln_product - others - elimination.water * point.ln_water_activity) / elimination.counts[elimination.pivot];
        }
        let bound: f64 = whole.water.iter().zip(&point.molality).map(|(w, m)| w * m).sum();
        let water_mol = point.water_kg * (1.0 / crate::chemistry::water::MOLAR_MASS_kg_per_mol + bound);
        let hydrogen_mol = dissolved.remove(0);
        let amounts_mol = whole.components.iter().copied().zip(dissolved).collect();
        let point = Point { ln_activity, ..point };
        (Solution { hydrogen_mol, amounts_mol, water_mol, point, system: whole }, amounts)
    }
}

//! Newton's method on the whole system, activity coefficients and free water included, with the analytic Jacobian.
//!
//! Mass action: μᵢ − ln βᵢ − Σ aᵢⱼ λⱼ − wᵢ ln a_w(m) + ln γᵢ(m) = 0 with μ = ln m. Balances: W(m) Σ aᵢⱼ mᵢ − Tⱼ = 0. The first set is
//! eliminated, so that the last linear system has one row for each component.

use nalgebra::{DMatrix, DVector, Dyn, LU};

use super::RESIDUAL;
use super::action::Action;
use super::system::{Point, System};

/// Steps of one call.
const STEPS: usize = 60;
/// Largest change of a logarithm in one step.
const STRIDE: f64 = 4.0;
/// A step this small is squared by the next, so that the point after it is the solution to all digits.
const CALM: f64 = 1e-6;

/// The linearised equations at a point.
pub(crate) struct Linearisation {
    /// The laws of mass action.
    pub action: Action,
    /// ∂(balance)/∂λ after elimination, divided by its size, factored.
    pub jacobian: LU<f64, Dyn, Dyn>,
    /// Q⁻¹ A, and Q⁻¹ e in the last column.
    response: DMatrix<f64>,
    /// Size of each balance, mol.
    pub scale_mol: DVector<f64>,
    /// Sum of each balance, mol/kg.
    sum_mol_per_kg: DVector<f64>,
    /// Share of the water that is free.
    free_share: f64,
}

impl Linearisation {
    /// Linearises the equations at a point, whose free water must be that of its molalities. `error` is e. `None` if singular.
    pub fn new(system: &System, point: &Point, error: &[f64]) -> Option<Self> {
        let (rows, columns) = system.counts.shape();
        let action = Action::new(system, &point.molality);
        let mut response = system.counts.clone().resize_horizontally(columns + 1, 0.0);
        for (row, e) in error.iter().enumerate() {
            response[(row, columns)] = *e;
        }
        if !action.solve(&mut response) {
            return None;
        }
        let (sum_mol_per_kg, size) = system.balances(&point.molality);
        let scale_mol =
            DVector::from_fn(columns, |j, _| (size[j] * point.water_kg).max(system.totals_mol[j].abs()));
        let free_share = point.water_kg / system.water_mol;
        let mut result = Self {
            action,
            jacobian: DMatrix::zeros(0, 0).lu(),
            response,
            scale_mol,
            sum_mol_per_kg,
            free_share,
        };
        let mut jacobian = DMatrix::zeros(columns, columns);
        for row in 0..rows {
            result.each_balance(system, point, row, |j, share| {
                for k in 0..columns {
                    jacobian[(j, k)] += share * result.response[(row, k)];
                }
            });
        }
        result.jacobian = jacobian.lu();
        Some(result)
    }

    /// Calls `f` with every balance that answers to ln m of a species, and the derivative divided by the size of the balance.
    fn each_balance(&self, system: &System, point: &Point, row: usize, mut f: impl FnMut(usize, f64)) {
        let amount_mol = point.molality[row] * point.water_kg;
        for &(column, count) in system.parts(row) {
            f(column, count * amount_mol / self.scale_mol[column]);
        }
        // Water that a species binds or releases changes all molalities.
        let water = system.water[row] * self.free_share * amount_mol;
        if water != 0.0 {
            for column in 0..self.scale_mol.len() {
                f(column, -water * self.sum_mol_per_kg[column] / self.scale_mol[column]);
            }
        }
    }

    /// Whether the solution is a minimum of the Gibbs energy, as far as the signs of two determinants tell: the energy has as many downward
    /// directions as the mass balances forbid. Ions of high charge, and interaction coefficients beyond their range, can give solutions
    /// that are none.
    fn stable(&self) -> bool {
        (self.jacobian.determinant() > 0.0) == (self.action.determinant() > 0.0)
    }

    /// The Newton step in λ and μ; `None` if singular.
    fn step(&self, system: &System, point: &Point) -> Option<(DVector<f64>, DVector<f64>)> {
        let (rows, columns) = system.counts.shape();
        let mut step = DVector::from_fn(columns, |j, _| {
            (system.totals_mol[j] - self.sum_mol_per_kg[j] * point.water_kg) / self.scale_mol[j]
        });
        for row in 0..rows {
            let settled = self.response[(row, columns)];
            self.each_balance(system, point, row, |j, share| step[j] += share * settled);
        }
        if !self.jacobian.solve_mut(&mut step) {
            return None;
        }
        let mut change = DVector::from_fn(rows, |row, _| -self.response[(row, columns)]);
        for column in 0..columns {
            for row in 0..rows {
                change[row] += self.response[(row, column)] * step[column];
            }
        }
        Some((step, change))
    }

    /// The weights of a row of the inverse of the whole system: those of the balances (1/mol), and of the laws of mass action.
    pub fn adjoint(&self, system: &System, point: &Point, column: usize) -> Option<(DVector<f64>, DVector<f64>)> {
        let (rows, columns) = system.counts.shape();
        let mut weights = DVector::zeros(columns);
        weights[column] = 1.0;
        if !super::action::solve_transposed(&self.jacobian, &mut weights) {
            return None;
        }
        let mut action = DVector::zeros(rows);
        for row in 0..rows {
            self.each_balance(system, point, row, |j, share| action[row] += share * weights[j]);
        }
        if !self.action.solve_transposed(&mut action) {
            return None;
        }
        weights.component_div_assign(&self.scale_mol);
        Some((weights, action))
    }
}

/// Iterates from a point near the solution; false if it does not get there.
pub(crate) fn finish(system: &System, point: &mut Point, budget: &mut usize) -> bool {
    let mut error = vec![0.0; system.species.len()];
    let (mut longest, mut stable) = (f64::INFINITY, false);
    for _ in 0..STEPS {
        let Some(water_kg) = system.free_water_kg(&point.molality) else { return false };
        point.water_kg = water_kg;
        point.ln_water_activity = system.activities(&point.molality, &mut point.ln_gamma);
        for (row, (e, x)) in error.iter_mut().zip(&point.ln_molality).enumerate() {
            *e = x - system.mass_action(point, row);
        }
        if longest < CALM && error.iter().all(|e| e.abs() < RESIDUAL) && system.residual(point) < RESIDUAL {
            return stable;
        }
        if *budget == 0 {
            return false;
        }
        *budget -= 1;
        let Some(linear) = Linearisation::new(system, point, &error) else { return false };
        stable = linear.stable();
        let Some((step, change)) = linear.step(system, point) else { return false };
        longest = change.amax().max(step.amax());
        // `amax` passes over NaN; the sums do not.
        if !(longest.is_finite() && step.sum().is_finite() && change.sum().is_finite()) {
            return false;
        }
        let share = if longest > STRIDE { STRIDE / longest } else { 1.0 };
        for (x, by) in point.ln_activity.iter_mut().zip(step.iter()) {
            *x += share * by;
        }
        for (x, by) in point.ln_molality.iter_mut().zip(change.iter()) {
            *x += share * by;
        }
        point.exponentiate();
    }
    false
}

//! Newton's method on the whole system, activity coefficients and free water included, with the analytic Jacobian.
//!
//! Mass action: μᵢ − ln βᵢ − Σ aᵢⱼ λⱼ − wᵢ ln a_w(m) + ln γᵢ(m) = 0 with μ = ln m. Balances: W(m) Σ aᵢⱼ mᵢ − Tⱼ = 0. The first set is
//! eliminated, so that the last linear system has one row for each component.

use super::RESIDUAL;
use super::action::Action;
use super::linear_algebra::{Factors, Matrix, add_scaled, dot, largest};
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
    action: Action,
    /// ∂(balance)/∂λ after elimination, divided by its size, factored.
    jacobian: Factors,
    /// Q⁻¹ A, and Q⁻¹ e in the last column.
    response: Matrix,
    /// How the balances answer to each species.
    answers: Answers,
}

/// ∂(balance)/∂μ, divided by the size of the balance.
struct Answers {
    /// Size of each balance, mol.
    scale_mol: Vec<f64>,
    /// Sum of each balance divided by its size.
    sum: Vec<f64>,
    /// Share of the water that is free.
    free_share: f64,
}

impl Answers {
    fn new(system: &System, point: &Point) -> Self {
        let (mut sum, mut scale_mol) = system.balances(&point.molality);
        for ((size, sum), total) in scale_mol.iter_mut().zip(&mut sum).zip(&system.totals_mol) {
            *size = (*size * point.water_kg).max(total.abs());
            *sum *= point.water_kg / *size;
        }
        Self { scale_mol, sum, free_share: point.water_kg / system.water_mol }
    }

    /// Calls `f` with every balance that answers to ln m of a species, and the derivative.
    fn each(&self, system: &System, point: &Point, row: usize, mut f: impl FnMut(usize, f64)) {
        let amount_mol = point.molality[row] * point.water_kg;
        for &(column, count) in system.parts(row) {
            f(column, count * amount_mol / self.scale_mol[column]);
        }
        // Water that a species binds or releases changes all molalities.
        let water = system.water[row] * self.free_share * point.molality[row];
        if water != 0.0 {
            for (column, sum) in self.sum.iter().enumerate() {
                f(column, -water * sum);
            }
        }
    }
}

impl Linearisation {
    /// Linearises the equations at a point, whose free water must be that of its molalities; `error` is e, none at a solution. `None` if
    /// singular.
    pub fn new(system: &System, point: &Point, error: &[f64]) -> Option<Self> {
        let (rows, columns) = (system.counts.rows(), system.counts.columns());
        let action = Action::new(system, &point.molality)?;
        let mut response = Matrix::zeros(rows, columns + 1);
        for row in 0..rows {
            for &(column, count) in system.parts(row) {
                response[(row, column)] += count;
            }
        }
        for (row, e) in error.iter().enumerate() {
            response[(row, columns)] = *e;
        }
        action.solve(&mut response);
        let answers = Answers::new(system, point);
        let mut jacobian = Matrix::zeros(columns, columns);
        for row in 0..rows {
            answers.each(system, point, row, |j, share| add_scaled(jacobian.row_mut(j), response.row(row), share));
        }
        Some(Self { action, jacobian: jacobian.factor()?, response, answers })
    }

    /// Whether the solution is a minimum of the Gibbs energy, as far as the signs of two determinants tell: the energy has as many downward
    /// directions as the mass balances forbid. Ions of high charge, and interaction coefficients beyond their range, can give solutions
    /// that are none.
    fn stable(&self) -> bool {
        self.jacobian.is_positive() == self.action.is_positive()
    }

    /// The Newton step in λ and μ.
    fn step(&self, system: &System, point: &Point) -> (Vec<f64>, Vec<f64>) {
        let (rows, columns) = (system.counts.rows(), system.counts.columns());
        let Answers { scale_mol, sum, .. } = &self.answers;
        let mut step: Vec<f64> =
            system.totals_mol.iter().zip(scale_mol).zip(sum).map(|((total, size), sum)| total / size - sum).collect();
        for row in 0..rows {
            let settled = self.response[(row, columns)];
            self.answers.each(system, point, row, |j, share| step[j] += share * settled);
        }
        self.jacobian.solve(&mut step);
        let change = (0..rows)
            .map(|row| {
                let (by_activity, settled) = self.response.row(row).split_at(columns);
                dot(by_activity, &step) - dot(settled, &[1.0])
            })
            .collect();
        (step, change)
    }

    /// The weights of a row of the inverse of the whole system: those of the balances (1/mol), and of the laws of mass action.
    pub fn adjoint(&self, system: &System, point: &Point, column: usize) -> (Vec<f64>, Vec<f64>) {
        let mut weights = vec![0.0; system.counts.columns()];
        weights[column] = 1.0;
        self.jacobian.solve_transposed(&mut weights);
        let mut action = vec![0.0; system.counts.rows()];
        for (row, entry) in action.iter_mut().enumerate() {
            self.answers.each(system, point, row, |j, share| *entry += share * weights[j]);
        }
        self.action.solve_transposed(&mut action);
        weights.iter_mut().zip(&self.answers.scale_mol).for_each(|(weight, size)| *weight /= size);
        (weights, action)
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
        if longest < CALM && largest(&error) < RESIDUAL && system.residual(point) < RESIDUAL {
            return stable;
        }
        if *budget == 0 {
            return false;
        }
        *budget -= 1;
        let Some(linear) = Linearisation::new(system, point, &error) else { return false };
        stable = linear.stable();
        let (step, change) = linear.step(system, point);
        longest = largest(&change).max(largest(&step));
        if !(longest.is_finite() && largest(&step).is_finite() && largest(&change).is_finite()) {
            return false;
        }
        let share = if longest > STRIDE { STRIDE / longest } else { 1.0 };
        add_scaled(&mut point.ln_activity, &step, share);
        add_scaled(&mut point.ln_molality, &change, share);
        point.exponentiate();
    }
    false
}

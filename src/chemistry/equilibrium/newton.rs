//! Newton's method on the whole system, activity coefficients and free water included, with the analytic Jacobian.
//!
//! Mass action: μᵢ − ln βᵢ − Σ aᵢⱼ λⱼ − wᵢ ln a_w(m) + ln γᵢ(m) = 0 with μ = ln m. Balances: W(m) Σ aᵢⱼ mᵢ − Tⱼ = 0. The first set is
//! eliminated, so that the last linear system has one row for each component.

use nalgebra::{DMatrix, DVector, Dyn, LU};

use super::RESIDUAL;
use super::system::{Point, System};
use crate::chemistry::water::MOLAR_MASS_kg_per_mol as WATER_kg_per_mol;

/// Steps of one call.
const STEPS: usize = 60;
/// Largest change of a logarithm in one step.
const STRIDE: f64 = 4.0;

/// The linearised equations at a point.
pub(crate) struct Linearisation {
    /// Q: ∂(mass action)/∂μ, factored.
    pub action: LU<f64, Dyn, Dyn>,
    /// ∂(balance)/∂μ, one row for each balance, divided by its size.
    pub balance: DMatrix<f64>,
    /// ∂(balance)/∂λ after elimination, divided by its size, factored.
    pub jacobian: LU<f64, Dyn, Dyn>,
    /// Q⁻¹ A.
    pub response: DMatrix<f64>,
    /// Size of each balance, mol.
    pub scale_mol: DVector<f64>,
    /// Sum of each balance, mol.
    pub sum_mol: DVector<f64>,
    /// ln γ and ln a_w at the molalities of the point.
    pub ln_gamma: DVector<f64>,
    pub ln_water_activity: f64,
    pub water_kg: f64,
}

impl Linearisation {
    /// Linearises the equations at the molalities of a point; `None` if they leave no water or are not finite.
    pub fn new(system: &System, molality: &DVector<f64>) -> Option<Self> {
        let (rows, columns) = system.counts.shape();
        let (ln_gamma, ln_water_activity) = system.activities(molality);
        let water_kg = system.free_water_kg(molality)?;
        let term = system.model.ionic_term(system.slope, system.ionic_strength(molality));
        // ∂ ln γᵢ/∂mₖ, then ∂ ln a_w/∂mₖ by Gibbs–Duhem.
        let half_slope = 0.5 * term.slope_kg_per_mol;
        let mut action = DMatrix::from_fn(rows, rows, |i, k| {
            let (zi, zk) = (system.charge[i], system.charge[k]);
            -half_slope * zi * zi * zk * zk
        });
        for &(i, j, epsilon) in &system.interactions {
            action[(i, j)] += epsilon;
            if i != j {
                action[(j, i)] += epsilon;
            }
        }
        for k in 0..rows {
            let mut column_sum = 1.0;
            for i in 0..rows {
                column_sum += molality[i] * action[(i, k)];
            }
            let water_slope = -WATER_kg_per_mol * column_sum;
            for i in 0..rows {
                action[(i, k)] = (action[(i, k)] - system.water[i] * water_slope) * molality[k];
            }
            action[(k, k)] += 1.0;
        }
        let action = action.lu();
        let response = action.solve(&system.counts)?;
        let mut sum_mol = DVector::zeros(columns);
        let mut scale_mol = DVector::zeros(columns);
        for column in 0..columns {
            let (mut sum, mut size) = (0.0, 0.0);
            for row in 0..rows {
                let part = system.counts[(row, column)] * molality[row] * water_kg;
                sum += part;
                size += part.abs();
            }
            sum_mol[column] = sum;
            scale_mol[column] = size.max(system.totals_mol[column].abs());
        }
        let mut balance = DMatrix::zeros(columns, rows);
        let water_share = water_kg / system.water_mol;
        for row in 0..rows {
            for column in 0..columns {
                balance[(column, row)] = molality[row]
                    * (system.counts[(row, column)] * water_kg - sum_mol[column] * water_share * system.water[row])
                    / scale_mol[column];
            }
        }
        let mut jacobian = DMatrix::zeros(columns, columns);
        for row in 0..rows {
            for j in 0..columns {
                let b = balance[(j, row)];
                for k in 0..columns {
                    jacobian[(j, k)] += b * response[(row, k)];
                }
            }
        }
        Some(Self {
            action,
            balance,
            jacobian: jacobian.lu(),
            response,
            scale_mol,
            sum_mol,
            ln_gamma,
            ln_water_activity,
            water_kg,
        })
    }
}

/// Iterates from a point near the solution; false if it does not get there.
pub(crate) fn finish(system: &System, point: &mut Point, budget: &mut usize) -> bool {
    let mut calm = false;
    for _ in 0..STEPS {
        let molality = point.molalities();
        let Some(linear) = Linearisation::new(system, &molality) else { return false };
        point.ln_gamma.copy_from(&linear.ln_gamma);
        point.ln_water_activity = linear.ln_water_activity;
        point.water_kg = linear.water_kg;
        let error = &point.ln_molality - system.mass_action(point);
        let residual = (&linear.sum_mol - &system.totals_mol).component_div(&linear.scale_mol);
        let worst = residual.iter().fold(0.0_f64, |a, x| a.max(x.abs()));
        let action_error = error.iter().fold(0.0_f64, |a, x| a.max(x.abs()));
        if !(worst.is_finite() && action_error.is_finite()) {
            return false;
        }
        if calm && worst < RESIDUAL && action_error < RESIDUAL {
            return true;
        }
        if *budget == 0 {
            return false;
        }
        *budget -= 1;
        let Some(settled) = linear.action.solve(&error) else { return false };
        let right = &linear.balance * &settled - residual;
        let Some(step) = linear.jacobian.solve(&right) else { return false };
        let change = &linear.response * &step - settled;
        let longest = change.iter().chain(step.iter()).fold(0.0_f64, |a, x| a.max(x.abs()));
        if !longest.is_finite() {
            return false;
        }
        // A step this small is squared by the next, so the point after it is the solution.
        calm = longest < 1e-6;
        let share = if longest > STRIDE { STRIDE / longest } else { 1.0 };
        point.ln_activity.axpy(share, &step, 1.0);
        point.ln_molality.axpy(share, &change, 1.0);
    }
    false
}

//! Equilibrium with frozen activity coefficients: a convex problem, solved by Newton's method with a line search.
//!
//! With γ, the water activity and the free water fixed, the balances are the gradient of Φ(λ) = Σ mᵢ(λ) − Σ Tⱼ λⱼ in the logarithms λ of
//! the free components. Φ is convex, so a damped Newton step that lowers it cannot go astray.

use super::linear_algebra::{Matrix, dot, largest};
use super::system::{Point, System};

/// Relative residual at which Newton's method on the whole system takes over.
const NEAR: f64 = 1e-2;
/// Steps of one call.
const STEPS: usize = 150;
/// Largest change of one logarithm in a step.
const STRIDE: f64 = 30.0;

/// Brings the balances near zero; false if the steps run out.
pub(crate) fn settle(system: &System, point: &mut Point, budget: &mut usize) -> bool {
    let target: Vec<f64> = system.totals_mol.iter().map(|t| t / point.water_kg).collect();
    system.apply_mass_action(point);
    for _ in 0..STEPS {
        let (mut gradient, mut scale) = system.balances(&point.molality);
        for ((g, s), t) in gradient.iter_mut().zip(&mut scale).zip(&target) {
            *g -= t;
            *s = s.max(t.abs());
        }
        if gradient.iter().zip(&scale).all(|(g, s)| g.abs() <= NEAR * s) {
            return true;
        }
        if *budget == 0 {
            return false;
        }
        *budget -= 1;
        let Some(step) = newton_step(system, &point.molality, &gradient, &scale) else { return false };
        let longest = largest(&step);
        if !longest.is_finite() {
            return false;
        }
        let mut share = if longest > STRIDE { STRIDE / longest } else { 1.0 };
        let before = potential(point, &target);
        let descent = dot(&gradient, &step);
        let start = point.ln_activity.clone();
        for _ in 0..40 {
            for ((x, from), by) in point.ln_activity.iter_mut().zip(&start).zip(&step) {
                *x = from + share * by;
            }
            system.apply_mass_action(point);
            if potential(point, &target) <= before + 1e-4 * share * descent + 1e-14 * before.abs() {
                break;
            }
            share *= 0.3;
        }
    }
    false
}

/// −H⁻¹ g with the rows and columns of the Hessian brought to a common size.
fn newton_step(system: &System, molality: &[f64], gradient: &[f64], scale: &[f64]) -> Option<Vec<f64>> {
    let size = gradient.len();
    let mut hessian = Matrix::zeros(size, size);
    for (row, m) in molality.iter().enumerate() {
        for &(j, count_j) in system.parts(row) {
            for &(k, count_k) in system.parts(row) {
                hessian[(j, k)] += m * count_j * count_k;
            }
        }
    }
    let root: Vec<f64> = (0..size).map(|j| libm::sqrt(hessian[(j, j)].max(1e-14 * scale[j]))).collect();
    for (j, root_j) in root.iter().enumerate() {
        for (entry, root_k) in hessian.row_mut(j).iter_mut().zip(&root) {
            *entry /= root_j * root_k;
        }
        // A diagonal below one belongs to a balance that nothing answers to; it then moves little.
        hessian[(j, j)] = hessian[(j, j)].max(1.0);
    }
    let mut step: Vec<f64> = gradient.iter().zip(&root).map(|(g, r)| -g / r).collect();
    hessian.factor()?.solve(&mut step);
    step.iter_mut().zip(&root).for_each(|(x, r)| *x /= r);
    Some(step)
}

/// Φ.
fn potential(point: &Point, target: &[f64]) -> f64 {
    point.molality.iter().sum::<f64>() - dot(target, &point.ln_activity)
}

//! Equilibrium with frozen activity coefficients: a convex problem, solved by Newton's method with a line search.
//!
//! With γ, the water activity and the free water fixed, the balances are the gradient of Φ(λ) = Σ mᵢ(λ) − Σ Tⱼ λⱼ in the logarithms λ of
//! the free components. Φ is convex, so a damped Newton step that lowers it cannot go astray.

use nalgebra::{DMatrix, DVector};

use super::system::{Point, System};

/// Relative residual at which Newton's method on the whole system takes over.
const NEAR: f64 = 1e-2;
/// Steps of one call.
const STEPS: usize = 150;
/// Largest change of one logarithm in a step.
const STRIDE: f64 = 30.0;

/// Brings the balances near zero; false if the steps run out.
pub(crate) fn settle(system: &System, point: &mut Point, budget: &mut usize) -> bool {
    let target = DVector::from_iterator(system.totals_mol.len(), system.totals_mol.iter().map(|t| t / point.water_kg));
    system.apply_mass_action(point);
    for _ in 0..STEPS {
        let (sum, mut scale) = system.balances(&point.molality);
        let gradient = sum - &target;
        scale.zip_apply(&target, |s, t| *s = s.max(t.abs()));
        if gradient.iter().zip(scale.iter()).all(|(g, s)| g.abs() <= NEAR * s) {
            return true;
        }
        if *budget == 0 {
            return false;
        }
        *budget -= 1;
        let Some(mut step) = newton_step(system, &point.molality, &gradient, &scale) else { return false };
        let longest = step.amax();
        if !longest.is_finite() {
            return false;
        }
        if longest > STRIDE {
            step *= STRIDE / longest;
        }
        let before = potential(point, &target);
        let descent = gradient.dot(&step);
        let start = point.ln_activity.clone();
        let mut share = 1.0;
        for _ in 0..40 {
            for ((x, from), by) in point.ln_activity.iter_mut().zip(&start).zip(step.iter()) {
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
fn newton_step(
    system: &System,
    molality: &[f64],
    gradient: &DVector<f64>,
    scale: &DVector<f64>,
) -> Option<DVector<f64>> {
    let size = gradient.len();
    let mut hessian = DMatrix::<f64>::zeros(size, size);
    for (row, m) in molality.iter().enumerate() {
        for &(j, count_j) in system.parts(row) {
            for &(k, count_k) in system.parts(row) {
                hessian[(j, k)] += m * count_j * count_k;
            }
        }
    }
    let root = DVector::from_fn(size, |j, _| libm::sqrt(hessian[(j, j)].max(1e-14 * scale[j])));
    for j in 0..size {
        for k in 0..size {
            hessian[(j, k)] /= root[j] * root[k];
        }
        // A diagonal below one belongs to a balance that nothing answers to; it then moves little.
        hessian[(j, j)] = hessian[(j, j)].max(1.0);
    }
    let mut step = DVector::from_fn(size, |j, _| -gradient[j] / root[j]);
    if !hessian.lu().solve_mut(&mut step) {
        return None;
    }
    step.component_div_assign(&root);
    Some(step)
}

/// Φ.
fn potential(point: &Point, target: &DVector<f64>) -> f64 {
    point.molality.iter().sum::<f64>() - target.iter().zip(&point.ln_activity).map(|(t, x)| t * x).sum::<f64>()
}

//! Equilibrium with frozen activity coefficients: a convex problem, solved by Newton's method with a line search.
//!
//! With γ, the water activity and the free water fixed, the balances are the gradient of Φ(λ) = Σ mᵢ(λ) − Σ Tⱼ λⱼ in the logarithms λ of
//! the free components. Φ is convex, so a damped Newton step that lowers it cannot go astray.

use nalgebra::{DMatrix, DVector};

use super::system::{Point, System};

/// Relative residual at which Newton's method on the whole system takes over.
const NEAR: f64 = 1e-3;
/// Steps of one call.
const STEPS: usize = 120;
/// Largest change of one logarithm in a step.
const STRIDE: f64 = 30.0;

/// Brings the balances near zero; false if the steps run out.
pub(crate) fn settle(system: &System, point: &mut Point, budget: &mut usize) -> bool {
    let target = &system.totals_mol / point.water_kg;
    point.ln_molality = system.mass_action(point);
    let mut molality = point.molalities();
    for _ in 0..STEPS {
        let (gradient, scale) = gradient(system, &molality, &target);
        let near = gradient.iter().zip(scale.iter()).all(|(g, s)| g.abs() <= NEAR * s);
        if near {
            return true;
        }
        if *budget == 0 {
            return false;
        }
        *budget -= 1;
        let Some(mut step) = newton_step(system, &molality, &gradient, &scale) else { return false };
        let longest = step.iter().fold(0.0_f64, |a, x| a.max(x.abs()));
        if !longest.is_finite() {
            return false;
        }
        if longest > STRIDE {
            step *= STRIDE / longest;
        }
        let before = potential(&molality, point, &target);
        let descent = gradient.dot(&step);
        let mut trial = point.clone();
        let mut share = 1.0;
        for _ in 0..40 {
            trial.ln_activity = &point.ln_activity + &step * share;
            trial.ln_molality = system.mass_action(&trial);
            molality = trial.molalities();
            let after = potential(&molality, &trial, &target);
            if after <= before + 1e-4 * share * descent + 1e-14 * before.abs() {
                break;
            }
            share *= 0.3;
        }
        *point = trial;
    }
    false
}

/// The balances and, for each, the sum of what takes part in it.
fn gradient(system: &System, molality: &DVector<f64>, target: &DVector<f64>) -> (DVector<f64>, DVector<f64>) {
    let mut gradient = -target;
    let mut scale = target.abs();
    for column in 0..system.counts.ncols() {
        let mut size = 0.0;
        for row in 0..system.counts.nrows() {
            let part = system.counts[(row, column)] * molality[row];
            gradient[column] += part;
            size += part.abs();
        }
        scale[column] = scale[column].max(size);
    }
    (gradient, scale)
}

/// −H⁻¹ g with the rows and columns of the Hessian brought to a common size.
fn newton_step(
    system: &System,
    molality: &DVector<f64>,
    gradient: &DVector<f64>,
    scale: &DVector<f64>,
) -> Option<DVector<f64>> {
    let size = system.counts.ncols();
    let mut hessian = DMatrix::<f64>::zeros(size, size);
    for row in 0..system.counts.nrows() {
        let m = molality[row];
        for j in 0..size {
            let part = system.counts[(row, j)] * m;
            if part != 0.0 {
                for k in j..size {
                    hessian[(j, k)] += part * system.counts[(row, k)];
                }
            }
        }
    }
    let root = DVector::from_fn(size, |j, _| libm::sqrt(hessian[(j, j)].max(1e-14 * scale[j])));
    for j in 0..size {
        hessian[(j, j)] = (hessian[(j, j)] / (root[j] * root[j])).max(1.0);
        for k in j + 1..size {
            hessian[(j, k)] /= root[j] * root[k];
            hessian[(k, j)] = hessian[(j, k)];
        }
    }
    let right = DVector::from_fn(size, |j, _| -gradient[j] / root[j]);
    let mut step = hessian.lu().solve(&right)?;
    for j in 0..size {
        step[j] /= root[j];
    }
    Some(step)
}

/// Φ.
fn potential(molality: &DVector<f64>, point: &Point, target: &DVector<f64>) -> f64 {
    molality.sum() - target.dot(&point.ln_activity)
}

//! Roots of several functions of as many variables: amounts that depend on each other.

use super::equilibrium::linear_algebra::{Matrix, add_scaled, dot, largest};

/// Longest step that is taken at once, in units of the variables, which are about 1.
const LONGEST_STEP: f64 = 0.5;

/// How many times the tolerance a step may be when rounding keeps the steps from getting any smaller.
const ROUNDING: f64 = 1e3;

/// Finds where all functions are zero, near a start, by Broyden's method (Broyden 1965). The variables are to be about 1 in size.
/// `slopes` holds a row for each function, with its derivatives by the variables at the start; they may be rough.
/// It ends when a step is no longer than the tolerance. None where it does not come to an end.
///
/// # Errors
/// What the functions themselves fail with.
pub fn find_coupled_roots<E>(
    mut f: impl FnMut(&[f64]) -> Result<Vec<f64>, E>,
    start: Vec<f64>,
    slopes: &[Vec<f64>],
    tolerance: f64,
    max_steps: usize,
) -> Result<Option<Vec<f64>>, E> {
    let size = start.len();
    let mut jacobian = Matrix::zeros(size, size);
    for (row, slopes) in slopes.iter().enumerate().take(size) {
        for (entry, slope) in jacobian.row_mut(row).iter_mut().zip(slopes) {
            *entry = *slope;
        }
    }
    let mut x = start;
    let mut y = f(&x)?;
    let mut last = f64::INFINITY;
    for _ in 0..max_steps {
        let Some(factors) = jacobian.clone().factor() else { return Ok(None) };
        let mut step: Vec<f64> = y.iter().map(|y| -y).collect();
        factors.solve(&mut step);
        let mut length = largest(&step);
        if !length.is_finite() || y.len() != size {
            return Ok(None);
        }
        if length > LONGEST_STEP {
            step.iter_mut().for_each(|part| *part *= LONGEST_STEP / length);
            length = LONGEST_STEP;
        }
        add_scaled(&mut x, &step, 1.0);
        let y_new = f(&x)?;
        if length <= tolerance || (length <= ROUNDING * tolerance && length >= last) {
            return Ok(Some(x));
        }
        let squared = dot(&step, &step);
        for (row, (new, old)) in y_new.iter().zip(&y).enumerate() {
            let unexplained = new - old - dot(jacobian.row(row), &step);
            add_scaled(jacobian.row_mut(row), &step, unexplained / squared);
        }
        (y, last) = (y_new, length);
    }
    Ok(None)
}

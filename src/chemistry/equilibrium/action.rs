//! The linearised laws of mass action, Q δμ = A δλ − e with Q = 1 + ∂(ln γ − w ln a_w)/∂μ.
//!
//! A species too scarce to change any activity coefficient has a column of the unit matrix. Only the block of the others is factored.

use super::linear_algebra::{Factors, Matrix, add_scaled};
use super::system::System;
use crate::chemistry::water::MOLAR_MASS_kg_per_mol as WATER_kg_per_mol;

/// Entries of Q below this are taken as zero: they change a step, or a derivative, by as little, and no solution.
const NEGLIGIBLE: f64 = 1e-8;

/// Q, factored.
pub(crate) struct Action {
    /// Species that change activity coefficients.
    majors: Vec<usize>,
    /// The factored block of these.
    factors: Factors,
    /// Columns of Q − 1 of these.
    columns: Matrix,
}

impl Action {
    /// Q at these molalities; `None` if it is singular.
    pub fn new(system: &System, molality: &[f64]) -> Option<Self> {
        let ionic_strength = system.ionic_strength(molality);
        let half_slope = 0.5 * system.model.ionic_term(system.slope, ionic_strength).slope_kg_per_mol;
        let rows = molality.len();
        let widest = system.charge.iter().fold(0.0_f64, |a, z| a.max(z * z));
        let wettest = system.water.iter().fold(0.0_f64, |a, w| a.max(w.abs()));
        let mut strength = vec![2.0 * WATER_kg_per_mol * wettest; rows];
        for &(i, j, epsilon) in &system.interactions {
            strength[i] += epsilon.abs();
            strength[j] += epsilon.abs();
        }
        let mut position = vec![usize::MAX; rows];
        let mut majors = Vec::with_capacity(rows);
        for row in 0..rows {
            let squared = system.charge[row] * system.charge[row];
            let bound = half_slope.abs() * squared * widest + strength[row];
            if molality[row] * bound > NEGLIGIBLE {
                position[row] = majors.len();
                majors.push(row);
            }
        }
        // ∂ ln γᵢ/∂mₖ, and 1 + Σᵢ mᵢ ∂ ln γᵢ/∂mₖ, which gives ∂ ln a_w/∂mₖ by Gibbs–Duhem.
        let by_charge: Vec<f64> = majors.iter().map(|&k| -half_slope * system.charge[k] * system.charge[k]).collect();
        let mut osmotic: Vec<f64> = by_charge.iter().map(|g| 1.0 + g * 2.0 * ionic_strength).collect();
        let mut columns = Matrix::zeros(rows, majors.len());
        for row in 0..rows {
            add_scaled(columns.row_mut(row), &by_charge, system.charge[row] * system.charge[row]);
        }
        for &(i, j, epsilon) in &system.interactions {
            if position[j] != usize::MAX {
                columns[(i, position[j])] += epsilon;
                osmotic[position[j]] += epsilon * molality[i];
            }
            if i != j && position[i] != usize::MAX {
                columns[(j, position[i])] += epsilon;
                osmotic[position[i]] += epsilon * molality[j];
            }
        }
        let amounts: Vec<f64> = majors.iter().map(|&k| molality[k]).collect();
        for row in 0..rows {
            let water = system.water[row] * WATER_kg_per_mol;
            for ((entry, by_water), m) in columns.row_mut(row).iter_mut().zip(&osmotic).zip(&amounts) {
                *entry = (*entry + water * by_water) * m;
            }
        }
        let mut block = Matrix::zeros(majors.len(), majors.len());
        for (at, &row) in majors.iter().enumerate() {
            block.row_mut(at).copy_from_slice(columns.row(row));
            block[(at, at)] += 1.0;
        }
        Some(Self { factors: block.factor()?, majors, columns })
    }

    /// Whether the determinant of Q is positive.
    pub fn is_positive(&self) -> bool {
        self.factors.is_positive()
    }

    /// Q⁻¹ B in place.
    pub fn solve(&self, right: &mut Matrix) {
        let mut major = Matrix::zeros(self.majors.len(), right.columns());
        for (at, &row) in self.majors.iter().enumerate() {
            major.row_mut(at).copy_from_slice(right.row(row));
        }
        self.factors.solve_matrix(&mut major);
        let mut next = self.majors.iter().copied().enumerate().peekable();
        for row in 0..right.rows() {
            if let Some((at, _)) = next.next_if(|&(_, major)| major == row) {
                right.row_mut(row).copy_from_slice(major.row(at));
            } else {
                for at in 0..self.majors.len() {
                    let coupling = self.columns[(row, at)];
                    if coupling != 0.0 {
                        add_scaled(right.row_mut(row), major.row(at), -coupling);
                    }
                }
            }
        }
    }

    /// Q⁻ᵀ b in place.
    pub fn solve_transposed(&self, right: &mut [f64]) {
        // The scarce species keep their values and pass them on to the majors through their coupling.
        let mut major: Vec<f64> = self.majors.iter().map(|&row| right[row]).collect();
        for &row in &self.majors {
            right[row] = 0.0;
        }
        for (row, x) in right.iter().enumerate() {
            if *x != 0.0 {
                add_scaled(&mut major, self.columns.row(row), -x);
            }
        }
        self.factors.solve_transposed(&mut major);
        for (at, &row) in self.majors.iter().enumerate() {
            right[row] = major[at];
        }
    }
}

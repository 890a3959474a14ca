//! The linearised laws of mass action, Q δμ = A δλ − e with Q = 1 + ∂(ln γ − w ln a_w)/∂μ.
//!
//! A species too scarce to change any activity coefficient has a column of the unit matrix. Only the block of the others is factored.

use nalgebra::{DMatrix, DVector, Dyn, LU};

use super::system::System;
use crate::chemistry::water::MOLAR_MASS_kg_per_mol as WATER_kg_per_mol;

/// Entries of Q below this are taken as zero: they change a step by as little, and no solution.
const NEGLIGIBLE: f64 = 1e-10;

/// Q, factored.
pub(crate) struct Action {
    /// Species that change activity coefficients.
    majors: Vec<usize>,
    /// The factored block of these.
    factors: LU<f64, Dyn, Dyn>,
    /// Columns of Q − 1 of these.
    columns: DMatrix<f64>,
}

impl Action {
    /// Q at these molalities.
    pub fn new(system: &System, molality: &[f64]) -> Self {
        let ionic_strength = system.ionic_strength(molality);
        let half_slope = 0.5 * system.model.ionic_term(system.slope, ionic_strength).slope_kg_per_mol;
        let rows = molality.len();
        let (mut strongest, mut wettest, mut widest) = (0.0_f64, 0.0_f64, 0.0_f64);
        for row in 0..rows {
            widest = widest.max(system.charge[row] * system.charge[row]);
            wettest = wettest.max(system.water[row].abs());
        }
        for &(_, _, epsilon) in &system.interactions {
            strongest = strongest.max(epsilon.abs());
        }
        let mut position = vec![usize::MAX; rows];
        let mut majors = Vec::with_capacity(rows);
        for row in 0..rows {
            let squared = system.charge[row] * system.charge[row];
            let bound = half_slope.abs() * squared * widest + strongest + WATER_kg_per_mol * wettest * (1.0 + strongest);
            if molality[row] * bound > NEGLIGIBLE {
                position[row] = majors.len();
                majors.push(row);
            }
        }
        // ∂ ln γᵢ/∂mₖ, and 1 + Σᵢ mᵢ ∂ ln γᵢ/∂mₖ, which gives ∂ ln a_w/∂mₖ by Gibbs–Duhem.
        let mut columns = DMatrix::zeros(rows, majors.len());
        let mut osmotic = DVector::zeros(majors.len());
        for (at, &k) in majors.iter().enumerate() {
            let by_charge = -half_slope * system.charge[k] * system.charge[k];
            for row in 0..rows {
                columns[(row, at)] = by_charge * system.charge[row] * system.charge[row];
            }
            osmotic[at] = 1.0 + by_charge * 2.0 * ionic_strength;
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
        for (at, &k) in majors.iter().enumerate() {
            for row in 0..rows {
                columns[(row, at)] =
                    (columns[(row, at)] + system.water[row] * WATER_kg_per_mol * osmotic[at]) * molality[k];
            }
        }
        let block = DMatrix::from_fn(majors.len(), majors.len(), |i, j| {
            columns[(majors[i], j)] + if i == j { 1.0 } else { 0.0 }
        });
        Self { factors: block.lu(), majors, columns }
    }

    /// The determinant of Q.
    pub fn determinant(&self) -> f64 {
        self.factors.determinant()
    }

    /// Q⁻¹ b for every column b, in place; false if Q is singular.
    pub fn solve(&self, right: &mut DMatrix<f64>) -> bool {
        let mut major = DMatrix::from_fn(self.majors.len(), right.ncols(), |i, j| right[(self.majors[i], j)]);
        if !self.factors.solve_mut(&mut major) {
            return false;
        }
        for column in 0..right.ncols() {
            for at in 0..self.majors.len() {
                let x = major[(at, column)];
                for row in 0..right.nrows() {
                    right[(row, column)] -= self.columns[(row, at)] * x;
                }
            }
            // The loop above took Q − 1 times the solution from the rows of the majors too; what is left there is the solution.
            for (at, &row) in self.majors.iter().enumerate() {
                right[(row, column)] = major[(at, column)];
            }
        }
        true
    }

    /// Q⁻ᵀ b in place; false if Q is singular.
    pub fn solve_transposed(&self, right: &mut DVector<f64>) -> bool {
        // The rows of the scarce species are those of the unit matrix but for their coupling to the majors.
        let mut major = DVector::from_fn(self.majors.len(), |at, _| {
            let coupled: f64 = (0..right.len()).map(|row| self.columns[(row, at)] * right[row]).sum();
            let own: f64 = self.majors.iter().map(|&row| self.columns[(row, at)] * right[row]).sum();
            right[self.majors[at]] - (coupled - own)
        });
        if !solve_transposed(&self.factors, &mut major) {
            return false;
        }
        for (at, &row) in self.majors.iter().enumerate() {
            right[row] = major[at];
        }
        true
    }
}

/// Solves Mᵀ x = b in place with the factors of M; false if it is singular.
pub(crate) fn solve_transposed(factors: &LU<f64, Dyn, Dyn>, right: &mut DVector<f64>) -> bool {
    // P M = L U, so Mᵀ = Uᵀ Lᵀ P.
    let (lower, upper) = (factors.l(), factors.u());
    if !upper.tr_solve_upper_triangular_mut(right) || !lower.tr_solve_lower_triangular_mut(right) {
        return false;
    }
    factors.p().inv_permute_rows(right);
    true
}

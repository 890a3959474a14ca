//! Small dense matrices and their LU factors with row pivoting. Systems here have 5 to 40 rows and are solved thousands of times while
//! somebody types, where the overhead of a general library is most of the time.

use core::ops::{Index, IndexMut};

/// A matrix, row after row.
#[derive(Clone, Debug, PartialEq)]
pub(crate) struct Matrix {
    columns: usize,
    values: Vec<f64>,
}

impl Matrix {
    /// A matrix of zeros.
    pub fn zeros(rows: usize, columns: usize) -> Self {
        Self { columns, values: vec![0.0; rows * columns] }
    }

    /// Number of rows.
    pub fn rows(&self) -> usize {
        self.values.len().checked_div(self.columns).unwrap_or(0)
    }

    /// Number of columns.
    pub fn columns(&self) -> usize {
        self.columns
    }

    /// A row.
    pub fn row(&self, row: usize) -> &[f64] {
        &self.values[row * self.columns..(row + 1) * self.columns]
    }

    /// A row, to be changed.
    pub fn row_mut(&mut self, row: usize) -> &mut [f64] {
        &mut self.values[row * self.columns..(row + 1) * self.columns]
    }

    fn swap_rows(&mut self, one: usize, other: usize) {
        if one != other {
            for column in 0..self.columns {
                self.values.swap(one * self.columns + column, other * self.columns + column);
            }
        }
    }

    /// LU factors of a square matrix; `None` if it is singular or not finite.
    pub fn factor(mut self) -> Option<Factors> {
        let size = self.columns;
        let mut swaps = Vec::with_capacity(size);
        let mut positive = true;
        for k in 0..size {
            let mut pivot = k;
            for row in k + 1..size {
                if self[(row, k)].abs() > self[(pivot, k)].abs() {
                    pivot = row;
                }
            }
            self.swap_rows(k, pivot);
            swaps.push(pivot);
            let diagonal = self[(k, k)];
            if diagonal == 0.0 || !diagonal.is_finite() {
                return None;
            }
            positive ^= (pivot != k) ^ (diagonal < 0.0);
            let (done, rest) = self.values.split_at_mut((k + 1) * size);
            let read = &done[k * size + k + 1..];
            for changed in rest.chunks_exact_mut(size) {
                let factor = changed[k] / diagonal;
                if factor != 0.0 {
                    changed[k] = factor;
                    add_scaled(&mut changed[k + 1..], read, -factor);
                }
            }
        }
        Some(Factors { matrix: self, swaps, positive })
    }
}

impl Index<(usize, usize)> for Matrix {
    type Output = f64;

    fn index(&self, (row, column): (usize, usize)) -> &f64 {
        &self.values[row * self.columns + column]
    }
}

impl IndexMut<(usize, usize)> for Matrix {
    fn index_mut(&mut self, (row, column): (usize, usize)) -> &mut f64 {
        &mut self.values[row * self.columns + column]
    }
}

/// The factors of P M = L U.
pub(crate) struct Factors {
    matrix: Matrix,
    swaps: Vec<usize>,
    positive: bool,
}

impl Factors {
    /// Whether the determinant is positive.
    pub fn is_positive(&self) -> bool {
        self.positive
    }

    /// M⁻¹ B in place.
    pub fn solve_matrix(&self, right: &mut Matrix) {
        let size = self.matrix.columns;
        for (k, &pivot) in self.swaps.iter().enumerate() {
            right.swap_rows(k, pivot);
        }
        let columns = right.columns;
        for row in 1..size {
            let (done, rest) = right.values.split_at_mut(row * columns);
            for (factor, read) in self.matrix.row(row).iter().zip(done.chunks_exact(columns)) {
                add_scaled(&mut rest[..columns], read, -factor);
            }
        }
        for row in (0..size).rev() {
            let (rest, done) = right.values.split_at_mut((row + 1) * columns);
            let changed = &mut rest[row * columns..];
            let (diagonal, factors) = (self.matrix[(row, row)], &self.matrix.row(row)[row + 1..]);
            for (factor, read) in factors.iter().zip(done.chunks_exact(columns)) {
                add_scaled(changed, read, -factor);
            }
            changed.iter_mut().for_each(|x| *x /= diagonal);
        }
    }

    /// M⁻¹ b in place.
    pub fn solve(&self, right: &mut [f64]) {
        for (k, &pivot) in self.swaps.iter().enumerate() {
            right.swap(k, pivot);
        }
        let size = self.matrix.columns;
        for row in 0..size {
            right[row] -= dot(&self.matrix.row(row)[..row], &right[..row]);
        }
        for row in (0..size).rev() {
            let rest = dot(&self.matrix.row(row)[row + 1..], &right[row + 1..]);
            right[row] = (right[row] - rest) / self.matrix[(row, row)];
        }
    }

    /// M⁻ᵀ b in place: Mᵀ = Uᵀ Lᵀ P.
    pub fn solve_transposed(&self, right: &mut [f64]) {
        let size = self.matrix.columns;
        for row in 0..size {
            right[row] /= self.matrix[(row, row)];
            let x = right[row];
            add_scaled(&mut right[row + 1..], &self.matrix.row(row)[row + 1..], -x);
        }
        for row in (0..size).rev() {
            let x = right[row];
            add_scaled(&mut right[..row], &self.matrix.row(row)[..row], -x);
        }
        for (k, &pivot) in self.swaps.iter().enumerate().rev() {
            right.swap(k, pivot);
        }
    }
}

/// Adds `factor` times one slice to another.
pub(crate) fn add_scaled(changed: &mut [f64], read: &[f64], factor: f64) {
    for (x, y) in changed.iter_mut().zip(read) {
        *x += factor * y;
    }
}

/// Σ xᵢ yᵢ.
pub(crate) fn dot(x: &[f64], y: &[f64]) -> f64 {
    x.iter().zip(y).map(|(x, y)| x * y).sum()
}

/// Largest size of an element; not finite if any is not.
pub(crate) fn largest(x: &[f64]) -> f64 {
    x.iter().fold(0.0, |a, b| if b.abs() <= a { a } else { b.abs() })
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    proptest! {
        #[test]
        fn solutions_solve(size in 1..12_usize, values in proptest::collection::vec(-1.0..1.0_f64, 144), right in proptest::collection::vec(-1.0..1.0_f64, 12)) {
            let mut matrix = Matrix::zeros(size, size);
            for i in 0..size {
                for j in 0..size {
                    matrix[(i, j)] = values[12 * i + j] + if i == j { 4.0 } else { 0.0 };
                }
            }
            // Rows out of order, so that pivoting has work to do.
            matrix.swap_rows(0, size - 1);
            let factors = matrix.clone().factor().unwrap();
            let mut x = right[..size].to_vec();
            factors.solve(&mut x);
            let mut columns = Matrix::zeros(size, 1);
            for i in 0..size {
                prop_assert!((dot(matrix.row(i), &x) - right[i]).abs() < 1e-11);
                columns[(i, 0)] = right[i];
            }
            factors.solve_matrix(&mut columns);
            let mut transposed = right[..size].to_vec();
            factors.solve_transposed(&mut transposed);
            for j in 0..size {
                prop_assert!((columns[(j, 0)] - x[j]).abs() < 1e-12);
                let sum: f64 = (0..size).map(|i| matrix[(i, j)] * transposed[i]).sum();
                prop_assert!((sum - right[j]).abs() < 1e-11);
            }
        }
    }

    #[test]
    fn a_singular_matrix_has_no_factors_and_signs_are_right() {
        assert!(Matrix::zeros(2, 2).factor().is_none());
        let mut swap = Matrix::zeros(2, 2);
        swap[(0, 1)] = 1.0;
        swap[(1, 0)] = 1.0;
        assert!(!swap.factor().unwrap().is_positive());
    }
}

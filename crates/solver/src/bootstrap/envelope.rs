//! Cholesky factors of symmetric matrices whose entries lie near the diagonal.

/// Pivots below this part of the diagonal mean that the matrix is singular: a window then shares less than 1e-12 of its samples.
const LEAST_PIVOT: f64 = 1e-12;

/// Lower triangle of a symmetric matrix, row by row from its first entry to the diagonal.
///
/// A Cholesky factor fills no place before the first entry of a row, so it lives in the same envelope (Jennings 1966).
/// Cost of a factor: Σ width² over the rows.
#[derive(Debug)]
pub(super) struct Envelope {
    /// Column of the first entry of each row.
    first: Vec<usize>,
    /// Entry (i, j) is number `base[i] + j`.
    base: Vec<usize>,
    n_entries: usize,
}

impl Envelope {
    /// With the column of the first entry of each row, none beyond the diagonal.
    pub(super) fn new(first: Vec<usize>) -> Self {
        let mut n_entries = 0;
        let mut base = Vec::with_capacity(first.len());
        for (row, &first) in first.iter().enumerate() {
            // Every earlier row has at least its diagonal, so this stays at 0 or above.
            base.push(n_entries - first);
            n_entries += row + 1 - first;
        }
        Self { first, base, n_entries }
    }

    /// A matrix of zeros.
    pub(super) fn zeros(&self) -> Vec<f64> {
        vec![0.0; self.n_entries]
    }

    /// Number of the entry in `row` at `column`, which is not beyond the diagonal and not before the row's first entry.
    pub(super) fn entry(&self, row: usize, column: usize) -> usize {
        self.base[row] + column
    }

    /// The Cholesky factor of a matrix; `None` if it is not positive definite.
    pub(super) fn factor(&self, mut values: Vec<f64>) -> Option<Factor<'_>> {
        for i in 0..self.first.len() {
            for j in self.first[i]..i {
                let from = self.first[i].max(self.first[j]);
                let dot = product(self.row(&values, i, from, j), self.row(&values, j, from, j));
                values[self.base[i] + j] = (values[self.base[i] + j] - dot) / values[self.base[j] + j];
            }
            let row = self.row(&values, i, self.first[i], i);
            let diagonal = values[self.base[i] + i];
            let pivot = diagonal - product(row, row);
            let positive = pivot > LEAST_PIVOT * diagonal && pivot.is_finite();
            if !positive {
                return None;
            }
            values[self.base[i] + i] = pivot.sqrt();
        }
        Some(Factor { envelope: self, values })
    }

    fn row<'v>(&self, values: &'v [f64], row: usize, from: usize, to: usize) -> &'v [f64] {
        &values[self.base[row] + from..self.base[row] + to]
    }
}

/// A Cholesky factor.
#[derive(Debug)]
pub(super) struct Factor<'e> {
    envelope: &'e Envelope,
    values: Vec<f64>,
}

impl Factor<'_> {
    /// Replaces a right-hand side by the solution.
    pub(super) fn solve(&self, x: &mut [f64]) {
        let Envelope { first, base, .. } = self.envelope;
        for i in 0..x.len() {
            let dot = product(self.envelope.row(&self.values, i, first[i], i), &x[first[i]..i]);
            x[i] = (x[i] - dot) / self.values[base[i] + i];
        }
        for i in (0..x.len()).rev() {
            x[i] /= self.values[base[i] + i];
            let (before, at) = x.split_at_mut(i);
            let row = self.envelope.row(&self.values, i, first[i], i);
            for (x, l) in before[first[i]..].iter_mut().zip(row) {
                *x -= l * at[0];
            }
        }
    }
}

fn product(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;
    use nalgebra::{DMatrix, DVector};

    /// A matrix with an uneven envelope, diagonally dominant.
    fn matrix() -> (Envelope, Vec<f64>, DMatrix<f64>) {
        let first = vec![0, 0, 2, 1, 0, 3, 6, 2];
        let n = first.len();
        let envelope = Envelope::new(first.clone());
        let mut values = envelope.zeros();
        let mut dense = DMatrix::zeros(n, n);
        for i in 0..n {
            for j in first[i]..=i {
                let x = if i == j { 5.0 + 0.3 * i as f64 } else { (1.7 * i as f64 - 0.9 * j as f64).sin() };
                values[envelope.entry(i, j)] = x;
                (dense[(i, j)], dense[(j, i)]) = (x, x);
            }
        }
        (envelope, values, dense)
    }

    #[test]
    fn solution_is_that_of_the_dense_matrix() {
        let (envelope, values, dense) = matrix();
        let right = DVector::from_fn(dense.nrows(), |i, _| 1.3 - 0.7 * i as f64);
        let expected = dense.cholesky().unwrap().solve(&right);
        let mut x = right.as_slice().to_vec();
        envelope.factor(values).unwrap().solve(&mut x);
        for (x, expected) in x.iter().zip(expected.iter()) {
            // Eight rows of order one: a few roundings.
            assert!((x - expected).abs() < 1e-14, "{x} against {expected}");
        }
    }

    #[test]
    fn singular_and_broken_matrices_have_no_factor() {
        let (envelope, mut values, _) = matrix();
        values[envelope.entry(5, 5)] = f64::NAN;
        assert!(envelope.factor(values).is_none());
        // Two windows that are one: rows (1, −1) and (−1, 1).
        let envelope = Envelope::new(vec![0, 0]);
        assert!(envelope.factor(vec![0.7, -0.7, 0.7]).is_none());
        assert!(envelope.factor(vec![0.0, 0.0, 0.7]).is_none());
    }
}

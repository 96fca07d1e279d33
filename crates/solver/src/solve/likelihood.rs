//! The negative log-likelihood and its derivatives, as sparse sums over points.

use super::shares::Shares;
use crate::ensemble::Ensemble;
use crate::math::{CHUNK, ordered_map};
use nalgebra::DMatrix;
use std::ops::Range;

/// Chunks whose parts of the Hessian are held at once.
const CHUNKS_AT_ONCE: usize = 16;

/// A(f) relative to its value at the reference of the shares, and its gradient.
#[derive(Debug, Clone, PartialEq)]
pub struct Evaluation {
    /// A(f) − A(f⁰). As a difference it keeps its digits close to the minimum, where A itself would lose them.
    pub value: f64,
    /// Σ_c m wₖ Mₖ − Mₖ, one a window, in samples.
    pub gradient: Vec<f64>,
}

/// The likelihood around a reference f⁰, with shares looked up once.
#[derive(Debug, Clone)]
pub struct Likelihood<'a> {
    ensemble: &'a Ensemble,
    shares: Shares,
    totals: Vec<f64>,
    /// Σ of the terms of each point at δ = 0.
    sums: Vec<f64>,
}

impl<'a> Likelihood<'a> {
    /// Looks the shares up at reduced free energies `f` (kT, one a window).
    #[must_use]
    pub fn at(ensemble: &'a Ensemble, f: &[f64]) -> Self {
        let shares = Shares::at(ensemble, f);
        let sums = (0..shares.n_points()).map(|point| shares.of_point(point).1.iter().sum()).collect();
        let totals = ensemble.windows.iter().map(crate::ensemble::Window::total_weight).collect();
        Self { ensemble, shares, totals, sums }
    }

    /// The shares and their reference.
    #[must_use]
    pub fn shares(&self) -> &Shares {
        &self.shares
    }

    /// Mₖ of each window.
    #[must_use]
    pub fn totals(&self) -> &[f64] {
        &self.totals
    }

    /// Value and gradient at f⁰ + `delta` (kT, one a window). Cost: one pass over the entries of the shares.
    #[must_use]
    pub fn evaluate(&self, delta: &[f64]) -> Evaluation {
        let growth: Vec<f64> = delta.iter().map(|d| d.exp()).collect();
        let change: Vec<f64> = delta.iter().map(|d| d.exp_m1()).collect();
        let weights = &self.ensemble.points.weights;
        let parts = ordered_map(self.shares.n_points(), CHUNK, |points| {
            let mut value = 0.0;
            let mut local = LocalWindows::of(&self.shares, points.clone());
            for point in points {
                let (windows, terms) = self.shares.of_point(point);
                let grown: f64 = windows.iter().zip(terms).map(|(&k, t)| t * change[k as usize]).sum();
                let sum = self.sums[point];
                value += weights[point] * (grown / sum).ln_1p();
                let per_sum = weights[point] / (sum + grown);
                for (&k, t) in windows.iter().zip(terms) {
                    local.add(k, t * growth[k as usize] * per_sum);
                }
            }
            (value, local)
        });
        let mut value = -self.totals.iter().zip(delta).map(|(m, d)| m * d).sum::<f64>();
        let mut gradient: Vec<f64> = self.totals.iter().map(|m| -m).collect();
        for (part, local) in parts {
            value += part;
            local.scatter(&mut gradient);
        }
        Evaluation { value, gradient }
    }

    /// Hessian δᵢⱼ Σ m sᵢ − Σ m sᵢ sⱼ with sₖ = Mₖ wₖ, windows × windows, in samples. Cost: entries times overlapping windows.
    #[must_use]
    pub fn hessian(&self, delta: &[f64]) -> DMatrix<f64> {
        let growth: Vec<f64> = delta.iter().map(|d| d.exp()).collect();
        let weights = &self.ensemble.points.weights;
        let n = self.totals.len();
        let mut hessian = DMatrix::zeros(n, n);
        // Chunks are folded in a few at a time: each holds a square of the windows it has to do with.
        let n_points = self.shares.n_points();
        for first in (0..n_points).step_by(CHUNKS_AT_ONCE * CHUNK) {
            let end = (first + CHUNKS_AT_ONCE * CHUNK).min(n_points);
            let parts = ordered_map(end - first, CHUNK, |points| {
                self.products(first + points.start..first + points.end, &growth, weights)
            });
            for (local, products) in parts {
                add_products(&mut hessian, &local, &products);
            }
        }
        hessian
    }

    /// Σ m sᵢ and Σ m sᵢ sⱼ over some points, for the windows that have to do with them; upper triangle only.
    fn products(&self, points: Range<usize>, growth: &[f64], weights: &[f64]) -> (LocalWindows, Vec<f64>) {
        let mut local = LocalWindows::of(&self.shares, points.clone());
        let width = local.present.len();
        let mut products = vec![0.0; width * width];
        let mut row: Vec<(usize, f64)> = Vec::new();
        for point in points {
            row.clear();
            row.extend(self.answered(point, growth).map(|(k, s)| (local.place_of(k), s)));
            for (i, &(a, s)) in row.iter().enumerate() {
                let weighted = weights[point] * s;
                local.sums[a] += weighted;
                for &(b, other) in &row[i..] {
                    products[a * width + b] += weighted * other;
                }
            }
        }
        (local, products)
    }

    /// Hessian times a vector, without the matrix.
    #[must_use]
    pub fn hessian_product(&self, delta: &[f64], vector: &[f64]) -> Vec<f64> {
        let growth: Vec<f64> = delta.iter().map(|d| d.exp()).collect();
        let weights = &self.ensemble.points.weights;
        let parts = ordered_map(self.shares.n_points(), CHUNK, |points| {
            let mut local = LocalWindows::of(&self.shares, points.clone());
            for point in points {
                let mean: f64 = self.answered(point, &growth).map(|(k, s)| s * vector[k as usize]).sum();
                for (k, s) in self.answered(point, &growth) {
                    local.add(k, weights[point] * s * (vector[k as usize] - mean));
                }
            }
            local
        });
        let mut product = vec![0.0; vector.len()];
        for local in parts {
            local.scatter(&mut product);
        }
        product
    }

    /// Windows with weight on a point and their parts of it, Mₖ wₖ, which add to one.
    pub(crate) fn answered<'s>(&'s self, point: usize, growth: &'s [f64]) -> impl Iterator<Item = (u32, f64)> + 's {
        let (windows, terms) = self.shares.of_point(point);
        let sum: f64 = windows.iter().zip(terms).map(|(&k, t)| t * growth[k as usize]).sum();
        windows.iter().zip(terms).map(move |(&k, t)| (k, t * growth[k as usize] / sum))
    }

    /// ln D of a point at δ = 0.
    pub(crate) fn log_denominator(&self, point: usize) -> f64 {
        self.shares.shift(point) + self.sums[point].ln()
    }
}

fn add_products(hessian: &mut DMatrix<f64>, local: &LocalWindows, products: &[f64]) {
    let width = local.present.len();
    for (a, &i) in local.present.iter().enumerate() {
        hessian[(i as usize, i as usize)] += local.sums[a];
        for (b, &j) in local.present.iter().enumerate().skip(a) {
            let product = products[a * width + b];
            hessian[(i as usize, j as usize)] -= product;
            if a != b {
                hessian[(j as usize, i as usize)] -= product;
            }
        }
    }
}

/// Sums over the few windows that a chunk of points has anything to do with.
struct LocalWindows {
    present: Vec<u32>,
    sums: Vec<f64>,
}

impl LocalWindows {
    fn of(shares: &Shares, points: Range<usize>) -> Self {
        let mut present: Vec<u32> = Vec::new();
        for point in points {
            for &k in shares.of_point(point).0 {
                if let Err(place) = present.binary_search(&k) {
                    present.insert(place, k);
                }
            }
        }
        let sums = vec![0.0; present.len()];
        Self { present, sums }
    }

    fn place_of(&self, window: u32) -> usize {
        self.present.partition_point(|&k| k < window)
    }

    fn add(&mut self, window: u32, value: f64) {
        let place = self.place_of(window);
        self.sums[place] += value;
    }

    fn scatter(&self, into: &mut [f64]) {
        for (&k, sum) in self.present.iter().zip(&self.sums) {
            into[k as usize] += sum;
        }
    }
}

#[cfg(test)]
mod tests {
    #![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

    use super::*;
    use crate::condense::{BinGrid, CellScheme, Condenser};
    use crate::ensemble::WindowData;
    use spandrel_bias::units::PositionUnit;
    use spandrel_bias::{Axis, Bias, Harmonic, Term};
    use std::sync::Arc;

    /// Four windows of unequal length, stiffness and weight.
    fn ensemble() -> Ensemble {
        let axes = [Axis::new("x", PositionUnit::None, None).unwrap()];
        let scheme = CellScheme::Samples(BinGrid::new(0, 0.0, 0.5, None).unwrap());
        let windows = [(0.2, 3.1, 70, 1.0), (0.9, 5.7, 110, 0.4), (1.7, 2.3, 45, 1.7), (2.2, 8.9, 160, 0.9)];
        let data = windows.iter().enumerate().map(|(k, &(center, force_constant, n, weight))| {
            let shape = Harmonic::new(center, force_constant).unwrap().into();
            let bias = Bias::new(Arc::from(axes.clone()), vec![Term { axis: 0, shape }]).unwrap();
            let mut condenser = Condenser::new(&scheme, &axes, &bias).unwrap();
            for i in 0..n {
                condenser.push(&[center + 0.7 * (f64::from(i) * (0.9 + 0.13 * k as f64)).sin()]).unwrap();
            }
            WindowData { name: k.to_string(), bias: bias.clone(), weight, replicas: vec![condenser.finish()] }
        });
        Ensemble::assemble(&axes, BinGrid::new(0, 0.0, 0.5, None).unwrap(), data.collect()).unwrap()
    }

    const AT: [f64; 4] = [0.0, 0.31, -0.42, 0.87];
    const REFERENCE: [f64; 4] = [0.0, -0.6, 0.4, 1.1];
    const STEP: f64 = 1e-5;

    fn moved(j: usize, by: f64) -> Vec<f64> {
        let mut delta = AT.to_vec();
        delta[j] += by;
        delta
    }

    #[test]
    fn gradient_is_the_slope_of_the_value_and_hessian_that_of_the_gradient() {
        let ensemble = ensemble();
        let likelihood = Likelihood::at(&ensemble, &REFERENCE);
        let gradient = likelihood.evaluate(&AT).gradient;
        let hessian = likelihood.hessian(&AT);
        for j in 0..4 {
            let (above, below) = (likelihood.evaluate(&moved(j, STEP)), likelihood.evaluate(&moved(j, -STEP)));
            let slope = (above.value - below.value) / (2.0 * STEP);
            // Central differences miss a third derivative (of some hundred samples) times STEP²/6, and rounding 1e-13/STEP.
            assert!((slope - gradient[j]).abs() < 1e-6, "{slope} against {}", gradient[j]);
            for i in 0..4 {
                let slope = (above.gradient[i] - below.gradient[i]) / (2.0 * STEP);
                assert!((slope - hessian[(i, j)]).abs() < 1e-6, "{slope} against {}", hessian[(i, j)]);
            }
        }
    }

    #[test]
    fn products_with_the_hessian_need_no_matrix() {
        let ensemble = ensemble();
        let likelihood = Likelihood::at(&ensemble, &REFERENCE);
        let vector = [0.3, -1.7, 2.2, 0.6];
        let product = likelihood.hessian_product(&AT, &vector);
        let expected = likelihood.hessian(&AT) * nalgebra::DVector::from_column_slice(&vector);
        for (a, b) in product.iter().zip(expected.iter()) {
            assert!((a - b).abs() < 1e-11, "{a} against {b}");
        }
    }

    #[test]
    fn value_does_not_depend_on_the_reference() {
        let ensemble = ensemble();
        let (near, far) = (Likelihood::at(&ensemble, &REFERENCE), Likelihood::at(&ensemble, &[0.0; 4]));
        let from_far: Vec<f64> = REFERENCE.iter().zip(&AT).map(|(f, d)| f + d).collect();
        let difference = far.evaluate(&from_far).value - far.evaluate(&REFERENCE).value;
        assert!((near.evaluate(&AT).value - difference).abs() < 1e-11);
    }
}

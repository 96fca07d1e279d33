//! The negative log-likelihood and its derivatives, as sparse sums over points.

use super::shares::Shares;
use crate::ensemble::Ensemble;
use crate::math::{CHUNK, ordered_map};
use nalgebra::DMatrix;
use std::ops::Range;

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
        let sums = (0..shares.n_points())
            .map(|point| shares.of_point(point).1.iter().sum())
            .collect();
        let totals = ensemble
            .windows
            .iter()
            .map(crate::ensemble::Window::total_weight)
            .collect();
        Self {
            ensemble,
            shares,
            totals,
            sums,
        }
    }

    /// The ensemble.
    #[must_use]
    pub fn ensemble(&self) -> &'a Ensemble {
        self.ensemble
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
        let parts = ordered_map(self.shares.n_points(), CHUNK, |points| {
            let mut local = LocalWindows::of(&self.shares, points.clone());
            let width = local.present.len();
            let mut products = vec![0.0; width * width];
            let mut row: Vec<(usize, f64)> = Vec::new();
            for point in points {
                row.clear();
                row.extend(self.answered(point, &growth).map(|(k, s)| (local.place_of(k), s)));
                for (i, &(a, s)) in row.iter().enumerate() {
                    let weighted = weights[point] * s;
                    local.sums[a] += weighted;
                    for &(b, other) in &row[i..] {
                        products[a * width + b] += weighted * other;
                    }
                }
            }
            (local, products)
        });
        let n = self.totals.len();
        let mut hessian = DMatrix::zeros(n, n);
        for (local, products) in parts {
            let width = local.present.len();
            for (a, &i) in local.present.iter().enumerate() {
                hessian[(i as usize, i as usize)] += local.sums[a];
                // Windows are increasing within a point, so only the upper triangle of the products was filled.
                for (b, &j) in local.present.iter().enumerate().skip(a) {
                    let product = products[a * width + b];
                    hessian[(i as usize, j as usize)] -= product;
                    if a != b {
                        hessian[(j as usize, i as usize)] -= product;
                    }
                }
            }
        }
        hessian
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
        windows
            .iter()
            .zip(terms)
            .map(move |(&k, t)| (k, t * growth[k as usize] / sum))
    }

    /// ln D of a point at δ = 0.
    pub(crate) fn log_denominator(&self, point: usize) -> f64 {
        self.shares.shift(point) + self.sums[point].ln()
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

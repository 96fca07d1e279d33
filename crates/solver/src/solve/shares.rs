//! Which windows answer for which points: the sparse table behind every sum over windows.

use crate::ensemble::Ensemble;
use crate::math::ordered_map;
use std::ops::Range;

/// Shares below this part of a point's weight are left out.
pub const SHARE_CUT: f64 = 1e-12;

/// Neighboring points whose windows are looked up together.
const STRETCH: usize = 64;

/// For each point the windows with weight there, and their terms Mₖ exp(f⁰ₖ − bₖ(c)) relative to the largest one.
///
/// Built at a reference f⁰; with f = f⁰ + δ a sum over windows is Σₖ termₖ exp(δₖ): no exponential a point. Valid while no |δₖ| exceeds
/// about 1, since a window left out here cannot have grown above e²·[`SHARE_CUT`] of a point by then.
/// Memory: 12 bytes an entry; the entries a point are the windows that overlap there, whatever the number of windows.
#[derive(Debug, Clone, PartialEq)]
pub struct Shares {
    reference: Vec<f64>,
    offsets: Vec<usize>,
    windows: Vec<u32>,
    terms: Vec<f64>,
    /// Logarithm of the largest term of each point.
    shifts: Vec<f64>,
}

impl Shares {
    /// Finds the shares at reduced free energies `reference` (kT, one a window).
    ///
    /// For each stretch of points a window is skipped if the least bias it can have there leaves it below the cut everywhere;
    /// otherwise its bias is evaluated on each point of the stretch.
    #[must_use]
    pub fn at(ensemble: &Ensemble, reference: &[f64]) -> Self {
        let log_weights: Vec<f64> =
            ensemble.windows.iter().zip(reference).map(|(window, f)| window.total_weight().ln() + f).collect();
        let floor = floor_of_denominator(ensemble, &log_weights);
        let parts =
            ordered_map(ensemble.points.len(), STRETCH, |points| stretch(ensemble, &log_weights, &floor, points));
        let mut shares = Self {
            reference: reference.to_vec(),
            offsets: vec![0],
            windows: Vec::new(),
            terms: Vec::new(),
            shifts: Vec::with_capacity(ensemble.points.len()),
        };
        for part in parts {
            let base = shares.windows.len();
            shares.offsets.extend(part.ends.iter().map(|end| base + end));
            shares.windows.extend(part.windows);
            shares.terms.extend(part.terms);
            shares.shifts.extend(part.shifts);
        }
        shares
    }

    /// The reduced free energies at which the terms were formed.
    #[must_use]
    pub fn reference(&self) -> &[f64] {
        &self.reference
    }

    /// Number of points.
    #[must_use]
    pub fn n_points(&self) -> usize {
        self.shifts.len()
    }

    /// Windows with weight on a point, increasing, and their terms relative to the largest.
    #[must_use]
    pub fn of_point(&self, point: usize) -> (&[u32], &[f64]) {
        let range = self.offsets[point]..self.offsets[point + 1];
        (&self.windows[range.clone()], &self.terms[range])
    }

    /// Logarithm of the term to which those of a point are relative.
    #[must_use]
    pub fn shift(&self, point: usize) -> f64 {
        self.shifts[point]
    }
}

struct Part {
    ends: Vec<usize>,
    windows: Vec<u32>,
    terms: Vec<f64>,
    shifts: Vec<f64>,
}

/// A lower bound of ln D on each point: the largest term among the windows that have samples there.
fn floor_of_denominator(ensemble: &Ensemble, log_weights: &[f64]) -> Vec<f64> {
    let own_terms = ordered_map(ensemble.n_windows(), 1, |range| {
        let k = range.start;
        let window = &ensemble.windows[k];
        window
            .counts
            .iter()
            .map(|&(point, _)| log_weights[k] - window.reduced_bias(ensemble.points.position(point as usize)))
            .collect::<Vec<_>>()
    });
    let mut floor = vec![f64::NEG_INFINITY; ensemble.points.len()];
    for (window, terms) in ensemble.windows.iter().zip(&own_terms) {
        for (&(point, _), &term) in window.counts.iter().zip(terms) {
            let so_far = &mut floor[point as usize];
            *so_far = if term > *so_far { term } else { *so_far };
        }
    }
    floor
}

fn stretch(ensemble: &Ensemble, log_weights: &[f64], floor: &[f64], points: Range<usize>) -> Part {
    let cut = SHARE_CUT.ln();
    let (lower, upper) = ensemble.points.bounding_box(points.clone());
    let least = floor[points.clone()].iter().fold(f64::INFINITY, |least, &x| if x < least { x } else { least });
    // One list a window of the stretch; a transposed copy then gives one list a point.
    let mut columns: Vec<(u32, Vec<f64>)> = Vec::new();
    for (k, window) in ensemble.windows.iter().enumerate() {
        if log_weights[k] - window.bias.lower_bound(&lower, &upper) < least + cut {
            continue;
        }
        let terms =
            points.clone().map(|point| log_weights[k] - window.reduced_bias(ensemble.points.position(point))).collect();
        columns.push((u32::try_from(k).unwrap_or(u32::MAX), terms));
    }
    let mut part = Part { ends: Vec::new(), windows: Vec::new(), terms: Vec::new(), shifts: Vec::new() };
    for (i, point) in points.enumerate() {
        let largest = columns
            .iter()
            .map(|(_, terms)| terms[i])
            .fold(f64::NEG_INFINITY, |largest, x| if x > largest { x } else { largest });
        for (k, terms) in &columns {
            if terms[i] >= floor[point] + cut {
                part.windows.push(*k);
                part.terms.push((terms[i] - largest).exp());
            }
        }
        part.ends.push(part.windows.len());
        part.shifts.push(largest);
    }
    part
}

//! All replicates, each drawn and solved.

use super::envelope::Factor;
use super::options::ReplicateProgress;
use super::resampler::{LANES, Resampler};
use super::resolve::resolve;
use super::targets::BinWeight;
use super::warm_start::WarmStart;
use rayon::prelude::*;
use std::ops::{ControlFlow, Range};

/// Passes of [`LANES`] replicates a thread between two reports of progress.
const PASSES_A_REPORT: usize = 2;

/// Changes of everything in one replicate, kT.
pub(super) struct Replicate {
    /// F of each bin relative to the zero; `None` if no sample of the bin or of the zero was drawn.
    pub bins: Vec<Option<f64>>,
    /// f of each window.
    pub windows: Vec<f64>,
}

/// What it takes to solve a replicate.
pub(super) struct Replication<'a> {
    pub resampler: Resampler,
    pub warm: &'a WarmStart,
    /// Factor of the Hessian of all counts.
    pub base: Factor<'a>,
    /// Weights of the profile's bins; `None` where nothing was sampled.
    pub bins: Vec<Option<BinWeight>>,
    /// Weight of the zero.
    pub zero: BinWeight,
}

impl Replication<'_> {
    /// All replicates in order; `None` for those that have no solution. `Err` if `progress` asks to stop.
    pub(super) fn all(
        &self,
        n_replicates: usize,
        progress: &mut ReplicateProgress<'_>,
    ) -> Result<Vec<Option<Replicate>>, Stopped> {
        let mut done = Vec::with_capacity(n_replicates);
        let wave = LANES * PASSES_A_REPORT * rayon::current_num_threads();
        while done.len() < n_replicates {
            report(progress, done.len(), n_replicates)?;
            let end = (done.len() + wave).min(n_replicates);
            let starts: Vec<usize> = (done.len()..end).step_by(LANES).collect();
            let passes: Vec<Vec<Option<Replicate>>> =
                starts.into_par_iter().map(|start| self.pass(start..(start + LANES).min(end))).collect();
            done.extend(passes.into_iter().flatten());
        }
        report(progress, n_replicates, n_replicates)?;
        Ok(done)
    }

    fn pass(&self, replicates: Range<usize>) -> Vec<Option<Replicate>> {
        let drawn = self.resampler.draw(replicates.start as u64..replicates.end as u64);
        let solve = |lane: usize| {
            let weights: Vec<f64> = drawn.iter().map(|lanes| lanes[lane]).collect();
            self.one(&weights)
        };
        (0..replicates.len()).map(solve).collect()
    }

    fn one(&self, weights: &[f64]) -> Option<Replicate> {
        let delta = resolve(self.warm, &self.base, weights)?;
        let growth = self.warm.growth_of_denominators(&delta);
        let zero = self.zero.change(weights, &growth);
        let bin = |bin: &Option<BinWeight>| Some(zero? - bin.as_ref()?.change(weights, &growth)?);
        Some(Replicate {
            bins: self.bins.iter().map(bin).collect(),
            windows: self.warm.rows().iter().map(|row| row.map_or(0.0, |row| delta[row])).collect(),
        })
    }
}

/// The caller asked to stop.
pub(super) struct Stopped;

fn report(progress: &mut ReplicateProgress<'_>, done: usize, asked_for: usize) -> Result<(), Stopped> {
    match progress(done, asked_for) {
        ControlFlow::Continue(()) => Ok(()),
        ControlFlow::Break(()) => Err(Stopped),
    }
}

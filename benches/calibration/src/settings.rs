//! What a study is asked for.

use clap::ValueEnum;
use spandrel_testkit::Window;

/// Statistical weight ω of one sample.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, ValueEnum)]
pub enum Weighting {
    /// 1 for every sample.
    #[default]
    Unit,
    /// 1/g with the exact statistical inefficiency g of the window's latent series.
    InverseG,
}

impl Weighting {
    /// Name on the command line and in the tables.
    #[must_use]
    pub fn name(self) -> &'static str {
        match self {
            Self::Unit => "unit",
            Self::InverseG => "inverse-g",
        }
    }

    /// ω of a window's samples.
    #[must_use]
    pub fn of(self, window: &Window) -> f64 {
        match self {
            Self::Unit => 1.0,
            Self::InverseG => window.correlation.statistical_inefficiency().recip(),
        }
    }
}

/// What a study is asked for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Settings {
    /// Replicate experiments of each system.
    pub n_replicates: u64,
    /// Seed of all random numbers.
    pub seed: u64,
    /// Weight of the samples.
    pub weighting: Weighting,
}

//! How far an autocorrelation is summed before its noise takes over.

/// Window constant of the automatic window, in integrated correlation times: an exponential correlation is cut where e⁻⁵ of it is left,
/// below the noise of any run that fits in the block means.
const WINDOW_IN_CORRELATION_TIMES: f64 = 5.0;

/// Sum of an autocorrelation over both directions of time, and how many lags went in.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct SummedLags {
    /// 1 + 2 Σ ρₜ.
    pub inefficiency: f64,
    /// Last lag M of the sum.
    pub lags: usize,
}

/// Pairs Γₘ = ρ₂ₘ + ρ₂ₘ₊₁ up to the first that is not positive, made non-increasing (C. J. Geyer 1992, Stat. Sci. 7, 473).
pub(super) fn monotone_pairs(rho: &[f64]) -> impl Iterator<Item = f64> {
    rho.chunks_exact(2).map(|pair| pair[0] + pair[1]).take_while(|&pair| pair > 0.0).scan(
        f64::INFINITY,
        |smallest, pair| {
            *smallest = pair.min(*smallest);
            Some(*smallest)
        },
    )
}

/// G = 2 Σ Γₘ − 1 over the initial monotone positive sequence.
pub(super) fn initial_sequence(rho: &[f64]) -> SummedLags {
    let (sum, n_pairs) = monotone_pairs(rho).fold((0.0, 0_usize), |(sum, n_pairs), pair| (sum + pair, n_pairs + 1));
    SummedLags { inefficiency: 2.0 * sum - 1.0, lags: (2 * n_pairs).max(2) - 1 }
}

/// G = 1 + 2 Σₜ₌₁..M ρₜ with the smallest M ≥ c G/2 (A. D. Sokal 1997; U. Wolff 2004, Comput. Phys. Commun. 156, 143).
///
/// There always is one, as the autocorrelation of a centered series sums to −½ over all lags, that is to G = 0.
pub(super) fn automatic_window(rho: &[f64]) -> SummedLags {
    let mut inefficiency = 1.0;
    let mut lags = 0;
    for rho in &rho[1..] {
        inefficiency += 2.0 * rho;
        lags += 1;
        if lags as f64 >= 0.5 * WINDOW_IN_CORRELATION_TIMES * inefficiency {
            break;
        }
    }
    SummedLags { inefficiency, lags }
}

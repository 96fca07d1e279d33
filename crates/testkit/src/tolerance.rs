//! Named tolerances. Each is of one kind, absolute unless its name says relative, and carries its reason.

/// 1e-10 kT. Quadrature against a closed form: the five-point rule on 4096 panels leaves less than 1e-12, rounding of a few
/// thousand added terms less than 1e-12, and a wrong formula is off by far more than 1e-10.
pub const QUADRATURE: f64 = 1e-10;

/// 1e-9. A quantile put back into its distribution function: the sampler's cubic is off by (hz/s)³ p h/384 at z deviations s from
/// the mean, some 1e-10 on panels of width h = s/40. No experiment of fewer than 1e16 samples could tell.
pub const QUANTILE: f64 = 1e-9;

/// 1e-9 kT. Two solvers of the same convex problem, each stopped at a step of 1e-10 kT.
pub const SOLVERS: f64 = 1e-9;

/// 1e-11. Sums of up to a million terms of order one in a different order: rounding grows like √n · 1e-16, with a reserve of
/// a hundred for cancellation.
pub const SUMMATION_ORDER: f64 = 1e-11;

/// 1e-13, relative. The same few operations in a different order.
pub const ROUNDING_RELATIVE: f64 = 1e-13;

/// 1e-11 kT. Reference values stored with at least 15 digits, compared with a double-precision sum of up to a million terms.
pub const STORED_DIGITS: f64 = 1e-11;

/// 1e-12, relative. Statistics with fifteen certified digits on integer data of three digits, where double precision keeps
/// thirteen or more.
pub const CERTIFIED_DIGITS_RELATIVE: f64 = 1e-12;

/// 1e-14. Fifteen printed digits of a number below one, and one rounding.
pub const HANDBOOK_DIGITS: f64 = 1e-14;

/// 5e-5 kT. Cells at a local error of 1e-5 kT against one cell a sample; the local errors add up along the windows to at
/// most five times that.
pub const CELLS: f64 = 5e-5;

/// 4.5 standard errors, two-sided probability 7e-6. For one comparison of a sample with the truth under a fixed seed: a right
/// program fails once in 150 000 choices of the seed, a bias of eight standard errors is found with certainty.
pub const STANDARD_ERRORS: f64 = 4.5;

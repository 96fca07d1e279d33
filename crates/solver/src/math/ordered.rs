//! Parallel work whose result does not depend on the number of threads.

use rayon::prelude::*;
use std::ops::Range;

/// Points in one unit of parallel work. A constant, so that sums are formed in the same order on any machine.
pub(crate) const CHUNK: usize = 1024;

/// Applies `work` to consecutive ranges of at most `chunk` items out of `n_items`, in parallel, and returns the results in order.
///
/// The caller combines them one after the other: floating-point sums then come out bit-identical for any number of threads.
pub(crate) fn ordered_map<T, F>(n_items: usize, chunk: usize, work: F) -> Vec<T>
where
    T: Send,
    F: Fn(Range<usize>) -> T + Sync,
{
    (0..n_items.div_ceil(chunk)).into_par_iter().map(|i| work(i * chunk..((i + 1) * chunk).min(n_items))).collect()
}

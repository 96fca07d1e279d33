//! Seeded random streams: one generator, one stream for each replicate and window.

use rand::SeedableRng;
use rand_chacha::ChaCha8Rng;

/// The generator of every sampler here: the same numbers on every platform and in every thread.
pub type Generator = ChaCha8Rng;

/// Windows that a replicate can have before its streams run into those of the next one.
const STREAMS_PER_REPLICATE: u64 = 1 << 20;

/// Generator for stream number `stream` of `seed`. Different streams of one seed never overlap.
#[must_use]
pub fn stream(seed: u64, stream: u64) -> Generator {
    let mut generator = ChaCha8Rng::seed_from_u64(seed);
    generator.set_stream(stream);
    generator
}

/// Generator for one window of one replicate, so that no window's samples depend on another's length.
///
/// Replicates up to 2⁴⁴ and windows up to 2²⁰ have streams of their own.
#[must_use]
pub fn window_stream(seed: u64, replicate: u64, window: usize) -> Generator {
    let first = replicate.wrapping_mul(STREAMS_PER_REPLICATE);
    stream(seed, first.wrapping_add(window as u64))
}

#[cfg(test)]
mod tests {
    use rand::Rng;

    use super::*;

    #[test]
    fn one_stream_repeats_and_two_streams_differ() {
        let draw = |seed, number| stream(seed, number).next_u64();
        assert_eq!(draw(17, 3), draw(17, 3));
        assert_ne!(draw(17, 3), draw(17, 4));
        assert_ne!(draw(17, 3), draw(18, 3));
    }

    #[test]
    fn windows_of_different_replicates_have_different_streams() {
        let draw = |replicate, window| window_stream(5, replicate, window).next_u64();
        assert_ne!(draw(2, 7), draw(2, 8));
        assert_ne!(draw(2, 7), draw(3, 7));
    }
}

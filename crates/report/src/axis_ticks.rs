//! Round numbers along an axis.

/// Steps in degrees that divide a turn the way people do.
const PARTS_OF_A_TURN: [f64; 6] = [15.0, 30.0, 45.0, 60.0, 90.0, 180.0];

/// Values at a round step, no more than `wanted` of them between `low` and `high` and not many fewer, ends included where they are round.
///
/// Round is 1, 2 or 5 times a power of ten; in degrees, above 10, a simple part of a turn. Empty unless `low < high` and both are finite.
pub(crate) fn ticks(low: f64, high: f64, wanted: f64, in_degrees: bool) -> Vec<f64> {
    if !(low.is_finite() && high.is_finite() && low < high) {
        return Vec::new();
    }
    let raw = (high - low) / wanted;
    let part_of_a_turn = PARTS_OF_A_TURN.iter().copied().find(|step| *step >= raw && in_degrees && raw > 10.0);
    let step = part_of_a_turn.unwrap_or_else(|| round_step(raw));
    let first = (low / step - 1e-9).ceil();
    let n_steps = (high / step + 1e-9).floor() - first;
    let mut values = Vec::new();
    let mut i = 0.0;
    while i <= n_steps {
        values.push((first + i) * step + 0.0);
        i += 1.0;
    }
    values
}

/// The tick as text, with the decimals that its neighbors need.
pub(crate) fn label(value: f64, ticks: &[f64]) -> String {
    let step = match ticks {
        [first, second, ..] => second - first,
        _ => value.abs().max(1.0),
    };
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped to 0..=12")]
    let decimals = (-(step.log10() + 1e-9).floor()).clamp(0.0, 12.0) as usize;
    let text = format!("{value:.decimals$}");
    text.replace('-', "\u{2212}")
}

fn round_step(raw: f64) -> f64 {
    let power = 10.0_f64.powf(raw.log10().floor());
    let digit = raw / power;
    let round = if digit <= 1.0 {
        1.0
    } else if digit <= 2.0 {
        2.0
    } else if digit <= 5.0 {
        5.0
    } else {
        10.0
    };
    round * power
}

#[cfg(test)]
mod tests {
    use super::*;

    fn labels(low: f64, high: f64, wanted: f64) -> Vec<String> {
        let values = ticks(low, high, wanted, false);
        values.iter().map(|&value| label(value, &values)).collect()
    }

    #[test]
    fn ticks_are_round_and_inside() {
        assert_eq!(labels(-180.0, 180.0, 8.0), ["−150", "−100", "−50", "0", "50", "100", "150"]);
        assert_eq!(labels(0.13, 0.61, 5.0), ["0.2", "0.3", "0.4", "0.5", "0.6"]);
        assert_eq!(labels(-0.011, 0.012, 4.0), ["−0.01", "0.00", "0.01"]);
    }

    #[test]
    fn degrees_come_in_parts_of_a_turn() {
        let values = ticks(-180.0, 180.0, 9.0, true);
        assert_eq!(values, [-180.0, -135.0, -90.0, -45.0, 0.0, 45.0, 90.0, 135.0, 180.0]);
        assert_eq!(ticks(0.0, 8.0, 4.0, true), ticks(0.0, 8.0, 4.0, false));
    }

    #[test]
    fn an_empty_or_endless_range_has_none() {
        assert!(ticks(1.0, 1.0, 5.0, false).is_empty());
        assert!(ticks(f64::NAN, 1.0, 5.0, true).is_empty());
        assert!(ticks(0.0, f64::INFINITY, 5.0, true).is_empty());
    }
}

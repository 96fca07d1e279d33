//! Bins of which a range, and the period of its axis, hold a whole number.

use crate::job::number::rough;

/// A range counts as a whole number of bins within this fraction of it.
pub(super) const WHOLE: f64 = 1e-9;

/// How far from the number of bins asked for another is looked for.
const FARTHEST: u32 = 20_000;

/// Whether a length is a whole number of bins, up to rounding.
pub(super) fn is_whole(length: f64, width: f64) -> bool {
    let number = (length / width).round().max(1.0);
    (number * width - length).abs() <= WHOLE * length
}

/// Advice on the bins nearest to a width, of which the range and any period hold a whole number. The width is offered where its few
/// digits are enough.
pub(super) fn fitting_bins(range: f64, period: Option<f64>, width: f64) -> String {
    let Some(number) = fitting_number(range, period, width) else {
        return "leave `from` and `to` out, or choose a range that is a simple fraction of the period".to_owned();
    };
    let shown = rough(range / number);
    let fits = |width: f64| is_whole(range, width) && period.is_none_or(|period| is_whole(period, width));
    if shown.parse().is_ok_and(fits) {
        format!("use `bins = {number}` or `bin_width = {shown}`")
    } else {
        format!("use `bins = {number}`, each of which is {shown} wide")
    }
}

fn fitting_number(range: f64, period: Option<f64>, width: f64) -> Option<f64> {
    let whole = period.unwrap_or(range);
    let asked = (whole / width).round().max(1.0);
    let near = (0..=FARTHEST).map(f64::from).flat_map(|step| [asked - step, asked + step]);
    let fitting = near.filter(|number| *number >= 1.0).find(|number| is_whole(range, whole / number))?;
    Some((range * fitting / whole).round())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_nearest_number_is_found_for_any_width() {
        assert_eq!(fitting_number(0.6, None, 0.059), Some(10.0));
        assert_eq!(fitting_number(0.6, None, 7.0), Some(1.0));
        assert_eq!(fitting_number(360.0, Some(360.0), 0.000_700_1), Some(514_212.0));
    }

    #[test]
    fn a_part_of_a_period_needs_a_multiple_of_its_denominator_in_the_period() {
        // 0.35 is 7/48 of 2.4: a width of 0.002 would be 1200 bins of the period, and does hold 25 times 48 of them.
        assert_eq!(fitting_number(0.35, Some(2.4), 0.002), Some(175.0));
        // 2.4 / 0.0073 is 328.8, and 328 is 41 times 8.
        assert_eq!(fitting_number(0.3, Some(2.4), 0.0073), Some(41.0));
        assert_eq!(fitting_number(0.5_f64.sqrt(), Some(2.4), 0.07), None);
    }
}

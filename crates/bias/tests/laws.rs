//! Laws that every shape of a bias term must obey, whatever its parameters.

#![expect(clippy::unwrap_used, reason = "a test may stop at what it did not expect")]

use std::sync::Arc;

use proptest::prelude::*;
use proptest::test_runner::{Config, RngSeed};
use spandrel_bias::units::PositionUnit;
use spandrel_bias::{
    Axis, Bias, FlatBottomed, Harmonic, Interpolation, Linear, OneSidedHarmonic, OutsideRule, PeriodicHarmonic, Shape,
    Side, Tabulated, Term,
};

/// The axis that terms act on in a bias over three axes, neither first nor last, so that mixed-up indices
/// show.
const ALONG: usize = 1;

/// Energies are compared to within this fraction of the largest one in reach: some 1e4 roundings.
const ENERGY_TOLERANCE: f64 = 1e-12;

/// A shape, its axis, and the stretch in which the interesting things happen.
#[derive(Debug, Clone)]
struct Case {
    axis: Axis,
    shape: Shape,
    lower: f64,
    upper: f64,
}

impl Case {
    fn bias(&self) -> Bias {
        let other = |name| Axis::new(name, PositionUnit::Nanometer, None).unwrap();
        let axes = [other("first"), self.axis.clone(), other("last")];
        let term = Term { axis: ALONG, shape: self.shape.clone() };
        Bias::new(Arc::from(axes), vec![term]).unwrap()
    }

    fn length(&self) -> f64 {
        self.upper - self.lower
    }

    /// A fraction of the stretch as a position.
    fn at(&self, fraction: f64) -> f64 {
        self.lower + fraction * self.length()
    }

    /// The distance from `position` to the nearest image of any of `marks`.
    fn distance(&self, position: f64, marks: &[f64]) -> f64 {
        marks.iter().map(|&mark| self.axis.displacement(position, mark).abs()).fold(f64::INFINITY, f64::min)
    }

    /// Breakpoints, and the rows of a table, at which the third derivative jumps.
    fn marks(&self) -> Vec<f64> {
        let mut marks = self.bias().breakpoints(ALONG);
        if let Shape::Tabulated(table) = &self.shape {
            marks.extend(table.positions());
        }
        marks
    }
}

fn energy(bias: &Bias, position: f64) -> f64 {
    bias.energy(&[17.5, position, -3.25]).unwrap()
}

fn slope(bias: &Bias, position: f64) -> f64 {
    let mut gradient = [f64::NAN; 3];
    bias.gradient(&[17.5, position, -3.25], &mut gradient).unwrap();
    assert_eq!((gradient[0], gradient[2]), (0.0, 0.0));
    gradient[ALONG]
}

fn curvature(bias: &Bias, position: f64) -> f64 {
    let mut matrix = [f64::NAN; 9];
    bias.second_derivatives(&[17.5, position, -3.25], &mut matrix).unwrap();
    let value = std::mem::take(&mut matrix[ALONG * 3 + ALONG]);
    assert!(matrix.iter().all(|&element| element == 0.0));
    value
}

/// The largest of `|function|` over the stretch of a case.
fn largest(case: &Case, function: impl Fn(f64) -> f64) -> f64 {
    (0..=400).map(|step| function(case.at(f64::from(step) / 400.0)).abs()).fold(0.0, f64::max)
}

/// Lengths over four powers of ten, so that no law rests on a scale near 1.
fn length() -> impl Strategy<Value = f64> {
    (-2.3f64..1.9).prop_map(|exponent| 10f64.powf(exponent))
}

/// An energy a squared length, for a shape of that length: 0.4 to 70 kT over it.
fn force_constant(length: f64) -> impl Strategy<Value = f64> {
    (0.4..70.0f64).prop_map(move |energy| energy / (length * length))
}

fn straight() -> Axis {
    Axis::new("straight", PositionUnit::Angstrom, None).unwrap()
}

fn circular(period: f64) -> Axis {
    Axis::new("circular", PositionUnit::Degree, Some(period)).unwrap()
}

/// Simple shapes on an axis without a period.
fn simple_straight() -> impl Strategy<Value = Case> {
    (length(), -7.3..7.3f64, 0.05..0.6f64, 0..5usize)
        .prop_flat_map(|(length, center, width, kind)| (Just((length, center, width, kind)), force_constant(length)))
        .prop_map(|((length, center, width, kind), k)| {
            let center = center * length;
            let shape: Shape = match kind {
                0 => Harmonic::new(center, k).unwrap().into(),
                1 => Linear::new((width - 0.3) * k * length).unwrap().into(),
                2 => OneSidedHarmonic::new(Side::Above, center, k).unwrap().into(),
                3 => OneSidedHarmonic::new(Side::Below, center, k).unwrap().into(),
                _ => FlatBottomed::new(center, width * length, k).unwrap().into(),
            };
            Case { axis: straight(), shape, lower: center - 1.3 * length, upper: center + 1.7 * length }
        })
}

/// Simple shapes on an axis with a period, seen over several periods.
fn simple_circular() -> impl Strategy<Value = Case> {
    (length(), -2.3..2.3f64, 0.05..0.45f64, any::<bool>())
        .prop_flat_map(|(period, center, width, flat)| (Just((period, center, width, flat)), force_constant(period)))
        .prop_map(|((period, center, width, flat), k)| {
            let center = center * period;
            let shape: Shape = if flat {
                FlatBottomed::new(center, width * period, k).unwrap().into()
            } else {
                PeriodicHarmonic::new(center, k).unwrap().into()
            };
            Case { axis: circular(period), shape, lower: -2.7 * period, upper: 3.1 * period }
        })
}

/// How a table lies on its axis.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Fit {
    Straight,
    PartOfPeriod,
    FullPeriod,
    FullPeriodWithJump,
}

fn table() -> impl Strategy<Value = Case> {
    let fit =
        prop_oneof![Just(Fit::Straight), Just(Fit::PartOfPeriod), Just(Fit::FullPeriod), Just(Fit::FullPeriodWithJump)];
    let rule = prop_oneof![Just(OutsideRule::Error), Just(OutsideRule::Hold), Just(OutsideRule::Extend)];
    let interpolation = prop_oneof![Just(Interpolation::Linear), Just(Interpolation::Cubic)];
    let rows = prop::collection::vec((0.3..1.7f64, -6.0..9.0f64), 3..9);
    (fit, rule, interpolation, rows, length(), -3.1..3.1f64).prop_map(
        |(fit, outside, interpolation, rows, length, start)| {
            let start = start * length;
            let total: f64 = rows[1..].iter().map(|row| row.0).sum();
            let mut positions = vec![start];
            let mut covered = 0.0;
            for row in &rows[1..] {
                covered += row.0;
                positions.push(start + length * covered / total);
            }
            let mut energies: Vec<f64> = rows.iter().map(|row| row.1).collect();
            let last = energies.len() - 1;
            let axis = match fit {
                Fit::Straight => straight(),
                Fit::PartOfPeriod => circular(1.37 * length),
                Fit::FullPeriod | Fit::FullPeriodWithJump => circular(length),
            };
            match fit {
                Fit::FullPeriod => energies[last] = energies[0],
                Fit::FullPeriodWithJump => energies[last] = energies[0] + 2.7,
                Fit::Straight | Fit::PartOfPeriod => {}
            }
            let ends = (positions[0], positions[last]);
            let shape = Tabulated::new(&axis, positions, energies, interpolation, outside).unwrap();
            assert_eq!(shape.is_closed(), fit == Fit::FullPeriod);
            // Where there is no energy outside the table, only the table itself can be looked at.
            let limited = outside == OutsideRule::Error && matches!(fit, Fit::Straight | Fit::PartOfPeriod);
            let (lower, upper) = match (limited, axis.period()) {
                (true, _) => ends,
                (false, Some(period)) => (ends.0 - 1.6 * period, ends.1 + 1.2 * period),
                (false, None) => (ends.0 - 0.4 * length, ends.1 + 0.7 * length),
            };
            Case { axis, shape: shape.into(), lower, upper }
        },
    )
}

fn any_shape() -> impl Strategy<Value = Case> {
    prop_oneof![2 => simple_straight(), 1 => simple_circular(), 3 => table()]
}

/// A fixed seed: the same cases on every machine, some 50 or more of each shape and setting.
fn config() -> Config {
    Config { cases: 1500, failure_persistence: None, rng_seed: RngSeed::Fixed(20_260_417), ..Config::default() }
}

/// The least energy over a stretch by brute force: a fine grid with every mark on it, and a ternary search
/// about the best grid point.
fn sampled_minimum(case: &Case, bias: &Bias, lower: f64, upper: f64) -> f64 {
    let mut positions: Vec<f64> = (0..=1000).map(|step| lower + (upper - lower) * f64::from(step) / 1000.0).collect();
    for mark in case.marks() {
        let image = case.axis.wrap(mark, lower);
        // On an axis with a period a stretch of several periods holds equal minima in each.
        if lower < image && image < upper {
            positions.push(image);
        }
    }
    positions.sort_by(f64::total_cmp);
    let best = (0..positions.len())
        .min_by(|&a, &b| energy(bias, positions[a]).total_cmp(&energy(bias, positions[b])))
        .unwrap();
    let mut from = positions[best.saturating_sub(1)];
    let mut to = positions[(best + 1).min(positions.len() - 1)];
    let mut least = energy(bias, positions[best]);
    for _ in 0..80 {
        let (left, right) = (from + (to - from) / 3.0, to - (to - from) / 3.0);
        let (left_energy, right_energy) = (energy(bias, left), energy(bias, right));
        least = least.min(left_energy).min(right_energy);
        if left_energy < right_energy {
            to = right;
        } else {
            from = left;
        }
    }
    least
}

proptest! {
    #![proptest_config(config())]

    #[test]
    fn slope_is_the_derivative_of_the_energy_away_from_breakpoints(
        case in any_shape(), fraction in 0.003..0.997f64,
    ) {
        let bias = case.bias();
        let position = case.at(fraction);
        let step = 1e-5 * case.length();
        prop_assume!(case.distance(position, &case.marks()) > 2.0 * step);
        let expected = (energy(&bias, position + step) - energy(&bias, position - step)) / (2.0 * step);
        // Truncation is h² b''' / 6, some 1e-8 of the largest slope for tables of 8 rows; rounding of b
        // over the step is some 1e-10.
        let scale = largest(&case, |position| slope(&bias, position));
        prop_assert!((slope(&bias, position) - expected).abs() <= 1e-6 * scale);
    }

    #[test]
    fn second_derivative_is_the_derivative_of_the_slope_away_from_breakpoints(
        case in any_shape(), fraction in 0.003..0.997f64,
    ) {
        let bias = case.bias();
        let position = case.at(fraction);
        let step = 1e-5 * case.length();
        prop_assume!(case.distance(position, &case.marks()) > 2.0 * step);
        let expected = (slope(&bias, position + step) - slope(&bias, position - step)) / (2.0 * step);
        // The slope is quadratic here, so only its rounding counts, over the step some 1e-9 of the scale;
        // straight lines have the same slope on both sides, to the last bit.
        let scale = bias.largest_curvature(ALONG);
        prop_assert!((curvature(&bias, position) - expected).abs() <= 1e-6 * scale);
    }

    #[test]
    fn largest_curvature_bounds_every_second_derivative_and_is_reached(case in any_shape()) {
        let bias = case.bias();
        let claimed = bias.largest_curvature(ALONG);
        let mut found = largest(&case, |position| curvature(&bias, position));
        if let Shape::Tabulated(table) = &case.shape {
            for &row in table.positions() {
                found = found.max(curvature(&bias, row).abs());
            }
        }
        // The weights of the two rows in an interpolated curvature add to 1 but for rounding.
        prop_assert!((found - claimed).abs() <= 1e-13 * claimed);
    }

    #[test]
    fn energy_and_slope_are_continuous_but_where_they_are_said_to_break(case in any_shape()) {
        let bias = case.bias();
        let scale = largest(&case, |position| slope(&bias, position));
        let curvature_scale = bias.largest_curvature(ALONG);
        let step = 1e-8 * case.length();
        let breakpoints = bias.breakpoints(ALONG);
        // A table that does not close on itself jumps opposite its middle (or at its ends).
        let jump = match &case.shape {
            Shape::Tabulated(table) if !table.is_closed() => case.axis.period().map(|period| {
                let (first, last) = table.range();
                0.5 * (first + last) + 0.5 * period
            }),
            _ => None,
        };
        for mark in case.marks() {
            let (left, right) = (mark - step, mark + step);
            if !(case.lower < left && right < case.upper) {
                continue;
            }
            let is_jump = jump.is_some_and(|jump| case.distance(mark, &[jump]) < 0.5 * step);
            if is_jump {
                continue;
            }
            let change = energy(&bias, right) - energy(&bias, left);
            prop_assert!(change.abs() <= 2.5 * step * scale, "energy at {mark}: {change}");
            if case.distance(mark, &breakpoints) > 2.0 * step {
                let change = slope(&bias, right) - slope(&bias, left);
                prop_assert!(change.abs() <= 2.5 * step * curvature_scale, "slope at {mark}: {change}");
                let change = curvature(&bias, right) - curvature(&bias, left);
                // A curvature that is interpolated between rows changes by its slope times the step.
                prop_assert!(change.abs() <= 1e-5 * curvature_scale, "curvature at {mark}: {change}");
            }
        }
    }

    #[test]
    fn energy_repeats_with_the_period(
        case in prop_oneof![simple_circular(), table()], fraction in 0.0..1.0f64, turns in -40..40i32,
    ) {
        prop_assume!(case.axis.period().is_some());
        let period = case.axis.period().unwrap();
        let bias = case.bias();
        let position = case.at(fraction);
        prop_assume!(case.distance(position, &bias.breakpoints(ALONG)) > 1e-6 * period);
        let image = position + f64::from(turns) * period;
        // Forty turns away a position is rounded by some 1e-14 periods.
        let scale = largest(&case, |position| slope(&bias, position)) * period;
        prop_assert!((energy(&bias, image) - energy(&bias, position)).abs() <= 1e-12 * scale);
    }

    #[test]
    fn lower_bound_is_the_minimum_over_the_box_and_never_above_it(
        case in any_shape(), fractions in (0.0..1.0f64, 0.0..1.0f64),
    ) {
        let bias = case.bias();
        let (lower, upper) = (
            case.at(fractions.0.min(fractions.1)),
            case.at(fractions.0.max(fractions.1)),
        );
        let bound = bias.lower_bound(&[-3.0, lower, 2.0], &[5.0, upper, 2.5]);
        let minimum = sampled_minimum(&case, &bias, lower, upper);
        prop_assert!(bound <= minimum, "{bound} is above {minimum}");
        let scale = largest(&case, |position| energy(&bias, position));
        // The slack for rounding is 1e-12 of a period, over which a table changes by some ten times its
        // spread at most; the search stops within rounding of a minimum.
        prop_assert!(minimum - bound <= 1e-9 * scale, "{bound} is far below {minimum}");
    }

    #[test]
    fn sums_of_terms_have_the_sums_of_their_energies_and_derivatives(
        cases in prop::collection::vec(simple_straight(), 2..5),
        positions in prop::array::uniform2(-9.0..9.0f64),
        sizes in prop::array::uniform2(0.1..4.0f64),
    ) {
        // The terms alternate between two axes; each alone is the same shape on an axis of its own.
        let axes: Arc<[Axis]> = Arc::from([straight(), straight()]);
        let terms: Vec<Term> = cases
            .iter()
            .enumerate()
            .map(|(index, case)| Term { axis: index % 2, shape: case.shape.clone() })
            .collect();
        let bias = Bias::new(Arc::clone(&axes), terms).unwrap();
        let singles: Vec<Bias> = cases.iter().map(Case::bias).collect();
        let along = |axis: usize| singles.iter().skip(axis).step_by(2);
        let all = |function: &dyn Fn(&Bias, f64) -> f64| -> (f64, f64) {
            let terms: Vec<f64> = (0..2)
                .flat_map(|axis| along(axis).map(move |single| (single, axis)))
                .map(|(single, axis)| function(single, positions[axis]))
                .collect();
            (terms.iter().sum(), terms.iter().map(|term| term.abs()).sum())
        };
        let (sum, scale) = all(&|single, position| energy(single, position));
        prop_assert!((bias.energy(&positions).unwrap() - sum).abs() <= ENERGY_TOLERANCE * scale);

        let mut gradient = [f64::NAN; 2];
        bias.gradient(&positions, &mut gradient).unwrap();
        let mut matrix = [f64::NAN; 4];
        bias.second_derivatives(&positions, &mut matrix).unwrap();
        prop_assert_eq!((matrix[1], matrix[2]), (0.0, 0.0));
        for axis in 0..2 {
            let position = positions[axis];
            let slopes: Vec<f64> = along(axis).map(|single| slope(single, position)).collect();
            let scale: f64 = slopes.iter().map(|slope| slope.abs()).sum();
            let sum: f64 = slopes.iter().sum();
            prop_assert!((gradient[axis] - sum).abs() <= ENERGY_TOLERANCE * scale);
            let sum: f64 = along(axis).map(|single| curvature(single, position)).sum();
            prop_assert!((matrix[axis * 3] - sum).abs() <= ENERGY_TOLERANCE * sum);
            let sum: f64 = along(axis).map(|single| single.largest_curvature(ALONG)).sum();
            prop_assert!((bias.largest_curvature(axis) - sum).abs() <= ENERGY_TOLERANCE * sum);
        }

        let upper = [positions[0] + sizes[0], positions[1] + sizes[1]];
        let bound = bias.lower_bound(&positions, &upper);
        for step in 0..=900u32 {
            let fractions = [f64::from(step % 31) / 30.0, f64::from(step / 31) / 29.1];
            let inside = [
                (positions[0] + fractions[0] * sizes[0]).min(upper[0]),
                (positions[1] + fractions[1] * sizes[1]).min(upper[1]),
            ];
            prop_assert!(bound <= bias.energy(&inside).unwrap());
        }
    }
}

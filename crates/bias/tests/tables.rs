//! Tabulated biases: the conditions that define their splines, and what lies outside them.

#![expect(clippy::unwrap_used, reason = "a test may stop at what it did not expect")]
#![expect(clippy::float_cmp, reason = "what is compared exactly is exact in binary")]

use std::f64::consts::PI;
use std::sync::Arc;

use proptest::prelude::*;
use proptest::test_runner::{Config, RngSeed};
use spandrel_bias::units::PositionUnit;
use spandrel_bias::{Axis, Bias, Interpolation, OutsideRule, OutsideTable, Tabulated, Term};

const POSITIONS: [f64; 5] = [-1.5, -0.25, 0.5, 2.0, 2.75];
const ENERGIES: [f64; 5] = [4.0, -1.5, 2.25, 0.5, 7.0];

fn straight() -> Axis {
    Axis::new("distance", PositionUnit::Nanometer, None).unwrap()
}

fn turn(period: f64) -> Axis {
    Axis::new("turn", PositionUnit::Radian, Some(period)).unwrap()
}

fn bias(axis: &Axis, positions: &[f64], energies: &[f64], interpolation: Interpolation, outside: OutsideRule) -> Bias {
    let table = Tabulated::new(axis, positions.to_vec(), energies.to_vec(), interpolation, outside);
    let term = Term { axis: 0, shape: table.unwrap().into() };
    Bias::new(Arc::from([axis.clone()]), vec![term]).unwrap()
}

fn energy(bias: &Bias, position: f64) -> f64 {
    bias.energy(&[position]).unwrap()
}

fn slope(bias: &Bias, position: f64) -> f64 {
    let mut gradient = [f64::NAN];
    bias.gradient(&[position], &mut gradient).unwrap();
    gradient[0]
}

fn curvature(bias: &Bias, position: f64) -> f64 {
    let mut second = [f64::NAN];
    bias.second_derivatives(&[position], &mut second).unwrap();
    second[0]
}

#[test]
fn linear_interpolation_goes_straight_from_row_to_row() {
    let bias = bias(&straight(), &POSITIONS, &ENERGIES, Interpolation::Linear, OutsideRule::Error);
    // A quarter of the way from (0.5, 2.25) to (2, 0.5): all exact in binary but the weights.
    let expected = 2.25 + 0.25 * (0.5 - 2.25);
    assert!((energy(&bias, 0.875) - expected).abs() < 1e-15);
    assert!((slope(&bias, 0.875) - (0.5 - 2.25) / 1.5).abs() < 1e-15);
    assert_eq!(bias.breakpoints(0), POSITIONS);
    assert_eq!(bias.largest_curvature(0), 0.0);
}

#[test]
fn a_natural_spline_through_three_rows_has_its_closed_form() {
    // One equation is left for the middle row: 2 (h₀ + h₁) M₁ = 6 (s₁ − s₀).
    let bias = bias(&straight(), &[0.4, 1.1, 2.7], &[3.0, -2.0, 5.5], Interpolation::Cubic, OutsideRule::Extend);
    let chords = [-5.0 / 0.7, 7.5 / 1.6];
    let middle = 3.0 * (chords[1] - chords[0]) / 2.3;
    assert!((curvature(&bias, 1.1) - middle).abs() < 1e-12 * middle);
    assert!((bias.largest_curvature(0) - middle).abs() < 1e-12 * middle);
    // The slope at the first row is s₀ − h₀ M₁/6, and goes on outside.
    let first = chords[0] - 0.7 * middle / 6.0;
    assert!((slope(&bias, -30.0) - first).abs() < 1e-12 * first.abs());
    let expected = 3.0 + first * (-30.0 - 0.4);
    assert!((energy(&bias, -30.0) - expected).abs() < 1e-12 * expected.abs());
}

#[test]
fn a_periodic_spline_through_three_rows_has_its_closed_form() {
    // Two distinct rows: (h₀ + h₁) (2 M₀ + M₁) = 6 (s₀ − s₁) and M₁ = −M₀.
    let bias = bias(&turn(2.5), &[0.3, 1.2, 2.8], &[1.0, 4.0, 1.0], Interpolation::Cubic, OutsideRule::Error);
    let expected = 6.0 * (3.0 / 0.9 - -3.0 / 1.6) / 2.5;
    for (position, expected) in [(0.3, expected), (1.2, -expected), (2.8, expected), (-1.3, -expected)] {
        assert!((curvature(&bias, position) - expected).abs() < 1e-12 * expected.abs());
    }
    assert!(bias.breakpoints(0).is_empty());
}

#[test]
fn a_periodic_spline_follows_a_smooth_curve_to_fourth_order() {
    // A spline's error falls with the fourth power of the step (de Boor 1978, chapter V), to which the
    // smooth curve a cos x + b sin 2x of period 2π has nothing to add.
    let curve = |x: f64| 1.7 * x.cos() - 0.6 * (2.0 * x).sin();
    let error = |n: u32| {
        let positions: Vec<f64> = (0..=n).map(|row| -PI + 2.0 * PI * f64::from(row) / f64::from(n)).collect();
        let mut energies: Vec<f64> = positions.iter().map(|&x| curve(x)).collect();
        energies[n as usize] = energies[0];
        let bias = bias(&turn(2.0 * PI), &positions, &energies, Interpolation::Cubic, OutsideRule::Error);
        (0..2000)
            .map(|step| {
                let x = 0.0123 + f64::from(step) * 0.0041;
                (energy(&bias, x) - curve(x)).abs()
            })
            .fold(0.0, f64::max)
    };
    let ratio = error(24) / error(48);
    // 2⁴ with the next order, a few per cent at this step, left over.
    assert!((14.0..18.0).contains(&ratio), "{ratio}");
}

#[test]
fn a_spline_has_the_same_shape_turned_around_the_circle() {
    let energies = [2.0, -3.5, 0.25, 4.0, 1.5, 2.0];
    let steps = [0.7, 1.3, 0.4, 0.9, 1.1];
    let rows = |first: usize| -> (Vec<f64>, Vec<f64>) {
        let mut position: f64 = steps[..first].iter().sum();
        let mut rows = (vec![position], vec![energies[first]]);
        for step in 0..steps.len() {
            position += steps[(first + step) % steps.len()];
            rows.0.push(position);
            rows.1.push(energies[(first + step + 1) % steps.len()]);
        }
        rows
    };
    let build = |first: usize| {
        let (positions, energies) = rows(first);
        bias(&turn(4.4), &positions, &energies, Interpolation::Cubic, OutsideRule::Error)
    };
    let (one, other) = (build(0), build(3));
    for step in 0..200 {
        let position = -5.0 + 0.0613 * f64::from(step);
        // A hundred roundings of energies near 5.
        assert!((energy(&one, position) - energy(&other, position)).abs() < 1e-13);
    }
}

#[test]
fn outside_a_limited_table_there_is_no_energy() {
    let bias = bias(&straight(), &POSITIONS, &ENERGIES, Interpolation::Cubic, OutsideRule::Error);
    assert!(bias.has_limited_domain());
    for position in [-1.500_01, 2.750_01, 60.0, f64::INFINITY] {
        let expected = OutsideTable { axis: 0, position, lower: -1.5, upper: 2.75 };
        assert_eq!(bias.energy(&[position]), Err(expected));
        assert_eq!(bias.gradient(&[position], &mut [0.0]), Err(expected));
        assert_eq!(bias.second_derivatives(&[position], &mut [0.0]), Err(expected));
    }
    assert!(bias.energy(&[f64::NAN]).is_err());
    assert_eq!(energy(&bias, -1.5).to_bits(), 4f64.to_bits());
    assert_eq!(energy(&bias, 2.75).to_bits(), 7f64.to_bits());
    assert_eq!(
        bias.energy(&[60.0]).unwrap_err().to_string(),
        "position 60 on axis 0 lies outside the bias table, which covers -1.5 to 2.75; extend the table, \
         or state that its energy is held or its slope extended outside"
    );
}

#[test]
fn a_held_table_keeps_the_energy_of_its_ends() {
    let bias = bias(&straight(), &POSITIONS, &ENERGIES, Interpolation::Cubic, OutsideRule::Hold);
    assert!(!bias.has_limited_domain());
    for (position, expected) in [(-1.6, 4.0), (-900.0, 4.0), (2.8, 7.0), (900.0, 7.0)] {
        assert_eq!(energy(&bias, position).to_bits(), f64::to_bits(expected));
        assert_eq!((slope(&bias, position), curvature(&bias, position)), (0.0, 0.0));
    }
    assert_eq!(bias.breakpoints(0), [-1.5, 2.75]);
    assert!(energy(&bias, f64::NAN).is_nan());
}

#[test]
fn in_the_gap_of_a_period_the_nearer_end_of_the_table_counts() {
    // The table covers 1 to 4 of a period of 5, so the gap from 4 to 6 is split at 5.
    let held = bias(&turn(5.0), &[1.0, 2.5, 4.0], &[3.0, -1.0, 8.0], Interpolation::Linear, OutsideRule::Hold);
    for (position, expected) in [(4.5, 8.0), (-0.25, 8.0), (5.25, 3.0), (0.5, 3.0), (-4.5, 3.0)] {
        assert_eq!(energy(&held, position).to_bits(), f64::to_bits(expected), "{position}");
    }
    assert_eq!(held.breakpoints(0), [1.0, 2.5, 4.0, 0.0]);
    let extended = bias(&turn(5.0), &[1.0, 2.5, 4.0], &[3.0, -1.0, 8.0], Interpolation::Linear, OutsideRule::Extend);
    // Slopes of 6 at the upper end and -8/3 at the lower one.
    for (position, expected) in [(4.5, 11.0), (-0.25, 12.5), (5.25, 5.0)] {
        assert!((energy(&extended, position) - expected).abs() < 1e-14);
    }
}

#[test]
fn a_full_period_rounded_to_six_digits_closes_the_circle() {
    for end in [0.5e-5, -0.7e-5].map(|rounding| PI + rounding) {
        let table = Tabulated::new(
            &turn(2.0 * PI),
            vec![-end, -1.0, 0.75, 2.0, end],
            vec![2.0, 5.0, -1.0, 4.0, 2.0],
            Interpolation::Cubic,
            OutsideRule::Error,
        )
        .unwrap();
        assert!(table.is_closed(), "{end}");
        assert!((table.range().1 - table.range().0 - 2.0 * PI).abs() < 1e-15);
        let term = Term { axis: 0, shape: table.into() };
        let bias = Bias::new(Arc::from([turn(2.0 * PI)]), vec![term]).unwrap();
        // Nothing is left of the circle that the table does not cover.
        for step in 0..3000 {
            assert!(bias.energy(&[-9.0 + 0.0061 * f64::from(step)]).is_ok());
        }
        assert!(bias.energy(&[PI]).is_ok() && bias.energy(&[-PI]).is_ok());
    }
}

#[test]
fn a_full_period_with_unequal_ends_jumps_where_it_begins() {
    let bias = bias(&turn(4.0), &[-1.0, 0.5, 3.0], &[2.0, 5.0, 9.0], Interpolation::Cubic, OutsideRule::Error);
    assert_eq!(bias.breakpoints(0), [-1.0]);
    assert!((energy(&bias, 3.0 - 1e-9) - 9.0).abs() < 1e-7);
    assert!((energy(&bias, 3.0) - 2.0).abs() < 1e-15);
    assert_eq!(curvature(&bias, -1.0), 0.0);
}

#[test]
fn the_end_of_a_limited_table_is_inside_it_in_every_image() {
    let axis = turn(2.0 * PI);
    let bias = bias(&axis, &[-1.3, 0.2, 1.1], &[2.0, 0.5, 3.0], Interpolation::Cubic, OutsideRule::Error);
    for image in -60..60 {
        for end in [-1.3, 1.1] {
            let position = end + f64::from(image) * 2.0 * PI;
            assert!(bias.energy(&[position]).is_ok(), "{position}");
        }
    }
    assert!(bias.energy(&[1.1001]).is_err());
}

#[test]
fn a_lower_bound_leaves_out_what_a_limited_table_does_not_cover() {
    let limited = bias(&straight(), &POSITIONS, &ENERGIES, Interpolation::Linear, OutsideRule::Error);
    let bound = |lower: f64, upper: f64| limited.lower_bound(&[lower], &[upper]);
    // Bounds are low by rounding at most.
    let close = |found: f64, expected: f64| found <= expected && found > expected - 1e-11;
    assert!(close(bound(2.75, 90.0), 7.0));
    assert!(close(bound(-90.0, -1.5), 4.0));
    assert!(close(bound(-90.0, 90.0), -1.5));
    // Nothing is known there, so nothing above the least energy of the table is claimed.
    assert!(close(bound(40.0, 90.0), -1.5));
    assert!(close(bound(-90.0, -40.0), -1.5));
}

#[test]
fn a_lower_bound_sees_held_ends_and_extended_slopes_without_end() {
    let build = |rule| bias(&straight(), &POSITIONS, &ENERGIES, Interpolation::Linear, rule);
    let (low, high) = ([f64::NEG_INFINITY], [f64::INFINITY]);
    let close = |found: f64, expected: f64| found <= expected && found > expected - 1e-11;
    let held = build(OutsideRule::Hold);
    assert!(close(held.lower_bound(&[40.0], &high), 7.0));
    assert!(close(held.lower_bound(&low, &[-40.0]), 4.0));
    assert!(close(held.lower_bound(&low, &high), -1.5));
    let extended = build(OutsideRule::Extend);
    // The upper end rises by 6.5 over 0.75.
    assert!(close(extended.lower_bound(&[3.5], &high), 13.5));
    assert!(close(extended.lower_bound(&low, &high), -1.5));
    let level = bias(&straight(), &[0.5, 1.5, 2.5], &[3.0, 3.0, 3.0], Interpolation::Linear, OutsideRule::Extend);
    assert!(close(level.lower_bound(&low, &high), 3.0));
    assert!(close(level.lower_bound(&low, &[-40.0]), 3.0));
    let falling = bias(&straight(), &[0.5, 1.5], &[3.0, 1.0], Interpolation::Linear, OutsideRule::Extend);
    assert_eq!(falling.lower_bound(&low, &high), f64::NEG_INFINITY);
}

#[test]
fn a_lower_bound_holds_at_a_jump_however_its_image_is_rounded() {
    // The gap from 1.1 on is split at its middle, where the held energy falls from 3 to 2.
    let (first, last) = (-1.3, 1.1);
    for period in [2.0 * PI, 4.7, 10.0 / 3.0] {
        let bias = bias(&turn(period), &[first, 0.2, last], &[2.0, 4.5, 3.0], Interpolation::Cubic, OutsideRule::Hold);
        for image in -60..60 {
            let jump = 0.5 * (first + last) + (f64::from(image) + 0.5) * period;
            for length in [0.01, 0.23, 0.31] {
                for (lower, upper) in [(jump - length, jump), (jump, jump + length)] {
                    let bound = bias.lower_bound(&[lower], &[upper]);
                    assert!(bound <= energy(&bias, lower).min(energy(&bias, upper)), "{jump}");
                }
            }
        }
    }
}

#[test]
fn a_table_serializes_as_its_rows_and_rules() {
    let table = Tabulated::new(
        &straight(),
        vec![0.5, 1.5, 2.25],
        vec![3.0, -1.0, 4.5],
        Interpolation::Cubic,
        OutsideRule::Extend,
    )
    .unwrap();
    assert_eq!(table.positions(), [0.5, 1.5, 2.25]);
    assert_eq!(table.energies(), [3.0, -1.0, 4.5]);
    assert_eq!(table.interpolation(), Interpolation::Cubic);
    assert_eq!(table.outside(), OutsideRule::Extend);
    assert_eq!(
        serde_json::to_value(&table).unwrap(),
        serde_json::json!({
            "positions": [0.5, 1.5, 2.25], "energies": [3.0, -1.0, 4.5],
            "interpolation": "cubic", "outside": "extend", "period": null
        })
    );
}

/// A fixed seed: the same cases on every machine.
fn config() -> Config {
    Config { cases: 1000, failure_persistence: None, rng_seed: RngSeed::Fixed(20_260_420), ..Config::default() }
}

proptest! {
    #![proptest_config(config())]

    // With continuity of slope and second derivative at the rows, which the laws check for every shape,
    // these conditions define the spline completely.
    #[test]
    fn splines_pass_through_their_rows_and_natural_ones_have_straight_ends(
        rows in prop::collection::vec((0.02..3.0f64, -40.0..70.0f64), 3..40), start in -9.0..9.0f64,
    ) {
        let mut position = start;
        let mut positions = Vec::new();
        for row in &rows {
            position += row.0;
            positions.push(position);
        }
        let energies: Vec<f64> = rows.iter().map(|row| row.1).collect();
        let bias = bias(&straight(), &positions, &energies, Interpolation::Cubic, OutsideRule::Hold);
        for (&position, &expected) in positions.iter().zip(&energies) {
            prop_assert!((energy(&bias, position) - expected).abs() <= 1e-13 * 70.0);
        }
        prop_assert_eq!(curvature(&bias, positions[0]), 0.0);
        prop_assert_eq!(curvature(&bias, positions[positions.len() - 1]), 0.0);
    }
}

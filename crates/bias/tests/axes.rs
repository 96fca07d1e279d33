//! Axes: their checks, and positions on periodic ones.

#![expect(clippy::unwrap_used, reason = "a test may stop at what it did not expect")]

use proptest::prelude::*;
use proptest::test_runner::{Config, RngSeed};
use spandrel_bias::units::PositionUnit;
use spandrel_bias::{Axis, AxisError};

fn torsion() -> Axis {
    Axis::new("torsion", PositionUnit::Degree, Some(360.0)).unwrap()
}

#[test]
fn an_axis_keeps_what_it_was_given() {
    let axis = Axis::new("gap", PositionUnit::Angstrom, None).unwrap();
    assert_eq!((axis.name(), axis.unit(), axis.period()), ("gap", PositionUnit::Angstrom, None));
    assert_eq!(serde_json::to_string(&torsion()).unwrap(), r#"{"name":"torsion","unit":"deg","period":360.0}"#);
}

#[test]
fn blank_names_and_impossible_periods_are_refused() {
    for name in ["", "  ", "\t"] {
        let error = Axis::new(name, PositionUnit::None, None).unwrap_err();
        assert_eq!(error, AxisError::EmptyName);
        assert_eq!(error.to_string(), "`name` of an axis is empty: expected a name to report it by");
    }
    for period in [0.0, -360.0, f64::NAN, f64::INFINITY] {
        let result = Axis::new("turn", PositionUnit::Degree, Some(period));
        assert!(matches!(result, Err(AxisError::Period { axis, .. }) if axis == "turn"));
    }
    assert_eq!(
        Axis::new("turn", PositionUnit::Degree, Some(-7.5)).unwrap_err().to_string(),
        "`period` of axis `turn` must be a positive, finite number, found -7.5; leave it out if the axis \
         does not close on itself"
    );
}

#[test]
fn a_straight_axis_leaves_positions_alone() {
    let axis = Axis::new("gap", PositionUnit::Angstrom, None).unwrap();
    assert_eq!(axis.displacement(950.5, -10.25).to_bits(), 960.75f64.to_bits());
    assert_eq!(axis.wrap(-950.5, 3.0).to_bits(), (-950.5f64).to_bits());
}

#[test]
fn half_a_period_away_counts_as_minus_half_a_period() {
    let axis = torsion();
    for position in [230.0, -130.0, 590.0] {
        assert_eq!(axis.displacement(position, 50.0).to_bits(), (-180.0f64).to_bits());
    }
}

#[test]
fn the_upper_end_of_a_period_wraps_to_its_lower_end() {
    let axis = torsion();
    for position in [-180.0, 180.0, 540.0, -900.0] {
        assert_eq!(axis.wrap(position, -180.0).to_bits(), (-180.0f64).to_bits());
    }
    // Too close below the end for the sum to tell them apart.
    assert_eq!(axis.wrap(-1e-20, 0.0).to_bits(), 0f64.to_bits());
}

/// A fixed seed: the same cases on every machine.
fn config() -> Config {
    Config { cases: 1000, failure_persistence: None, rng_seed: RngSeed::Fixed(20_260_419), ..Config::default() }
}

proptest! {
    #![proptest_config(config())]

    #[test]
    fn wrapping_adds_whole_periods_and_lands_in_range(
        period in 0.004..700.0f64, lower in -3.0..3.0f64, position in -60.0..60.0f64,
    ) {
        let axis = Axis::new("turn", PositionUnit::Radian, Some(period)).unwrap();
        let (lower, position) = (lower * period, position * period);
        let wrapped = axis.wrap(position, lower);
        prop_assert!(lower <= wrapped && wrapped < lower + period);
        let turns = (wrapped - position) / period;
        // Sixty periods away a position carries a rounding of some 1e-14 periods.
        prop_assert!((turns - turns.round()).abs() < 1e-12);

        let way = axis.displacement(position, lower);
        prop_assert!(-0.5 * period <= way && way < 0.5 * period);
        let turns = (position - lower - way) / period;
        prop_assert!((turns - turns.round()).abs() < 1e-12);
    }
}

//! Values of each shape at hand-worked places, and what a bias says of itself.

#![expect(clippy::unwrap_used, reason = "a test may stop at what it did not expect")]
#![expect(clippy::float_cmp, reason = "what is compared exactly is exact in binary")]

use std::sync::Arc;

use spandrel_bias::units::PositionUnit;
use spandrel_bias::{
    Axis, Bias, FlatBottomed, Harmonic, HarmonicConvention, Linear, OneSidedHarmonic, PeriodicHarmonic, Shape, Side,
    Term,
};

fn straight() -> Axis {
    Axis::new("distance", PositionUnit::Nanometer, None).unwrap()
}

fn torsion() -> Axis {
    Axis::new("torsion", PositionUnit::Degree, Some(360.0)).unwrap()
}

fn alone(axis: Axis, shape: impl Into<Shape>) -> Bias {
    let term = Term { axis: 0, shape: shape.into() };
    Bias::new(Arc::from([axis]), vec![term]).unwrap()
}

/// Energy, slope and second derivative; the numbers of these tests are all exact in binary.
fn values(bias: &Bias, position: f64) -> [f64; 3] {
    let mut gradient = [f64::NAN];
    let mut second = [f64::NAN];
    bias.gradient(&[position], &mut gradient).unwrap();
    bias.second_derivatives(&[position], &mut second).unwrap();
    [bias.energy(&[position]).unwrap(), gradient[0], second[0]]
}

#[test]
fn a_harmonic_is_half_its_constant_times_the_squared_displacement() {
    let bias = alone(straight(), Harmonic::new(1.5, 3.0).unwrap());
    assert_eq!(values(&bias, 3.5), [6.0, 6.0, 3.0]);
    assert_eq!(values(&bias, 1.0), [0.375, -1.5, 3.0]);
}

#[test]
fn a_constant_without_the_half_counts_double() {
    let constant = HarmonicConvention::Full.half_force_constant(1.75);
    let bias = alone(straight(), Harmonic::new(-0.5, constant).unwrap());
    // 1.75 · 2.5²
    assert_eq!(values(&bias, 2.0)[0], 10.9375);
    assert_eq!(HarmonicConvention::Half.half_force_constant(1.75), 1.75);
}

#[test]
fn a_periodic_harmonic_acts_from_the_nearest_image() {
    let bias = alone(torsion(), PeriodicHarmonic::new(170.0, 0.25).unwrap());
    // -165 is 25 above 170; 140, 500 and -220 are 30 below.
    assert_eq!(values(&bias, -165.0), [78.125, 6.25, 0.25]);
    for position in [140.0, 500.0, -220.0] {
        assert_eq!(values(&bias, position), [112.5, -7.5, 0.25]);
    }
}

#[test]
fn a_linear_term_rises_by_its_slope() {
    let bias = alone(straight(), Linear::new(-2.5).unwrap());
    assert_eq!(values(&bias, 3.0), [-7.5, -2.5, 0.0]);
}

#[test]
fn a_one_sided_harmonic_acts_on_its_side_only() {
    let above = alone(straight(), OneSidedHarmonic::new(Side::Above, 2.0, 5.0).unwrap());
    assert_eq!(values(&above, 2.5), [0.625, 2.5, 5.0]);
    assert_eq!(values(&above, 1.5), [0.0, 0.0, 0.0]);
    let below = alone(straight(), OneSidedHarmonic::new(Side::Below, 2.0, 5.0).unwrap());
    assert_eq!(values(&below, 1.5), [0.625, -2.5, 5.0]);
    assert_eq!(values(&below, 2.5), [0.0, 0.0, 0.0]);
}

#[test]
fn a_flat_bottomed_harmonic_acts_from_the_edges_of_its_bottom() {
    let bias = alone(straight(), FlatBottomed::new(-1.0, 0.75, 4.0).unwrap());
    assert_eq!(values(&bias, -0.5), [0.0, 0.0, 0.0]);
    assert_eq!(values(&bias, 0.25), [0.5, 2.0, 4.0]);
    assert_eq!(values(&bias, -2.25), [0.5, -2.0, 4.0]);
    let bias = alone(torsion(), FlatBottomed::new(-150.0, 40.0, 0.125).unwrap());
    // 180 is on the bottom; 162 is 48 below the center.
    assert_eq!(values(&bias, 180.0), [0.0, 0.0, 0.0]);
    assert_eq!(values(&bias, 162.0), [4.0, -1.0, 0.125]);
}

#[test]
fn a_bias_without_terms_is_zero_everywhere() {
    let bias = Bias::new(Arc::from([straight(), torsion()]), Vec::new()).unwrap();
    assert_eq!(bias.n_axes(), 2);
    assert_eq!(bias.energy(&[-70.0, 12.5]), Ok(0.0));
    let mut gradient = [7.0; 2];
    bias.gradient(&[-70.0, 12.5], &mut gradient).unwrap();
    assert_eq!(gradient, [0.0; 2]);
    let mut second = [7.0; 4];
    bias.second_derivatives(&[-70.0, 12.5], &mut second).unwrap();
    assert_eq!(second, [0.0; 4]);
    assert_eq!(bias.lower_bound(&[-80.0, 0.0], &[5.0, 20.0]), 0.0);
    assert_eq!(bias.largest_curvature(1), 0.0);
    assert!(bias.breakpoints(0).is_empty());
    assert_eq!(bias.reference_position(1), None);
    assert!(!bias.has_limited_domain());
}

/// Two axes with several terms each, the terms of the axes interleaved.
fn mixed() -> Bias {
    let terms: [(usize, Shape); 5] = [
        (0, Linear::new(1.25).unwrap().into()),
        (1, FlatBottomed::new(30.0, 12.0, 0.5).unwrap().into()),
        (0, OneSidedHarmonic::new(Side::Below, 0.25, 6.0).unwrap().into()),
        (1, PeriodicHarmonic::new(-100.0, 0.25).unwrap().into()),
        (0, Harmonic::new(0.75, 9.0).unwrap().into()),
    ];
    let terms = terms.map(|(axis, shape)| Term { axis, shape });
    Bias::new(Arc::from([straight(), torsion()]), terms.to_vec()).unwrap()
}

#[test]
fn breakpoints_are_bounds_edges_and_antipodes_of_the_axis_asked_for() {
    assert_eq!(mixed().breakpoints(0), [0.25]);
    assert_eq!(mixed().breakpoints(1), [18.0, 42.0, 210.0, 80.0]);
}

#[test]
fn the_reference_position_is_the_first_center_along_the_axis() {
    assert_eq!(mixed().reference_position(0), Some(0.75));
    assert_eq!(mixed().reference_position(1), Some(30.0));
}

#[test]
fn largest_curvatures_of_terms_along_an_axis_add() {
    assert_eq!(mixed().largest_curvature(0), 15.0);
    assert_eq!(mixed().largest_curvature(1), 0.75);
}

#[test]
fn lower_bounds_hold_for_boxes_without_end() {
    let (low, high) = ([f64::NEG_INFINITY], [f64::INFINITY]);
    let bound = |shape: Shape, lower: &[f64], upper: &[f64]| alone(straight(), shape).lower_bound(lower, upper);
    let harmonic: Shape = Harmonic::new(1.5, 4.0).unwrap().into();
    assert_eq!(bound(harmonic.clone(), &low, &high), 0.0);
    assert_eq!(bound(harmonic.clone(), &[2.5], &high), 2.0);
    assert_eq!(bound(harmonic, &low, &[1.0]), 0.5);
    assert_eq!(bound(Linear::new(3.0).unwrap().into(), &[2.0], &high), 6.0);
    assert_eq!(bound(Linear::new(3.0).unwrap().into(), &low, &[2.0]), f64::NEG_INFINITY);
    assert_eq!(bound(Linear::new(-3.0).unwrap().into(), &low, &[2.0]), -6.0);
    assert_eq!(bound(Linear::new(0.0).unwrap().into(), &low, &high), 0.0);
    let wall: Shape = OneSidedHarmonic::new(Side::Above, 1.0, 2.0).unwrap().into();
    assert_eq!(bound(wall.clone(), &low, &high), 0.0);
    assert_eq!(bound(wall, &[4.0], &high), 9.0);
    let periodic = alone(torsion(), PeriodicHarmonic::new(10.0, 0.5).unwrap());
    assert_eq!(periodic.lower_bound(&[90.0], &high), 0.0);
}

#[test]
fn lower_bounds_on_a_periodic_axis_find_the_center_in_any_image() {
    let bias = alone(torsion(), PeriodicHarmonic::new(170.0, 0.5).unwrap());
    for (lower, upper) in [(160.0, 190.0), (-200.0, -180.0), (500.0, 540.0), (-170.0, 175.0)] {
        assert_eq!(bias.lower_bound(&[lower], &[upper]), 0.0, "{lower} to {upper}");
    }
    // From -160 to 140 the nearest point is 140, or 30 away; both bounds are low by rounding at most.
    let bound = bias.lower_bound(&[-150.0], &[140.0]);
    assert!(bound <= 225.0 && bound > 225.0 * (1.0 - 1e-12), "{bound}");
}

#[test]
fn a_bias_serializes_as_its_terms() {
    let value = serde_json::to_value(mixed()).unwrap();
    assert_eq!(
        value["terms"][1],
        serde_json::json!({
            "axis": 1, "shape": "flat_bottomed", "center": 30.0, "half_width": 12.0, "force_constant": 0.5
        })
    );
    assert_eq!(value["terms"][2]["side"], "below");
    assert_eq!(value["terms"][4]["shape"], "harmonic");
    assert!(value.get("axes").is_none());
}

#[test]
fn a_bias_knows_its_axes_and_terms() {
    let bias = mixed();
    assert_eq!(bias.axes()[1].name(), "torsion");
    assert_eq!(bias.terms().len(), 5);
    assert_eq!(bias.terms()[3].axis, 1);
    assert_eq!(bias, bias.clone());
}

#[test]
fn positions_that_are_not_numbers_have_no_number_for_an_energy() {
    for shape in [
        Harmonic::new(0.4, 9.0).unwrap().into(),
        Linear::new(1.5).unwrap().into(),
        OneSidedHarmonic::new(Side::Above, 0.4, 9.0).unwrap().into(),
        OneSidedHarmonic::new(Side::Below, 0.4, 9.0).unwrap().into(),
        Shape::from(FlatBottomed::new(0.4, 0.3, 9.0).unwrap()),
    ] {
        let bias = alone(straight(), shape.clone());
        assert!(bias.energy(&[f64::NAN]).unwrap().is_nan(), "{shape:?}");
    }
}

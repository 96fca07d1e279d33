//! What a bias refuses, and how it says so.

#![expect(clippy::unwrap_used, reason = "a test may stop at what it did not expect")]

use std::sync::Arc;

use spandrel_bias::units::PositionUnit;
use spandrel_bias::{
    Axis, Bias, BiasError, FlatBottomed, Harmonic, Interpolation, Linear, OneSidedHarmonic, OutsideRule,
    PeriodicHarmonic, Shape, Side, TableError, Tabulated, Term,
};

const NO_NUMBERS: [f64; 3] = [f64::NAN, f64::INFINITY, f64::NEG_INFINITY];

fn straight() -> Axis {
    Axis::new("distance", PositionUnit::Nanometer, None).unwrap()
}

fn torsion() -> Axis {
    Axis::new("torsion", PositionUnit::Degree, Some(360.0)).unwrap()
}

fn refusal(axis: Axis, shape: impl Into<Shape>) -> BiasError {
    let harmless: Shape = FlatBottomed::new(1.0, 0.5, 2.0).unwrap().into();
    let terms = [harmless, shape.into()].map(|shape| Term { axis: 0, shape });
    Bias::new(Arc::from([axis]), terms.to_vec()).unwrap_err()
}

#[test]
fn parameters_that_are_not_finite_are_refused_by_name() {
    for number in NO_NUMBERS {
        let fields = [
            (Harmonic::new(number, 2.0).unwrap_err(), "center"),
            (PeriodicHarmonic::new(number, 2.0).unwrap_err(), "center"),
            (Linear::new(number).unwrap_err(), "slope"),
            (OneSidedHarmonic::new(Side::Below, number, 2.0).unwrap_err(), "bound"),
            (FlatBottomed::new(number, 0.5, 2.0).unwrap_err(), "center"),
        ];
        for (error, name) in fields {
            assert!(matches!(error, BiasError::NotFinite { field, .. } if field == name), "{error:?}");
        }
    }
    assert_eq!(Linear::new(f64::INFINITY).unwrap_err().to_string(), "`slope` must be a finite number, found inf");
}

#[test]
fn force_constants_must_be_positive_and_finite() {
    for number in [0.0, -3.5].into_iter().chain(NO_NUMBERS) {
        for error in [
            Harmonic::new(1.5, number).unwrap_err(),
            PeriodicHarmonic::new(1.5, number).unwrap_err(),
            OneSidedHarmonic::new(Side::Above, 1.5, number).unwrap_err(),
            FlatBottomed::new(1.5, 0.5, number).unwrap_err(),
        ] {
            assert!(matches!(error, BiasError::ForceConstant { .. }), "{error:?}");
        }
    }
    assert_eq!(
        Harmonic::new(1.5, -3.5).unwrap_err().to_string(),
        "`force_constant` must be a positive, finite number, found -3.5; leave the term out where no \
         bias acted"
    );
}

#[test]
fn half_widths_must_not_be_negative() {
    for number in [-0.25].into_iter().chain(NO_NUMBERS) {
        let error = FlatBottomed::new(1.5, number, 2.0).unwrap_err();
        assert!(matches!(error, BiasError::HalfWidth { .. }), "{error:?}");
    }
    assert!(FlatBottomed::new(1.5, 0.0, 2.0).is_ok());
    assert_eq!(
        FlatBottomed::new(1.5, -0.25, 2.0).unwrap_err().to_string(),
        "`half_width` must be a finite number of 0 or more, found -0.25"
    );
}

#[test]
fn shapes_that_do_not_repeat_are_refused_on_an_axis_with_a_period() {
    let error = refusal(torsion(), Harmonic::new(40.0, 2.0).unwrap());
    assert_eq!(
        error.to_string(),
        "bias term 1 is a harmonic, which is ambiguous on axis `torsion` because it has a period; use a \
         periodic harmonic"
    );
    let error = refusal(torsion(), Linear::new(2.0).unwrap());
    assert!(matches!(&error, BiasError::PeriodNotAllowed { term: 1, .. }));
    let wall = OneSidedHarmonic::new(Side::Above, 40.0, 2.0).unwrap();
    let error = refusal(torsion(), wall);
    assert!(matches!(&error, BiasError::PeriodNotAllowed { axis, .. } if axis == "torsion"));
}

#[test]
fn a_periodic_harmonic_is_refused_on_a_straight_axis() {
    let error = refusal(straight(), PeriodicHarmonic::new(0.5, 2.0).unwrap());
    assert_eq!(
        error.to_string(),
        "bias term 1 is a periodic harmonic, but axis `distance` has no `period`; give the axis its \
         period, or use a harmonic"
    );
}

#[test]
fn a_flat_bottom_must_be_narrower_than_the_period() {
    let error = refusal(torsion(), FlatBottomed::new(20.0, 180.0, 2.0).unwrap());
    assert_eq!(
        error.to_string(),
        "`half_width` of bias term 1 must be below half the period of axis `torsion`, which is 360; \
         found 180"
    );
    let narrow = FlatBottomed::new(20.0, 179.0, 2.0).unwrap().into();
    let terms = vec![Term { axis: 0, shape: narrow }];
    assert!(Bias::new(Arc::from([torsion()]), terms).is_ok());
}

#[test]
fn terms_must_name_an_axis_that_exists() {
    let term = Term { axis: 2, shape: Linear::new(1.5).unwrap().into() };
    let error = Bias::new(Arc::from([straight(), torsion()]), vec![term]).unwrap_err();
    assert_eq!(error.to_string(), "`axis` of bias term 0 is 2, expected an index below 2, the number of axes");
    assert_eq!(Bias::new(Arc::from([]), Vec::new()).unwrap_err(), BiasError::NoAxes);
}

fn table(axis: &Axis, positions: &[f64], energies: &[f64]) -> Result<Tabulated, BiasError> {
    Tabulated::new(axis, positions.to_vec(), energies.to_vec(), Interpolation::Cubic, OutsideRule::Hold)
}

#[test]
fn columns_of_a_table_must_be_equally_long_and_long_enough() {
    let axis = straight();
    assert_eq!(
        table(&axis, &[0.5, 1.5, 2.5], &[3.0, 4.0]).unwrap_err().to_string(),
        "a bias table needs one energy a position, found 3 positions and 2 energies"
    );
    assert_eq!(
        table(&axis, &[0.5, 1.5], &[3.0, 4.0]).unwrap_err().to_string(),
        "a bias table with this interpolation needs at least 3 rows, found 2"
    );
    let linear = |positions: Vec<f64>, energies: Vec<f64>| {
        Tabulated::new(&straight(), positions, energies, Interpolation::Linear, OutsideRule::Hold)
    };
    assert!(linear(vec![0.5, 1.5], vec![3.0, 4.0]).is_ok());
    assert_eq!(linear(vec![0.5], vec![3.0]).unwrap_err(), TableError::TooShort { found: 1, needed: 2 }.into());
    assert!(linear(vec![], vec![]).is_err());
}

#[test]
fn numbers_of_a_table_must_be_finite() {
    for number in NO_NUMBERS {
        let error = table(&straight(), &[0.5, 1.5, number], &[3.0, 4.0, 7.0]).unwrap_err();
        assert!(matches!(error, BiasError::Table(TableError::NotFinite { row: 2, column: "position", .. })));
        let error = table(&straight(), &[0.5, 1.5, 2.5], &[3.0, number, 7.0]).unwrap_err();
        assert!(matches!(error, BiasError::Table(TableError::NotFinite { row: 1, column: "energy", .. })));
    }
    assert_eq!(
        table(&straight(), &[0.5, 1.5, 2.5], &[3.0, 4.0, f64::NAN]).unwrap_err().to_string(),
        "`energy` in row 3 of a bias table must be a finite number, found NaN"
    );
}

#[test]
fn positions_of_a_table_must_increase() {
    for second in [0.5, 0.25] {
        let error = table(&straight(), &[0.5, second, 2.5], &[3.0, 4.0, 5.0]).unwrap_err();
        let expected = TableError::NotIncreasing { row: 1, previous: 0.5, found: second };
        assert_eq!(error, expected.into());
    }
    assert_eq!(
        table(&straight(), &[0.5, 2.5, 1.5], &[3.0, 4.0, 5.0]).unwrap_err().to_string(),
        "`position` in row 3 of a bias table must be above that of the row before, 2.5, found 1.5; sort \
         the table and keep each position once"
    );
}

#[test]
fn a_table_must_not_go_around_more_than_once() {
    let error = table(&torsion(), &[-180.0, 20.0, 185.0], &[3.0, 4.0, 5.0]).unwrap_err();
    assert_eq!(
        error.to_string(),
        "a bias table on axis `torsion` must span at most the period, 360, found 365; keep one period of \
         it"
    );
}

#[test]
fn a_row_within_rounding_of_the_closing_one_is_refused() {
    // Moving the last row onto 180 would put it at, or below, the one before.
    let error = table(&torsion(), &[-180.0, 20.0, 180.0005, 180.001], &[3.0, 4.0, 5.0, 3.0]);
    assert!(matches!(error.unwrap_err(), BiasError::Table(TableError::NotIncreasing { row: 3, .. })));
}

#[test]
fn a_table_serves_only_axes_of_the_period_it_was_prepared_for() {
    let prepared = table(&straight(), &[-170.0, 20.0, 150.0], &[3.0, 4.0, 5.0]).unwrap();
    assert_eq!(
        refusal(torsion(), prepared).to_string(),
        "the table of bias term 1 was prepared for an axis with no period, but axis `torsion` has period \
         360; prepare it for the axis it acts on"
    );
}

//! Spellings, constants and conversions of units.

#![expect(clippy::unwrap_used, reason = "a test may stop at what it did not expect")]

use std::f64::consts::PI;

use proptest::prelude::*;
use proptest::test_runner::{Config, RngSeed};
use spandrel_bias::units::{
    AVOGADRO, BOLTZMANN, CALORIE, ELEMENTARY_CHARGE, EnergyUnit, FARADAY, ForceConstantUnit, ForceUnit, GAS_CONSTANT,
    PositionUnit, Temperature, TimeUnit, UnitError,
};

/// A handful of roundings.
const ROUNDING: f64 = 1e-14;

#[track_caller]
fn assert_close(found: f64, expected: f64) {
    assert!((found - expected).abs() <= ROUNDING * expected.abs(), "expected {expected}, found {found}");
}

#[test]
fn position_units_are_read_in_their_usual_spellings() {
    let spellings = [
        (PositionUnit::Nanometer, "nm NM nanometer nanometers nanometre"),
        (PositionUnit::Angstrom, "Å \u{212b} A\u{30a} å A a angstrom Angstroms ångström"),
        (PositionUnit::Degree, "deg degree Degrees °"),
        (PositionUnit::Radian, "rad radian radians"),
        (PositionUnit::None, "none 1 unitless dimensionless"),
    ];
    for (unit, words) in spellings {
        for word in words.split(' ') {
            assert_eq!(format!(" {word} ").parse(), Ok(unit), "{word}");
        }
    }
}

#[test]
fn time_units_are_read_in_their_usual_spellings() {
    let spellings = [
        (TimeUnit::Femtosecond, "fs femtosecond femtoseconds"),
        (TimeUnit::Picosecond, "ps PS picosecond picoseconds"),
        (TimeUnit::Nanosecond, "ns nanosecond nanoseconds"),
        (TimeUnit::Microsecond, "us \u{b5}s \u{3bc}s microsecond microseconds"),
    ];
    for (unit, words) in spellings {
        for word in words.split(' ') {
            assert_eq!(word.parse(), Ok(unit), "{word}");
        }
    }
}

#[test]
fn energy_units_are_read_in_their_usual_spellings() {
    let spellings: [(EnergyUnit, &[&str]); 4] = [
        (EnergyUnit::KilojoulePerMole, &["kJ/mol", "kj/mol", "kJ mol^-1", "kJ·mol⁻¹", "kJ mol-1", "kilojoule / mole"]),
        (EnergyUnit::KilocaloriePerMole, &["kcal/mol", "Kcal/mol", "mol^-1 kcal", "kcal*mol**-1"]),
        (EnergyUnit::Kt, &["kT", "kt", "kBT", "k_BT", "RT"]),
        (EnergyUnit::ElectronVolt, &["eV", "ev", "electronvolt"]),
    ];
    for (unit, words) in spellings {
        for word in words {
            assert_eq!(word.parse(), Ok(unit), "{word}");
        }
    }
}

#[test]
fn force_constant_units_are_read_in_their_usual_spellings() {
    use EnergyUnit::{ElectronVolt, KilocaloriePerMole, KilojoulePerMole, Kt};
    let spellings = [
        ("kJ/mol/rad^2", KilojoulePerMole, PositionUnit::Radian),
        ("kJ/mol/rad²", KilojoulePerMole, PositionUnit::Radian),
        ("kJ/(mol nm^2)", KilojoulePerMole, PositionUnit::Nanometer),
        ("kJ/(mol·nm²)", KilojoulePerMole, PositionUnit::Nanometer),
        ("kJ/mol/nm/nm", KilojoulePerMole, PositionUnit::Nanometer),
        ("kJ/((mol)(nm)nm)", KilojoulePerMole, PositionUnit::Nanometer),
        ("kJ mol^-1 nm^-2", KilojoulePerMole, PositionUnit::Nanometer),
        ("kJ mol⁻¹ nm⁻²", KilojoulePerMole, PositionUnit::Nanometer),
        ("kcal/mol/Å^2", KilocaloriePerMole, PositionUnit::Angstrom),
        ("kcal/mol/angstrom**2", KilocaloriePerMole, PositionUnit::Angstrom),
        ("kcal/mol/A2", KilocaloriePerMole, PositionUnit::Angstrom),
        ("kT/deg^2", Kt, PositionUnit::Degree),
        ("eV/A^2", ElectronVolt, PositionUnit::Angstrom),
        ("kJ/mol", KilojoulePerMole, PositionUnit::None),
        ("kJ/mol/1^2", KilojoulePerMole, PositionUnit::None),
        ("kT", Kt, PositionUnit::None),
    ];
    for (text, energy, per) in spellings {
        assert_eq!(text.parse(), Ok(ForceConstantUnit { energy, per }), "{text}");
    }
    let force = ForceUnit { energy: KilocaloriePerMole, per: PositionUnit::Angstrom };
    for text in ["kcal/mol/Å", "kcal/(mol A)", "kcal mol-1 angstrom^-1"] {
        assert_eq!(text.parse(), Ok(force), "{text}");
    }
}

#[test]
fn texts_that_are_no_unit_of_the_kind_are_refused() {
    for text in ["", "m", "nmm", "n m", "nm^2", "2", "11"] {
        assert!(text.parse::<PositionUnit>().is_err(), "{text}");
    }
    for text in ["", "s", "ms", "fs ps", "steps"] {
        assert!(text.parse::<TimeUnit>().is_err(), "{text}");
    }
    // Without "per mole" a kilojoule could mean a system's, a mole's or a particle's.
    for text in ["", "kJ", "kcal", "J/mol", "kJ*mol", "kT/mol", "eV/mol", "kJ/mol/nm", "kJ kcal/mol", "kJ/kT"] {
        assert!(text.parse::<EnergyUnit>().is_err(), "{text}");
    }
    for text in [
        "kJ/mol nm^2", // the nanometers would multiply
        "kJ/mol/nm",
        "kJ/mol/nm^3",
        "kJ/mol/nm^22",
        "kJ/mol/nm/deg",
        "kJ^2/mol/nm^2",
        "kJ/mol/nm^",
        "kJ/mol/nm^-",
        "kJ//mol/nm^2",
        "kJ/mol/nm^2/",
        "kJ/(mol nm^2",
        "kJ/mol) nm^2",
        "kJ/(mol nm^2/)",
        "kJ/mol/12",
        "kJ/mol/nm²²",
        "nm^2",
        "kJ;mol",
    ] {
        assert!(text.parse::<ForceConstantUnit>().is_err(), "{text}");
    }
    for text in ["kJ/mol/nm^2", "kJ mol^-1 nm", "nm", "kJ/mol/nm^", "kJ/mol/nm-"] {
        assert!(text.parse::<ForceUnit>().is_err(), "{text}");
    }
}

#[test]
fn every_unit_reads_back_from_the_symbol_that_it_shows_and_serializes_as() {
    for unit in PositionUnit::ALL {
        assert_eq!(unit.to_string().parse(), Ok(unit));
        assert_eq!(serde_json::to_value(unit).unwrap(), unit.symbol());
        for energy in EnergyUnit::ALL {
            assert_eq!(energy.to_string().parse(), Ok(energy));
            assert_eq!(serde_json::to_value(energy).unwrap(), energy.symbol());
            let force = ForceUnit { energy, per: unit };
            assert_eq!(force.to_string().parse(), Ok(force));
            assert_eq!(serde_json::to_value(force).unwrap(), force.to_string());
            let constant = ForceConstantUnit { energy, per: unit };
            assert_eq!(constant.to_string().parse(), Ok(constant));
            assert_eq!(serde_json::to_value(constant).unwrap(), constant.to_string());
        }
    }
    for unit in TimeUnit::ALL {
        assert_eq!(unit.to_string().parse(), Ok(unit));
        assert_eq!(serde_json::to_value(unit).unwrap(), unit.symbol());
    }
}

#[test]
fn thermal_energy_follows_from_the_defining_constants() {
    let kelvin = 310.15;
    let temperature = Temperature::new(kelvin).unwrap();
    let joule_per_particle = BOLTZMANN * kelvin;
    let joule_per_mole = joule_per_particle * AVOGADRO;
    assert_close(temperature.thermal_energy(EnergyUnit::KilojoulePerMole), joule_per_mole / 1000.0);
    assert_close(temperature.thermal_energy(EnergyUnit::KilocaloriePerMole), joule_per_mole / CALORIE / 1000.0);
    assert_close(temperature.thermal_energy(EnergyUnit::ElectronVolt), joule_per_particle / ELEMENTARY_CHARGE);
    assert_eq!(temperature.thermal_energy(EnergyUnit::Kt).to_bits(), 1f64.to_bits());
}

#[test]
fn molar_constants_have_their_codata_2022_values() {
    // CODATA 2022: R = 8.314 462 618... J/(mol K), F = 96 485.332 12... C/mol; both exact, here as printed.
    assert_eq!(format!("{:.9}", GAS_CONSTANT * 1000.0), "8.314462618");
    assert_eq!(format!("{:.5}", FARADAY * 1000.0), "96485.33212");
}

#[test]
fn a_force_constant_per_squared_radian_serves_an_axis_in_degrees() {
    let temperature = Temperature::new(298.15).unwrap();
    let unit: ForceConstantUnit = "kJ/mol/rad^2".parse().unwrap();
    let reduced = unit.to_reduced(100.0, PositionUnit::Degree, temperature).unwrap();
    let per_squared_degree = 100.0 * (PI / 180.0) * (PI / 180.0);
    assert_close(reduced, per_squared_degree / (GAS_CONSTANT * 298.15));
}

#[test]
fn a_force_per_nanometer_is_a_tenth_of_that_per_angstrom() {
    let temperature = Temperature::new(273.4).unwrap();
    let unit: ForceUnit = "kT/nm".parse().unwrap();
    assert_close(unit.to_reduced(37.0, PositionUnit::Angstrom, temperature).unwrap(), 3.7);
    assert_close(unit.from_reduced(3.7, PositionUnit::Angstrom, temperature).unwrap(), 37.0);
}

#[test]
fn time_units_stand_a_thousand_apart() {
    assert_close(TimeUnit::Femtosecond.factor_to(TimeUnit::Picosecond), 1e-3);
    assert_close(TimeUnit::Nanosecond.factor_to(TimeUnit::Femtosecond), 1e6);
    assert_close(TimeUnit::Picosecond.factor_to(TimeUnit::Microsecond), 1e-6);
    assert_close(TimeUnit::Microsecond.factor_to(TimeUnit::Nanosecond), 1e3);
}

#[test]
fn positions_convert_within_lengths_and_within_angles_only() {
    use PositionUnit::{Angstrom, Degree, Nanometer, None, Radian};
    assert_close(Nanometer.factor_to(Angstrom).unwrap(), 10.0);
    assert_close(Angstrom.factor_to(Nanometer).unwrap(), 0.1);
    assert_close(Degree.factor_to(Radian).unwrap(), PI / 180.0);
    assert_close(Radian.factor_to(Degree).unwrap(), 180.0 / PI);
    for from in PositionUnit::ALL {
        assert_eq!(from.factor_to(from), Ok(1.0));
        for to in PositionUnit::ALL {
            if from.dimension() != to.dimension() {
                assert_eq!(from.factor_to(to), Err(UnitError::Incompatible { from, to }));
            }
        }
    }
    assert_ne!(Nanometer.dimension(), Degree.dimension());
    assert_ne!(None.dimension(), Radian.dimension());
}

#[test]
fn only_positive_finite_temperatures_are_accepted() {
    for kelvin in [0.0, -0.0, -300.0, f64::NAN, f64::INFINITY, f64::NEG_INFINITY] {
        assert!(matches!(Temperature::new(kelvin), Err(UnitError::Temperature { .. })));
    }
    let temperature = Temperature::new(277.5).unwrap();
    assert_eq!(temperature.kelvin().to_bits(), 277.5f64.to_bits());
    assert_eq!(temperature.to_string(), "277.5 K");
    assert_eq!(serde_json::to_string(&temperature).unwrap(), "277.5");
}

#[test]
fn messages_name_what_was_found_and_what_is_allowed() {
    let message = |error: UnitError| error.to_string();
    assert_eq!(
        message("furlong".parse::<PositionUnit>().unwrap_err()),
        "unknown position unit `furlong`: expected one of `nm`, `angstrom`, `deg`, `rad` or `none`"
    );
    assert_eq!(
        message("kJ".parse::<EnergyUnit>().unwrap_err()),
        "unknown energy unit `kJ`: expected one of `kJ/mol`, `kcal/mol`, `kT` or `eV`"
    );
    assert_eq!(
        message("ms".parse::<TimeUnit>().unwrap_err()),
        "unknown time unit `ms`: expected one of `fs`, `ps`, `ns` or `us`"
    );
    assert_eq!(
        message("kT/nm".parse::<ForceConstantUnit>().unwrap_err()),
        "unknown force constant unit `kT/nm`: expected an energy (`kJ/mol`, `kcal/mol`, `kT` or `eV`) \
         over a squared position (`nm^2`, `angstrom^2`, `deg^2`, `rad^2`, or nothing on an axis without \
         a unit), such as `kJ/mol/nm^2`"
    );
    assert_eq!(
        message("N".parse::<ForceUnit>().unwrap_err()),
        "unknown force unit `N`: expected an energy (`kJ/mol`, `kcal/mol`, `kT` or `eV`) over a position \
         (`nm`, `angstrom`, `deg`, `rad`, or nothing on an axis without a unit), such as `kJ/mol/nm`"
    );
    assert_eq!(
        message(PositionUnit::Nanometer.factor_to(PositionUnit::Degree).unwrap_err()),
        "`nm` does not convert to `deg`: expected two lengths, two angles or two pure numbers, found a \
         length and an angle; give both in units of the same kind"
    );
    assert_eq!(
        message(Temperature::new(-4.0).unwrap_err()),
        "`temperature` must be a positive, finite number of kelvin, found -4"
    );
}

/// A fixed seed: the same cases on every machine.
fn config() -> Config {
    Config { cases: 1000, failure_persistence: None, rng_seed: RngSeed::Fixed(20_260_418), ..Config::default() }
}

proptest! {
    #![proptest_config(config())]

    #[test]
    fn values_survive_the_way_into_kt_and_back(
        value in -900.0..900.0f64,
        kelvin in 40.0..1200.0f64,
        energy in prop::sample::select(EnergyUnit::ALL.to_vec()),
        units in prop::sample::select(PositionUnit::ALL.to_vec())
            .prop_flat_map(|unit| {
                let same: Vec<PositionUnit> = PositionUnit::ALL
                    .into_iter()
                    .filter(|other| other.dimension() == unit.dimension())
                    .collect();
                (Just(unit), prop::sample::select(same))
            }),
    ) {
        let temperature = Temperature::new(kelvin).unwrap();
        let (axis, per) = units;
        let close = |found: f64| (found - value).abs() <= ROUNDING * value.abs();
        prop_assert!(close(energy.from_reduced(energy.to_reduced(value, temperature), temperature)));
        prop_assert!(close(value * axis.factor_to(per).unwrap() * per.factor_to(axis).unwrap()));
        let force = ForceUnit { energy, per };
        let reduced = force.to_reduced(value, axis, temperature).unwrap();
        prop_assert!(close(force.from_reduced(reduced, axis, temperature).unwrap()));
        let constant = ForceConstantUnit { energy, per };
        let reduced = constant.to_reduced(value, axis, temperature).unwrap();
        prop_assert!(close(constant.from_reduced(reduced, axis, temperature).unwrap()));
    }

    #[test]
    fn a_harmonic_has_one_energy_whatever_units_it_is_written_in(
        displacement in 0.07..4.0f64, constant in 0.3..700.0f64, kelvin in 90.0..900.0f64,
        energy in prop::sample::select(EnergyUnit::ALL.to_vec()),
    ) {
        // The same restraint, with its force constant per nm² and its axis once in nm and once in Å.
        let temperature = Temperature::new(kelvin).unwrap();
        let unit = ForceConstantUnit { energy, per: PositionUnit::Nanometer };
        let in_unit = |axis: PositionUnit| -> f64 {
            let displacement = displacement * PositionUnit::Nanometer.factor_to(axis).unwrap();
            let constant = unit.to_reduced(constant, axis, temperature).unwrap();
            0.5 * constant * displacement * displacement
        };
        let expected = energy.to_reduced(0.5 * constant * displacement * displacement, temperature);
        prop_assert!((in_unit(PositionUnit::Nanometer) - expected).abs() <= ROUNDING * expected);
        prop_assert!((in_unit(PositionUnit::Angstrom) - expected).abs() <= ROUNDING * expected);
    }

    #[test]
    fn reading_a_unit_never_panics(text in "\\PC{0,24}|[kJmolnrad/()^*1-9² -]{0,40}") {
        let _ = text.parse::<PositionUnit>();
        let _ = text.parse::<TimeUnit>();
        let _ = text.parse::<EnergyUnit>();
        let _ = text.parse::<ForceUnit>();
        let _ = text.parse::<ForceConstantUnit>();
    }
}

//! The reference data agree with themselves and with this crate's own independent formulas.
#![expect(clippy::unwrap_used, reason = "a missing or broken reference file fails the test")]

use std::path::Path;

use spandrel_testkit::{DensityOfStates, Table, autocorrelation, tolerance};

fn read(name: &str) -> String {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("../../tests/reference");
    std::fs::read_to_string(folder.join(name)).unwrap()
}

fn density(size: u32) -> DensityOfStates {
    read(&format!("ising/density_{size}.csv")).parse().unwrap()
}

#[test]
fn ising_states_are_as_many_as_spin_patterns() {
    for size in [16, 32] {
        let total = -density(size).reduced_free_energy(0.0);
        let expected = f64::from(size * size) * std::f64::consts::LN_2;
        assert!((total - expected).abs() < tolerance::STORED_DIGITS, "{size}: {total}");
    }
}

#[test]
fn ising_free_energies_agree_with_the_product_formula() {
    let table: Table = read("ising/free_energy.csv").parse().unwrap();
    let couplings = table.column("coupling").unwrap();
    for size in [16, 32] {
        let (states, expected) = (density(size), table.column(&format!("minus_ln_z_{size}")).unwrap());
        for (coupling, expected) in couplings.iter().zip(expected) {
            let difference = states.reduced_free_energy(*coupling) - expected;
            assert!(difference.abs() < tolerance::STORED_DIGITS, "{size} at {coupling}: {difference}");
        }
    }
}

/// Far above the critical temperature a torus of 32 sites differs from the infinite lattice by less than (2K)³².
#[test]
fn ising_free_energy_per_site_agrees_with_the_infinite_lattice_at_weak_coupling() {
    let table: Table = read("ising/free_energy.csv").parse().unwrap();
    let infinite = table.column("minus_ln_z_per_site_infinite").unwrap()[0];
    let finite = density(32).reduced_free_energy(0.1) / 1024.0;
    assert!((finite - infinite).abs() < 1e-13);
}

/// The gradient of the likelihood: at the stored f every window answers for as many samples as it has.
#[test]
fn dense_free_energies_satisfy_the_likelihood_equations() {
    let samples: Table = read("dense-likelihood/samples.csv").parse().unwrap();
    let free_energies: Table = read("dense-likelihood/f.csv").parse().unwrap();
    let f = free_energies.column("f_kT").unwrap();
    let windows: Vec<Vec<f64>> = read("dense-likelihood/windows.csv")
        .lines()
        .skip(1)
        .map(|line| line.split(',').skip(2).map(|field| field.parse().unwrap()).collect())
        .collect();
    let mut answered = vec![0.0; f.len()];
    for x in samples.column("x_nm").unwrap() {
        let terms: Vec<f64> = windows
            .iter()
            .zip(&f)
            .map(|(window, f)| {
                let [center, force_constant, slope, n_samples] = window[..] else { unreachable!("four numbers") };
                n_samples * (f - 0.5 * force_constant * (x - center).powi(2) - slope * x).exp()
            })
            .collect();
        let total: f64 = terms.iter().sum();
        for (sum, term) in answered.iter_mut().zip(&terms) {
            *sum += term / total;
        }
    }
    for (window, answered) in windows.iter().zip(answered) {
        assert!((answered - window[3]).abs() < tolerance::STORED_DIGITS * window[3], "{answered} of {}", window[3]);
    }
}

#[test]
fn butane_torsion_files_are_complete() {
    let names: Vec<String> = read("butane-torsion/windows.csv")
        .lines()
        .skip(1)
        .map(|line| line.split(',').next().unwrap().to_owned())
        .collect();
    assert_eq!(names.len(), 24);
    for name in names {
        let text = read(&format!("butane-torsion/{name}"));
        let rows = text.lines().filter(|line| !line.starts_with('#'));
        assert!(rows.clone().all(|row| row.split_whitespace().all(|field| field.parse::<f64>().is_ok())));
        assert_eq!(rows.count(), 4000, "{name}");
    }
    let truth: Vec<f64> = read("butane-torsion/truth.csv")
        .lines()
        .skip(1)
        .map(|line| line.split(',').nth(1).unwrap().parse().unwrap())
        .collect();
    // The torsion of Ryckaert & Bellemans 1975 at the bin middles.
    let coefficients = [9.278_940, 12.155_744, -13.120_222, -3.059_722, 26.240_444, -31.495_184];
    for (bin, truth) in (0..).zip(truth) {
        let cosine = (-178.5 + 3.0 * f64::from(bin) - 180.0).to_radians().cos();
        let energy: f64 = (0..).zip(coefficients).map(|(power, c)| c * cosine.powi(power)).sum();
        // Six decimals were written, and six of each coefficient.
        assert!((energy - truth).abs() < 4e-6, "bin {bin}: {energy} against {truth}");
    }
}

/// National Institute of Standards and Technology, Statistical Reference Datasets, Lew.
#[test]
fn autocorrelation_agrees_with_the_certified_value() {
    let series: Vec<f64> = read("nist-strd/lew.txt").lines().map(|line| line.trim().parse().unwrap()).collect();
    assert_eq!(series.len(), 200);
    let found = autocorrelation(&series, 1)[1];
    assert!((found / -0.307_304_800_605_679 - 1.0).abs() < tolerance::CERTIFIED_DIGITS_RELATIVE, "{found}");
}

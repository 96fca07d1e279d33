//! The commented jobs that are shipped can be loaded, and mean what they say.

use std::path::{Path, PathBuf};

use spandrel_bias::Shape;
use spandrel_bias::units::{GAS_CONSTANT, PositionUnit};
use spandrel_cli::job::{AuxiliaryRole, Job, Setting, load};
use spandrel_ingest::{Discard, Separator, TimeSource};
use spandrel_solver::profile::Zero;

/// Rounding of a few operations on numbers of order one.
const ROUNDING: f64 = 1e-12;

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("../../config-examples")
}

fn example(name: &str) -> Job {
    load(&folder().join(name)).unwrap_or_else(|problems| panic!("{problems}"))
}

fn close(a: f64, b: f64) -> bool {
    (a - b).abs() <= ROUNDING * b.abs().max(1.0)
}

#[test]
fn every_example_loads() {
    let mut names: Vec<PathBuf> = std::fs::read_dir(folder())
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| path.extension().is_some_and(|extension| extension == "toml"))
        .collect();
    names.sort();
    assert_eq!(names.len(), 10, "{names:?}");
    for name in names {
        let job = load(&name).unwrap_or_else(|problems| panic!("{problems}"));
        assert!(job.windows.iter().all(|window| !window.replicas.is_empty()));
    }
}

#[test]
fn force_constants_are_in_kt_at_the_temperature_of_the_job() {
    let job = example("windows-one-by-one.toml");
    // 500 kJ/mol/nm² over R T, the same by either convention.
    let expected = 500.0 / (GAS_CONSTANT * 310.0);
    for name in ["z1", "z3"] {
        let window = job.windows.iter().find(|window| window.name == name).unwrap();
        let Shape::Harmonic(harmonic) = &window.bias.terms()[0].shape else { panic!("not harmonic") };
        assert!(close(harmonic.force_constant(), expected), "{name}");
    }
}

#[test]
fn a_window_keeps_its_own_discard() {
    let job = example("windows-one-by-one.toml");
    let discards: Vec<Discard> = job.windows.iter().map(|window| window.selection.discard).collect();
    assert_eq!(discards[1], Discard::Time(40.0));
    assert_eq!(discards[2], Discard::Fraction(0.1));
}

#[test]
fn the_same_bias_in_four_units_has_the_same_energy() {
    let job = example("mixed-units.toml");
    assert_eq!(job.axes[0].unit(), PositionUnit::Angstrom);
    assert!(close(job.columns[0].factor, 10.0));
    assert_eq!(job.windows[0].selection.discard, Discard::Time(50.0));
    for (window, center) in job.windows.iter().zip([-3.0, -1.5, 0.0, 1.5]) {
        // 5 kJ/mol/Å² at 0.7 Å from the center.
        let expected = 0.5 * 5.0 * 0.49 / (GAS_CONSTANT * 310.0);
        let energy = window.bias.energy(&[center + 0.7]).unwrap();
        assert!(close(energy, expected), "{}: {energy} {expected}", window.name);
    }
}

#[test]
fn a_table_gives_every_window_its_own_center_and_leaves_out_what_is_excluded() {
    let job = example("windows-from-table.toml");
    assert_eq!(job.windows.len(), 9);
    assert_eq!(job.excluded.windows, ["spare1"]);
    let centers: Vec<f64> = job.windows.iter().filter_map(|window| window.bias.reference_position(0)).collect();
    assert_eq!(centers, [-0.6, -0.45, -0.3, -0.15, 0.0, 0.15, 0.3, 0.45, 0.6]);
    assert!(job.windows[4].replicas[0][0].ends_with("data/pore/z4.txt"));
}

#[test]
fn replicas_and_segments_come_from_lists_patterns_and_tables() {
    let job = example("replicas-and-segments.toml");
    let shape: Vec<(&str, Vec<usize>, Vec<usize>)> = job
        .windows
        .iter()
        .map(|window| {
            let segments = window.replicas.iter().map(Vec::len).collect();
            (window.name.as_str(), window.replica_numbers.clone(), segments)
        })
        .collect();
    assert_eq!(
        shape,
        [
            ("a", vec![1, 2], vec![2, 2]),
            ("b", vec![1], vec![2]),
            ("c", vec![1], vec![2]),
            ("d", vec![1, 2], vec![2, 2]),
            ("e", vec![1, 2], vec![2, 2]),
        ]
    );
    assert_eq!(job.excluded.replicas[0].replica, 2);
}

#[test]
fn a_table_of_energies_is_interpolated_between_its_rows() {
    let job = example("tabulated-bias.toml");
    // Rows of bias2.txt: 0.19 nm has 900 · 0.19⁴ = 1.1729 kJ/mol, 0.21 nm has 900 · 0.21⁴ = 1.7503 kJ/mol (as printed).
    let energy = job.windows[2].bias.energy(&[0.195]).unwrap();
    let expected = (1.1729 + 0.25 * (1.7503 - 1.1729)) / (GAS_CONSTANT * 310.0);
    assert!(close(energy, expected), "{energy} {expected}");
    assert!(job.windows[2].bias.energy(&[1.06]).is_err());
    let tables = job.auxiliary.iter().filter(|file| file.role == AuxiliaryRole::BiasTable);
    assert_eq!(tables.count(), 5);
}

#[test]
fn a_torsion_is_divided_from_minus_half_a_period() {
    let job = example("periodic-torsion.toml");
    assert_eq!(job.windows[0].name, "angle-168");
    assert_eq!(job.profile.bins.n_bins_in_period(), Some(60));
    assert!(close(job.profile.bins.lower_edge(0), -180.0));
    assert_eq!(job.profile.request.last_bin, Some(59));
    // 60 kJ/mol/rad² at 20 degrees from the center, through the end of the period.
    let expected = 0.5 * 60.0 * 20f64.to_radians().powi(2) / (GAS_CONSTANT * 310.0);
    assert!(close(job.windows[0].bias.energy(&[172.0]).unwrap(), expected));
    assert_eq!(job.layout.time, TimeSource::Interval(2.0));
}

#[test]
fn the_terms_of_a_window_add_up() {
    let job = example("walls.toml");
    let between = job.windows.iter().find(|window| window.name == "between").unwrap();
    let wall = 0.5 * 1000.0 * 0.01 / (GAS_CONSTANT * 310.0);
    assert!(close(between.bias.energy(&[0.35]).unwrap(), wall));
    assert!(close(between.bias.energy(&[-0.35]).unwrap(), wall));
    assert!(close(between.bias.energy(&[0.2]).unwrap(), 0.0));
}

#[test]
fn a_slope_is_that_of_the_energy() {
    let job = example("constant-force.toml");
    let bias = &job.windows[0].bias;
    let rise = bias.energy(&[0.6]).unwrap() - bias.energy(&[0.1]).unwrap();
    assert!(close(rise, -12.0 / (GAS_CONSTANT * 310.0)));
}

#[test]
fn a_free_window_has_no_energy_anywhere() {
    let job = example("unbiased-window.toml");
    assert!(job.windows[0].bias.terms().is_empty());
    assert_eq!(job.windows.len(), 3);
    assert_eq!(job.excluded.windows, ["barrier2"]);
    assert_eq!(job.windows[1].selection.stride.get(), 2);
    assert_eq!(job.profile.request.first_bin, None);
}

#[test]
fn columns_can_be_named_and_the_solver_told() {
    let job = example("comma-separated-gzip.toml");
    assert_eq!(job.layout.separator, Separator::Comma);
    assert_eq!(job.windows[6].name, "z6");
    assert_eq!(job.solver.seed, 7);
    assert_eq!(job.solver.options.method.name(), "trust-region");
    assert_eq!((job.profile.request.first_bin, job.profile.request.last_bin), (Some(0), Some(49)));
}

#[test]
fn the_resolved_job_has_every_default_and_no_absolute_path() {
    let job = load(&folder().canonicalize().unwrap().join("windows-one-by-one.toml")).unwrap();
    let resolved = job.resolved();
    assert_eq!(resolved.profile.zero, Zero::Range { from: -0.7, to: -0.6 });
    assert_eq!(resolved.output_folder, "result/windows-one-by-one");
    assert_eq!(resolved.windows[3].bias[0].get("convention"), Some(&Setting::Text("full".to_owned())));
    assert_eq!(resolved.windows[3].bias[0].get("center_unit"), Some(&Setting::Text("nm".to_owned())));
    assert_eq!(resolved.windows[3].replicas[0].segments, ["data/pore/z3.txt"]);
    let text = serde_json::to_string_pretty(&resolved).unwrap();
    assert!(!text.contains(folder().canonicalize().unwrap().to_str().unwrap()), "{text}");
    assert!(text.contains("\"seed\": 1"), "{text}");
}

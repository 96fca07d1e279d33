//! An invented experiment: a small solute is carried along z, the normal of a membrane-like slab, in 31 restrained windows.
//!
//! Water lies on both sides; the two faces of the slab differ, and so do the shallow minima before them. One window was
//! continued in a second file that repeats some frames, and one was started twice.

use std::fmt::Write as _;

use spandrel_testkit::{Correlation, KnownSystem, OneDimensionalSystem, Potential, Restraint, SystemError, Window};

const SEED: u64 = 20_261_201;
const TEMPERATURE: f64 = 310.0;
/// Molar gas constant in kJ/mol/K times the temperature. It stands here because this crate depends on no other one of ours.
const THERMAL_ENERGY: f64 = 8.314_462_618_153_24e-3 * TEMPERATURE;
/// Time between frames, ps.
const INTERVAL: u32 = 2;

const N_WINDOWS: u32 = 31;
const FRAMES: usize = 2500;
/// This window's first file ends, killed, after so many frames; the restart went back to an earlier one.
const CONTINUED: usize = 11;
const LAST_FRAME_BEFORE_THE_BREAK: usize = 1600;
const FIRST_FRAME_AFTER_THE_BREAK: usize = 1575;
/// This window was started twice, with fewer frames each time.
const STARTED_TWICE: usize = 17;
const FRAMES_OF_A_START: usize = 1400;

/// Free energy along z (nm), kJ/mol, zero in the water: a barrier, a shoulder and two minima at the faces.
fn free_energy(z: f64) -> f64 {
    let bump = |height: f64, center: f64, width: f64| height * (-((z - center) / width).powi(2)).exp();
    bump(19.0, 0.07, 0.46) + bump(2.6, 0.61, 0.19) + bump(-4.3, -0.93, 0.21) + bump(-2.4, 1.06, 0.24)
}

/// Center (nm) and force constant (kJ/mol/nm²) of a window; the steep stretch is held more firmly.
fn restraint(window: u32) -> (f64, f64) {
    let center = (f64::from(window) - 15.0) / 10.0;
    (center, if center.abs() < 0.65 { 700.0 } else { 500.0 })
}

/// Correlation time in frames: the solute is slower inside the slab.
fn correlation_time(center: f64) -> f64 {
    3.0 + 9.0 * (-(center / 0.6).powi(2)).exp()
}

fn system() -> Result<OneDimensionalSystem, SystemError> {
    let windows = (0..N_WINDOWS)
        .map(|window| {
            let (center, force_constant) = restraint(window);
            Window {
                restraint: Restraint::Harmonic { center, force_constant: force_constant / THERMAL_ENERGY },
                n_samples: FRAMES,
                correlation: Correlation::Exponential { time: correlation_time(center) },
            }
        })
        .collect();
    OneDimensionalSystem::new(Potential::new(|z| free_energy(z) / THERMAL_ENERGY), -2.5, 2.5, windows)
}

/// Names and contents of all files of the demo.
///
/// # Errors
/// None in practice; the constructor of the system is fallible.
pub fn files() -> Result<Vec<(String, String)>, SystemError> {
    let system = system()?;
    let (first_runs, second_runs) = (system.sample_all(SEED, 0), system.sample_all(SEED, 1));
    let mut files = Vec::new();
    let mut table = "window,start,file,center_nm,force_constant_kJ_per_mol_nm2\n".to_owned();
    for (number, index) in (0..N_WINDOWS).zip(0..) {
        let (center, force_constant) = restraint(number);
        let name = format!("z{number:02}");
        let runs = [&first_runs[index], &second_runs[index]];
        let starts = starts(index, &name, runs.map(|positions| Run { positions, center, force_constant }));
        for (start, parts) in (1..).zip(starts) {
            let names: Vec<&str> = parts.iter().map(|(name, _)| name.as_str()).collect();
            // Writing into a String cannot fail.
            let _ = writeln!(table, "{name},{start},{},{center:.1},{force_constant:.0}", names.join(";"));
            files.extend(parts);
        }
    }
    files.push(("windows.csv".to_owned(), table));
    files.push(("truth.csv".to_owned(), truth(&system)));
    Ok(files)
}

/// The files of a window: for each start its parts in order, as names and contents.
fn starts(index: usize, name: &str, runs: [Run<'_>; 2]) -> Vec<Vec<(String, String)>> {
    let [run, again] = runs;
    let file = |suffix: &str, text: String| (format!("{name}{suffix}.txt"), text);
    match index {
        CONTINUED => vec![vec![
            file("", run.text(1, LAST_FRAME_BEFORE_THE_BREAK)),
            file("_continued", run.text(FIRST_FRAME_AFTER_THE_BREAK, FRAMES)),
        ]],
        STARTED_TWICE => vec![
            vec![file("_start1", run.text(1, FRAMES_OF_A_START))],
            vec![file("_start2", again.text(1, FRAMES_OF_A_START))],
        ],
        _ => vec![vec![file("", run.text(1, FRAMES))]],
    }
}

/// One run of one window.
struct Run<'a> {
    positions: &'a [f64],
    center: f64,
    force_constant: f64,
}

impl Run<'_> {
    /// The frames from `first` to `last`, counted from 1, as a text file.
    fn text(&self, first: usize, last: usize) -> String {
        let mut text = format!(
            "# invented data: solute restrained at z = {:.1} nm with {:.0} kJ/mol/nm^2, {TEMPERATURE:.0} K\n\
             # time_ps z_nm bias_kJ_per_mol\n",
            self.center, self.force_constant
        );
        for (time, z) in
            (0..).step_by(INTERVAL as usize).skip(1).zip(self.positions).skip(first - 1).take(last + 1 - first)
        {
            let bias = 0.5 * self.force_constant * (z - self.center).powi(2);
            let _ = writeln!(text, "{time:>6} {z:>8.4} {bias:>7.3}");
        }
        text
    }
}

/// The exact profile on bins of 0.05 nm, its lowest value zero.
fn truth(system: &OneDimensionalSystem) -> String {
    let edges: Vec<f64> = (-30..=30).map(|i| f64::from(i) / 20.0).collect();
    let mut text = "# exact profile, -RT ln of the mean density in each bin of 0.05 nm; lowest bin zero\n\
                    z_nm,free_energy_kJ_per_mol\n"
        .to_owned();
    for (bin, value) in edges.windows(2).zip(system.profile(&edges)) {
        let _ = writeln!(text, "{:.3},{:.4}", 0.5 * (bin[0] + bin[1]), THERMAL_ENERGY * value);
    }
    text
}

//! Findings just below, at and just above their thresholds, and where they stay silent.
#![expect(clippy::unwrap_used, reason = "a test may fail loudly")]

mod common;

use common::{CellChoice, assemble, axis, bias, sampled, solved};
use spandrel_bias::Bias;
use spandrel_solver::bootstrap::{BetweenReplicas, ReplicaError};
use spandrel_solver::condense::BinGrid;
use spandrel_solver::ensemble::Ensemble;
use spandrel_solver::findings::{
    Finding, Severity, look_at_ensemble, look_at_links, look_at_profile, look_at_replicas,
};
use spandrel_solver::influence::Influence;
use spandrel_solver::profile::{Profile, ProfileRequest, Zero};
use spandrel_solver::solve::{Link, Links, SolveOptions};
use spandrel_testkit::{Restraint, cases};

fn codes(findings: &[Finding]) -> Vec<&'static str> {
    findings.iter().map(Finding::code).collect()
}

fn small_ensemble() -> Ensemble {
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.25, None).unwrap();
    let restraint = |center| Restraint::Harmonic { center, force_constant: 3.0 };
    let biases: Vec<Bias> = [0.1, 0.4].iter().map(|&center| bias(&restraint(center), &axis)).collect();
    let series: Vec<Vec<f64>> =
        [0.1, 0.4].iter().map(|center| (0..900).map(|i| center + 0.5 * (f64::from(i) * 2.4).sin()).collect()).collect();
    assemble(&axis, bins, &biases, &series, &CellChoice::Lattice)
}

fn draw(ensemble: &Ensemble) -> Profile {
    let solution = solved(ensemble, &SolveOptions::default());
    let influence = Influence::of(ensemble, &solution).unwrap();
    let request = ProfileRequest { first_bin: None, last_bin: None, zero: Zero::Minimum };
    Profile::draw(ensemble, &influence, &request).unwrap()
}

#[test]
fn few_effective_samples_begin_just_below_twenty() {
    let mut ensemble = small_ensemble();
    for (effective_samples, expected) in [(19.99, 1), (20.0, 0), (20.01, 0)] {
        ensemble.windows[1].effective_samples = effective_samples;
        let findings = look_at_ensemble(&ensemble);
        assert_eq!(codes(&findings), vec!["few-effective-samples"; expected], "{effective_samples}");
        assert!(findings.iter().all(|finding| finding.windows() == ["w1"] && finding.severity() == Severity::Note));
    }
}

#[test]
fn a_link_is_thin_just_below_twenty_samples() {
    let ensemble = small_ensemble();
    let mut links = Links::find(&ensemble);
    for (linking_samples, expected) in [(19.99, 1), (20.0, 0), (20.01, 0)] {
        links.tree = vec![Link { windows: (0, 1), difference: 0.1, linking_samples }];
        let findings = look_at_links(&ensemble, &links, false);
        assert_eq!(codes(&findings), vec!["thin-link"; expected], "{linking_samples}");
        if let [finding] = findings.as_slice() {
            let record = finding.record();
            assert_eq!((record.measured, record.threshold), (Some(19.99), Some(20.0)));
            assert_eq!(record.windows, ["w0", "w1"]);
        }
    }
}

#[test]
fn windows_are_linked_from_one_effective_sample_on() {
    let ensemble = small_ensemble();
    let linked = Links::find(&ensemble);
    assert_eq!(linked.groups.len(), 1);
    // The same samples, counted as fewer and fewer independent ones, until all that the two answer for of each other is below one.
    let mut thinned = ensemble.clone();
    let strength = linked.tree[0].linking_samples;
    for (factor, groups) in [(1.0 + 1e-6, 1), (1.0 - 1e-6, 2)] {
        for (thin, window) in thinned.windows.iter_mut().zip(&ensemble.windows) {
            thin.effective_samples = window.effective_samples / strength * factor;
        }
        assert_eq!(Links::find(&thinned).groups.len(), groups, "{factor}");
    }
    let findings = look_at_links(&thinned, &Links::find(&thinned), false);
    assert_eq!(codes(&findings), ["not-linked"]);
    assert_eq!(findings[0].severity(), Severity::Error);
    let allowed = look_at_links(&thinned, &Links::find(&thinned), true);
    assert_eq!((codes(&allowed), allowed[0].severity()), (vec!["not-linked"], Severity::Warning));
}

#[test]
fn a_frozen_window_is_named() {
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.25, None).unwrap();
    let biases = [bias(&Restraint::None, &axis), bias(&Restraint::None, &axis)];
    let moving: Vec<f64> = (0..300).map(|i| 0.3 * (f64::from(i) * 1.3).sin()).collect();
    let ensemble = assemble(&axis, bins, &biases, &[moving, vec![0.1; 300]], &CellChoice::Lattice);
    let findings = look_at_ensemble(&ensemble);
    assert_eq!(codes(&findings), ["no-error-support"]);
    assert_eq!(findings[0].windows(), ["w1"]);
    // It counts as a single sample wherever independent samples are counted.
    assert!((ensemble.windows[1].effective_samples - 1.0).abs() < f64::EPSILON);
}

#[test]
fn empty_bins_are_one_finding_a_stretch() {
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 0.25, None).unwrap();
    let places = [0.1, 1.1, 1.3, 2.6];
    let series: Vec<f64> = (0..800).map(|i| places[i % 4] + 0.01 * (i as f64 * 0.3).sin()).collect();
    let ensemble = assemble(&axis, bins, &[bias(&Restraint::None, &axis)], &[series], &CellChoice::Lattice);
    let findings = look_at_profile(&draw(&ensemble));
    let stretches: Vec<(f64, f64, usize)> = findings
        .iter()
        .filter_map(|finding| match *finding {
            Finding::UnsampledBins { from, to, bins } => Some((from, to, bins)),
            _ => None,
        })
        .collect();
    assert_eq!(stretches, [(0.25, 1.0, 3), (1.5, 2.5, 4)]);
}

#[test]
fn bins_with_a_single_sample_have_no_error_and_are_counted() {
    // 500 samples spread over one bin, and one or four independent ones in another.
    let axis = axis(None);
    let bins = BinGrid::new(0, 0.0, 1.0, None).unwrap();
    for (rare, expected) in [(1, vec!["error-not-determined"]), (4, vec![])] {
        let mut series: Vec<f64> = (0..500).map(|i| 0.5 + 0.4 * (f64::from(i) * 2.1).sin()).collect();
        for i in 0..rare {
            series[70 * i + 9] = 1.5;
        }
        let ensemble = assemble(&axis, bins, &[bias(&Restraint::None, &axis)], &[series], &CellChoice::Lattice);
        assert_eq!(codes(&look_at_profile(&draw(&ensemble))), expected, "{rare} rare samples");
    }
}

#[test]
fn a_zero_is_thin_just_below_two_effective_samples() {
    let mut profile = draw(&small_ensemble());
    for (effective_samples, expected) in [(1.99, vec!["thin-zero"]), (2.0, vec![]), (2.01, vec![])] {
        profile.zero_effective_samples = effective_samples;
        let zero: Vec<&str> =
            codes(&look_at_profile(&profile)).into_iter().filter(|code| *code == "thin-zero").collect();
        assert_eq!(zero, expected, "{effective_samples}");
    }
}

#[test]
fn replicas_disagree_beyond_one_and_a_half_times_and_beyond_chance() {
    let profile = draw(&small_ensemble());
    let uncertainty = profile.bins.iter().find_map(|bin| bin.uncertainty).unwrap();
    let with = |ratio: f64, degrees_between: f64| {
        let error = ReplicaError { uncertainty, replicated_part: 0.8, ratio, degrees_between };
        let bins = profile.bins.iter().map(|bin| bin.uncertainty.map(|_| error)).collect();
        codes(&look_at_replicas(&profile, &BetweenReplicas { n_windows: 5, bins, windows: Vec::new() }))
    };
    // 99.9 % of χ²(20) lie below 45.31 (any table): 1.501² · 20 = 45.06 may be chance, 1.51² · 20 = 45.60 is none.
    assert_eq!(with(1.5, 20.0), Vec::<&str>::new());
    assert_eq!(with(1.501, 20.0), Vec::<&str>::new());
    assert_eq!(with(1.51, 20.0), ["replicas-disagree"]);
    // With many degrees of freedom the factor decides, with one chance does: 99.9 % of χ²(1) lie below 10.83 = 3.29².
    assert_eq!(with(1.499, 400.0), Vec::<&str>::new());
    assert_eq!(with(1.501, 400.0), ["replicas-disagree"]);
    assert_eq!(with(3.28, 1.0), Vec::<&str>::new());
    assert_eq!(with(3.30, 1.0), ["replicas-disagree"]);
}

#[test]
fn a_clean_set_gives_no_finding() {
    let case = cases::independent().unwrap();
    let ensemble = sampled(&case.system, None, case.edges[0], 0.05, 31, &CellChoice::Lattice);
    let links = Links::find(&ensemble);
    assert_eq!(look_at_ensemble(&ensemble), []);
    assert_eq!(look_at_links(&ensemble, &links, false), []);
}

#[test]
fn every_finding_says_what_to_do() {
    let all = [
        Finding::CutLastLine { window: "w".into(), file: "w.txt".into(), line: 7 },
        Finding::RepeatedFrames { window: "w".into(), file: "w.txt".into(), line: 7, frames: 3 },
        Finding::FewEffectiveSamples { window: "w".into(), effective_samples: 8.2 },
        Finding::NoErrorSupport { window: "w".into(), samples: 5 },
        Finding::NeverSettles { window: "w".into() },
        Finding::UnsettledStart { window: "w".into(), samples: 300, gain: 2.5 },
        Finding::ErrorsDisagree { ratio: 1.7, place: "in the bin at 0.5".into() },
        Finding::ReplicasDisagree { ratio: 3.1, position: 0.5 },
        Finding::NotLinked { below: "v".into(), above: "w".into(), range: Some((0.25, 0.5)), gaps_allowed: false },
        Finding::ThinLink { windows: ("v".into(), "w".into()), linking_samples: 3.1 },
        Finding::UnsampledBins { from: 0.5, to: 1.0, bins: 2 },
        Finding::ThinZero { effective_samples: 1.5 },
        Finding::ErrorNotDetermined { bins: 2, of: 9 },
    ];
    let mut seen = codes(&all);
    seen.sort_unstable();
    seen.dedup();
    assert_eq!(seen.len(), all.len());
    for finding in &all {
        let record = finding.record();
        assert!(!record.message.is_empty() && !record.advice.is_empty() && !record.message.contains("NaN"));
    }
}

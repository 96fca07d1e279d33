//! Looks at finished results.

use super::finding::{FEW_EFFECTIVE_SAMPLES, Finding, THIN_LINK};
use crate::ensemble::Ensemble;
use crate::profile::{BinStatus, FEWEST_EFFECTIVE_SAMPLES, Profile};
use crate::solve::Links;

/// Windows with few effective samples, or with none that could be told apart.
#[must_use]
pub fn look_at_ensemble(ensemble: &Ensemble) -> Vec<Finding> {
    let mut findings = Vec::new();
    for (k, window) in ensemble.windows.iter().enumerate() {
        let supported =
            ensemble.streams.iter().filter(|stream| stream.window == k).all(|stream| stream.batches.is_some());
        if !supported {
            findings.push(Finding::NoErrorSupport { window: window.name.clone(), samples: window.n_samples });
        } else if window.effective_samples < FEW_EFFECTIVE_SAMPLES {
            findings.push(Finding::FewEffectiveSamples {
                window: window.name.clone(),
                effective_samples: window.effective_samples,
            });
        }
    }
    findings
}

/// Stretches that link nothing, and thin links. `gaps_allowed`: the groups are to be solved apart.
#[must_use]
pub fn look_at_links(ensemble: &Ensemble, links: &Links, gaps_allowed: bool) -> Vec<Finding> {
    let name = |k: usize| ensemble.windows[k].name.clone();
    let mut findings: Vec<Finding> = links
        .uncovered
        .iter()
        .map(|stretch| Finding::NotLinked {
            below: name(stretch.below),
            above: name(stretch.above),
            range: stretch.range,
            gaps_allowed,
        })
        .collect();
    findings.extend(links.tree.iter().filter(|link| link.linking_samples < THIN_LINK).map(|link| Finding::ThinLink {
        windows: (name(link.windows.0), name(link.windows.1)),
        linking_samples: link.linking_samples,
    }));
    findings
}

/// Stretches of empty bins, and bins without an error.
#[must_use]
pub fn look_at_profile(profile: &Profile) -> Vec<Finding> {
    let mut findings = Vec::new();
    let mut rest = profile.bins.as_slice();
    while let Some(start) = rest.iter().position(|bin| bin.status == BinStatus::Unsampled) {
        let length = rest[start..].iter().take_while(|bin| bin.status == BinStatus::Unsampled).count();
        findings.push(Finding::UnsampledBins {
            from: rest[start].lower,
            to: rest[start + length - 1].upper,
            bins: length,
        });
        rest = &rest[start + length..];
    }
    if profile.zero_effective_samples < FEWEST_EFFECTIVE_SAMPLES {
        findings.push(Finding::ThinZero { effective_samples: profile.zero_effective_samples });
        return findings;
    }
    let without_error = profile.bins.iter().filter(|bin| bin.status == BinStatus::NotDetermined).count();
    if without_error > 0 {
        let of = profile.bins.iter().filter(|bin| bin.free_energy.is_some()).count();
        findings.push(Finding::ErrorNotDetermined { bins: without_error, of });
    }
    findings
}

//! Looks at errors that were estimated in more than one way.

use super::finding::Finding;
use crate::bootstrap::{BetweenReplicas, Bootstrap, DISAGREEMENT, Place};
use crate::ensemble::Ensemble;
use crate::profile::Profile;
use statrs::distribution::{ChiSquared, ContinuousCDF};

/// Probability below which a spread between replicas is no chance.
const CHANCE: f64 = 1e-3;

/// A bootstrap that disagrees with the errors from influences.
#[must_use]
pub fn look_at_bootstrap(ensemble: &Ensemble, profile: &Profile, bootstrap: &Bootstrap) -> Vec<Finding> {
    let farthest = bootstrap.disagreement();
    let finding = farthest.map(|farthest| Finding::ErrorsDisagree {
        ratio: farthest.ratio,
        place: match farthest.place {
            Place::Bin(bin) => format!("in the bin at {:.6}", profile.bins[bin].center()),
            Place::Window(k) => format!("of the free energy of window `{}`", ensemble.windows[k].name),
        },
    });
    finding.into_iter().collect()
}

/// Replicas that differ by more than their own fluctuations explain: by more than half as much again, and by more than chance.
#[must_use]
pub fn look_at_replicas(profile: &Profile, between: &BetweenReplicas) -> Vec<Finding> {
    let beyond_chance = |ratio: f64, degrees: f64| {
        ChiSquared::new(degrees).is_ok_and(|chi_squared| chi_squared.sf(ratio * ratio * degrees) < CHANCE)
    };
    let worst = profile
        .bins
        .iter()
        .zip(&between.bins)
        .filter_map(|(bin, error)| error.map(|error| (bin, error)))
        .filter(|(_, error)| error.ratio > DISAGREEMENT && beyond_chance(error.ratio, error.degrees_between))
        .reduce(|worst, next| if next.1.ratio > worst.1.ratio { next } else { worst });
    worst
        .map(|(bin, error)| Finding::ReplicasDisagree { ratio: error.ratio, position: bin.center() })
        .into_iter()
        .collect()
}

//! `profile.svg`: the profile as a picture.

use crate::job::Job;
use crate::pipeline::Part;
use spandrel_bias::units::PositionUnit;
use spandrel_report::{Curve, ProfileFigure};

/// Name of the file.
pub const FIGURE: &str = "profile.svg";

/// The profiles of all parts, in the job's units.
#[must_use]
pub fn profile_figure(job: &Job, parts: &[Part]) -> String {
    let axis = &job.axes[job.profile.bins.axis()];
    let position_label = match axis.unit() {
        PositionUnit::None => axis.name().to_owned(),
        unit => format!("{} ({unit})", axis.name()),
    };
    let energy_of_kt = job.energy_unit.from_reduced(1.0, job.temperature);
    ProfileFigure {
        position_label,
        in_degrees: axis.unit() == PositionUnit::Degree,
        energy_label: format!("free energy ({})", job.energy_unit),
        curves: parts.iter().map(|part| Curve::of_profile(&part.profile, part.band.as_ref(), energy_of_kt)).collect(),
    }
    .to_svg()
}

//! Figures drawn from the results of the solver. No statistics: what is drawn was computed elsewhere.

mod axis_ticks;
mod profile_figure;
mod svg;

pub use profile_figure::{Curve, CurvePoint, ProfileFigure};

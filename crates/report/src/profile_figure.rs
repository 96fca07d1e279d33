//! The profile with its interval.

use crate::axis_ticks::{label, ticks};
use crate::svg::Drawing;
use spandrel_solver::profile::{BinStatus, Profile, SimultaneousBand};
use std::ops::Range;

const WIDTH: f64 = 720.0;
const HEIGHT: f64 = 440.0;
const LEFT: f64 = 72.0;
const RIGHT: f64 = 20.0;
const TOP: f64 = 48.0;
const BOTTOM: f64 = 58.0;

/// One hue in two strengths, told apart by lightness alone; open circles need no color at all.
const STYLE: &str = "\
.ground{fill:#fff}\
.frame{fill:none;stroke:#5b6470;stroke-width:1}\
.rule{fill:none;stroke:#e3e6ea;stroke-width:1}\
.curve-band{fill:#dbe5ef;stroke:none}\
.band{fill:#9fb8d3;stroke:none}\
.curve{fill:none;stroke:#16324f;stroke-width:2;stroke-linejoin:round}\
.bare{fill:#fff;stroke:#16324f;stroke-width:1.2}\
.spot{fill:#16324f;stroke:none}\
text{font-family:sans-serif;fill:#20262d}\
.tick{font-size:12px}\
.name{font-size:14px;text-anchor:middle}\
.note{font-size:12px;fill:#4a525c}\
.middle{text-anchor:middle}.end{text-anchor:end}";

/// What stands on a figure besides the numbers.
#[derive(Debug, Clone, PartialEq)]
pub struct ProfileFigure {
    /// Name of the axis with its unit, for example `z (nm)`.
    pub position_label: String,
    /// Whether positions are in degrees, whose ticks divide a turn.
    pub in_degrees: bool,
    /// Name of the energy with its unit.
    pub energy_label: String,
    /// One curve for each group of windows.
    pub curves: Vec<Curve>,
}

/// One profile in the units of the figure.
#[derive(Debug, Clone, PartialEq)]
pub struct Curve {
    points: Vec<CurvePoint>,
}

/// One sampled bin.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CurvePoint {
    /// Number of the bin in its profile.
    pub bin: usize,
    /// Middle of the bin.
    pub position: f64,
    /// Free energy.
    pub energy: f64,
    /// Half width of the 95 % interval; 0 in the bin that is zero by choice, `None` where the data support none.
    pub half_width: Option<f64>,
    /// Half width of the band that holds the whole curve; 0 and `None` as above.
    pub band_half_width: Option<f64>,
}

impl Curve {
    /// The sampled bins of a profile with its band, energies multiplied by `energy_of_kt` (the unit's value of kT).
    #[must_use]
    pub fn of_profile(profile: &Profile, band: Option<&SimultaneousBand>, energy_of_kt: f64) -> Self {
        let points = profile.bins.iter().enumerate().filter_map(|(number, bin)| {
            let around = |half_width: Option<f64>| match bin.status {
                BinStatus::Zero => Some(0.0),
                _ => half_width.map(|half_width| half_width * energy_of_kt),
            };
            Some(CurvePoint {
                bin: number,
                position: bin.center(),
                energy: bin.free_energy? * energy_of_kt,
                half_width: around(bin.uncertainty.map(|uncertainty| uncertainty.half_width_95)),
                band_half_width: around(band.and_then(|band| band.half_widths.get(number).copied().flatten())),
            })
        });
        Self { points: points.collect() }
    }

    /// Runs of neighboring bins that `keep`: a curve is not drawn across bins that are missing.
    fn stretches(&self, keep: impl Fn(&CurvePoint) -> bool) -> Vec<Range<usize>> {
        let mut stretches: Vec<Range<usize>> = Vec::new();
        for (i, point) in self.points.iter().enumerate().filter(|(_, point)| keep(point)) {
            match stretches.last_mut() {
                Some(last) if last.end == i && self.points[i - 1].bin + 1 == point.bin => last.end = i + 1,
                _ => stretches.push(i..i + 1),
            }
        }
        stretches
    }
}

impl CurvePoint {
    /// How far the drawing reaches above and below the point.
    fn reach(&self) -> f64 {
        self.band_half_width.or(self.half_width).unwrap_or(0.0)
    }
}

/// From the figure's units to pixels.
struct Scale {
    positions: (f64, f64),
    energies: (f64, f64),
}

impl Scale {
    fn of(curves: &[Curve]) -> Option<Self> {
        let points = || curves.iter().flat_map(|curve| &curve.points);
        let low = |so_far: f64, x: f64| if x < so_far { x } else { so_far };
        let high = |so_far: f64, x: f64| if x > so_far { x } else { so_far };
        let positions = points().map(|point| point.position);
        let lower = points().map(|point| point.energy - point.reach());
        let upper = points().map(|point| point.energy + point.reach());
        let positions = (positions.clone().fold(f64::INFINITY, low), positions.fold(f64::NEG_INFINITY, high));
        let energies = (lower.fold(f64::INFINITY, low), upper.fold(f64::NEG_INFINITY, high));
        let all = [positions.0, positions.1, energies.0, energies.1];
        all.iter()
            .all(|x| x.is_finite())
            .then(|| Self { positions: widened(positions, 0.02), energies: widened(energies, 0.05) })
    }

    fn x(&self, position: f64) -> f64 {
        LEFT + (position - self.positions.0) / (self.positions.1 - self.positions.0) * (WIDTH - LEFT - RIGHT)
    }

    fn y(&self, energy: f64) -> f64 {
        HEIGHT - BOTTOM - (energy - self.energies.0) / (self.energies.1 - self.energies.0) * (HEIGHT - TOP - BOTTOM)
    }
}

fn widened((low, high): (f64, f64), share: f64) -> (f64, f64) {
    let margin = if high > low { (high - low) * share } else { 1.0 };
    (low - margin, high + margin)
}

impl ProfileFigure {
    /// The figure as the text of an SVG file: vector paths and real text, literal colors, no script.
    #[must_use]
    pub fn to_svg(&self) -> String {
        let mut drawing = Drawing::new(WIDTH, HEIGHT);
        if let Some(scale) = Scale::of(&self.curves) {
            draw_frame(&mut drawing, &scale, self.in_degrees);
            for curve in &self.curves {
                draw_curve(&mut drawing, &scale, curve);
            }
        }
        let bottom = HEIGHT - BOTTOM;
        drawing.text("name", (f64::midpoint(LEFT, WIDTH - RIGHT), bottom + 42.0), &self.position_label);
        drawing.upward_text("name", (22.0, f64::midpoint(TOP, bottom)), &self.energy_label);
        self.draw_key(&mut drawing);
        drawing.finish(&format!("{} along {}", self.energy_label, self.position_label), STYLE)
    }

    fn draw_key(&self, drawing: &mut Drawing) {
        let y = TOP - 12.0;
        let mut x = LEFT;
        let mut swatch = |drawing: &mut Drawing, classes: &[&str], text: &str, width: f64| {
            for class in classes {
                if *class == "curve" {
                    drawing.path(class, &[(x, y - 6.0), (x + 26.0, y - 6.0)], false);
                } else {
                    drawing.path(class, &[(x, y - 12.0), (x + 26.0, y - 12.0), (x + 26.0, y), (x, y)], true);
                }
            }
            drawing.text("note", (x + 32.0, y - 2.0), text);
            x += width;
        };
        swatch(drawing, &["band", "curve"], "free energy, 95 % interval of each bin", 262.0);
        swatch(drawing, &["curve-band"], "95 % band of the whole curve", 212.0);
        if self.curves.iter().flat_map(|curve| &curve.points).any(|point| point.half_width.is_none()) {
            drawing.circle("bare", (x + 8.0, y - 6.0), 3.0, "no error");
            drawing.text("note", (x + 18.0, y - 2.0), "no error supported");
        }
        if self.curves.len() > 1 {
            let note = "each group of windows has a zero of its own";
            drawing.text("note", (LEFT, y - 22.0), note);
        }
    }
}

fn draw_frame(drawing: &mut Drawing, scale: &Scale, in_degrees: bool) {
    let (right, bottom) = (WIDTH - RIGHT, HEIGHT - BOTTOM);
    let positions = ticks(scale.positions.0, scale.positions.1, 9.0, in_degrees);
    let energies = ticks(scale.energies.0, scale.energies.1, 7.0, false);
    for &energy in &energies {
        let y = scale.y(energy);
        drawing.path("rule", &[(LEFT, y), (right, y)], false);
        drawing.text("tick end", (LEFT - 8.0, y + 4.0), &label(energy, &energies));
    }
    for &position in &positions {
        let x = scale.x(position);
        drawing.path("frame", &[(x, bottom), (x, bottom + 5.0)], false);
        drawing.text("tick middle", (x, bottom + 20.0), &label(position, &positions));
    }
    drawing.path("frame", &[(LEFT, TOP), (right, TOP), (right, bottom), (LEFT, bottom)], true);
}

/// One of the two half widths of a point.
type HalfWidth = fn(&CurvePoint) -> Option<f64>;

fn draw_curve(drawing: &mut Drawing, scale: &Scale, curve: &Curve) {
    let at = |point: &CurvePoint, shift: f64| (scale.x(point.position), scale.y(point.energy + shift));
    let half_widths: [(&str, HalfWidth); 2] =
        [("curve-band", |point| point.band_half_width), ("band", |point| point.half_width)];
    for (class, half_width) in half_widths {
        for stretch in curve.stretches(|point| half_width(point).is_some()) {
            let points = &curve.points[stretch];
            let upper = points.iter().map(|point| at(point, half_width(point).unwrap_or(0.0)));
            let lower = points.iter().rev().map(|point| at(point, -half_width(point).unwrap_or(0.0)));
            drawing.path(class, &upper.chain(lower).collect::<Vec<_>>(), true);
        }
    }
    for stretch in curve.stretches(|_| true) {
        let points: Vec<(f64, f64)> = curve.points[stretch].iter().map(|point| at(point, 0.0)).collect();
        match points.as_slice() {
            [alone] => drawing.circle("spot", *alone, 2.0, "one bin"),
            line => drawing.path("curve", line, false),
        }
    }
    for point in curve.points.iter().filter(|point| point.half_width.is_none()) {
        drawing.circle("bare", at(point, 0.0), 3.0, "no error that the data support");
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn point(bin: usize, energy: f64, half_width: Option<f64>) -> CurvePoint {
        CurvePoint { bin, position: 0.1 * bin as f64, energy, half_width, band_half_width: half_width }
    }

    fn figure(points: Vec<CurvePoint>) -> String {
        ProfileFigure {
            position_label: "z (nm)".into(),
            in_degrees: false,
            energy_label: "F (kJ/mol) & more".into(),
            curves: vec![Curve { points }],
        }
        .to_svg()
    }

    #[test]
    fn a_missing_bin_breaks_the_curve_and_its_band() {
        let whole = figure((0..6).map(|bin| point(bin, 1.5, Some(0.2))).collect());
        let broken = figure([0, 1, 2, 4, 5].map(|bin| point(bin, 1.5, Some(0.2))).to_vec());
        let curves = |svg: &str| svg.matches("class=\"curve\"").count();
        let bands = |svg: &str| svg.matches("class=\"band\"").count();
        // One of each belongs to the key.
        assert_eq!((curves(&whole), bands(&whole)), (2, 2));
        assert_eq!((curves(&broken), bands(&broken)), (3, 3));
    }

    #[test]
    fn bins_without_an_error_are_open_circles_without_a_band() {
        let svg = figure(vec![point(0, 0.0, Some(0.0)), point(1, 2.0, None), point(2, 3.0, None)]);
        // Two bins and the key.
        assert_eq!(svg.matches("class=\"bare\"").count(), 3);
    }

    #[test]
    fn words_are_escaped_and_an_empty_profile_still_gives_a_figure() {
        let svg = figure(Vec::new());
        assert!(svg.contains("F (kJ/mol) &amp; more"));
        assert!(svg.ends_with("</svg>\n"));
        assert!(!svg.contains("NaN"));
    }
}

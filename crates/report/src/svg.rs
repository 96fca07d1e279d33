//! The few pieces of SVG 1.1 that the figures are made of.

use std::fmt::Write as _;

/// A drawing under construction. Coordinates are in pixels from the upper left corner; two decimals are kept.
pub(crate) struct Drawing {
    width: f64,
    height: f64,
    body: String,
}

impl Drawing {
    pub(crate) fn new(width: f64, height: f64) -> Self {
        Self { width, height, body: String::new() }
    }

    /// A line through points, or several, with the given class.
    pub(crate) fn path(&mut self, class: &str, points: &[(f64, f64)], closed: bool) {
        if points.is_empty() {
            return;
        }
        let mut path = String::new();
        for (i, (x, y)) in points.iter().enumerate() {
            let _ = write!(path, "{}{x:.2} {y:.2}", if i == 0 { "M" } else { "L" });
        }
        let end = if closed { "Z" } else { "" };
        let _ = writeln!(self.body, "<path class=\"{class}\" d=\"{path}{end}\"/>");
    }

    pub(crate) fn circle(&mut self, class: &str, (x, y): (f64, f64), radius: f64, title: &str) {
        let _ = writeln!(
            self.body,
            "<circle class=\"{class}\" cx=\"{x:.2}\" cy=\"{y:.2}\" r=\"{radius}\"><title>{}</title></circle>",
            escaped(title)
        );
    }

    pub(crate) fn text(&mut self, class: &str, (x, y): (f64, f64), text: &str) {
        let _ = writeln!(self.body, "<text class=\"{class}\" x=\"{x:.2}\" y=\"{y:.2}\">{}</text>", escaped(text));
    }

    /// Text that runs upward, centered on a point.
    pub(crate) fn upward_text(&mut self, class: &str, (x, y): (f64, f64), text: &str) {
        let _ = writeln!(
            self.body,
            "<text class=\"{class}\" transform=\"translate({x:.2} {y:.2}) rotate(-90)\">{}</text>",
            escaped(text)
        );
    }

    /// The whole file; `style` is a style sheet for the classes, `title` is read to those who cannot see.
    pub(crate) fn finish(self, title: &str, style: &str) -> String {
        let (width, height) = (self.width, self.height);
        format!(
            "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {width} {height}\" width=\"{width}\" height=\"{height}\" role=\"img\">\n<title>{}</title>\n<style>{style}</style>\n<rect class=\"ground\" width=\"{width}\" height=\"{height}\"/>\n{}</svg>\n",
            escaped(title),
            self.body
        )
    }
}

fn escaped(text: &str) -> String {
    text.replace('&', "&amp;").replace('<', "&lt;").replace('>', "&gt;").replace('"', "&quot;")
}

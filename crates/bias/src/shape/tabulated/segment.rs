//! The stretch between two rows of a table.

/// A cubic between two rows, given by its energies and second derivatives there; a straight line when both
/// second derivatives are 0.
///
/// With h the length, a = (end − x)/h and b = (x − start)/h,
/// y = a y₀ + b y₁ + ((a³ − a) M₀ + (b³ − b) M₁) h²/6.
#[derive(Debug, Clone, Copy)]
pub(super) struct Segment {
    pub(super) start: f64,
    pub(super) end: f64,
    pub(super) energies: [f64; 2],
    pub(super) curvatures: [f64; 2],
}

impl Segment {
    fn length(&self) -> f64 {
        self.end - self.start
    }

    /// The weights a and b of the two rows at `position`.
    fn weights(&self, position: f64) -> (f64, f64) {
        let length = self.length();
        ((self.end - position) / length, (position - self.start) / length)
    }

    pub(super) fn energy(&self, position: f64) -> f64 {
        let (a, b) = self.weights(position);
        let length = self.length();
        let [start_energy, end_energy] = self.energies;
        let [start_curvature, end_curvature] = self.curvatures;
        let bend = (a * a * a - a) * start_curvature + (b * b * b - b) * end_curvature;
        a * start_energy + b * end_energy + bend * (length * length / 6.0)
    }

    pub(super) fn slope(&self, position: f64) -> f64 {
        let (a, b) = self.weights(position);
        let length = self.length();
        let [start_curvature, end_curvature] = self.curvatures;
        let bend = (3.0 * b * b - 1.0) * end_curvature - (3.0 * a * a - 1.0) * start_curvature;
        self.chord() + bend * (length / 6.0)
    }

    pub(super) fn curvature(&self, position: f64) -> f64 {
        let (a, b) = self.weights(position);
        a * self.curvatures[0] + b * self.curvatures[1]
    }

    fn chord(&self) -> f64 {
        (self.energies[1] - self.energies[0]) / self.length()
    }

    /// The least energy between `lower` and `upper`, both of which must lie in the segment.
    pub(super) fn minimum(&self, lower: f64, upper: f64) -> f64 {
        let mut least = self.energy(lower).min(self.energy(upper));
        for position in self.stationary_positions() {
            // Roots that do not exist are not numbers and fail this, too.
            if lower < position && position < upper {
                least = least.min(self.energy(position));
            }
        }
        least
    }

    /// The roots of the slope as a quadratic in b, 3 (M₁ − M₀) b² + 6 M₀ b + (6 s/h − 2 M₀ − M₁) = 0 with s
    /// the slope of the chord, as positions. Not finite where there is none.
    fn stationary_positions(&self) -> [f64; 2] {
        let length = self.length();
        let [start_curvature, end_curvature] = self.curvatures;
        let quadratic = 3.0 * (end_curvature - start_curvature);
        let half_linear = 3.0 * start_curvature;
        let constant = 6.0 * self.chord() / length - 2.0 * start_curvature - end_curvature;
        // Both roots without cancellation: q/A and C/q with q = −(B/2 + sign(B) √((B/2)² − A C)).
        let root = (half_linear * half_linear - quadratic * constant).sqrt();
        let q = -(half_linear + root.copysign(half_linear));
        [self.start + length * (q / quadratic), self.start + length * (constant / q)]
    }
}

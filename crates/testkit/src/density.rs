//! A normalized density exp(−E)/Z on an interval: its integral, its distribution function and the inverse of that.

/// Panels of the quadrature. With five Gauss points each, features as narrow as 1/200 of the range are integrated to 1e-13.
const PANELS: usize = 4096;

/// Nodes on [−1, 1] and weights of the five-point Gauss–Legendre rule (Abramowitz & Stegun 1964, table 25.4).
const GAUSS: [(f64, f64); 5] = [
    (-0.906_179_845_938_664, 0.236_926_885_056_189_08),
    (-0.538_469_310_105_683_1, 0.478_628_670_499_366_47),
    (0.0, 0.568_888_888_888_888_9),
    (0.538_469_310_105_683_1, 0.478_628_670_499_366_47),
    (0.906_179_845_938_664, 0.236_926_885_056_189_08),
];

/// ∫ integrand over [lower, upper] by one five-point rule.
fn gauss(lower: f64, upper: f64, integrand: impl Fn(f64) -> f64) -> f64 {
    let (middle, half) = (0.5 * (lower + upper), 0.5 * (upper - lower));
    half * GAUSS.iter().map(|(node, weight)| weight * integrand(middle + half * node)).sum::<f64>()
}

#[derive(Clone, Debug)]
pub(crate) struct Density {
    lower: f64,
    panel_width: f64,
    /// ln ∫ exp(−E).
    ln_integral: f64,
    /// Probability of each panel.
    masses: Vec<f64>,
    /// Probability below each panel edge; the last one is 1.
    cumulative: Vec<f64>,
    /// Density at each panel edge.
    edge_densities: Vec<f64>,
    mean: f64,
    variance: f64,
}

impl Density {
    /// `None` if the energy is nowhere finite or somewhere not a number.
    pub(crate) fn new(lower: f64, upper: f64, energy: impl Fn(f64) -> f64) -> Option<Self> {
        let panel_width = (upper - lower) / PANELS as f64;
        let edge = |i: usize| lower + panel_width * i as f64;
        let lowest = (0..=PANELS).map(|i| energy(edge(i))).filter(|e| e.is_finite()).fold(f64::INFINITY, f64::min);
        if !lowest.is_finite() {
            return None;
        }
        let weight = |x: f64| (lowest - energy(x)).exp();
        let panel = |i: usize, moment: &dyn Fn(f64) -> f64| gauss(edge(i), edge(i + 1), |x| moment(x) * weight(x));
        let mut masses: Vec<f64> = (0..PANELS).map(|i| panel(i, &|_| 1.0)).collect();
        let total: f64 = masses.iter().sum();
        if !(total > 0.0 && total.is_finite()) {
            return None;
        }
        for mass in &mut masses {
            *mass /= total;
        }
        let mean = (0..PANELS).map(|i| panel(i, &|x| x)).sum::<f64>() / total;
        let variance = (0..PANELS).map(|i| panel(i, &|x| (x - mean).powi(2))).sum::<f64>() / total;
        let mut below = 0.0;
        let mut cumulative: Vec<f64> = Vec::with_capacity(PANELS + 1);
        cumulative.push(below);
        for mass in &masses {
            below += mass;
            cumulative.push(below);
        }
        // Rounding of the running sum would otherwise leave a gap below one.
        for value in &mut cumulative {
            *value /= below;
        }
        let edge_densities = (0..=PANELS).map(|i| weight(edge(i)) / total).collect();
        Some(Self {
            lower,
            panel_width,
            ln_integral: total.ln() - lowest,
            masses,
            cumulative,
            edge_densities,
            mean,
            variance,
        })
    }

    pub(crate) fn ln_integral(&self) -> f64 {
        self.ln_integral
    }

    pub(crate) fn mean(&self) -> f64 {
        self.mean
    }

    pub(crate) fn variance(&self) -> f64 {
        self.variance
    }

    /// Probability of [from, to]; parts outside the range have none. `energy` must be the function given to `new`.
    pub(crate) fn probability(&self, from: f64, to: f64, energy: impl Fn(f64) -> f64) -> f64 {
        let upper = self.edge(PANELS);
        let (from, to) = (from.clamp(self.lower, upper), to.clamp(self.lower, upper));
        if from >= to {
            return 0.0;
        }
        let density = |x: f64| (-energy(x) - self.ln_integral).exp();
        let (first, last) = (self.panel_of(from), self.panel_of(to));
        if first == last {
            return gauss(from, to, density);
        }
        // Panels are added one by one: a difference of cumulative sums would lose the digits of a rare stretch.
        gauss(from, self.edge(first + 1), density)
            + self.masses[first + 1..last].iter().sum::<f64>()
            + gauss(self.edge(last), to, density)
    }

    /// Position with probability `below` under it; `below` is taken into [0, 1].
    ///
    /// Inside a panel the distribution function is the cubic through its end values and end slopes; what that leaves out is
    /// of fourth order in the panel's width, below 1e-9 in probability for deviations of 40 panels or more.
    pub(crate) fn quantile(&self, below: f64) -> f64 {
        let below = below.clamp(0.0, 1.0);
        let index = self.cumulative.partition_point(|&value| value <= below).clamp(1, PANELS) - 1;
        let mass = self.cumulative[index + 1] - self.cumulative[index];
        if mass <= 0.0 {
            return self.edge(index);
        }
        let target = ((below - self.cumulative[index]) / mass).clamp(0.0, 1.0);
        let slope = |i: usize| self.edge_densities[i] * self.panel_width / mass;
        self.edge(index) + self.panel_width * invert_cubic(slope(index), slope(index + 1), target)
    }

    /// Probability below `x` to the accuracy of the cubic of [`Self::quantile`].
    pub(crate) fn cumulative(&self, x: f64) -> f64 {
        let x = x.clamp(self.lower, self.edge(PANELS));
        let index = self.panel_of(x);
        let mass = self.cumulative[index + 1] - self.cumulative[index];
        if mass <= 0.0 {
            return self.cumulative[index];
        }
        let slope = |i: usize| self.edge_densities[i] * self.panel_width / mass;
        let t = (x - self.edge(index)) / self.panel_width;
        self.cumulative[index] + mass * cubic(slope(index), slope(index + 1), t).0.clamp(0.0, 1.0)
    }

    fn edge(&self, index: usize) -> f64 {
        self.lower + self.panel_width * index as f64
    }

    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped to the panels; NaN becomes 0")]
    fn panel_of(&self, x: f64) -> usize {
        (((x - self.lower) / self.panel_width) as usize).min(PANELS - 1)
    }
}

/// The cubic on [0, 1] from 0 to 1 with end slopes a and b, and its derivative, at t.
fn cubic(a: f64, b: f64, t: f64) -> (f64, f64) {
    let (second, third) = (3.0 - 2.0 * a - b, a + b - 2.0);
    (t * (a + t * (second + t * third)), a + t * (2.0 * second + t * 3.0 * third))
}

/// Root t in [0, 1] of cubic(t) = target, by Newton steps kept inside a shrinking bracket.
fn invert_cubic(a: f64, b: f64, target: f64) -> f64 {
    let (mut low, mut high, mut t) = (0.0, 1.0, target);
    for _ in 0..60 {
        let (value, derivative) = cubic(a, b, t);
        let excess = value - target;
        if excess > 0.0 {
            high = t;
        } else {
            low = t;
        }
        let newton = t - excess / derivative;
        let next = if newton >= low && newton <= high { newton } else { 0.5 * (low + high) };
        if (next - t).abs() < 1e-15 {
            return next;
        }
        t = next;
    }
    t
}

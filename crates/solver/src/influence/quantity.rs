//! A number drawn from a solution, as its derivatives.

/// Direct effect of a stretch of points on a quantity.
#[derive(Debug, Clone, PartialEq)]
pub struct Direct {
    /// First point of the stretch.
    pub first: usize,
    /// q = ∂Q/∂m on each point of it.
    pub values: Vec<f64>,
}

/// A scalar Q(f, m): its value and how it changes with the free energies and with the counts.
#[derive(Debug, Clone, PartialEq)]
pub struct Quantity {
    /// Value at the solution.
    pub value: f64,
    /// q = ∂Q/∂m, on the stretches where it is not 0 (in the order of points, without overlap).
    pub direct: Vec<Direct>,
    /// ∂Q/∂f, one a window, at fixed m. Need not add to zero: a quantity is taken relative to the gauge window.
    pub free_energy_gradient: Vec<f64>,
}

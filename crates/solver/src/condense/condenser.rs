//! The stage that takes rows in and gives blocks out.

use super::bins::BinGrid;
use super::cells::{Cells, LatticeCell};
use super::groups::GroupCounts;
use super::lattice::{CellKey, CellLattice};
use super::replica::CondensedReplica;
use crate::series::{BlockMeans, Cascade};
use serde::Serialize;
use spandrel_bias::{Axis, Bias, OutsideTable};
use std::collections::HashMap;
use std::fmt;
use std::sync::Arc;

/// What a cell is.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub enum CellScheme {
    /// Fine cells along a single axis: the normal case.
    Lattice(Arc<CellLattice>),
    /// One cell a sample: for several axes, and where cells would not pay.
    Samples(BinGrid),
}

impl CellScheme {
    /// Fine cells on the given lattice.
    #[must_use]
    pub fn lattice(lattice: CellLattice) -> Self {
        Self::Lattice(Arc::new(lattice))
    }

    /// The output bins.
    #[must_use]
    pub fn bins(&self) -> &BinGrid {
        match self {
            Self::Lattice(lattice) => lattice.bins(),
            Self::Samples(bins) => bins,
        }
    }
}

/// Why a sample, or any at all, cannot be taken in.
#[derive(Debug, Clone, PartialEq)]
pub enum CondenseError {
    /// The bins are along an axis that does not exist, a lattice was asked for with several axes, or the bias has other axes.
    Axes {
        /// Number of axes.
        n_axes: usize,
    },
    /// The window's own tabulated bias does not reach the sample.
    OutsideTable(OutsideTable),
    /// The position is more than four million bins from the origin.
    TooFar {
        /// Axis number from 0.
        axis: usize,
        /// The position.
        position: f64,
    },
    /// More samples than one cell each can number (2³²).
    TooMany,
}

impl fmt::Display for CondenseError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Axes { n_axes } => {
                write!(f, "bins, cells and bias must be along the same {n_axes} axes, and a lattice needs a single one")
            }
            Self::OutsideTable(inner) => inner.fmt(f),
            Self::TooFar { position, .. } => write!(
                f,
                "position {position} lies more than four million output bins from their origin; check its unit, or widen the bins"
            ),
            Self::TooMany => {
                write!(f, "more than 4294967295 cells in one run; widen the cells or take a larger stride")
            }
        }
    }
}

impl std::error::Error for CondenseError {}

/// Takes the samples of one run in, in the order of time.
///
/// Memory: groups × occupied cells; it does not grow with the run's length (for [`CellScheme::Lattice`]).
#[derive(Debug)]
pub struct Condenser<'a> {
    scheme: &'a CellScheme,
    axes: &'a [Axis],
    bias: &'a Bias,
    n_samples: u64,
    numbers: HashMap<CellKey, u32>,
    lattice_cells: Vec<LatticeCell>,
    sample_positions: Vec<f64>,
    groups: GroupCounts,
    blocks: BlockMeans,
    channels: Vec<Cascade>,
    reference: Vec<f64>,
    squared_slopes: Vec<f64>,
    /// Scratch: one value a channel, and the gradient.
    row: Vec<f64>,
    gradient: Vec<f64>,
}

impl<'a> Condenser<'a> {
    /// An empty run of a window with the given reduced bias (kT).
    ///
    /// # Errors
    /// Axes that do not fit together.
    pub fn new(scheme: &'a CellScheme, axes: &'a [Axis], bias: &'a Bias) -> Result<Self, CondenseError> {
        let n_axes = axes.len();
        let one_lattice = matches!(scheme, CellScheme::Samples(_)) || n_axes == 1;
        if !(one_lattice && scheme.bins().axis() < n_axes && bias.n_axes() == n_axes) {
            return Err(CondenseError::Axes { n_axes });
        }
        Ok(Self {
            scheme,
            axes,
            bias,
            n_samples: 0,
            numbers: HashMap::new(),
            lattice_cells: Vec::new(),
            sample_positions: Vec::new(),
            groups: GroupCounts::new(),
            blocks: BlockMeans::new(n_axes + 1),
            channels: vec![Cascade::default(); n_axes + 1],
            reference: vec![0.0; n_axes],
            squared_slopes: vec![0.0; n_axes],
            row: vec![0.0; n_axes + 1],
            gradient: vec![0.0; n_axes],
        })
    }

    /// Takes one sample in: a finite position on every axis, in the axes' units. On an axis with a period any image will do.
    ///
    /// # Errors
    /// A position outside the window's own table, or too far from the output bins. The sample is then not counted.
    pub fn push(&mut self, position: &[f64]) -> Result<(), CondenseError> {
        let energy = self.bias.energy(position).map_err(CondenseError::OutsideTable)?;
        self.bias.gradient(position, &mut self.gradient).map_err(CondenseError::OutsideTable)?;
        let cell = self.cell_of(position)?;
        if self.n_samples == 0 {
            self.set_reference(position);
        }
        for (i, (axis, &x)) in self.axes.iter().zip(position).enumerate() {
            self.row[i] = if axis.period().is_some() { axis.displacement(x, self.reference[i]) } else { x };
            self.squared_slopes[i] += self.gradient[i] * self.gradient[i];
        }
        self.row[self.axes.len()] = energy;
        for (channel, &value) in self.channels.iter_mut().zip(&self.row) {
            channel.push(value);
        }
        self.blocks.push(&self.row);
        self.groups.push(cell);
        self.n_samples += 1;
        Ok(())
    }

    fn set_reference(&mut self, position: &[f64]) {
        for (i, (axis, &x)) in self.axes.iter().zip(position).enumerate() {
            if axis.period().is_some() {
                self.reference[i] = self.bias.reference_position(i).unwrap_or(x);
            }
        }
    }

    fn cell_of(&mut self, position: &[f64]) -> Result<u32, CondenseError> {
        match self.scheme {
            CellScheme::Lattice(lattice) => {
                let axis = lattice.bins().axis();
                let x = position[axis];
                let (key, fixed) = lattice.locate(x).ok_or(CondenseError::TooFar { axis, position: x })?;
                let next = u32::try_from(self.lattice_cells.len()).map_err(|_| CondenseError::TooMany)?;
                let number = *self.numbers.entry(key).or_insert(next);
                if number == next {
                    self.lattice_cells.push(LatticeCell { key, count: 0, position_sum: 0 });
                }
                let cell = &mut self.lattice_cells[number as usize];
                cell.count += 1;
                cell.position_sum += i128::from(fixed);
                Ok(number)
            }
            CellScheme::Samples(bins) => {
                let axis = bins.axis();
                let x = position[axis];
                bins.bin_of(x).ok_or(CondenseError::TooFar { axis, position: x })?;
                let number = u32::try_from(self.n_samples).map_err(|_| CondenseError::TooMany)?;
                self.sample_positions.extend_from_slice(position);
                Ok(number)
            }
        }
    }

    /// The condensed run; cells are numbered in the order of position.
    #[must_use]
    pub fn finish(self) -> CondensedReplica {
        let n_axes = self.axes.len();
        let groups = self.groups.finish();
        let (cells, groups) = match self.scheme {
            CellScheme::Samples(_) => (Cells::Samples { positions: self.sample_positions, n_axes }, groups),
            CellScheme::Lattice(lattice) => {
                let mut order: Vec<usize> = (0..self.lattice_cells.len()).collect();
                order.sort_unstable_by_key(|&i| self.lattice_cells[i].key);
                let mut new_number = vec![0_u32; order.len()];
                for (rank, &i) in order.iter().enumerate() {
                    new_number[i] = u32::try_from(rank).unwrap_or(u32::MAX);
                }
                let cells = order.iter().map(|&i| self.lattice_cells[i].clone()).collect();
                let groups = groups.iter().map(|group| group.renumbered(&new_number)).collect();
                (Cells::Lattice { lattice: Arc::clone(lattice), cells }, groups)
            }
        };
        let n = self.n_samples.max(1) as f64;
        CondensedReplica {
            n_samples: self.n_samples,
            cells,
            groups,
            blocks: self.blocks,
            channels: self.channels,
            reference: self.reference,
            mean_squared_slope: self.squared_slopes.iter().map(|sum| sum / n).collect(),
        }
    }
}

//! Rows in, blocks out: a run is condensed once, while it streams past, into counts on fine cells and block means.
//!
//! ```text
//! positions -> Condenser -> CondensedReplica { cells, groups of counts, block means, running sums }
//! ```
//!
//! A cell stands for its samples by their mean position, so cells only need to be fine enough that the bias is close to a parabola's
//! tangent within one: [`required_level`] picks the width from the biases and the data. All positions are summed as fixed-point
//! integers, so that condensed runs coarsen to the very bytes that coarser cells would have given.

mod bins;
mod cells;
mod condenser;
mod groups;
mod lattice;
mod replica;
mod start;
mod without_leading;

pub use bins::{BinGrid, BinGridError};
pub use cells::{Cells, LatticeCell};
pub use condenser::{CellScheme, CondenseError, Condenser};
pub use groups::{Group, MAX_GROUPS};
pub use lattice::{CellKey, CellLattice, DEFAULT_CELL_ERROR, MAX_LEVEL, required_level};
pub use replica::CondensedReplica;
pub use start::StartUp;

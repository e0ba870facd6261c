//! Shorter formulas with a stated error.
//!
//! [`simplify()`] looks for the shortest formula that stays within a [`Goal`] over the band and the
//! tolerances. Before the expansion whole elements are left out (`dropping`), during it the terms that
//! matter are picked (`terms`), after it the formula is shortened as it is written (`polish`). The error
//! is measured on the result against the exact function (`sweep`); a formula that fails is never
//! given.
//!
//! The length of what is printed decides, so this stands behind the shapes.
//! May use: everything but the command line.
//!
//! Sources: simplification before, during and after generation (Fernández, Rodríguez-Vázquez, Huertas &
//! Gielen, Symbolic Analysis Techniques, 1998).

pub mod answer;
mod dropping;
mod error;
mod goal;
mod matched;
mod polish;
mod program;
mod pruning;
mod result;
mod roots;
mod samples;
mod search;
mod sections;
mod sweep;
mod target;
mod terms;

pub use error::SimplifyError;
pub use goal::{Goal, GoalError, percentage};
pub use result::{Corners, Left, LeftOut, Simplified, Step, simplify};
pub use roots::{Figure, FigureKind};
pub use target::{Deviation, Worst};

/// Looks over the work: is told how far it is, and may end it.
pub trait Watch {
    /// What is being done, and how much of it.
    fn progress(&mut self, stage: &str, done: usize, of: usize);
    /// Whether to end with what there is.
    fn expired(&self) -> bool;
}

/// Looks away.
#[derive(Clone, Copy, Debug, Default)]
pub struct Unwatched;

impl Watch for Unwatched {
    fn progress(&mut self, _: &str, _: usize, _: usize) {}

    fn expired(&self) -> bool {
        false
    }
}

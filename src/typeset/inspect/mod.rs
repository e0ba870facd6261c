//! The listing of a circuit: what was understood, and what the graph says.
//!
//! [`text()`] is for a terminal, [`listing()`] makes the structures of [`json`]. Both say the same: nodes,
//! elements with their inferred classes and values, symbols, devices and blocks, questions, claims,
//! limits, what is noisy, and the facts of [`crate::circuit::graph::facts`]. Nothing is solved, so a
//! circuit without questions, or without a solution, has a listing too.

pub mod json;
mod listing;
mod text;
mod value;
mod words;

pub use listing::listing;
pub use text::text;
pub use value::{Values, nominal};
pub use words::class_word;

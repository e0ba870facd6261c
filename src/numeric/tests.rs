//! Circuits whose answers are known, and the witnesses against each other.
//!
//! Expected fractions follow from the circuit laws by hand; where a formula is a textbook's, the
//! test names it.

mod agreement;
mod crosschecks;
mod known;
mod singular;

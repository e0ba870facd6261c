//! Exact, closed-form transfer functions and impedances of linear circuits.
//!
//! # Steps
//! 1. [`language`] reads the text of a circuit and keeps where everything stood.
//! 2. [`circuit`] is the network that the text means: nodes, elements, symbols, questions.
//! 3. [`elimination`] turns the network into determinants, exactly, over [`algebra`].
//! 4. [`analysis`] answers the questions: rational functions in lowest terms, and the evidence.
//! 5. [`typeset`] gives an answer its form: expression trees, plain text, LaTeX, JSON.
//! 6. [`simplify`] looks for the shortest form that stays within a stated error.
//!
//! [`numeric`] is the witness: it solves the same network by other means and may use nothing
//! but [`circuit`]. A step uses only the steps above it; the program (`cli`) is arguments and glue.

#![forbid(unsafe_code)]

pub mod algebra;
pub mod analysis;
pub mod circuit;
pub mod elimination;
pub mod language;
pub mod numeric;
pub mod simplify;
pub mod typeset;

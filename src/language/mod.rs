//! The circuit language: pest grammars, the syntax tree with spans, diagnostics, and the step from
//! a syntax tree to a [`crate::circuit::Circuit`].
//!
//! May use: [`crate::circuit`].

//! The questions: from a circuit and a query to a rational function in lowest terms.
//!
//! May use: [`crate::circuit`], [`crate::algebra`], [`crate::elimination`], [`crate::numeric`].

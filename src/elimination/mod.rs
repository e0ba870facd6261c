//! Exact nodal elimination on a frontier: each element is a choice, the network determinant is a
//! sum over pairs of trees, and all of it is held in one decision diagram.
//!
//! May use: [`crate::circuit`], [`crate::algebra`]. Never rounds.

//! The witnesses: solves that share no code with the derivation that they judge.
//!
//! May use: [`crate::circuit`] only. In particular it may use neither [`crate::algebra`] nor
//! [`crate::elimination`]: a witness must not share code with what it judges.

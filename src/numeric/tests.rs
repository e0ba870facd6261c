//! Circuits whose answers are known.

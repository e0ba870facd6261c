//! Forms for reading: expression trees and their printing as plain text, LaTeX and JSON.
//!
//! May use: [`crate::algebra`].

//! Forms for reading: expression trees and their printing as plain text, LaTeX and JSON.
//!
//! A [`Formula`] says how an answer is *written*: what is a fraction, which product stands before
//! which, what is parallel to what. The caller chooses the form and the order; a printer keeps
//! both and adds only what its medium needs (parentheses, bars, line breaks).
//!
//! Trees and printers know no circuits: a symbol is an index into a [`SymbolTable`]. [`shape`] makes
//! trees from polynomials, [`answer`] puts a whole answer together.
//! May use: [`crate::circuit`], [`crate::algebra`], [`crate::elimination`], [`crate::analysis`].

pub mod answer;
mod evaluate;
mod formula;
mod greek;
pub mod json;
pub mod latex;
mod latex_name;
mod linear;
pub mod number;
pub mod plain;
pub mod screen;
pub mod shape;
mod symbol;

pub use formula::{Formula, Letter, View};
pub use linear::Dialect;
pub use symbol::{Style, SymbolName, SymbolTable};

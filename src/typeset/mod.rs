//! Forms for reading: expression trees and their printing as plain text, LaTeX and JSON.
//!
//! A [`Formula`] says how an answer is *written*: what is a fraction, which product stands before
//! which, what is parallel to what. The caller chooses the form and the order; a printer keeps
//! both and adds only what its medium needs (parentheses, bars, line breaks).
//!
//! Nothing here knows circuits: a symbol is an index into a [`SymbolTable`].
//! May use: [`crate::algebra`].

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
mod symbol;

pub use formula::{Formula, Letter, View};
pub use linear::Dialect;
pub use symbol::{Style, SymbolName, SymbolTable};

//! Forms for reading: expression trees and their printing as plain text, LaTeX and JSON.
//!
//! A [`Formula`] says how an answer is *written*: what is a fraction, which product stands before
//! which, what is parallel to what. The caller chooses the form and the order; a printer keeps
//! both and adds only what its medium needs (parentheses, bars, line breaks).
//!
//! ```
//! use cofactor::typeset::{Dialect, Formula, SymbolTable, plain};
//!
//! let names = SymbolTable::new(["R1", "C1"]);
//! let time_constant = Formula::product([Formula::s(), Formula::symbol(0), Formula::symbol(1)]);
//! let pole = Formula::sum([Formula::integer(1), time_constant]);
//! let low_pass = Formula::quotient(Formula::integer(1), pole);
//! assert_eq!(plain::text(&low_pass, &names, Dialect::Expression), "1/(1 + s*R1*C1)");
//! ```
//!
//! Trees and printers know no circuits: a symbol is an index into a [`SymbolTable`]. [`shape`] makes
//! trees from polynomials, [`answer`] puts a whole answer together.
//! May use: [`crate::circuit`], [`crate::algebra`], [`crate::elimination`], [`crate::analysis`].

pub mod answer;
pub mod drawing;
mod evaluate;
mod formula;
mod greek;
pub mod inspect;
pub mod json;
pub mod latex;
mod latex_name;
mod latex_text;
mod linear;
mod math;
pub mod mathml;
mod mathml_name;
mod measure;
pub mod note;
pub mod number;
pub mod plain;
pub mod plot;
#[cfg(test)]
mod random;
pub mod screen;
pub mod shape;
pub mod svg;
mod symbol;
mod visible;

pub use formula::{Formula, Letter, View};
pub use linear::Dialect;
pub use symbol::{Style, SymbolName, SymbolTable};

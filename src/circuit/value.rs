//! Values of elements: rational functions of `s` and the symbols, as written.

use super::SymbolId;

/// An exact number.
pub type Number = num_rational::BigRational;

/// A resolved expression: names are symbols, decimals are exact.
///
/// Chains are flat (`a + b + c` is one sum of three, `a − b` holds a [`Value::Negative`],
/// `a/b/c` is a product with powers −1), and the reader bounds the depth, so recursion over a value is safe.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Value {
    /// An exact number.
    Number(Number),
    /// A symbol of the circuit.
    Symbol(SymbolId),
    /// The complex frequency.
    S,
    /// A sum of at least two.
    Sum(Vec<Value>),
    /// A product of at least two.
    Product(Vec<Value>),
    /// An integer power, possibly negative: `x^-1` is a reciprocal.
    Power(Box<Value>, i32),
    /// The negative.
    Negative(Box<Value>),
    /// a·b/(a + b), for two or more: 1/(1/a + 1/b + …).
    Parallel(Vec<Value>),
}

//! Shapes: the ways to write one and the same rational function.
//!
//! Each shape is a file and a pure function from a fraction in lowest terms to a [`Formula`]; all
//! of them have the same value. What they share is here: a polynomial written out, and the signs.

mod bode;
mod by_element;
mod compact;
mod nested;
mod powers;
mod product;
mod sections;

pub use bode::bode;
pub(crate) use bode::ratio;
pub use by_element::by_element;
pub use compact::compact;
pub use nested::{Layered, nested};
pub use powers::powers;
pub use product::product;
pub use sections::{NumericSection, Quantity, Section, sections};

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::Signed;

use super::{Formula, Letter};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::analysis::ClosedForm;
use crate::circuit::{Symbol, Unit};
use crate::elimination::Elimination;

/// Which letter a variable is.
#[derive(Clone, Copy, Debug, Default)]
pub struct Lettering<'a> {
    /// The variable that stands for π, when there is one.
    pub pi: Option<Var>,
    /// The symbols, for what they are by their nature; those beyond are taken for numbers.
    pub symbols: &'a [Symbol],
}

impl Lettering<'_> {
    /// The unit of a symbol.
    pub(crate) fn unit(self, symbol: u32) -> Unit {
        self.symbols.get(symbol as usize).map_or(Unit::ONE, |symbol| symbol.unit)
    }

    /// The letter of a variable: `s`, π, or the symbol one below the variable's number.
    pub fn letter(self, variable: Var) -> Letter {
        match variable.0.checked_sub(1) {
            None => Letter::S,
            Some(_) if self.pi == Some(variable) => Letter::Pi,
            Some(symbol) => Letter::Symbol(symbol),
        }
    }

    /// A monomial times a number.
    pub fn term(
        self,
        powers: impl IntoIterator<Item = (Var, u32)>,
        coefficient: &BigInt,
    ) -> Formula {
        let number = Formula::number(BigRational::from_integer(coefficient.clone()));
        let factors = powers.into_iter().map(|(variable, power)| {
            Formula::power(Formula::letter(self.letter(variable)), power as i32)
        });
        Formula::product(std::iter::once(number).chain(factors))
    }

    /// A polynomial as the sum of its terms; what all terms share stands before a parenthesis.
    pub fn polynomial(self, polynomial: &Polynomial) -> Formula {
        let common = polynomial.monomial_content();
        let content = polynomial.content();
        let content = if polynomial.is_negative() { -content } else { content };
        if polynomial.len() <= 1 || (common.is_empty() && content.abs() == BigInt::from(1)) {
            return self.expanded(polynomial);
        }
        let shared = Polynomial::monomial(common.iter().copied(), content.clone());
        match polynomial.divide_exact(&shared) {
            Some(rest) => Formula::product([self.term(common, &content), self.expanded(&rest)]),
            None => self.expanded(polynomial),
        }
    }

    /// A polynomial as the plain sum of its terms.
    pub fn expanded(self, polynomial: &Polynomial) -> Formula {
        // Pairs in place of the reference order (R1·C2 before C1·R2 comes from the order of the
        // symbols), terms as the algebra sorts them.
        Formula::sum(
            polynomial
                .terms()
                .map(|(powers, coefficient)| self.term(powers.collect::<Vec<_>>(), &coefficient)),
        )
    }
}

/// Numerator and denominator with the sign that reads best: below the bar the lowest power of `s`
/// is not negative; where it has both signs, the numerator decides.
pub(crate) fn signed(fraction: &Fraction) -> (Polynomial, Polynomial) {
    let (n, d) = (fraction.numerator().clone(), fraction.denominator().clone());
    let balance = |polynomial: &Polynomial| -> i64 {
        let lowest = polynomial.coefficient(Var::S, polynomial.trailing_degree(Var::S));
        lowest.terms().map(|(_, coefficient)| if coefficient.is_negative() { -1 } else { 1 }).sum()
    };
    let sign = match balance(&d) {
        0 => balance(&n),
        balance => balance,
    };
    if sign < 0 { (-n, -d) } else { (n, d) }
}

/// s to a power, times something.
pub(crate) fn with_s(power: u32, factor: Formula) -> Formula {
    Formula::product([Formula::power(Formula::s(), power as i32), factor])
}

/// A shape by its name on the command line.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Shape {
    /// The shortest that a reader of a design note would write by hand.
    Compact,
    /// Numerator over denominator by powers of `s`.
    Powers,
    /// Gain, power of `s`, and polynomials that begin with 1.
    Bode,
    /// Irreducible factors.
    Product,
    /// Coefficients as sums of reactive elements times what they see.
    ByElement,
    /// Gain, and corner or ω0 and Q of each section.
    Sections,
    /// Named sub-expressions.
    Nested,
}

/// The closed form of a derivation in a shape; `None` when the shape needs an expansion and the
/// form is too long for one. An answer that was put together from others has no diagram: it is nested
/// as it is.
pub fn write(
    form: &ClosedForm,
    elimination: Option<&Elimination>,
    shape: Shape,
    letters: Lettering<'_>,
) -> Option<Layered> {
    let plain = |formula| Some(Layered::plain(formula));
    match (form, shape) {
        (ClosedForm::Expanded(fraction), Shape::Powers) => plain(powers(fraction, letters)),
        (ClosedForm::Expanded(fraction), Shape::Bode) => plain(bode(fraction, letters)),
        (ClosedForm::Expanded(fraction), Shape::Product) => plain(product(fraction, letters)),
        (ClosedForm::Expanded(fraction), Shape::ByElement) => plain(by_element(fraction, letters)),
        (ClosedForm::Expanded(fraction), Shape::Sections) => {
            let (formula, sections) = sections(fraction, letters);
            Some(Layered { sections, ..Layered::plain(formula) })
        }
        (ClosedForm::Expanded(fraction), Shape::Compact) => plain(compact(fraction, letters)),
        (ClosedForm::Expanded(fraction), Shape::Nested) => match elimination {
            Some(elimination) => Some(nested(&elimination.nested(), letters)),
            None => plain(compact(fraction, letters)),
        },
        (ClosedForm::Nested(sums), Shape::Nested | Shape::Compact) => Some(nested(sums, letters)),
        (ClosedForm::Nested(_), _) => None,
    }
}

#[cfg(test)]
mod tests;

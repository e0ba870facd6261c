//! The expression tree.
//!
//! A tree is built only by the constructors below, which keep it tidy:
//!
//! - sums hold at least two terms, no sums and no zeros; products at least two factors, no
//!   products and no ones, and at most one number, which stands first;
//! - numbers are not negative; a minus sign stands at the top, before a term of a sum, or before
//!   an operand of `||`, nowhere else;
//! - a quotient's numerator and denominator are no quotients themselves; exponents are 2 or more.
//!
//! The order of terms and factors is the caller's. Inner nodes are shared, so a clone costs
//! nothing; no operation recurses, so neither length nor depth is bounded by the stack.

use std::fmt;
use std::mem;
use std::sync::Arc;

use num_rational::BigRational;
use num_traits::{One, Signed, Zero, pow};

use super::linear::Dialect;
use super::plain;
use super::symbol::SymbolTable;

/// An expression as it is to be written.
#[derive(Clone)]
pub struct Formula(Node);

#[derive(Clone)]
enum Node {
    Number(Arc<BigRational>),
    Letter(Letter),
    Sum(Children),
    Product(Children),
    /// Two children: numerator, denominator.
    Quotient(Children),
    /// One child: the base.
    Power(Children, u32),
    /// One child.
    Negative(Children),
    Parallel(Children),
}

/// What a formula names.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Letter {
    /// The complex frequency `s`.
    S,
    /// The frequency `f` in hertz.
    Frequency,
    /// The number π.
    Pi,
    /// A symbol: an index into the [`SymbolTable`].
    Symbol(u32),
    /// A named sub-expression, counted from 0.
    Definition(u32),
}

/// The outermost operation of a formula, for reading.
#[derive(Clone, Copy, Debug)]
pub enum View<'a> {
    /// An exact number, not negative.
    Number(&'a BigRational),
    /// A name.
    Letter(Letter),
    /// Two or more terms; a subtracted term is a [`View::Negative`].
    Sum(&'a [Formula]),
    /// Two or more factors.
    Product(&'a [Formula]),
    /// Numerator and denominator.
    Quotient(&'a Formula, &'a Formula),
    /// A base and an exponent of 2 or more.
    Power(&'a Formula, u32),
    /// The negative of what follows.
    Negative(&'a Formula),
    /// 1/(1/a + 1/b + …) of two or more.
    Parallel(&'a [Formula]),
}

/// Shared children, released without recursion.
#[derive(Clone)]
struct Children(Arc<Vec<Formula>>);

impl Children {
    fn new(items: Vec<Formula>) -> Self {
        Self(Arc::new(items))
    }

    /// The children for building on: moved when nobody else holds them, else copied.
    fn into_vec(mut self) -> Vec<Formula> {
        match Arc::get_mut(&mut self.0) {
            Some(items) => mem::take(items),
            None => self.0.to_vec(),
        }
    }
}

impl Drop for Children {
    fn drop(&mut self) {
        let Some(items) = Arc::get_mut(&mut self.0) else { return };
        // Grandchildren move to this list before their parent goes, so a drop never nests.
        let mut pending = mem::take(items);
        while let Some(mut item) = pending.pop() {
            if let Some(children) = item.children_mut()
                && let Some(items) = Arc::get_mut(&mut children.0)
            {
                pending.append(items);
            }
        }
    }
}

/// Number above which a power of a number is left as written, in bits of the result.
const MAX_FOLDED_BITS: u64 = 4096;

impl Formula {
    /// An exact number.
    #[must_use]
    pub fn number(value: BigRational) -> Self {
        if value.is_negative() {
            Self::signed(true, Self(Node::Number(Arc::new(-value))))
        } else {
            Self(Node::Number(Arc::new(value)))
        }
    }

    /// An integer.
    #[must_use]
    pub fn integer(value: i64) -> Self {
        Self::number(BigRational::from_integer(value.into()))
    }

    /// The symbol of that index.
    #[must_use]
    pub fn symbol(index: u32) -> Self {
        Self::letter(Letter::Symbol(index))
    }

    /// The named sub-expression of that index.
    #[must_use]
    pub fn definition(index: u32) -> Self {
        Self::letter(Letter::Definition(index))
    }

    /// The complex frequency `s`.
    #[must_use]
    pub fn s() -> Self {
        Self::letter(Letter::S)
    }

    /// The frequency `f` in hertz.
    #[must_use]
    pub fn frequency() -> Self {
        Self::letter(Letter::Frequency)
    }

    /// The number π.
    #[must_use]
    pub fn pi() -> Self {
        Self::letter(Letter::Pi)
    }

    /// Any letter.
    #[must_use]
    pub fn letter(letter: Letter) -> Self {
        Self(Node::Letter(letter))
    }

    /// The sum of the terms, in their order; 0 for none.
    ///
    /// Nested sums are flattened, zeros dropped. A sum of negatives only becomes the negative of
    /// a sum. Numbers are not added up. Adding to a sum that nobody else holds costs only what is
    /// added, unless it is a negative.
    #[must_use]
    pub fn sum(terms: impl IntoIterator<Item = Self>) -> Self {
        let mut flat: Vec<Self> = Vec::new();
        for term in terms {
            let (negative, term) = term.into_signed();
            match term.0 {
                Node::Number(value) if value.is_zero() => {}
                Node::Sum(children) if negative => {
                    flat.extend(children.into_vec().into_iter().map(Self::negative));
                }
                Node::Sum(children) if flat.is_empty() => flat = children.into_vec(),
                Node::Sum(children) => flat.extend(children.into_vec()),
                node => flat.push(Self::signed(negative, Self(node))),
            }
        }
        match flat.len() {
            0 => Self::integer(0),
            1 => flat.swap_remove(0),
            _ if flat.iter().all(Self::is_negative) => {
                let terms = flat.into_iter().map(|term| term.into_signed().1).collect();
                Self::signed(true, Self(Node::Sum(Children::new(terms))))
            }
            _ => Self(Node::Sum(Children::new(flat))),
        }
    }

    /// The product of the factors, in their order; 1 for none.
    ///
    /// Nested products are flattened and ones dropped; numbers are multiplied into one leading
    /// number and signs into one sign before the whole.
    #[must_use]
    pub fn product(factors: impl IntoIterator<Item = Self>) -> Self {
        let mut flat: Vec<Self> = Vec::new();
        let mut coefficient: Option<BigRational> = None;
        let mut negative = false;
        for factor in factors {
            let (minus, factor) = factor.into_signed();
            negative ^= minus;
            let items = match factor.0 {
                Node::Product(children) if flat.is_empty() => {
                    flat = children.into_vec();
                    if matches!(flat.first(), Some(Self(Node::Number(_)))) {
                        vec![flat.remove(0)]
                    } else {
                        continue;
                    }
                }
                Node::Product(children) => children.into_vec(),
                node => vec![Self(node)],
            };
            for item in items {
                match item.0 {
                    Node::Number(value) => match &mut coefficient {
                        Some(coefficient) => *coefficient *= &*value,
                        None => coefficient = Some((*value).clone()),
                    },
                    node => flat.push(Self(node)),
                }
            }
        }
        if let Some(coefficient) = coefficient {
            if coefficient.is_zero() {
                return Self::integer(0);
            }
            if !coefficient.is_one() {
                flat.insert(0, Self::number(coefficient));
            }
        }
        let unsigned = match flat.len() {
            0 => Self::integer(1),
            1 => flat.swap_remove(0),
            _ => Self(Node::Product(Children::new(flat))),
        };
        Self::signed(negative, unsigned)
    }

    /// `numerator / denominator`.
    ///
    /// Quotients of quotients become one quotient, a quotient of numbers a number. A quotient by
    /// the number 0 is kept as written and has no value.
    #[must_use]
    pub fn quotient(numerator: Self, denominator: Self) -> Self {
        let (minus_above, numerator) = numerator.into_signed();
        let (minus_below, denominator) = denominator.into_signed();
        let negative = minus_above ^ minus_below;
        let (above, below) = numerator.into_fraction();
        let (mut divisor, lifted) = denominator.into_fraction();
        let mut above = match lifted {
            Some(lifted) => Self::product([above, lifted]),
            None => above,
        };
        if let Some(below) = below {
            divisor = Self::product([below, divisor]);
        }
        if let Node::Number(value) = &divisor.0
            && !value.is_zero()
            && (!value.is_integer() || matches!(above.0, Node::Number(_)))
        {
            let reciprocal = Self::number(value.recip());
            above = Self::product([reciprocal, above]);
            divisor = Self::integer(1);
        }
        let unsigned = if divisor.is_one() || (above.is_zero() && !divisor.is_zero()) {
            above
        } else {
            Self(Node::Quotient(Children::new(vec![above, divisor])))
        };
        Self::signed(negative, unsigned)
    }

    /// `base ^ exponent`; a negative exponent gives a reciprocal, the exponent 0 gives 1.
    #[must_use]
    pub fn power(base: Self, exponent: i32) -> Self {
        let power = Self::unsigned_power(base, exponent.unsigned_abs());
        if exponent < 0 { Self::quotient(Self::integer(1), power) } else { power }
    }

    fn unsigned_power(base: Self, exponent: u32) -> Self {
        if exponent <= 1 {
            return if exponent == 0 { Self::integer(1) } else { base };
        }
        let (negative, base) = base.into_signed();
        let negative = negative && exponent % 2 == 1;
        let unsigned = match base.0 {
            Node::Number(value) if folds(&value, exponent) => {
                Self::number(pow((*value).clone(), exponent as usize))
            }
            Node::Power(children, inner) => match inner.checked_mul(exponent) {
                Some(exponent) => Self(Node::Power(children, exponent)),
                None => {
                    let base = Self(Node::Power(children, inner));
                    Self(Node::Power(Children::new(vec![base]), exponent))
                }
            },
            node => Self(Node::Power(Children::new(vec![Self(node)]), exponent)),
        };
        Self::signed(negative, unsigned)
    }

    /// The negative.
    #[must_use]
    pub fn negative(self) -> Self {
        let (negative, unsigned) = self.into_signed();
        Self::signed(!negative, unsigned)
    }

    /// `a || b || …` = 1/(1/a + 1/b + …); 0 where an operand is the number 0 (a short), and 1/0,
    /// which has no value, for none (an open circuit).
    #[must_use]
    pub fn parallel(operands: impl IntoIterator<Item = Self>) -> Self {
        let mut flat = Vec::new();
        for operand in operands {
            match operand.0 {
                Node::Parallel(children) => flat.extend(children.into_vec()),
                node => flat.push(Self(node)),
            }
        }
        if flat.iter().any(Self::is_zero) {
            return Self::integer(0);
        }
        match flat.len() {
            0 => Self::quotient(Self::integer(1), Self::integer(0)),
            1 => flat.swap_remove(0),
            _ => Self(Node::Parallel(Children::new(flat))),
        }
    }

    /// The outermost operation.
    #[must_use]
    pub fn view(&self) -> View<'_> {
        match &self.0 {
            Node::Number(value) => View::Number(value),
            Node::Letter(letter) => View::Letter(*letter),
            Node::Sum(children) => View::Sum(&children.0),
            Node::Product(children) => View::Product(&children.0),
            Node::Quotient(children) => View::Quotient(&children.0[0], &children.0[1]),
            Node::Power(children, exponent) => View::Power(&children.0[0], *exponent),
            Node::Negative(children) => View::Negative(&children.0[0]),
            Node::Parallel(children) => View::Parallel(&children.0),
        }
    }

    /// The operands of the outermost operation, in order.
    #[must_use]
    pub fn operands(&self) -> &[Self] {
        match &self.0 {
            Node::Number(_) | Node::Letter(_) => &[],
            Node::Sum(children)
            | Node::Product(children)
            | Node::Quotient(children)
            | Node::Power(children, _)
            | Node::Negative(children)
            | Node::Parallel(children) => &children.0,
        }
    }

    /// True for the number 0.
    #[must_use]
    pub fn is_zero(&self) -> bool {
        matches!(&self.0, Node::Number(value) if value.is_zero())
    }

    /// True for the number 1.
    #[must_use]
    pub fn is_one(&self) -> bool {
        matches!(&self.0, Node::Number(value) if value.is_one())
    }

    /// True where the formula begins with a minus sign that applies to the whole.
    #[must_use]
    pub fn is_negative(&self) -> bool {
        matches!(self.0, Node::Negative(_))
    }

    /// How often a symbol or a named sub-expression stands in the formula: the measure of its
    /// length. Numbers, π, `s` and `f` do not count, a power counts its base once.
    #[must_use]
    pub fn symbols(&self) -> u64 {
        let mut count = 0;
        let mut pending = vec![self];
        while let Some(formula) = pending.pop() {
            if let Node::Letter(Letter::Symbol(_) | Letter::Definition(_)) = formula.0 {
                count += 1;
            }
            pending.extend(formula.operands());
        }
        count
    }

    fn signed(negative: bool, unsigned: Self) -> Self {
        if negative && !unsigned.is_zero() {
            Self(Node::Negative(Children::new(vec![unsigned])))
        } else {
            unsigned
        }
    }

    fn into_signed(self) -> (bool, Self) {
        match self.0 {
            Node::Negative(children) => (true, only(children)),
            node => (false, Self(node)),
        }
    }

    /// Numerator and, for a quotient, denominator.
    fn into_fraction(self) -> (Self, Option<Self>) {
        match self.0 {
            Node::Quotient(children) => {
                let mut items = children.into_vec();
                let denominator = items.pop();
                (items.pop().unwrap_or_else(|| Self::integer(1)), denominator)
            }
            node => (Self(node), None),
        }
    }

    fn children_mut(&mut self) -> Option<&mut Children> {
        match &mut self.0 {
            Node::Number(_) | Node::Letter(_) => None,
            Node::Sum(children)
            | Node::Product(children)
            | Node::Quotient(children)
            | Node::Power(children, _)
            | Node::Negative(children)
            | Node::Parallel(children) => Some(children),
        }
    }
}

/// The child of a node that has exactly one.
fn only(children: Children) -> Formula {
    children.into_vec().pop().unwrap_or_else(|| Formula::integer(0))
}

/// True where the power of the number is short enough to be worked out.
fn folds(value: &BigRational, exponent: u32) -> bool {
    let bits = value.numer().bits().max(value.denom().bits());
    bits.saturating_mul(exponent.into()) <= MAX_FOLDED_BITS
}

impl PartialEq for Formula {
    /// Same form: the same operations on the same operands in the same order.
    fn eq(&self, other: &Self) -> bool {
        let mut pending = vec![(self, other)];
        while let Some((a, b)) = pending.pop() {
            let same = match (&a.0, &b.0) {
                (Node::Number(x), Node::Number(y)) => x == y,
                (Node::Letter(x), Node::Letter(y)) => x == y,
                (Node::Power(_, x), Node::Power(_, y)) => x == y,
                (x, y) => mem::discriminant(x) == mem::discriminant(y),
            };
            if !same || a.operands().len() != b.operands().len() {
                return false;
            }
            pending.extend(a.operands().iter().zip(b.operands()));
        }
        true
    }
}

impl Eq for Formula {}

impl fmt::Debug for Formula {
    /// The formula as text, with symbols as `x0`, `x1`, ….
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        plain::write(f, self, &SymbolTable::default(), Dialect::Language)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn x(index: u32) -> Formula {
        Formula::symbol(index)
    }

    fn n(value: i64) -> Formula {
        Formula::integer(value)
    }

    fn half() -> Formula {
        Formula::number(BigRational::new(1.into(), 2.into()))
    }

    #[track_caller]
    fn check(formula: Formula, expected: &str) {
        assert_eq!(format!("{formula:?}"), expected);
    }

    #[test]
    fn sums_are_flat_and_carry_their_signs() {
        check(Formula::sum([]), "0");
        check(Formula::sum([n(0), x(0)]), "x0");
        check(Formula::sum([x(0), Formula::sum([x(1), x(2)])]), "x0 + x1 + x2");
        check(Formula::sum([x(0), x(1).negative()]), "x0 - x1");
        check(Formula::sum([x(0).negative(), x(1)]), "-x0 + x1");
        check(Formula::sum([x(0).negative(), x(1).negative()]), "-(x0 + x1)");
        let difference = Formula::sum([x(1), x(2).negative()]);
        check(Formula::sum([x(0), difference.negative()]), "x0 - x1 + x2");
        check(Formula::sum([x(0), n(-2)]), "x0 - 2");
    }

    #[test]
    fn products_lead_with_one_number_and_one_sign() {
        check(Formula::product([]), "1");
        check(Formula::product([n(1), x(0)]), "x0");
        check(Formula::product([x(0), n(2), x(1), n(-3)]), "-6*x0*x1");
        check(Formula::product([x(0).negative(), x(1).negative()]), "x0*x1");
        check(Formula::product([n(0), x(0).negative()]), "0");
        check(Formula::product([half(), n(2), x(0)]), "x0");
        let inner = Formula::product([n(2), x(1)]);
        check(Formula::product([inner.clone(), x(0)]), "2*x1*x0");
        check(Formula::product([x(0), inner]), "2*x0*x1");
    }

    #[test]
    fn quotients_do_not_nest() {
        let over = Formula::quotient;
        check(over(x(0), n(1)), "x0");
        check(over(n(0), x(0)), "0");
        check(over(n(1), n(0)), "1/0");
        check(over(n(0), n(0)), "0/0");
        check(over(n(3), n(6)), "0.5");
        check(over(x(0), n(2)), "x0/2");
        check(over(x(0), half()), "2*x0");
        check(over(x(0).negative(), x(1)), "-x0/x1");
        check(over(x(0).negative(), x(1).negative()), "x0/x1");
        check(over(over(x(0), x(1)), x(2)), "x0/(x1*x2)");
        check(over(x(0), over(x(1), x(2))), "x0*x2/x1");
        check(over(over(x(0), x(1)), over(x(2), x(3))), "x0*x3/(x1*x2)");
        check(over(n(1), over(n(1), x(0))), "x0");
    }

    #[test]
    fn powers_are_positive() {
        check(Formula::power(x(0), 0), "1");
        check(Formula::power(x(0), 1), "x0");
        check(Formula::power(x(0), -1), "1/x0");
        check(Formula::power(x(0), -2), "1/x0^2");
        check(Formula::power(x(0).negative(), 2), "x0^2");
        check(Formula::power(x(0).negative(), 3), "-x0^3");
        check(Formula::power(Formula::power(x(0), 2), 3), "x0^6");
        check(Formula::power(half(), -2), "4");
        check(Formula::power(n(2), 1_000_000_000), "2^1000000000");
        check(
            Formula::power(Formula::power(x(0), i32::MAX), i32::MAX),
            "(x0^2147483647)^2147483647",
        );
        check(Formula::power(x(0), i32::MIN), "1/x0^2147483648");
    }

    #[test]
    fn parallels_are_flat() {
        let along = |items: [Formula; 2]| Formula::parallel(items);
        check(Formula::parallel([]), "1/0");
        check(Formula::parallel([x(0)]), "x0");
        check(along([x(0), along([x(1), x(2)])]), "x0 || x1 || x2");
        check(along([x(0), n(0)]), "0");
        check(along([x(0).negative(), x(1)]), "(-x0) || x1");
    }

    #[test]
    fn length_counts_symbols() {
        let power = Formula::power(x(0), 3);
        let sum = Formula::sum([Formula::s(), Formula::definition(0), n(7), power, Formula::pi()]);
        assert_eq!(sum.symbols(), 2);
    }

    #[test]
    fn deep_and_long_trees_are_no_burden() {
        let mut deep = x(0);
        for _ in 0..300_000 {
            deep = Formula::quotient(n(1), Formula::sum([x(1), deep]));
        }
        assert_eq!(deep.symbols(), 300_001);
        assert_eq!(deep, deep.clone());
        assert!(format!("{deep:?}").starts_with("1/(x1 + 1/(x1 + "));

        let mut long = x(0);
        for index in 1..100_000 {
            long = Formula::sum([long, x(index)]);
        }
        assert_eq!(long.symbols(), 100_000);
    }
}

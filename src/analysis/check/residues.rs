//! Values modulo a prime, for candidates that the exact algebra confirms afterwards.

use num_bigint::BigInt;
use num_traits::ToPrimitive;

use crate::algebra::modular::{Field, Random, primes};
use crate::algebra::{Fraction, Polynomial, Var};
use crate::circuit::{Number, SymbolId, Value};
use crate::elimination::variable_of;

/// A random point: a residue for `s` and for each symbol.
#[derive(Clone, Debug)]
pub(super) struct Point {
    pub(super) field: Field,
    /// `s` first, then the symbols.
    residues: Vec<u64>,
}

impl Point {
    /// A point for that many symbols; the same seed gives the same point.
    pub(super) fn random(symbols: usize, seed: u64) -> Option<Self> {
        let field = primes().next()?;
        let mut random = Random::new(seed);
        let residues = (0..=symbols).map(|_| random.unit(&field)).collect();
        Some(Self { field, residues })
    }

    /// All residues: that of `s` first, then those of the symbols.
    pub(super) fn residues(&self) -> &[u64] {
        &self.residues
    }

    pub(super) fn of(&self, variable: Var) -> u64 {
        self.residues.get(variable.0 as usize).copied().unwrap_or(0)
    }

    /// With one coordinate multiplied.
    pub(super) fn scaled(&self, variable: Var, factor: u64) -> Self {
        let mut changed = self.clone();
        let residue = &mut changed.residues[variable.0 as usize];
        *residue = self.field.mul(*residue, factor);
        changed
    }

    /// With one coordinate replaced.
    pub(super) fn with(&self, variable: Var, residue: u64) -> Self {
        let mut changed = self.clone();
        changed.residues[variable.0 as usize] = residue;
        changed
    }

    pub(super) fn polynomial(&self, polynomial: &Polynomial) -> u64 {
        polynomial.evaluate_modulo(&self.field, |variable| self.of(variable))
    }

    /// None at a pole.
    pub(super) fn fraction(&self, fraction: &Fraction) -> Option<u64> {
        self.quotient(
            self.polynomial(fraction.numerator()),
            self.polynomial(fraction.denominator()),
        )
    }

    pub(super) fn quotient(&self, above: u64, below: u64) -> Option<u64> {
        (below != 0).then(|| self.field.mul(above, self.field.inverse(below)))
    }

    /// An integer of any size.
    pub(super) fn integer(&self, value: &BigInt) -> u64 {
        let modulus = BigInt::from(self.field.modulus());
        let residue = ((value % &modulus) + &modulus) % &modulus;
        residue.to_u64().unwrap_or(0)
    }

    pub(super) fn number(&self, number: &Number) -> Option<u64> {
        self.quotient(self.integer(number.numer()), self.integer(number.denom()))
    }

    pub(super) fn symbol(&self, symbol: SymbolId) -> u64 {
        self.of(variable_of(symbol))
    }

    /// A power with any exponent; none for a negative power of 0.
    pub(super) fn power(&self, base: u64, exponent: i32) -> Option<u64> {
        let size = u64::from(exponent.unsigned_abs());
        let power = self.field.pow(base, size);
        if exponent < 0 { self.quotient(1, power) } else { Some(power) }
    }

    /// None where something divides by 0.
    pub(super) fn value(&self, value: &Value) -> Option<u64> {
        let field = &self.field;
        Some(match value {
            Value::Number(number) => self.number(number)?,
            Value::Symbol(symbol) => self.symbol(*symbol),
            Value::S => self.of(Var::S),
            Value::Sum(terms) => {
                let mut sum = 0;
                for term in terms {
                    sum = field.add(sum, self.value(term)?);
                }
                sum
            }
            Value::Product(factors) => {
                let mut product = 1;
                for factor in factors {
                    product = field.mul(product, self.value(factor)?);
                }
                product
            }
            Value::Negative(inner) => field.neg(self.value(inner)?),
            Value::Power(base, exponent) => self.power(self.value(base)?, *exponent)?,
            Value::Parallel(parts) => {
                let mut sum = 0;
                for part in parts {
                    sum = field.add(sum, self.quotient(1, self.value(part)?)?);
                }
                self.quotient(1, sum)?
            }
        })
    }
}

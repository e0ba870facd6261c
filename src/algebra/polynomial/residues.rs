//! Values modulo a prime, at a point or along one variable.

use super::{Integer, Polynomial, Var};
use crate::algebra::modular::{Dense, Field};

impl Polynomial {
    /// The coefficients modulo a prime.
    pub fn coefficients_modulo(&self, field: &Field) -> Vec<u64> {
        self.coefficients.iter().map(|value| value.modulo(field.modulus())).collect()
    }

    /// The value modulo a prime. Cost: one product for each power of each term.
    pub fn evaluate_modulo(&self, field: &Field, value: impl Fn(Var) -> u64) -> u64 {
        self.term_values(field, value).into_iter().fold(0, |sum, term| field.add(sum, term))
    }

    /// Modulo a prime, with values for all variables but one.
    pub fn univariate_modulo(
        &self,
        field: &Field,
        variable: Var,
        value: impl Fn(Var) -> u64,
    ) -> Dense {
        let others = |other| if other == variable { 1 } else { value(other) };
        self.sums_by_power(&self.term_values(field, others), variable, field)
    }

    /// The univariate images along each of the polynomial's variables through one point, none of
    /// whose coordinates is 0. Cost: that of one evaluation and one addition a term and variable.
    pub fn lines_modulo(&self, field: &Field, value: impl Fn(Var) -> u64) -> Vec<(Var, Dense)> {
        let terms = self.term_values(field, &value);
        self.variables()
            .map(|variable| {
                let sums = self.sums_by_power(&terms, variable, field);
                let powers = field.powers(field.inverse(value(variable)), sums.degree() as u32);
                let unscaled = sums.coefficients().iter().zip(powers);
                let line = unscaled.map(|(&sum, power)| field.mul(sum, power)).collect();
                (variable, Dense::new(line))
            })
            .collect()
    }

    /// With each coefficient replaced by the number nearest to 0 in its residue class.
    pub(crate) fn symmetric_modulo(&self, field: &Field) -> Self {
        let mut result = Self { layout: self.layout.clone(), ..Self::zero() };
        for (words, coefficient) in self.monomials().zip(&self.coefficients) {
            let value = field.symmetric(coefficient.modulo(field.modulus()));
            if value != 0 {
                result.words.extend_from_slice(words);
                result.coefficients.push(Integer::Small(value));
            }
        }
        result.tightened()
    }

    fn term_values(&self, field: &Field, value: impl Fn(Var) -> u64) -> Vec<u64> {
        let tables: Vec<Vec<u64>> = self
            .variables()
            .map(|variable| field.powers(value(variable), self.degree(variable)))
            .collect();
        let mut values = self.coefficients_modulo(field);
        for (words, term) in self.monomials().zip(&mut values) {
            for (place, powers) in self.layout.fields().iter().zip(&tables) {
                let exponent = place.get(words);
                if exponent > 0 {
                    *term = field.mul(*term, powers[exponent as usize]);
                }
            }
        }
        values
    }

    fn sums_by_power(&self, terms: &[u64], variable: Var, field: &Field) -> Dense {
        let mut sums = vec![0; self.degree(variable) as usize + 1];
        let place = self.layout.field(variable);
        for (words, &term) in self.monomials().zip(terms) {
            let sum = &mut sums[place.map_or(0, |place| place.get(words)) as usize];
            *sum = field.add(*sum, term);
        }
        Dense::new(sums)
    }
}

//! Parts of a polynomial and what is done with its variables: contents, coefficients by power,
//! derivatives, substitution and evaluation. All linear in the terms unless noted.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Zero};

use super::{Integer, Key, Layout, LongKey, Packing, Polynomial, Var, bits_for};

impl Polynomial {
    /// The greatest common divisor of the coefficients, not negative; 0 for the polynomial 0.
    pub fn content(&self) -> BigInt {
        self.integer_content().into_big()
    }

    pub(crate) fn integer_content(&self) -> Integer {
        let mut content = Integer::ZERO;
        for coefficient in &self.coefficients {
            content = content.gcd(coefficient);
            if content.is_one() {
                break;
            }
        }
        content
    }

    /// The lowest power of each variable that divides all terms, variables ascending.
    pub fn monomial_content(&self) -> Vec<(Var, u32)> {
        let lowest = self.variables().map(|variable| (variable, self.trailing_degree(variable)));
        lowest.filter(|power| power.1 > 0).collect()
    }

    /// Divided by the content, leading coefficient positive; 0 stays 0.
    pub fn primitive_part(&self) -> Self {
        let content = self.integer_content();
        self.divided_by_integer(&content).unwrap_or_else(Self::zero).abs()
    }

    /// The coefficients by power of a variable, lowest first, `degree + 1` of them; none for 0.
    pub fn coefficients(&self, variable: Var) -> Vec<Self> {
        let Some(&field) = self.layout.field(variable) else {
            return if self.is_zero() { Vec::new() } else { vec![self.clone()] };
        };
        let mut parts = vec![Self::zero(); self.degree(variable) as usize + 1];
        let mut key = LongKey::from_elem(0, self.layout.words());
        for (words, coefficient) in self.monomials().zip(&self.coefficients) {
            key.copy_from_slice(words);
            field.clear(&mut key);
            let part = &mut parts[field.get(words) as usize];
            part.words.extend_from_slice(&key);
            part.coefficients.push(coefficient.clone());
        }
        // Terms of one power keep their order among themselves.
        for part in &mut parts {
            part.layout = self.layout.clone();
            *part = std::mem::take(part).tightened();
        }
        parts
    }

    /// The coefficient of one power of a variable.
    pub fn coefficient(&self, variable: Var, power: u32) -> Self {
        let field = self.layout.field(variable).copied();
        let mut part = Self { layout: self.layout.clone(), ..Self::zero() };
        let mut key = LongKey::from_elem(0, self.layout.words());
        for (words, coefficient) in self.monomials().zip(&self.coefficients) {
            if field.map_or(0, |field| field.get(words)) == power {
                key.copy_from_slice(words);
                if let Some(field) = field {
                    field.clear(&mut key);
                }
                part.words.extend_from_slice(&key);
                part.coefficients.push(coefficient.clone());
            }
        }
        part.tightened()
    }

    /// The coefficient of the highest power of a variable.
    pub fn leading_coefficient_in(&self, variable: Var) -> Self {
        self.coefficient(variable, self.degree(variable))
    }

    /// `Σ parts[k] · variable^k`, the inverse of [`Self::coefficients`]; the parts may themselves
    /// contain the variable. Cost: a sort if they do not.
    pub fn from_coefficients(variable: Var, parts: &[Self]) -> Self {
        if parts.iter().any(|part| part.contains(variable)) {
            let products = parts.iter().zip(0_u32..);
            return Self::sum(products.map(|(part, power)| part.times_power(variable, power)));
        }
        let degree = u32::try_from(parts.len()).unwrap_or(u32::MAX).saturating_sub(1);
        if degree == 0 {
            return parts.first().cloned().unwrap_or_default();
        }
        let own = Layout::new(std::iter::once((variable, bits_for(degree))));
        let layout = parts.iter().fold(own, |layout, part| layout.union(&part.layout));
        let Some(&field) = layout.field(variable) else { return Self::zero() };
        let mut terms: Vec<(LongKey, Integer)> = Vec::new();
        for (power, part) in (0..=degree).rev().zip(parts.iter().rev()) {
            let keys: Vec<LongKey> =
                Packing::new(&part.layout, &layout).keys(part.len(), &part.words);
            for (mut key, coefficient) in keys.into_iter().zip(&part.coefficients) {
                field.add(&mut key, power);
                terms.push((key, coefficient.clone()));
            }
        }
        // Already in order when the variable is the most significant one: the sort sees that.
        terms.sort_by(|a, b| b.0.cmp(&a.0));
        Self::from_sorted(layout, terms)
    }

    /// The partial derivative.
    pub fn derivative(&self, variable: Var) -> Self {
        let Some(&field) = self.layout.field(variable) else { return Self::zero() };
        let mut result = Self { layout: self.layout.clone(), ..Self::zero() };
        let mut key = LongKey::from_elem(0, self.layout.words());
        for (words, coefficient) in self.monomials().zip(&self.coefficients) {
            let exponent = field.get(words);
            if exponent > 0 {
                key.copy_from_slice(words);
                field.clear(&mut key);
                field.add(&mut key, exponent - 1);
                key.push_words(key.len(), &mut result.words);
                let factor = Integer::from(i64::from(exponent));
                result.coefficients.push(coefficient.times(&factor));
            }
        }
        result.tightened()
    }

    /// Puts a polynomial in the place of a variable, by Horner's rule.
    pub fn substitute(&self, variable: Var, value: &Self) -> Self {
        if !self.contains(variable) {
            return self.clone();
        }
        let parts = self.coefficients(variable);
        if value.len() <= 1 {
            // Powers of a monomial do not grow: add the shifted parts at once.
            let terms = parts.iter().zip(0_u32..);
            return Self::sum(terms.map(|(part, power)| part * &value.pow(power)));
        }
        parts.iter().rev().fold(Self::zero(), |sum, part| &(&sum * value) + part)
    }

    /// With all variables but the given ones, ascending, set to 1; terms that coincide
    /// afterwards are added. Cost: a sort.
    pub(crate) fn projected(&self, kept: &[Var]) -> Self {
        let fields = self.layout.fields().iter();
        let left = fields.filter(|field| kept.contains(&field.variable));
        let layout = Layout::new(left.map(|field| (field.variable, field.bits)));
        let keys: Vec<LongKey> = Packing::new(&self.layout, &layout).keys(self.len(), &self.words);
        let mut terms: Vec<_> = keys.into_iter().zip(self.coefficients.iter().cloned()).collect();
        terms.sort_by(|a, b| b.0.cmp(&a.0));
        Self::from_sorted(layout, terms)
    }

    /// Gives variables other names; what coincides afterwards is collected.
    pub fn renamed(&self, name: impl Fn(Var) -> Var) -> Self {
        let terms = self.coefficients.iter().enumerate().map(|(term, coefficient)| {
            let powers = self.powers(term).map(|(variable, power)| (name(variable), power));
            (powers.collect::<Vec<_>>(), coefficient.to_big())
        });
        Self::from_terms(terms)
    }

    /// The value at rational values of the variables.
    pub fn evaluate(&self, value: impl Fn(Var) -> BigRational) -> BigRational {
        let tables: Vec<Vec<BigRational>> = self
            .variables()
            .map(|variable| {
                let (base, mut powers) = (value(variable), vec![BigRational::one()]);
                for _ in 0..self.degree(variable) {
                    powers.push(powers.last().map_or_else(BigRational::one, |last| last * &base));
                }
                powers
            })
            .collect();
        let mut sum = BigRational::zero();
        for (words, coefficient) in self.monomials().zip(&self.coefficients) {
            let mut term = BigRational::from(coefficient.to_big());
            for (field, powers) in self.layout.fields().iter().zip(&tables) {
                let exponent = field.get(words);
                if exponent > 0 {
                    term *= &powers[exponent as usize];
                }
            }
            sum += term;
        }
        sum
    }
}

//! Factorisation in several variables by lifting from one (Wang 1978; Geddes, Czapor & Labahn 1992,
//! chapter 6).
//!
//! All variables but a main one `x` get small integer values; the image is factored over the
//! integers and its factors are lifted back, a variable at a time, as power series about the values.
//! The leading coefficients are known beforehand: they are factored recursively and distributed by
//! the divisors of their values (Wang's condition). Lifting is done in a field, modulo a 61-bit
//! prime, and once more modulo another one for larger coefficients. Unlucky values give too many
//! image factors and a lifting that does not end in an exact product: other values are tried, a
//! bounded number of times. The result is verified by division.

use num_bigint::BigInt;
use num_integer::Integer as _;
use num_traits::{One, Signed};

use super::super::modular::{Dense, Field, Random, primes};
use super::super::monomial::Var;
use super::super::polynomial::Polynomial;
use super::{factor, zassenhaus};

/// Sets of values that are tried at most.
const POINTS: u64 = 24;
/// Primes for the coefficients.
const MOST_PRIMES: usize = 32;
/// Products of polynomials in the lifting of one set of values.
const PRODUCTS: usize = 4_000;

/// Irreducible factors of a primitive square-free polynomial that has no factor free of any of its
/// variables; `None` if the bound on the work was met.
pub(super) fn factors(polynomial: &Polynomial) -> Option<Vec<Polynomial>> {
    let cost = |&variable: &Var| {
        let lead = polynomial.leading_coefficient_in(variable);
        (polynomial.degree(variable), lead.len())
    };
    let main = polynomial.variables().min_by_key(cost)?;
    let others: Vec<Var> = polynomial.variables().filter(|&variable| variable != main).collect();
    // The content in the main variable, if any, is found by its own factorisation.
    let content = super::super::gcd::gcd_all(polynomial.coefficients(main));
    if !content.is_constant() {
        let rest = polynomial.divide_exact(&content)?;
        let parts = [factor(&content), factor(&rest)];
        let complete = parts.iter().all(|part| part.complete);
        let parts = parts.into_iter().flat_map(|part| part.factors);
        return complete.then(|| parts.map(|part| part.0).collect());
    }
    let lead = factor(&polynomial.leading_coefficient_in(main));
    let problem = Problem { polynomial, main, others, lead: lead.factors, unit: lead.content };
    let mut random = Random::new(0x7761_6e67);
    for attempt in 0..POINTS {
        let values = sample(attempt, problem.others.len(), &mut random);
        if let Some(factors) = problem.attempt(&values) {
            return Some(factors);
        }
    }
    None
}

/// Values for the variables: zeros first, since they keep the polynomial sparse; then small
/// integers; then primes, whose products have divisors of their own, as Wang's condition wants.
fn sample(attempt: u64, count: usize, random: &mut Random) -> Vec<i64> {
    let below = |random: &mut Random, bound: u64| (random.word() % bound) as i64;
    match attempt {
        0 => vec![0; count],
        1..4 => (0..count).map(|_| below(random, 4 * attempt + 1) - 2 * attempt as i64).collect(),
        _ => {
            let mut values = Vec::with_capacity(count);
            while values.len() < count {
                let value = 2 * below(random, 8 * attempt + 16 * count as u64) + 3;
                let prime = (2..value).take_while(|d| d * d <= value).all(|d| value % d != 0);
                if prime && !values.contains(&value) {
                    values.push(value);
                }
            }
            values
        }
    }
}

struct Problem<'a> {
    polynomial: &'a Polynomial,
    main: Var,
    others: Vec<Var>,
    /// Factors of the leading coefficient, and its content.
    lead: Vec<(Polynomial, u32)>,
    unit: BigInt,
}

impl Problem<'_> {
    fn at(&self, polynomial: &Polynomial, values: &[i64]) -> Polynomial {
        self.others.iter().zip(values).fold(polynomial.clone(), |image, (&variable, &value)| {
            image.substitute(variable, &Polynomial::from(value))
        })
    }

    /// The polynomial in new variables that vanish at the values, or back.
    fn shifted(
        &self,
        polynomial: &Polynomial,
        values: &[i64],
        sign: i64,
        field: &Field,
    ) -> Polynomial {
        self.others.iter().zip(values).fold(polynomial.clone(), |image, (&variable, &value)| {
            if value == 0 {
                return image;
            }
            let place = &Polynomial::variable(variable) + &Polynomial::from(sign * value);
            image.substitute(variable, &place).symmetric_modulo(field)
        })
    }

    fn attempt(&self, values: &[i64]) -> Option<Vec<Polynomial>> {
        let image = self.at(self.polynomial, values);
        if image.degree(self.main) != self.polynomial.degree(self.main) {
            return None;
        }
        let content = image.content();
        let image = image.primitive_part();
        let slope = image.derivative(self.main);
        if !super::gcd(&image, &slope).is_constant() {
            return None;
        }
        let parts = match image.monomial_content().is_empty() {
            true => zassenhaus::factors(&image)?,
            false => {
                let variable = Polynomial::variable(self.main);
                let mut parts = vec![variable.clone()];
                let rest = image.divide_exact(&variable)?;
                if !rest.is_constant() {
                    parts.extend(zassenhaus::factors(&rest)?);
                }
                parts
            }
        };
        if parts.len() == 1 {
            return Some(vec![self.polynomial.clone().abs()]);
        }
        let leads = self.distributed(&parts, values, &content)?;
        self.lifted(&parts, &leads, values)
    }

    /// Leading coefficients of the factors up to integers, from the divisors of their values.
    fn distributed(
        &self,
        parts: &[Polynomial],
        values: &[i64],
        content: &BigInt,
    ) -> Option<Vec<Polynomial>> {
        let numbers: Vec<BigInt> = self
            .lead
            .iter()
            .map(|(factor, _)| self.at(factor, values).to_constant().map(|value| value.abs()))
            .collect::<Option<_>>()?;
        // Each value needs a divisor of its own.
        let mut known = vec![content * self.unit.abs()];
        for number in &numbers {
            let mut own = number.clone();
            for other in known.iter().rev() {
                let mut common = own.gcd(other);
                while !common.is_one() {
                    own /= &common;
                    common = common.gcd(&own);
                }
            }
            if own.is_one() {
                return None;
            }
            known.push(own);
        }
        let mut leads = vec![Polynomial::one(); parts.len()];
        for ((factor, multiplicity), own) in self.lead.iter().zip(&known[1..]) {
            let mut left = *multiplicity;
            for (part, lead) in parts.iter().zip(&mut leads) {
                let mut number = part.leading_coefficient();
                while left > 0 && number.is_multiple_of(own) {
                    number /= own;
                    left -= 1;
                    *lead = &*lead * factor;
                }
            }
            if left > 0 {
                return None;
            }
        }
        Some(leads)
    }

    /// Lifts modulo one prime after the other, joining the residues, until the factors divide.
    fn lifted(
        &self,
        parts: &[Polynomial],
        leads: &[Polynomial],
        values: &[i64],
    ) -> Option<Vec<Polynomial>> {
        let mut joined: Vec<Polynomial> = vec![Polynomial::zero(); parts.len()];
        let mut modulus = BigInt::one();
        for field in primes().take(MOST_PRIMES) {
            let residues = self.lifted_modulo(&field, parts, leads, values)?;
            let inverse = Polynomial::from(modulus.clone()).evaluate_modulo(&field, |_| 0);
            let inverse = Polynomial::from(field.symmetric(field.inverse(inverse)));
            let mut stable = true;
            for (whole, residue) in joined.iter_mut().zip(&residues) {
                let change = (residue - &*whole).symmetric_modulo(&field);
                stable &= change.is_zero();
                let step = (&change * &inverse).symmetric_modulo(&field);
                *whole += &step.scaled(&modulus);
            }
            modulus *= field.modulus();
            if let Some(factors) = self.verified(&joined) {
                return Some(factors);
            }
            if stable {
                break;
            }
        }
        None
    }

    /// The primitive parts, if they multiply to the polynomial.
    fn verified(&self, factors: &[Polynomial]) -> Option<Vec<Polynomial>> {
        let mut rest = self.polynomial.clone();
        let mut result = Vec::with_capacity(factors.len());
        for factor in factors {
            let factor = factor.primitive_part();
            rest = rest.divide_exact(&factor)?;
            result.push(factor);
        }
        rest.is_constant().then_some(result)
    }

    /// Multiples of the factors by integers, modulo a prime.
    fn lifted_modulo(
        &self,
        field: &Field,
        parts: &[Polynomial],
        leads: &[Polynomial],
        values: &[i64],
    ) -> Option<Vec<Polynomial>> {
        let unit = Polynomial::from(self.unit.clone()).symmetric_modulo(field);
        let inverse = field.inverse(unit.evaluate_modulo(field, |_| 0));
        let inverse = Polynomial::from(field.symmetric(inverse));
        // Up to the unit, the leading coefficient is the product of those of the factors.
        let whole = self.shifted(self.polynomial, values, 1, field);
        let whole = (&whole * &inverse).symmetric_modulo(field);
        let leads: Vec<Polynomial> =
            leads.iter().map(|lead| self.shifted(lead, values, 1, field)).collect();
        let image = |(part, lead): (&Polynomial, &Polynomial)| {
            let image = part.univariate_modulo(field, self.main, |_| 0).monic(field);
            image.scaled(lead.evaluate_modulo(field, |_| 0), field)
        };
        let images: Vec<Dense> = parts.iter().zip(&leads).map(image).collect();
        let factors =
            Lift::new(field, self.main, &self.others, &images)?.run(&whole, &images, &leads)?;
        let back = |factor: &Polynomial| {
            let factor = self.shifted(factor, values, -1, field);
            (&factor * &unit).symmetric_modulo(field)
        };
        Some(factors.iter().map(back).collect())
    }
}

/// The state of lifting modulo a prime about the origin.
struct Lift<'a> {
    field: &'a Field,
    main: Var,
    others: &'a [Var],
    /// Image factors and the inverses of their cofactors modulo them.
    bases: Vec<(Dense, Dense)>,
    products: usize,
}

impl<'a> Lift<'a> {
    fn new(field: &'a Field, main: Var, others: &'a [Var], images: &[Dense]) -> Option<Self> {
        let one = Dense::new(vec![1]);
        let all = images.iter().fold(one, |product, image| product.mul(image, field));
        let bases = images.iter().map(|image| {
            let cofactor = all.div_rem(image, field).0;
            Some((image.clone(), cofactor.inverse_modulo(image, field)?))
        });
        Some(Self { field, main, others, bases: bases.collect::<Option<_>>()?, products: 0 })
    }

    fn times(&mut self, a: &Polynomial, b: &Polynomial) -> Option<Polynomial> {
        self.products += 1;
        (self.products <= PRODUCTS).then(|| (a * b).symmetric_modulo(self.field))
    }

    fn minus(&self, a: &Polynomial, b: &Polynomial) -> Polynomial {
        (a - b).symmetric_modulo(self.field)
    }

    /// Factors of `whole` with the given images at the origin and the given leading coefficients.
    fn run(
        &mut self,
        whole: &Polynomial,
        images: &[Dense],
        leads: &[Polynomial],
    ) -> Option<Vec<Polynomial>> {
        let main = self.main;
        let mut factors: Vec<Polynomial> =
            images.iter().map(|image| self.polynomial(image)).collect();
        for (place, &variable) in self.others.iter().enumerate() {
            let at_origin = |polynomial: &Polynomial| {
                let later = &self.others[place + 1..];
                later.iter().fold(polynomial.clone(), |value, &other| value.coefficient(other, 0))
            };
            let target = at_origin(whole);
            let bases = factors.clone();
            for (factor, lead) in factors.iter_mut().zip(leads) {
                let degree = factor.degree(main);
                let known = factor.leading_coefficient_in(main);
                let change = &at_origin(lead) - &known;
                *factor =
                    (&*factor + &change.times_power(main, degree)).symmetric_modulo(self.field);
            }
            let degree = target.degree(variable);
            let mut error = self.error(&target, &factors)?;
            for power in 1..=degree {
                if error.is_zero() {
                    break;
                }
                let part = error.coefficient(variable, power);
                if part.is_zero() {
                    continue;
                }
                let changes = self.corrections(&bases, &part, place, &target)?;
                for (factor, change) in factors.iter_mut().zip(changes) {
                    *factor = (&*factor + &change.times_power(variable, power))
                        .symmetric_modulo(self.field);
                }
                error = self.error(&target, &factors)?;
            }
            if !error.is_zero() {
                return None;
            }
        }
        Some(factors)
    }

    fn error(&mut self, target: &Polynomial, factors: &[Polynomial]) -> Option<Polynomial> {
        let mut product = Polynomial::one();
        for factor in factors {
            product = self.times(&product, factor)?;
        }
        Some(self.minus(target, &product))
    }

    fn polynomial(&self, dense: &Dense) -> Polynomial {
        let terms = dense.coefficients().iter().zip(0_u32..);
        let terms = terms.map(|(&value, power)| {
            ([(self.main, power)], BigInt::from(self.field.symmetric(value)))
        });
        Polynomial::from_terms(terms)
    }

    /// Solves `Σ δᵢ·Π_{j≠i} aⱼ = c` with the degree of δᵢ in x below that of aᵢ, in the first
    /// `count` of the other variables.
    fn corrections(
        &mut self,
        a: &[Polynomial],
        c: &Polynomial,
        count: usize,
        target: &Polynomial,
    ) -> Option<Vec<Polynomial>> {
        let Some(last) = count.checked_sub(1) else {
            let right = c.univariate_modulo(self.field, self.main, |_| 0);
            let solve = |(image, inverse): &(Dense, Dense)| {
                let value = right.mul(inverse, self.field).div_rem(image, self.field).1;
                self.polynomial(&value)
            };
            return Some(self.bases.iter().map(solve).collect());
        };
        let variable = self.others[last];
        let mut cofactors = Vec::with_capacity(a.len());
        for skipped in 0..a.len() {
            let mut product = Polynomial::one();
            for (_, factor) in a.iter().enumerate().filter(|(place, _)| *place != skipped) {
                product = self.times(&product, factor)?;
            }
            cofactors.push(product);
        }
        let bases: Vec<Polynomial> = a.iter().map(|value| value.coefficient(variable, 0)).collect();
        let mut result = vec![Polynomial::zero(); a.len()];
        let mut error = c.clone();
        for power in 0..=target.degree(variable) {
            let part = error.coefficient(variable, power);
            if part.is_zero() {
                continue;
            }
            let changes = self.corrections(&bases, &part, last, target)?;
            for ((sum, change), cofactor) in result.iter_mut().zip(changes).zip(&cofactors) {
                let change = change.times_power(variable, power);
                let product = self.times(&change, cofactor)?;
                error = self.minus(&error, &product);
                *sum = (&*sum + &change).symmetric_modulo(self.field);
            }
        }
        error.is_zero().then_some(result)
    }
}

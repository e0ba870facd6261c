//! Sparse modular greatest common divisors (Zippel 1979, 1990; scaling after Brown 1971).
//!
//! Modulo a prime, the gcd is built one variable at a time from univariate images in a main
//! variable `x`. The terms found so far are the skeleton for the next variable: a further value of
//! it costs only as many images as the largest coefficient of a power of `x` has terms, taken at a
//! geometric sequence of points, where the linear systems are transposed Vandermonde systems
//! (quadratic). Images are scaled by `γ = gcd(lc a, lc b)`, so that what is built is
//! `G' = γ/lc(G) · G` with integer coefficients. Further primes reuse the skeleton; residues are
//! joined by the Chinese remainder theorem.
//!
//! An answer is believed only if it divides both operands and has the degrees of the probe. Cost:
//! about `Σ dⱼ·T` images for degrees `dⱼ` and `T` terms a power of `x`, each linear in the operands.

use num_bigint::BigInt;

use super::super::integer::Integer;
use super::super::modular::{Dense, Field, Random, primes};
use super::super::monomial::Var;
use super::super::polynomial::Polynomial;

/// Attempts with fresh points before giving up.
const ATTEMPTS: u64 = 4;
/// Changes of the points within one attempt.
const RETRIES: usize = 8;
/// Primes for the coefficients: enough for some 15 000 bits.
const MOST_PRIMES: usize = 256;

/// The gcd of operands over the same variables with the degrees of a probe, all positive. `None`
/// when luck ran out.
pub(super) fn gcd(a: &Polynomial, b: &Polynomial, degrees: &[(Var, u32)]) -> Option<Polynomial> {
    let main = main_variable(a, b, degrees)?;
    let (lead_a, lead_b) = (a.leading_coefficient_in(main), b.leading_coefficient_in(main));
    let scale = super::gcd(&lead_a, &lead_b);
    let others = degrees.iter().filter(|entry| entry.0 != main);
    let problem = Problem {
        a,
        b,
        degree: degrees.iter().find(|entry| entry.0 == main)?.1,
        bounds: others.clone().map(|&(var, degree)| degree + scale.degree(var)).collect(),
        order: std::iter::once(main).chain(others.map(|entry| entry.0)).collect(),
        scale,
    };
    (0..ATTEMPTS).find_map(|attempt| {
        problem.attempt(&mut Random::new(attempt)).map(|found| finished(found, degrees))
    })
}

/// The variable whose choice promises the fewest images: few terms in a leading coefficient, most
/// of the degree in the variable itself.
fn main_variable(a: &Polynomial, b: &Polynomial, degrees: &[(Var, u32)]) -> Option<Var> {
    let leading = |operand: &Polynomial, variable: Var| {
        let degree = operand.degree(variable);
        let field = operand.layout.field(variable);
        operand.monomials().filter(|words| field.map_or(0, |f| f.get(words)) == degree).count()
    };
    let total: usize = degrees.iter().map(|entry| entry.1 as usize).sum();
    let cost = |&&(variable, degree): &&(Var, u32)| {
        let terms = leading(a, variable).min(leading(b, variable));
        terms.saturating_mul(1 + total - degree as usize)
    };
    degrees.iter().min_by_key(cost).map(|entry| entry.0)
}

/// Adds factors free of the main variable, which images cannot show.
fn finished(found: Candidate, degrees: &[(Var, u32)]) -> Polynomial {
    let Candidate { polynomial, left, right } = found;
    if degrees.iter().all(|&(variable, degree)| polynomial.degree(variable) == degree) {
        return polynomial;
    }
    let rest = super::gcd(&left, &right);
    (&polynomial * &rest).abs()
}

/// A verified common divisor with its cofactors.
struct Candidate {
    polynomial: Polynomial,
    left: Polynomial,
    right: Polynomial,
}

struct Problem<'a> {
    a: &'a Polynomial,
    b: &'a Polynomial,
    /// `γ`.
    scale: Polynomial,
    /// The main variable, then the others.
    order: Vec<Var>,
    /// Degree of the gcd in the main variable.
    degree: u32,
    /// Bounds for the degrees of `G'` in the other variables.
    bounds: Vec<u32>,
}

/// Terms modulo a prime: exponents in the order of the problem, descending, and coefficients.
#[derive(Clone)]
struct Terms {
    width: usize,
    exponents: Vec<u32>,
    values: Vec<u64>,
}

impl Terms {
    fn new(polynomial: &Polynomial, order: &[Var], field: &Field) -> Self {
        let fields: Vec<_> = order.iter().map(|&var| polynomial.layout.field(var)).collect();
        let values = polynomial.coefficients_modulo(field);
        let row = |words: &[u64]| -> Vec<u32> {
            fields.iter().map(|place| place.map_or(0, |place| place.get(words))).collect()
        };
        if order.is_sorted() {
            let exponents = polynomial.monomials().flat_map(row).collect();
            return Self { width: order.len(), exponents, values };
        }
        let mut rows: Vec<(Vec<u32>, u64)> = polynomial.monomials().map(row).zip(values).collect();
        rows.sort_unstable_by(|a, b| b.0.cmp(&a.0));
        let values = rows.iter().map(|row| row.1).collect();
        let exponents = rows.into_iter().flat_map(|row| row.0).collect();
        Self { width: order.len(), exponents, values }
    }

    fn rows(&self) -> impl Iterator<Item = &[u32]> {
        self.exponents.chunks_exact(self.width)
    }

    /// With a value for the last variable; like terms are neighbours.
    fn with_last(&self, value: u64, field: &Field) -> Self {
        let width = self.width - 1;
        let mut result = Self { width, exponents: Vec::new(), values: Vec::new() };
        let most = self.rows().map(|row| row[width]).max().unwrap_or(0);
        let powers = field.powers(value, most);
        for (row, &coefficient) in self.rows().zip(&self.values) {
            let term = match row[width] {
                0 => coefficient,
                power => field.mul(coefficient, powers[power as usize]),
            };
            let same = result.exponents.len() >= width
                && !result.values.is_empty()
                && result.exponents[result.exponents.len() - width..] == row[..width];
            match result.values.last_mut() {
                Some(last) if same => *last = field.add(*last, term),
                _ => {
                    result.exponents.extend_from_slice(&row[..width]);
                    result.values.push(term);
                }
            }
        }
        result
    }

    /// The values of the monomials without the main variable at a point.
    fn ratios(&self, point: &[u64], field: &Field) -> Vec<u64> {
        let most = |place: usize| self.rows().map(|row| row[place + 1]).max().unwrap_or(0);
        let tables: Vec<Vec<u64>> = point
            .iter()
            .enumerate()
            .map(|(place, &value)| field.powers(value, most(place)))
            .collect();
        self.rows()
            .map(|row| {
                row[1..].iter().zip(&tables).filter(|entry| *entry.0 > 0).fold(
                    1,
                    |product, (&power, table)| {
                        if product == 1 {
                            table[power as usize]
                        } else {
                            field.mul(product, table[power as usize])
                        }
                    },
                )
            })
            .collect()
    }
}

/// Univariate images of one polynomial at the powers of a point.
struct Sequence<'a> {
    terms: &'a Terms,
    ratios: Vec<u64>,
    current: Vec<u64>,
}

impl<'a> Sequence<'a> {
    fn new(terms: &'a Terms, point: &[u64], field: &Field) -> Self {
        let ratios = terms.ratios(point, field);
        Self { terms, ratios, current: terms.values.clone() }
    }

    fn next(&mut self, field: &Field) -> Dense {
        let degree = self.terms.exponents.first().copied().unwrap_or(0);
        let mut sums = vec![0; degree as usize + 1];
        let entries = self.terms.rows().zip(&self.ratios).zip(&mut self.current);
        for ((row, &ratio), value) in entries {
            *value = field.mul(*value, ratio);
            let sum = &mut sums[row[0] as usize];
            *sum = field.add(*sum, *value);
        }
        Dense::new(sums)
    }
}

/// The three polynomials of which images are taken.
struct Images {
    a: Terms,
    b: Terms,
    scale: Terms,
}

impl Images {
    fn with_last(&self, value: u64, field: &Field) -> Self {
        Self {
            a: self.a.with_last(value, field),
            b: self.b.with_last(value, field),
            scale: self.scale.with_last(value, field),
        }
    }

    /// The coefficients of `G'` for a skeleton in the variables that are left.
    fn coefficients(
        &self,
        skeleton: &Terms,
        problem: &Problem<'_>,
        field: &Field,
        random: &mut Random,
    ) -> Option<Vec<u64>> {
        (0..RETRIES).find_map(|_| {
            let point: Vec<u64> = (1..skeleton.width).map(|_| random.unit(field)).collect();
            self.at_powers(skeleton, problem, field, &point)
        })
    }

    fn at_powers(
        &self,
        skeleton: &Terms,
        problem: &Problem<'_>,
        field: &Field,
        point: &[u64],
    ) -> Option<Vec<u64>> {
        let nodes = skeleton.ratios(point, field);
        let powers: Vec<u32> = skeleton.rows().map(|row| row[0]).collect();
        let groups: Vec<_> = runs(&powers).collect();
        let most = groups.iter().map(|(_, range)| range.len()).max()?;
        let mut sequences =
            [&self.a, &self.b, &self.scale].map(|terms| Sequence::new(terms, point, field));
        let mut values: Vec<Vec<u64>> = vec![Vec::with_capacity(most); groups.len()];
        for _ in 0..most {
            let [a, b, scale] = sequences.each_mut().map(|sequence| sequence.next(field));
            let image = problem.image(&a, &b, scale.leading(), field)?;
            for ((power, _), values) in groups.iter().zip(&mut values) {
                values.push(image.coefficients().get(*power as usize).copied().unwrap_or(0));
            }
        }
        let mut result = Vec::with_capacity(nodes.len());
        for ((_, range), values) in groups.iter().zip(&values) {
            result.extend(solve_vandermonde(&nodes[range.clone()], values, field)?);
        }
        Some(result)
    }
}

/// Ranges of equal values.
fn runs(values: &[u32]) -> impl Iterator<Item = (u32, std::ops::Range<usize>)> {
    let mut start = 0;
    values.chunk_by(|a, b| a == b).map(move |chunk| {
        let range = start..start + chunk.len();
        start = range.end;
        (chunk[0], range)
    })
}

/// Solves `Σⱼ cⱼ·mⱼ^k = v_k` for k = 1, 2, …; none if two nodes are equal.
fn solve_vandermonde(nodes: &[u64], values: &[u64], field: &Field) -> Option<Vec<u64>> {
    if let [node] = nodes {
        return Some(vec![field.mul(values[0], field.inverse(*node))]);
    }
    let mut master = vec![1];
    for &node in nodes {
        master.insert(0, 0);
        for power in 0..master.len() - 1 {
            let product = field.mul(master[power + 1], node);
            master[power] = field.sub(master[power], product);
        }
    }
    let mut sums = Vec::with_capacity(nodes.len());
    let mut divisors = Vec::with_capacity(nodes.len());
    for &node in nodes {
        // master/(z − node), from the top, its value at the node, and its product with the values.
        let (mut quotient, mut at_node, mut sum) = (0, 0, 0);
        for power in (0..nodes.len()).rev() {
            quotient = field.add(master[power + 1], field.mul(quotient, node));
            at_node = field.add(field.mul(at_node, node), quotient);
            sum = field.add(sum, field.mul(quotient, values[power]));
        }
        let divisor = field.mul(at_node, node);
        if divisor == 0 {
            return None;
        }
        sums.push(sum);
        divisors.push(divisor);
    }
    field.invert_all(&mut divisors);
    Some(sums.iter().zip(&divisors).map(|(&sum, &inverse)| field.mul(sum, inverse)).collect())
}

impl Problem<'_> {
    /// One pass with its own points: all primes until a candidate is verified.
    fn attempt(&self, random: &mut Random) -> Option<Candidate> {
        let mut fields = primes();
        let (first, skeleton) = fields
            .by_ref()
            .take(3)
            .find_map(|field| self.build(&field, random).map(|terms| (field, terms)))?;
        let mut joined: Vec<BigInt> =
            skeleton.values.iter().map(|&value| BigInt::from(first.symmetric(value))).collect();
        if let Some(found) = self.verified(&skeleton, &joined) {
            return Some(found);
        }
        let mut modulus = BigInt::from(first.modulus());
        for field in fields.filter(|field| *field != first).take(MOST_PRIMES) {
            let images = self.images(&field);
            let values = images.coefficients(&skeleton, self, &field, random)?;
            let stable = join(&mut joined, &mut modulus, &values, &field);
            if stable {
                return self.verified(&skeleton, &joined);
            }
        }
        None
    }

    fn images(&self, field: &Field) -> Images {
        let terms = |polynomial| Terms::new(polynomial, &self.order, field);
        Images { a: terms(self.a), b: terms(self.b), scale: terms(&self.scale) }
    }

    /// The image of `G'` in the main variable; none at an unlucky point.
    fn image(&self, a: &Dense, b: &Dense, scale: u64, field: &Field) -> Option<Dense> {
        let kept = a.degree() == self.a.degree(self.order[0]) as usize
            && b.degree() == self.b.degree(self.order[0]) as usize;
        if !kept || scale == 0 {
            return None;
        }
        let common = a.gcd(b, field);
        (common.degree() == self.degree as usize).then(|| common.scaled(scale, field))
    }

    /// `G'` modulo one prime, a variable at a time.
    fn build(&self, field: &Field, random: &mut Random) -> Option<Terms> {
        let anchor: Vec<u64> = self.bounds.iter().map(|_| random.unit(field)).collect();
        let mut levels = vec![self.images(field)];
        for &value in anchor.iter().rev() {
            let next = levels.last()?.with_last(value, field);
            levels.push(next);
        }
        let bottom = levels.pop()?;
        let dense = |terms: &Terms| Sequence::new(terms, &[], field).next(field);
        let (a, b, scale) = (dense(&bottom.a), dense(&bottom.b), dense(&bottom.scale));
        let image = self.image(&a, &b, scale.leading(), field)?;
        let mut found = Terms { width: 1, exponents: Vec::new(), values: Vec::new() };
        for (power, &value) in image.coefficients().iter().enumerate().rev() {
            if value != 0 {
                found.exponents.push(power as u32);
                found.values.push(value);
            }
        }
        for (&start, &bound) in anchor.iter().zip(&self.bounds) {
            let level = levels.pop()?;
            let mut points = vec![start];
            let mut values = vec![found.values.clone()];
            while points.len() <= bound as usize {
                let point = random.unit(field);
                if points.contains(&point) {
                    continue;
                }
                let images = level.with_last(point, field);
                values.push(images.coefficients(&found, self, field, random)?);
                points.push(point);
            }
            found = interpolated(&found, &points, &values, field);
        }
        Some(found)
    }

    /// The candidate without what the scaling brought in, if it divides both operands.
    fn verified(&self, skeleton: &Terms, values: &[BigInt]) -> Option<Candidate> {
        let order = &self.order;
        let terms = skeleton
            .rows()
            .zip(values)
            .map(|(row, value)| (order.iter().copied().zip(row.iter().copied()), value.clone()));
        let scaled = Polynomial::from_terms(terms).primitive_part();
        self.divided(scaled.clone()).or_else(|| {
            let content = super::gcd_all(scaled.coefficients(order[0]));
            if content.is_constant() {
                return None;
            }
            self.divided(scaled.divide_exact(&content)?)
        })
    }

    fn divided(&self, polynomial: Polynomial) -> Option<Candidate> {
        let left = self.a.divide_exact(&polynomial)?;
        let right = self.b.divide_exact(&polynomial)?;
        Some(Candidate { polynomial, left, right })
    }
}

/// Interpolates each coefficient in one more variable.
fn interpolated(skeleton: &Terms, points: &[u64], values: &[Vec<u64>], field: &Field) -> Terms {
    let count = points.len();
    // Column k: the polynomial that is 1 at point k and 0 at the others.
    let basis: Vec<Dense> = (0..count)
        .map(|place| {
            let unit: Vec<u64> = (0..count).map(|other| u64::from(other == place)).collect();
            Dense::interpolate(points, &unit, field)
        })
        .collect();
    let mut result = Terms { width: skeleton.width + 1, exponents: Vec::new(), values: Vec::new() };
    for (term, row) in skeleton.rows().enumerate() {
        for power in (0..count).rev() {
            let sum = basis.iter().zip(values).fold(0, |sum, (basis, values)| {
                let weight = basis.coefficients().get(power).copied().unwrap_or(0);
                field.add(sum, field.mul(weight, values[term]))
            });
            if sum != 0 {
                result.exponents.extend_from_slice(row);
                result.exponents.push(power as u32);
                result.values.push(sum);
            }
        }
    }
    result
}

/// Chinese remaindering (Garner's step); whether nothing changed.
fn join(joined: &mut [BigInt], modulus: &mut BigInt, values: &[u64], field: &Field) -> bool {
    let residue = |value: &BigInt| Integer::from(value).modulo(field.modulus());
    let inverse = field.inverse(residue(modulus));
    let mut stable = true;
    for (whole, &value) in joined.iter_mut().zip(values) {
        let step = field.mul(field.sub(value, residue(whole)), inverse);
        if step != 0 {
            stable = false;
            *whole += &*modulus * field.symmetric(step);
        }
    }
    *modulus *= field.modulus();
    stable
}

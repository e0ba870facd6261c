//! Numeric coefficients: polynomials in `s` with integer coefficients, exactly.
//!
//! Every choice is scaled by a factor of its own that makes its weights integers; the factors
//! multiply numerator and denominator alike. A level that the diagram leaves out has the weight 1
//! there, which has become that factor: an edge is multiplied by the factors of the levels it skips.

use num_bigint::BigInt;
use num_integer::Integer;
use num_rational::BigRational;
use num_traits::{One, Zero};

use crate::algebra::{Polynomial, Var};
use crate::elimination::diagram::{Diagram, Link};

/// Coefficients by powers of `s`, lowest first.
pub(crate) type Coefficients = Vec<BigInt>;

/// Powers of ten tried as the unit of `s`: with picofarads beside siemens, integers are three times
/// shorter where `s` counts in 1e9/s.
const UNITS: [u32; 5] = [0, 3, 6, 9, 12];

/// The weights of each choice as integer polynomials in `s`, and the choice's factor.
pub(crate) struct Scaled {
    weights: Vec<Coefficients>,
    factors: Vec<BigInt>,
    /// The unit of `s` in the weights, as a power of ten.
    unit: u32,
}

impl Scaled {
    /// Binary digits of all weights and factors.
    fn bits(&self) -> u64 {
        self.weights.iter().flatten().chain(&self.factors).map(BigInt::bits).sum()
    }
}

/// Puts numbers into the weights; `symbol` gives a symbol's value.
pub(crate) fn scale(
    weights: &[Polynomial],
    first_weight: &[u32],
    symbol: &dyn Fn(Var) -> BigRational,
) -> Scaled {
    let values: Vec<Vec<BigRational>> = weights
        .iter()
        .map(|weight| {
            let coefficients = weight.coefficients(Var::S);
            coefficients.iter().map(|coefficient| coefficient.evaluate(symbol)).collect()
        })
        .collect();
    let choices: Vec<&[Vec<BigRational>]> = first_weight
        .iter()
        .enumerate()
        .map(|(choice, &first)| {
            let last = first_weight.get(choice + 1).map_or(values.len(), |&next| next as usize);
            &values[first as usize..last]
        })
        .collect();
    let first = scaled(&choices, UNITS[0]);
    UNITS[1..]
        .iter()
        .map(|&unit| scaled(&choices, unit))
        .fold(first, |best, other| if other.bits() < best.bits() { other } else { best })
}

/// The weights of these choices with that unit of `s`.
fn scaled(choices: &[&[Vec<BigRational>]], unit: u32) -> Scaled {
    let mut scaled = Scaled { weights: Vec::new(), factors: Vec::new(), unit };
    for weights in choices {
        let weights: Vec<Vec<BigRational>> = weights
            .iter()
            .map(|weight| {
                let powers = weight.iter().zip(0_u32..);
                powers.map(|(value, power)| value * power_of_ten(unit * power)).collect()
            })
            .collect();
        let all = || weights.iter().flatten().filter(|value| !value.is_zero());
        let denominator = all().fold(BigInt::one(), |common, value| common.lcm(value.denom()));
        let content = all().fold(BigInt::zero(), |common, value| {
            common.gcd(&(value.numer() * (&denominator / value.denom())))
        });
        let content = if content.is_zero() { BigInt::one() } else { content };
        for weight in &weights {
            let whole =
                |value: &BigRational| value.numer() * (&denominator / value.denom()) / &content;
            scaled.weights.push(weight.iter().map(whole).collect());
        }
        // Only whole when a weight 1 stands in the choice; else no level of it is ever left out.
        scaled.factors.push(&denominator / &content);
    }
    scaled
}

fn power_of_ten(exponent: u32) -> BigInt {
    BigInt::from(10).pow(exponent)
}

/// How many products of integers [`of`] takes.
pub(crate) fn products(diagram: &Diagram, weights: &[Polynomial]) -> u64 {
    let mut degrees: Vec<u32> = vec![0];
    let mut products = 0_u64;
    for node in 1..diagram.len() {
        let mut degree = 0;
        for edge in diagram.edges(node) {
            let below = degrees[edge.link.node()];
            let weight = &weights[edge.weight as usize];
            products += u64::from(below + 1) * u64::from(weight.degree(Var::S) + 1);
            degree = degree.max(below + weight.degree(Var::S));
        }
        degrees.push(degree);
    }
    products
}

/// Numerator and denominator, up to one common factor.
pub(crate) fn of(
    diagram: &Diagram,
    scaled: &Scaled,
    level_of: &[u32],
    roots: [Link; 2],
) -> [Coefficients; 2] {
    let mut factor_at = vec![BigInt::one(); level_of.len()];
    for (choice, &level) in level_of.iter().enumerate() {
        factor_at[level as usize] = scaled.factors[choice].clone();
    }
    let levels = level_of.len();
    let level = |node: usize| {
        if node == 0 { levels } else { level_of[diagram.choice(node) as usize] as usize }
    };
    let skipped = |from: usize, to: usize| -> BigInt {
        factor_at[from..to].iter().filter(|factor| !factor.is_one()).product()
    };
    let mut uses = diagram.uses();
    let mut values: Vec<Coefficients> = vec![vec![BigInt::one()]];
    for node in 1..diagram.len() {
        let mut sum = Coefficients::new();
        for edge in diagram.edges(node) {
            let child = edge.link.node();
            let mut factor = skipped(level(node) + 1, level(child));
            if edge.link.is_negative() {
                factor = -factor;
            }
            for (power, weight) in scaled.weights[edge.weight as usize].iter().enumerate() {
                if weight.is_zero() {
                    continue;
                }
                let weight = weight * &factor;
                if sum.len() < values[child].len() + power {
                    sum.resize(values[child].len() + power, BigInt::zero());
                }
                for (at, value) in values[child].iter().enumerate() {
                    sum[at + power] += value * &weight;
                }
            }
            // What no parent needs any more is dropped; the determinant 1 stays.
            uses[child] -= 1;
            if uses[child] == 0 && child != 0 {
                values[child] = Coefficients::new();
            }
        }
        values.push(sum);
    }
    let degree = roots.iter().filter(|root| !root.is_dead()).map(|root| values[root.node()].len());
    let degree = degree.max().unwrap_or(0);
    roots.map(|root| {
        if root.is_dead() {
            return Coefficients::new();
        }
        let mut factor = skipped(0, level(root.node()));
        if root.is_negative() {
            factor = -factor;
        }
        let powers = values[root.node()].iter().enumerate();
        powers
            .map(|(power, value)| {
                value * &factor * power_of_ten(scaled.unit * (degree - 1 - power) as u32)
            })
            .collect()
    })
}

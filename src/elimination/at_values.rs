//! An elimination with numbers in the place of its symbols, made ready for many frequencies.

use num_complex::Complex;

use super::passes::numbers::{ComplexNumbers, Scaled, scaled_integer};
use super::passes::{self, Ring, gradient};
use super::value::symbol_of;
use super::{Elimination, Link};
use crate::algebra::Polynomial;
use crate::circuit::SymbolId;

/// A value that is smaller than its terms by this factor is taken for rounding.
const NOISE: f64 = 1e-10;
/// What stands for infinity where a symbol enters by higher powers.
const HUGE: f64 = 1e12;

type C = Complex<f64>;

/// An elimination at certain values of its symbols.
#[derive(Debug)]
pub struct AtValues<'e> {
    of: &'e Elimination,
    symbols: Vec<f64>,
    weights: Vec<Vec<WeightTerm>>,
    /// For each symbol that occurs: whether the determinants are of first degree in it for certain.
    occurring: Vec<(SymbolId, bool)>,
}

/// A term of a weight with the symbols' values put in.
#[derive(Clone, Debug)]
struct WeightTerm {
    value: Scaled,
    s_power: u32,
    symbols: Vec<u32>,
}

/// The answer at one frequency as one symbol goes to its limits; none where that cannot be told from
/// rounding, or is infinite.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Extremes {
    /// The symbol.
    pub symbol: SymbolId,
    /// At 0.
    pub at_zero: Option<C>,
    /// At infinity.
    pub at_infinity: Option<C>,
}

impl Elimination {
    /// The elimination with these symbol values (by index).
    pub fn at_values(&self, symbols: &[f64]) -> AtValues<'_> {
        AtValues {
            of: self,
            symbols: symbols.to_vec(),
            weights: self.weights.iter().map(|weight| terms(weight, symbols)).collect(),
            occurring: self.occurring(),
        }
    }

    /// The symbols, each with whether only one choice holds it, to the first power.
    fn occurring(&self) -> Vec<(SymbolId, bool)> {
        let mut found: std::collections::BTreeMap<SymbolId, (usize, bool)> = Default::default();
        for (index, weight) in self.weights.iter().enumerate() {
            let choice = self.first_weight.partition_point(|&first| first as usize <= index);
            for variable in weight.variables() {
                let Some(symbol) = symbol_of(variable) else { continue };
                let entry = found.entry(symbol).or_insert((choice, true));
                entry.1 &= entry.0 == choice && weight.degree(variable) == 1;
            }
        }
        found.into_iter().map(|(symbol, (_, linear))| (symbol, linear)).collect()
    }
}

fn terms(weight: &Polynomial, symbols: &[f64]) -> Vec<WeightTerm> {
    weight
        .terms()
        .map(|(powers, coefficient)| {
            let mut term =
                WeightTerm { value: scaled_integer(&coefficient), s_power: 0, symbols: Vec::new() };
            for (variable, power) in powers {
                let Some(symbol) = symbol_of(variable) else {
                    term.s_power = power;
                    continue;
                };
                let value = Scaled::new(C::new(symbols[symbol.0 as usize], 0.0), 0);
                for _ in 0..power {
                    term.value = term.value.times(value);
                }
                term.symbols.push(symbol.0);
            }
            term
        })
        .collect()
}

impl AtValues<'_> {
    /// Numerator over denominator at a complex frequency in rad/s.
    ///
    /// # Cost
    /// One pass over the diagram.
    pub fn value(&self, s: C) -> C {
        let values = passes::values(&ComplexNumbers, &self.of.diagram, &self.weights_at(s));
        let [above, below] = self.roots().map(|root| passes::at(&ComplexNumbers, &values, root));
        above.over(below)
    }

    /// The value, and for every symbol what it becomes as that symbol alone goes to 0 and to infinity.
    ///
    /// The determinants are of first degree in a symbol that only one choice holds (the bilinear
    /// theorem, Bode 1945), so that two backward passes give all of them; each other symbol costs
    /// two passes of its own.
    pub fn extremes(&self, s: C) -> (C, Vec<Extremes>) {
        let diagram = &self.of.diagram;
        let weights = self.weights_at(s);
        let values = passes::values(&ComplexNumbers, diagram, &weights);
        let whole = self.roots().map(|root| passes::at(&ComplexNumbers, &values, root));
        let linear = self.roots().map(|root| {
            let by_weight = gradient::by_weight(&ComplexNumbers, diagram, &weights, &values, root);
            self.shares(s, &by_weight)
        });
        let extremes = self
            .occurring
            .iter()
            .map(|&(symbol, is_linear)| {
                if !is_linear {
                    return Extremes {
                        symbol,
                        at_zero: finite(self.with(symbol, 0.0).value(s)),
                        at_infinity: finite(self.with(symbol, HUGE).value(s)),
                    };
                }
                let index = symbol.0 as usize;
                let shares = [linear[0][index], linear[1][index]];
                let rest = [0, 1].map(|side| whole[side].plus(shares[side].negative()));
                Extremes {
                    symbol,
                    at_zero: quotient(rest, whole),
                    at_infinity: quotient(shares, whole),
                }
            })
            .collect();
        (whole[0].over(whole[1]), extremes)
    }

    /// Coefficients of numerator and denominator by powers of `s`, lowest first, each as
    /// (m, e) for m·2^e: those of a large network leave the range of a double.
    pub fn coefficients(&self) -> [Vec<(f64, i32)>; 2] {
        let weights: Vec<Vec<Scaled>> = self
            .weights
            .iter()
            .map(|terms| {
                let mut by_power: Vec<Scaled> = Vec::new();
                for term in terms {
                    let power = term.s_power as usize;
                    by_power.resize(by_power.len().max(power + 1), Scaled::ZERO);
                    by_power[power] = by_power[power].plus(term.value);
                }
                by_power
            })
            .collect();
        let lines = passes::at_links(&Lines, &self.of.diagram, &weights, &self.roots());
        let mut sides =
            lines.into_iter().map(|line| line.iter().map(|value| value.real_parts()).collect());
        [sides.next().unwrap_or_default(), sides.next().unwrap_or_default()]
    }

    fn roots(&self) -> [Link; 2] {
        [self.of.numerator, self.of.denominator]
    }

    /// The same with another value of one symbol; in units of its present one where it is huge.
    fn with(&self, symbol: SymbolId, factor: f64) -> Self {
        let mut symbols = self.symbols.clone();
        symbols[symbol.0 as usize] *= factor;
        Self { of: self.of, ..self.of.at_values(&symbols) }
    }

    fn weights_at(&self, s: C) -> Vec<Scaled> {
        let powers = Powers::new(s);
        self.weights
            .iter()
            .map(|terms| {
                terms.iter().fold(Scaled::ZERO, |sum, term| {
                    sum.plus(powers.times(term.value, term.s_power))
                })
            })
            .collect()
    }

    /// x·∂/∂x of a root for every symbol by its index.
    fn shares(&self, s: C, by_weight: &[Scaled]) -> Vec<Scaled> {
        let powers = Powers::new(s);
        let mut shares = vec![Scaled::ZERO; self.symbols.len()];
        for (terms, factor) in self.weights.iter().zip(by_weight) {
            for term in terms {
                let value = powers.times(term.value, term.s_power).times(*factor);
                for &symbol in &term.symbols {
                    let share = &mut shares[symbol as usize];
                    *share = share.plus(value);
                }
            }
        }
        shares
    }
}

/// A quotient whose parts are more than the rounding of `whole`.
fn quotient(parts: [Scaled; 2], whole: [Scaled; 2]) -> Option<C> {
    let is_noise = |side: usize| {
        let size = parts[side].over(whole[side]).norm();
        size.is_nan() || size < NOISE
    };
    if is_noise(1) { None } else { finite(parts[0].over(parts[1])) }
}

fn finite(value: C) -> Option<C> {
    value.is_finite().then_some(value)
}

struct Powers(Scaled);

impl Powers {
    fn new(s: C) -> Self {
        Self(Scaled::new(s, 0))
    }

    fn times(&self, value: Scaled, power: u32) -> Scaled {
        (0..power).fold(value, |value, _| value.times(self.0))
    }
}

/// Polynomials in `s`, lowest power first.
struct Lines;

impl Ring for Lines {
    type Weight = Vec<Scaled>;
    type Value = Vec<Scaled>;

    fn zero(&self) -> Vec<Scaled> {
        Vec::new()
    }

    fn one(&self) -> Vec<Scaled> {
        vec![ComplexNumbers.one()]
    }

    fn add(
        &self,
        sum: &mut Vec<Scaled>,
        weight: &Vec<Scaled>,
        value: &Vec<Scaled>,
        negative: bool,
    ) {
        let length = (weight.len() + value.len()).saturating_sub(1);
        sum.resize(sum.len().max(length), Scaled::ZERO);
        for (i, factor) in weight.iter().enumerate() {
            for (j, coefficient) in value.iter().enumerate() {
                ComplexNumbers.add(&mut sum[i + j], factor, coefficient, negative);
            }
        }
    }

    fn negate(&self, value: &Vec<Scaled>) -> Vec<Scaled> {
        value.iter().map(|coefficient| coefficient.negative()).collect()
    }
}

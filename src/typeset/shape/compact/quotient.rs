//! A fraction as one product of factors above and below one bar.
//!
//! Numerator and denominator are factored. Then every factor that is a sum may be divided by some of
//! its symbols, which the monomial before it takes over: `R4·(R1 + R2)/(R1·(R3 + R4))` becomes
//! `(1 + R2/R1)/(1 + R3/R4)`. Which symbols is a descent from a few starts: as it is; the constant or
//! the highest coefficient made 1; what stands on the other side of the bar used up; everything.

use num_bigint::BigInt;
use num_rational::BigRational;
use num_traits::{One, Signed};

use super::inverse::inverse;
use super::laurent::{Exponents, Laurent};
use super::order;
use super::sum::{Form, Writer};
use crate::algebra::{Fraction, Polynomial, factor};
use crate::typeset::Formula;

/// Rounds of one descent.
const MAX_ROUNDS: usize = 8;
/// Sums longer than this stay as they are.
const MAX_TERMS: usize = 40;
/// From this many terms on only the most useful starts are made.
const MANY_TERMS: usize = 16;

/// number · monomial · Π factor^power.
pub(super) struct Factored {
    number: BigRational,
    monomial: Exponents,
    factors: Vec<(Laurent, i32)>,
}

impl Factored {
    /// `None` where a coefficient or an exponent is too large.
    pub(super) fn new(fraction: &Fraction, writer: &Writer<'_>) -> Option<Self> {
        let mut whole =
            Self { number: BigRational::one(), monomial: writer.ring.one(), factors: Vec::new() };
        whole.take(fraction.numerator(), 1, writer)?;
        whole.take(fraction.denominator(), -1, writer)?;
        whole.absorb_sign();
        Some(whole)
    }

    fn take(&mut self, polynomial: &Polynomial, side: i32, writer: &Writer<'_>) -> Option<()> {
        let (content, factors) = factors(polynomial);
        let content = BigRational::from_integer(content);
        self.number *= if side > 0 { content } else { content.recip() };
        for (factor, multiplicity) in factors {
            let power = side * i32::try_from(multiplicity).ok()?;
            let mut factor = Laurent::new(&factor, &writer.ring)?;
            if let [(exponents, coefficient)] = factor.terms.as_slice() {
                debug_assert_eq!(*coefficient, 1, "factors are primitive");
                for (sum, exponent) in self.monomial.iter_mut().zip(exponents) {
                    *sum = i8::try_from(i32::from(*sum) + i32::from(*exponent) * power).ok()?;
                }
                continue;
            }
            if begins_negative(&factor) {
                factor.terms.iter_mut().for_each(|term| term.1 = -term.1);
                if power % 2 != 0 {
                    self.number = -&self.number;
                }
            }
            self.factors.push((factor, power));
        }
        Some(())
    }

    /// A minus sign before the whole turns a difference round where there is one: `b − a`, not
    /// `−(a − b)`.
    fn absorb_sign(&mut self) {
        if !self.number.is_negative() {
            return;
        }
        let difference = |factor: &Laurent| {
            let lowest = factor.by_power().into_iter().next();
            lowest.is_some_and(|(_, part)| balance(&part) == 0)
        };
        let found =
            self.factors.iter_mut().find(|(factor, power)| *power % 2 != 0 && difference(factor));
        if let Some((factor, _)) = found {
            factor.terms.iter_mut().for_each(|term| term.1 = -term.1);
            self.number = -&self.number;
        }
    }

    /// The best form that is found.
    pub(super) fn write(&self, writer: &mut Writer<'_>) -> Form {
        let none: Vec<Exponents> = self.factors.iter().map(|_| writer.ring.one()).collect();
        let mut best = self.with(&none, writer);
        if self.factors.iter().any(|(factor, _)| factor.len() > MAX_TERMS) {
            return best;
        }
        for start in self.starts(writer) {
            best = best.better(self.descend(start, writer));
        }
        best
    }

    /// The factors by powers of `s`, none of them divided by anything.
    pub(in super::super) fn plain(&self, writer: &mut Writer<'_>) -> Formula {
        let mut sides: [Vec<Formula>; 2] = Default::default();
        for (factor, power) in &self.factors {
            let formula = writer.by_powers(&factor.by_power());
            sides[usize::from(*power < 0)].push(Formula::power(formula, power.abs()));
        }
        let [above, below] = sides;
        quotient(writer.monomial(&self.monomial, &self.number), above, below)
    }

    /// Divisors to begin with.
    fn starts(&self, writer: &Writer<'_>) -> Vec<Vec<Exponents>> {
        let lowest = |factor: &Laurent| {
            factor.by_power().first().map(|(_, part)| part.content().0).unwrap_or_default()
        };
        let highest = |factor: &Laurent| {
            factor.by_power().last().map(|(_, part)| part.content().0).unwrap_or_default()
        };
        let mut used_up = Vec::new();
        let mut left = self.monomial.clone();
        for (factor, power) in &self.factors {
            let mut divisor = writer.ring.one();
            for (place, degree) in factor.degrees().iter().enumerate().skip(1) {
                let side = if *power < 0 { 1 } else { -1 };
                if *degree > 0 && left[place].signum() == side {
                    let most = (*degree).min(left[place].abs());
                    divisor[place] = most;
                    left[place] -= side * most;
                }
            }
            used_up.push(divisor);
        }
        let each = |choose: &dyn Fn(&Laurent) -> Exponents| -> Vec<Exponents> {
            self.factors
                .iter()
                .map(|(factor, _)| {
                    let mut divisor = choose(factor);
                    divisor[0] = 0;
                    divisor
                })
                .collect()
        };
        let mut starts = vec![each(&|_| writer.ring.one())];
        let mut others = vec![each(&lowest), used_up];
        if self.factors.iter().map(|(factor, _)| factor.len()).sum::<usize>() <= MANY_TERMS {
            others.extend([each(&highest), each(&|factor: &Laurent| factor.degrees())]);
        }
        for start in others {
            if !starts.contains(&start) {
                starts.push(start);
            }
        }
        starts
    }

    /// Changes one symbol's exponent in one divisor after the other, as long as that helps.
    fn descend(&self, mut divisors: Vec<Exponents>, writer: &mut Writer<'_>) -> Form {
        let mut best = self.with(&divisors, writer);
        for _ in 0..MAX_ROUNDS {
            let mut improved = false;
            for index in 0..divisors.len() {
                let degrees = self.factors[index].0.degrees();
                for place in 1..degrees.len() {
                    if degrees[place] <= 0 || writer.exhausted() {
                        continue;
                    }
                    let before = divisors[index][place];
                    let mut kept = before;
                    for value in [0, degrees[place]] {
                        if value == kept {
                            continue;
                        }
                        let literals = self.literals(&divisors, index);
                        divisors[index][place] = value;
                        if self.literals(&divisors, index) > literals
                            || self.hopeless(&divisors, best.cost)
                        {
                            continue;
                        }
                        let form = self.with(&divisors, writer);
                        if form.cost < best.cost {
                            (best, kept, improved) = (form, value, true);
                        }
                    }
                    divisors[index][place] = kept;
                }
            }
            if !improved {
                break;
            }
        }
        best
    }

    /// Symbols of the monomial, and of a factor when it is written out.
    fn literals(&self, divisors: &[Exponents], index: usize) -> usize {
        let monomial = self.monomial_with(divisors);
        let monomial = monomial.iter().skip(1).filter(|power| **power != 0).count();
        monomial + self.factors[index].0.over(&divisors[index]).literals()
    }

    /// Whether even the least number of symbols would be too many.
    fn hopeless(&self, divisors: &[Exponents], cost: u32) -> bool {
        let sums = self.factors.iter().zip(divisors);
        let sums: usize = sums.map(|((factor, _), divisor)| factor.over(divisor).distinct()).sum();
        let monomial = self.monomial_with(divisors);
        let monomial = monomial.iter().skip(1).filter(|power| **power != 0).count();
        (sums + monomial) as u32 * super::cost::SYMBOL >= cost
    }

    fn monomial_with(&self, divisors: &[Exponents]) -> Exponents {
        let mut monomial = self.monomial.clone();
        for ((_, power), divisor) in self.factors.iter().zip(divisors) {
            for (sum, exponent) in monomial.iter_mut().zip(divisor) {
                let moved = i32::from(*exponent).saturating_mul(*power);
                *sum = sum.saturating_add(i8::try_from(moved).unwrap_or(i8::MAX));
            }
        }
        monomial
    }

    /// The form when each factor is divided by its divisor.
    fn with(&self, divisors: &[Exponents], writer: &mut Writer<'_>) -> Form {
        let mut number = self.number.clone();
        let mut sides: [Vec<Formula>; 2] = Default::default();
        for ((factor, power), divisor) in self.factors.iter().zip(divisors) {
            let form = writer.sum(&factor.over(divisor)).formula;
            if form.is_negative() && power % 2 != 0 {
                number = -number;
            }
            let form = super::cost::unsigned(&form).clone();
            let raised = Formula::power(form, power.abs());
            if *power > 0 {
                sides[0].push(raised);
                continue;
            }
            match inverse(&raised, writer.letters) {
                Some(parallel) => sides[0].push(parallel),
                None => sides[1].push(raised),
            }
        }
        let [above, below] = sides;
        let monomial = writer.monomial(&self.monomial_with(divisors), &number);
        Form::new(quotient(monomial, above, below))
    }
}

/// A monomial, perhaps with a bar, times factors over factors.
fn quotient(monomial: Formula, above: Vec<Formula>, below: Vec<Formula>) -> Formula {
    let whole = order::product([monomial].into_iter().chain(above));
    if below.is_empty() {
        return whole;
    }
    order::product([whole, Formula::quotient(Formula::integer(1), order::product(below))])
}

/// Terms above which a polynomial is not factored.
const MAX_FACTORED: usize = 4000;

/// Content and factors; a long polynomial is its own factor, apart from what is seen at once.
pub(in super::super) fn factors(polynomial: &Polynomial) -> (BigInt, Vec<(Polynomial, u32)>) {
    if polynomial.len() <= MAX_FACTORED {
        let found = factor(polynomial);
        return (found.content, found.factors);
    }
    let content = polynomial.content();
    let powers = polynomial.monomial_content();
    let shared = Polynomial::monomial(powers.iter().copied(), content.clone());
    let mut factors: Vec<(Polynomial, u32)> =
        powers.into_iter().map(|(v, power)| (Polynomial::variable(v), power)).collect();
    factors.push((polynomial.divide_exact(&shared).unwrap_or_default(), 1));
    (content, factors)
}

/// Positive terms less negative ones.
fn balance(sum: &Laurent) -> i64 {
    sum.terms.iter().map(|term| if term.1 > 0 { 1 } else { -1 }).sum()
}

/// Whether a sum is better turned round: by the signs of its lowest power of `s`, or its first term.
fn begins_negative(sum: &Laurent) -> bool {
    let parts = sum.by_power();
    let Some((_, lowest)) = parts.first() else { return false };
    match balance(lowest) {
        0 => lowest.terms.first().is_some_and(|term| term.1 < 0),
        balance => balance < 0,
    }
}

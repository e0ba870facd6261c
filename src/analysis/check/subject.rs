//! What a claim is judged against: the function itself, or something about it.
//!
//! A pole is rational in the symbols where the denominator has a factor that is linear in `s`; of a
//! factor that is quadratic the squares of ω0 and Q are. Everything else about roots is known by numbers only.

use num_complex::Complex;
use num_traits::{One, Signed, ToPrimitive, Zero};

use super::values::{Values, variables};
use super::{CheckError, Step, limits};
use crate::algebra::{Fraction, Polynomial, Univariate, Var, factor};
use crate::analysis::Notice;
use crate::analysis::limits::fraction_limit;
use crate::analysis::roots::{self, Root};
use crate::circuit::{Circuit, Claim, LimitTo, Number, Property, SymbolId, SymbolRole};
use crate::elimination::{fraction_of, variable_of};

/// The exact value of what is claimed.
#[derive(Clone, Debug)]
pub(super) enum Exact {
    /// The value.
    Value(Fraction),
    /// The value is the positive root of this.
    Square(Fraction),
    /// No rational function.
    Numbers,
}

/// What a claim is about, with its exact value.
pub(super) struct Subject {
    pub(super) property: Property,
    /// The whole function.
    pub(super) function: Fraction,
    pub(super) exact: Exact,
}

impl Subject {
    pub(super) fn new(
        circuit: &Circuit,
        claim: &Claim,
        function: Fraction,
        values: &Values,
        notices: &mut Vec<Notice>,
    ) -> Result<Self, CheckError> {
        let exact = match claim.property {
            Property::Function => Exact::Value(function.clone()),
            Property::DcGain => Exact::Value(end(&function, LimitTo::Zero)?),
            Property::HighFrequencyGain => Exact::Value(end(&function, LimitTo::Infinity)?),
            Property::Pole(number) => {
                let wanted = Wanted { number, letter: 'p', claim };
                wanted.root(function.denominator(), values, notices)?
            }
            Property::Zero(number) => {
                let wanted = Wanted { number, letter: 'z', claim };
                wanted.root(function.numerator(), values, notices)?
            }
            Property::NaturalFrequency(_)
            | Property::NaturalFrequencySquared(_)
            | Property::NaturalHertz(_)
            | Property::Quality(_) => pair(circuit, claim, function.denominator(), values)?,
        };
        Ok(Self { property: claim.property, function, exact })
    }

    /// The exact value or its square.
    pub(super) fn fraction(&self) -> Option<&Fraction> {
        match &self.exact {
            Exact::Value(fraction) | Exact::Square(fraction) => Some(fraction),
            Exact::Numbers => None,
        }
    }

    /// The claim as a fraction, squared where the exact value is known by its square; none where it holds
    /// a root and must not be squared.
    pub(super) fn claimed(&self, claim: &Claim) -> Result<Option<Fraction>, CheckError> {
        let plain = fraction_of(&claim.formula).map_err(|_| CheckError::DividesByZero)?;
        let root = match &claim.under_root {
            Some(root) => Some(fraction_of(root).map_err(|_| CheckError::DividesByZero)?),
            None => None,
        };
        Ok(match (&self.exact, root) {
            (Exact::Square(_), root) => Some(&plain.pow(2) * &root.unwrap_or_else(Fraction::one)),
            (_, None) => Some(plain),
            (_, Some(_)) => None,
        })
    }

    /// Whether a claim whose square is right is positive, as what it claims is.
    pub(super) fn has_right_sign(&self, claim: &Claim, values: &Values) -> bool {
        let Exact::Square(_) = self.exact else { return true };
        let Ok(plain) = fraction_of(&claim.formula) else { return false };
        let value = |variable: Var| {
            let symbol = crate::elimination::symbol_of(variable);
            let number = symbol.and_then(|symbol| values.number(symbol)).cloned();
            number.unwrap_or_else(Number::one)
        };
        plain.evaluate(value).is_some_and(|number| number.is_positive())
    }

    /// The value of the claim at the nominal values, where it does not depend on the frequency.
    pub(super) fn claimed_number(claim: &Claim, values: &Values) -> Option<f64> {
        let plain = values.value(&fraction_of(&claim.formula).ok()?)?;
        match &claim.under_root {
            Some(root) => Some(plain * values.value(&fraction_of(root).ok()?)?.sqrt()),
            None => Some(plain),
        }
    }

    /// The exact value as a number; a complex one for a pole or zero of a pair.
    pub(super) fn number(&self, values: &Values) -> Result<Option<Complex<f64>>, CheckError> {
        let real = |value: Option<f64>| Ok(value.map(|value| Complex::new(value, 0.0)));
        let pole = |number: u32| numbered(self.function.denominator(), number, 'p', values);
        match (&self.exact, self.property) {
            (Exact::Value(fraction), _) => real(values.value(fraction)),
            (Exact::Square(fraction), _) => real(values.value(fraction).map(f64::sqrt)),
            (_, Property::Pole(number)) => pole(number).map(|root| root.map(|root| root.value)),
            (_, Property::Zero(number)) => {
                let root = numbered(self.function.numerator(), number, 'z', values)?;
                Ok(root.map(|root| root.value))
            }
            (_, property) => {
                let poles = listed(self.function.denominator(), values)?;
                let Some(poles) = poles else { return Ok(None) };
                let named = named_pole(property).map(|number| number as usize - 1);
                let first = || poles.iter().find(|root| !root.is_real());
                let root = match named {
                    Some(index) => poles.get(index),
                    None => first(),
                };
                let size = root.map(|root| root.value.norm());
                real(match property {
                    Property::NaturalFrequency(_) => size,
                    Property::NaturalFrequencySquared(_) => size.map(|size| size * size),
                    Property::NaturalHertz(_) => size.map(|size| size / std::f64::consts::TAU),
                    _ => root.and_then(Root::q),
                })
            }
        }
    }

    /// The least sets of limits in which the claim is right.
    pub(super) fn limits(&self, circuit: &Circuit, claim: &Claim) -> Vec<Vec<Step>> {
        let claimed = self.claimed(claim).ok().flatten();
        match (&self.exact, self.property, claimed) {
            (Exact::Value(exact) | Exact::Square(exact), property, Some(claimed)) => {
                let found = limits::search(circuit, claim, exact, &claimed);
                let polynomial = match property {
                    Property::Pole(_) => self.function.denominator(),
                    Property::Zero(_) => self.function.numerator(),
                    _ => return found,
                };
                if found.is_empty() {
                    limits::of_root(circuit, claim, polynomial, &claimed)
                } else {
                    found
                }
            }
            (Exact::Numbers, Property::Pole(_), Some(claimed)) => {
                limits::of_root(circuit, claim, self.function.denominator(), &claimed)
            }
            (Exact::Numbers, Property::Zero(_), Some(claimed)) => {
                limits::of_root(circuit, claim, self.function.numerator(), &claimed)
            }
            _ => Vec::new(),
        }
    }
}

/// The value at one end of the frequency axis.
fn end(function: &Fraction, to: LimitTo) -> Result<Fraction, CheckError> {
    let place = if to == LimitTo::Zero { "s = 0" } else { "s = ∞" };
    fraction_limit(function, Var::S, to).ok_or(CheckError::Infinite(place))
}

/// A root that a claim names.
struct Wanted<'a> {
    number: u32,
    letter: char,
    claim: &'a Claim,
}

impl Wanted<'_> {
    fn root(
        &self,
        polynomial: &Polynomial,
        values: &Values,
        notices: &mut Vec<Notice>,
    ) -> Result<Exact, CheckError> {
        let degree = polynomial.degree(Var::S);
        if self.number > degree {
            return Err(no_root(&format!("{}{}", self.letter, self.number), degree, self.letter));
        }
        let candidates: Vec<(Fraction, u32)> = factor(polynomial)
            .factors
            .iter()
            .filter(|(factor, _)| factor.degree(Var::S) == 1)
            .filter_map(|(factor, multiplicity)| {
                let root = Fraction::new(
                    &-&factor.coefficient(Var::S, 0),
                    &factor.coefficient(Var::S, 1),
                )?;
                Some((root, *multiplicity))
            })
            .collect();
        if let Some((root, _)) =
            candidates.first().filter(|(_, multiplicity)| *multiplicity == degree)
        {
            return Ok(Exact::Value(root.clone()));
        }
        if let Some(root) = numbered(polynomial, self.number, self.letter, values)? {
            let near = |candidate: &Fraction| {
                values.value(candidate).is_some_and(|value| {
                    (Complex::new(value, 0.0) - root.value).norm() <= 1e-9 * root.value.norm()
                })
            };
            let found = candidates.into_iter().find(|(candidate, _)| near(candidate));
            return Ok(found.map_or(Exact::Numbers, |(candidate, _)| Exact::Value(candidate)));
        }
        // Without numbers nothing says which root is which.
        let claimed = fraction_of(&self.claim.formula).map_err(|_| CheckError::DividesByZero)?;
        let is_claimed = |(candidate, _): &&(Fraction, u32)| *candidate == claimed;
        let found = candidates.iter().find(is_claimed).or_else(|| candidates.first());
        notices.push(Notice {
            code: "root-number",
            message: format!(
                "which root is {}{} depends on values that the file leaves out",
                self.letter, self.number
            ),
            line: 0,
        });
        Ok(found.map_or(Exact::Numbers, |(candidate, _)| Exact::Value(candidate.clone())))
    }
}

/// ω0, f0 or Q of a pair of poles, exactly where it belongs to a quadratic factor.
fn pair(
    circuit: &Circuit,
    claim: &Claim,
    denominator: &Polynomial,
    values: &Values,
) -> Result<Exact, CheckError> {
    let degree = denominator.degree(Var::S);
    if degree == 0 {
        return Err(no_root("pole", 0, 'p'));
    }
    if let Some(number) = named_pole(claim.property).filter(|number| *number > degree) {
        return Err(no_root(&format!("p{number}"), degree, 'p'));
    }
    let is_quality = matches!(claim.property, Property::Quality(_));
    let quadratic = match degree {
        1 if is_quality => return Err(no_root("pair of poles", 1, 'p')),
        1 => denominator.pow(2),
        2 => denominator.clone(),
        _ => {
            let factors = factor(denominator).factors;
            let mut quadratics: Vec<Polynomial> = factors
                .into_iter()
                .map(|(factor, _)| factor)
                .filter(|factor| factor.degree(Var::S) == 2)
                .collect();
            match (quadratics.len(), named_pole(claim.property)) {
                (1, None) => quadratics.remove(0),
                _ => match of_root(&quadratics, claim, denominator, values)? {
                    Some(index) => quadratics.remove(index),
                    None => return Ok(Exact::Numbers),
                },
            }
        }
    };
    let [c0, c1, c2] = [0, 1, 2].map(|power| quadratic.coefficient(Var::S, power));
    let square = match claim.property {
        Property::NaturalFrequencySquared(_) => {
            return Ok(Fraction::new(&c0, &c2).map_or(Exact::Numbers, Exact::Value));
        }
        Property::NaturalFrequency(_) => Fraction::new(&c0, &c2),
        Property::NaturalHertz(_) => pi(circuit, claim).and_then(|pi| {
            let turns = Polynomial::monomial([(pi, 2)], 4);
            Fraction::new(&c0, &(&turns * &c2))
        }),
        _ => Fraction::new(&(&c0 * &c2), &c1.squared()),
    };
    Ok(square.map_or(Exact::Numbers, Exact::Square))
}

/// Which of the factors has the pole that a claim names, or the first pair.
fn of_root(
    quadratics: &[Polynomial],
    claim: &Claim,
    denominator: &Polynomial,
    values: &Values,
) -> Result<Option<usize>, CheckError> {
    let Some(poles) = listed(denominator, values)? else { return Ok(None) };
    let wanted = match named_pole(claim.property) {
        Some(number) => poles.get(number as usize - 1),
        None => poles.iter().find(|root| !root.is_real()),
    };
    let Some(wanted) = wanted else {
        return Err(no_root("pair of poles", denominator.degree(Var::S), 'p'));
    };
    for (index, quadratic) in quadratics.iter().enumerate() {
        let roots = listed(quadratic, values)?.unwrap_or_default();
        let near = |root: &Root| (root.value - wanted.value).norm() <= 1e-9 * wanted.value.norm();
        if roots.iter().any(near) {
            return Ok(Some(index));
        }
    }
    Ok(None)
}

fn named_pole(property: Property) -> Option<u32> {
    match property {
        Property::NaturalFrequency(pole)
        | Property::NaturalFrequencySquared(pole)
        | Property::NaturalHertz(pole)
        | Property::Quality(pole) => pole,
        _ => None,
    }
}

/// The variable that stands for π in a claim.
pub(super) fn pi(circuit: &Circuit, claim: &Claim) -> Option<Var> {
    let symbols = claim.symbols(circuit);
    let index = symbols.iter().position(|symbol| symbol.role == SymbolRole::Pi)?;
    u32::try_from(index).ok().map(|index| variable_of(SymbolId(index)))
}

fn no_root(wanted: &str, degree: u32, letter: char) -> CheckError {
    CheckError::NoSuchRoot {
        wanted: wanted.to_owned(),
        count: degree as usize,
        kind: if letter == 'p' { "poles" } else { "zeros" },
    }
}

/// The roots at the nominal values, each as often as it counts, by size; none without values.
fn listed(polynomial: &Polynomial, values: &Values) -> Result<Option<Vec<Root>>, CheckError> {
    let Some(coefficients) = values.coefficients(polynomial) else { return Ok(None) };
    let polynomial = Univariate::from_rationals(&coefficients);
    if polynomial.is_zero() {
        return Ok(None);
    }
    let roots = roots::find(&polynomial).map_err(CheckError::Roots)?;
    let repeat = |root: &Root| std::iter::repeat_n(*root, root.multiplicity as usize);
    Ok(Some(roots.iter().flat_map(repeat).collect()))
}

/// One root by its number.
fn numbered(
    polynomial: &Polynomial,
    number: u32,
    letter: char,
    values: &Values,
) -> Result<Option<Root>, CheckError> {
    let Some(roots) = listed(polynomial, values)? else { return Ok(None) };
    let missing = || no_root(&format!("{letter}{number}"), roots.len() as u32, letter);
    roots.get(number as usize - 1).copied().map(Some).ok_or_else(missing)
}

/// Whether a fraction holds the first variable.
pub(super) fn depends_on_s(fraction: &Fraction) -> bool {
    variables(fraction).any(|variable| variable == Var::S)
}

/// An exact number as a double.
pub(super) fn to_f64(number: &Number) -> f64 {
    if number.is_zero() { 0.0 } else { number.to_f64().unwrap_or(f64::NAN) }
}

//! Claims with `~`: how near they are at the nominal values, at the ends of the tolerances, and over
//! the band.
//!
//! Each tolerance is tried at both ends by itself; then the two corners in which those ends meet that
//! made the claim larger, and smaller, than what is exact. That is exact for what is monotonic and linear in the
//! tolerances, and a good guide elsewhere.

use num_complex::Complex;

use super::CheckError;
use super::subject::Subject;
use super::values::{Values, variables};
use crate::circuit::{Circuit, Claim, Number, Property, SymbolId};
use crate::elimination::{fraction_of, symbol_of};

/// How near a claim is.
#[derive(Clone, Debug, PartialEq)]
pub struct Nearness {
    /// The relative deviation that is allowed.
    pub within: f64,
    /// The largest relative deviation |claim/exact − 1|.
    pub worst: f64,
    /// At the nominal values alone.
    pub nominal: f64,
    /// Where the largest one is, in hertz; none where nothing depends on the frequency.
    pub at_hz: Option<f64>,
    /// How many sets of values were tried.
    pub corners: usize,
}

pub(super) fn judge(
    circuit: &Circuit,
    claim: &Claim,
    subject: &Subject,
    values: &Values,
    within: &Number,
) -> Result<Nearness, CheckError> {
    let mut used = vec![subject.function.clone()];
    for value in std::iter::once(&claim.formula).chain(&claim.under_root) {
        used.push(fraction_of(value).map_err(|_| CheckError::DividesByZero)?);
    }
    let references: Vec<_> = used.iter().collect();
    if let Some(missing) = values.missing(&references) {
        return Err(CheckError::NoValues(missing));
    }
    let mut symbols: Vec<SymbolId> =
        used.iter().flat_map(variables).filter_map(symbol_of).collect();
    symbols.sort_unstable();
    symbols.dedup();
    let mut tried = Tried { claim, subject, worst: (0.0, None), count: 0 };
    let nominal = tried.at(values)?;
    let center = nominal.signed;
    let (mut up, mut down) = (values.clone(), values.clone());
    let mut any = 0;
    for symbol in symbols {
        let tolerance = circuit.symbols.get(symbol.0 as usize).and_then(|s| s.tolerance.as_ref());
        let (Some(tolerance), Some(number)) = (tolerance, values.number(symbol)) else { continue };
        any += 1;
        let ends = [number + &tolerance.low, number + &tolerance.high];
        let [low, high] = [
            tried.at(&values.with(symbol, ends[0].clone()))?.signed - center,
            tried.at(&values.with(symbol, ends[1].clone()))?.signed - center,
        ];
        let [low_end, high_end] = ends;
        let (more, less) = if low > high { (low_end, high_end) } else { (high_end, low_end) };
        up = up.with(symbol, more);
        down = down.with(symbol, less);
    }
    if any > 1 {
        tried.at(&up)?;
        tried.at(&down)?;
    }
    Ok(Nearness {
        within: super::subject::to_f64(within),
        worst: tried.worst.0,
        nominal: nominal.size,
        at_hz: tried.worst.1,
        corners: tried.count,
    })
}

struct Tried<'a> {
    claim: &'a Claim,
    subject: &'a Subject,
    worst: (f64, Option<f64>),
    count: usize,
}

/// The deviation at one set of values.
struct At {
    size: f64,
    /// With the sign of |claim/exact| − 1 where it is largest.
    signed: f64,
}

impl Tried<'_> {
    fn at(&mut self, values: &Values) -> Result<At, CheckError> {
        self.count += 1;
        let mut at = At { size: 0.0, signed: 0.0 };
        let mut take = |ratio: Complex<f64>, hertz: Option<f64>| {
            let size = (ratio - 1.0).norm();
            let size = if size.is_nan() { f64::INFINITY } else { size };
            if size >= at.size {
                at = At { size, signed: ratio.norm() - 1.0 };
            }
            if size > self.worst.0 {
                self.worst = (size, hertz);
            }
        };
        if self.claim.property == Property::Function {
            let claimed =
                fraction_of(&self.claim.formula).map_err(|_| CheckError::DividesByZero)?;
            let (Some(claim), Some(truth)) =
                (values.response(&claimed), values.response(&self.subject.function))
            else {
                return Ok(at);
            };
            if claim.is_constant() && truth.is_constant() {
                take(claim.at(0.0) / truth.at(0.0), None);
            } else {
                for &hertz in &values.frequencies {
                    take(claim.at(hertz) / truth.at(hertz), Some(hertz));
                }
            }
        } else {
            let exact = self.subject.number(values)?;
            let claimed = Subject::claimed_number(self.claim, values);
            match (exact, claimed) {
                (Some(exact), Some(claimed)) => take(Complex::new(claimed, 0.0) / exact, None),
                _ => take(Complex::new(f64::INFINITY, 0.0), None),
            }
        }
        Ok(at)
    }
}

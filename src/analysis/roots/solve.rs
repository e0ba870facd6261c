//! Which value of one symbol moves a root, ω0, Q or the gain to where it is wanted.
//!
//! A network function is a quotient of two polynomials that are linear in (almost) every symbol, so
//! the gain is a linear fractional function of it: three values determine it, and the cross-ratio gives the
//! fourth exactly. Everything else is followed from the nominal value outwards in both directions,
//! until the target lies between two steps, and then closed in on.

use num_complex::Complex;
use num_traits::{Signed, ToPrimitive, Zero};

use super::preferred::Series;
use super::values::{Nominal, follow, places};
use crate::algebra::Univariate;
use crate::circuit::{Number, SymbolId};

/// What is to be moved; roots are counted from 1 in the order of the report, multiple ones once for each
/// time.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Quantity {
    /// The frequency of a pole, |p|/2π.
    Pole(usize),
    /// The frequency of a zero.
    Zero(usize),
    /// The frequency ω0/2π of the pair to which this pole belongs.
    NaturalFrequency(usize),
    /// The Q of the pair to which this pole belongs.
    Quality(usize),
    /// H(0).
    DcGain,
}

/// A value that does it.
#[derive(Clone, Debug, PartialEq)]
pub struct Solution {
    /// The value of the symbol, in its unit.
    pub value: f64,
    /// Whether it is exact but for the rounding of the number.
    pub closed_form: bool,
    /// The preferred values next to it.
    pub preferred: Vec<Preferred>,
}

/// A preferred value and what results with it.
#[derive(Clone, Debug, PartialEq)]
pub struct Preferred {
    /// The series.
    pub series: Series,
    /// The value.
    pub value: f64,
    /// What the quantity becomes; none where it does not exist.
    pub reached: Option<f64>,
}

/// Why no value does it.
#[derive(Clone, Debug, PartialEq)]
pub enum Unreachable {
    /// The quantity does not exist at the nominal values: no such root, no pair, no gain.
    NoSuchQuantity,
    /// The function does not depend on the symbol, or it has no value to start from.
    NoSuchSymbol,
    /// Within a factor of a million about the nominal value it only reaches these.
    OutOfReach {
        /// The least.
        least: f64,
        /// The largest.
        largest: f64,
    },
}

/// Steps in a decade, and decades in each direction.
const STEPS: u32 = 16;
const DECADES: u32 = 6;

/// Finds the value of `symbol` at which the quantity has the target.
///
/// # Errors
/// Where there is none, with what can be reached.
///
/// # Cost
/// Up to some two hundred evaluations of the coefficients and their roots.
pub fn solve(
    values: &Nominal<'_>,
    quantity: Quantity,
    symbol: SymbolId,
    target: &Number,
) -> Result<Solution, Unreachable> {
    let solver = Solver { values, quantity, symbol };
    let nominal = values.number(symbol).ok_or(Unreachable::NoSuchSymbol)?;
    let start = nominal.to_f64().filter(|x| *x > 0.0).ok_or(Unreachable::NoSuchSymbol)?;
    let (above, below) = values.with(&[]).ok_or(Unreachable::NoSuchQuantity)?;
    let first = solver.start(&above, &below).ok_or(Unreachable::NoSuchQuantity)?;
    let wanted = target.to_f64().ok_or(Unreachable::NoSuchQuantity)?;
    let finish = |value: f64, closed_form: bool| Solution {
        value,
        closed_form,
        preferred: Series::ALL
            .into_iter()
            .filter_map(|series| {
                let (digits, power) = series.nearest(value)?;
                let value = f64::from(digits) * libm::pow(10.0, f64::from(power));
                let reached = solver.walk(&first, start, value).map(|state| state.reached);
                Some(Preferred { series, value, reached })
            })
            .collect(),
    };
    if quantity == Quantity::DcGain
        && let Some(exact) = solver.cross_ratio(nominal, target)
        && let Some(value) = exact.to_f64()
    {
        return Ok(finish(value, true));
    }
    solver.search(&first, start, wanted).map(|value| finish(value, false))
}

/// The quantity at one value, and the roots that it belongs to.
#[derive(Clone, Debug)]
struct State {
    at: f64,
    reached: f64,
    roots: Vec<Complex<f64>>,
    /// The places of the root and its partner.
    followed: [usize; 2],
}

struct Solver<'a> {
    values: &'a Nominal<'a>,
    quantity: Quantity,
    symbol: SymbolId,
}

impl Solver<'_> {
    fn start(&self, above: &Univariate, below: &Univariate) -> Option<State> {
        let roots = self.roots(above, below)?;
        let index = match self.quantity {
            Quantity::DcGain => 0,
            Quantity::Pole(number)
            | Quantity::Zero(number)
            | Quantity::NaturalFrequency(number)
            | Quantity::Quality(number) => number.checked_sub(1)?,
        };
        let mut partner = index;
        if self.quantity != Quantity::DcGain {
            let root = *roots.get(index)?;
            if matches!(self.quantity, Quantity::NaturalFrequency(_) | Quantity::Quality(_)) {
                partner = roots.iter().position(|&other| other == root.conj() && root.im != 0.0)?;
            }
        }
        self.state(0.0, above, below, roots, [index, partner])
    }

    fn roots(&self, above: &Univariate, below: &Univariate) -> Option<Vec<Complex<f64>>> {
        match self.quantity {
            Quantity::DcGain => Some(Vec::new()),
            Quantity::Zero(_) => places(above),
            _ => places(below),
        }
    }

    fn state(
        &self,
        at: f64,
        above: &Univariate,
        below: &Univariate,
        roots: Vec<Complex<f64>>,
        followed: [usize; 2],
    ) -> Option<State> {
        let root = || Some((*roots.get(followed[0])?, *roots.get(followed[1])?));
        let reached = match self.quantity {
            Quantity::DcGain => gain(above, below)?.to_f64()?,
            Quantity::Pole(_) | Quantity::Zero(_) => root()?.0.norm() / std::f64::consts::TAU,
            Quantity::NaturalFrequency(_) => {
                let (p, q) = root()?;
                (p * q).norm().sqrt() / std::f64::consts::TAU
            }
            Quantity::Quality(_) => {
                let (p, q) = root()?;
                // Of the quadratic (s − p)(s − q), also where both have become real.
                (p * q).norm().sqrt() / (p + q).norm()
            }
        };
        reached.is_finite().then_some(State { at, reached, roots, followed })
    }

    /// The next state at `at`, with the roots followed.
    fn step(&self, from: &State, at: f64) -> Option<State> {
        let (above, below) = self.values.with_one(self.symbol, at)?;
        let roots = self.roots(&above, &below)?;
        let places = follow(&from.roots, &roots);
        let followed = match self.quantity {
            Quantity::DcGain => [0, 0],
            _ => [(*places.get(from.followed[0])?)?, (*places.get(from.followed[1])?)?],
        };
        self.state(at, &above, &below, roots, followed)
    }

    /// From the nominal value to `to` in steps.
    fn walk(&self, first: &State, start: f64, to: f64) -> Option<State> {
        let steps = (libm::log10(to / start).abs() * f64::from(STEPS)).ceil().max(1.0) as u32;
        let mut state = State { at: start, ..first.clone() };
        for step in 1..=steps {
            let part = f64::from(step) / f64::from(steps);
            let at = if step == steps { to } else { start * libm::pow(to / start, part) };
            state = self.step(&state, at)?;
        }
        Some(state)
    }

    fn search(&self, first: &State, start: f64, wanted: f64) -> Result<f64, Unreachable> {
        let (mut least, mut largest) = (first.reached, first.reached);
        let first = State { at: start, ..first.clone() };
        let mut ends = [Some(first.clone()), Some(first)];
        for step in 1..=STEPS * DECADES {
            for (direction, end) in [1.0, -1.0].into_iter().zip(&mut ends) {
                let Some(from) = end.take() else { continue };
                let power = direction * f64::from(step) / f64::from(STEPS);
                let at = start * libm::pow(10.0, power);
                let Some(to) = self.step(&from, at) else { continue };
                least = least.min(to.reached);
                largest = largest.max(to.reached);
                let (before, after) = (from.reached - wanted, to.reached - wanted);
                if before.is_zero() {
                    return Ok(from.at);
                }
                if before.signum() != after.signum() || after.is_zero() {
                    return Ok(self.close_in(from, to, wanted));
                }
                *end = Some(to);
            }
        }
        Err(Unreachable::OutOfReach { least, largest })
    }

    /// Halves or interpolates, on logarithmic scales, until the numbers are exhausted.
    fn close_in(&self, mut low: State, mut high: State, wanted: f64) -> f64 {
        for round in 0..100 {
            let (a, b) = (low.at, high.at);
            let (f, g) = (low.reached - wanted, high.reached - wanted);
            let middle = if round % 3 == 2 { 0.5 } else { (f / (f - g)).clamp(0.01, 0.99) };
            let at = a * libm::pow(b / a, middle);
            if (b / a - 1.0).abs() < 4e-16 {
                break;
            }
            let Some(state) = self.step(&low, at) else { break };
            if state.reached == wanted || (state.reached / wanted - 1.0).abs() < 1e-15 {
                return at;
            }
            if (state.reached - wanted).signum() == f.signum() { low = state } else { high = state }
        }
        if (low.reached - wanted).abs() < (high.reached - wanted).abs() { low.at } else { high.at }
    }

    /// The value at which a linear fractional function of it has the target, exactly; none where it is
    /// no such function, or the value is not positive.
    fn cross_ratio(&self, nominal: &Number, target: &Number) -> Option<Number> {
        let gain_at = |x: &Number| {
            let (above, below) = self.values.with(&[(self.symbol, x.clone())])?;
            gain(&above, &below)
        };
        let times = |factor: i64| nominal * Number::from_integer(factor.into());
        let x = [nominal.clone(), times(2), times(3)];
        let h = [gain_at(&x[0])?, gain_at(&x[1])?, gain_at(&x[2])?];
        if h[0] == h[1] || h[1] == h[2] || h[0] == h[2] {
            return None;
        }
        if *target == h[2] {
            return Some(x[2].clone());
        }
        // (x − x0)/(x − x2) = k, a multiple of (h − h0)/(h − h2) that is 1 at x1 on both sides.
        let k = (target - &h[0]) / (target - &h[2])
            * ((&h[1] - &h[2]) / (&h[1] - &h[0]))
            * ((&x[1] - &x[0]) / (&x[1] - &x[2]));
        let one = Number::from_integer(1.into());
        if k == one {
            return None;
        }
        let value = (&x[0] - &x[2] * &k) / (one - k);
        (value.is_positive() && gain_at(&value)? == *target).then_some(value)
    }
}

/// H(0), where it is finite.
fn gain(above: &Univariate, below: &Univariate) -> Option<Number> {
    let below = below.coefficient(0);
    (!below.is_zero()).then(|| above.coefficient(0) / below)
}

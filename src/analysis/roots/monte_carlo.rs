//! Chance: the roots of many circuits whose values lie evenly between the limits of their tolerances.
//!
//! The same seed gives the same circuits on every machine (SplitMix64), however many processors it has:
//! values are drawn in order, and the circuits of a batch are shared out. Each is solved from exact
//! coefficients, like the nominal one; each root is followed to the one that it has become.

use std::sync::atomic::{AtomicUsize, Ordering};

use num_complex::Complex;

use super::find::Root;
use super::stability::{Verdict, verdict};
use super::values::{Nominal, follow, places};
use crate::algebra::modular::Random;
use crate::circuit::{Circuit, Number, SymbolId};

/// What chance does to the roots.
#[derive(Clone, Debug, PartialEq)]
pub struct Chance {
    /// Circuits drawn.
    pub trials: usize,
    /// The seed they were drawn with.
    pub seed: u64,
    /// Circuits that are not stable.
    pub not_stable: usize,
    /// For each pole of the report.
    pub poles: Vec<Spread>,
    /// For each zero of the report.
    pub zeros: Vec<Spread>,
}

/// Quantiles of one root: 5 %, 50 % and 95 %.
#[derive(Clone, Debug, PartialEq)]
pub struct Spread {
    /// Of |p|/2π in hertz.
    pub hz: [f64; 3],
    /// Of Q, where the root belongs to a pair in nine circuits out of ten.
    pub q: Option<[f64; 3]>,
}

/// Circuits that are drawn before any of them is solved.
const BATCH: usize = 256;

/// Values that were drawn for the symbols with a tolerance.
type Draw = Vec<(SymbolId, Number)>;

/// Draws so many circuits from that seed. `poles` and `zeros` are the nominal roots; `progress` is told
/// now and then how many circuits are done.
///
/// # Cost
/// That of the coefficients and their roots, for each circuit, on all processors.
pub fn monte_carlo(
    circuit: &Circuit,
    values: &Nominal<'_>,
    poles: &[Root],
    zeros: &[Root],
    (trials, seed): (usize, u64),
    progress: &mut dyn FnMut(usize),
) -> Chance {
    let mut random = Random::new(seed);
    let toleranced = Toleranced::new(circuit);
    let (mut poles, mut zeros) = (Followed::new(poles), Followed::new(zeros));
    let mut not_stable = 0;
    for done in (0..trials).step_by(BATCH) {
        progress(done);
        let draws: Vec<Draw> =
            (done..trials.min(done + BATCH)).map(|_| toleranced.draw(&mut random)).collect();
        for solved in solved(values, &draws).into_iter().flatten() {
            not_stable += usize::from(!solved.stable);
            if let Some([above, below]) = solved.places {
                zeros.take(&above);
                poles.take(&below);
            }
        }
    }
    Chance { trials, seed, not_stable, poles: poles.spreads(), zeros: zeros.spreads() }
}

/// The symbols that have a tolerance.
pub(crate) struct Toleranced<'a>(Vec<(SymbolId, &'a Number, [&'a Number; 2])>);

impl<'a> Toleranced<'a> {
    /// Those of a circuit.
    pub(crate) fn new(circuit: &'a Circuit) -> Self {
        let symbols = (0_u32..).map(SymbolId).zip(&circuit.symbols);
        Self(
            symbols
                .filter_map(|(id, symbol)| {
                    let nominal = symbol.nominal.as_ref()?;
                    let tolerance = symbol.tolerance.as_ref()?;
                    Some((id, nominal, [&tolerance.low, &tolerance.high]))
                })
                .collect(),
        )
    }

    /// Whether no symbol has one.
    pub(crate) fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// A value for each, evenly between its limits.
    pub(crate) fn draw(&self, random: &mut Random) -> Vec<(SymbolId, Number)> {
        let values = self.0.iter().map(|&(id, nominal, [low, high])| {
            // 2^-32 of the span is finer than any tolerance.
            let part = Number::new((random.word() >> 32).into(), (1_u64 << 32).into());
            (id, nominal + low + (high - low) * part)
        });
        values.collect()
    }
}

/// One circuit that was drawn.
struct Solved {
    stable: bool,
    /// Zeros and poles.
    places: Option<[Vec<Complex<f64>>; 2]>,
}

/// The circuits of a batch, in its order; none where the function is not finite.
fn solved(values: &Nominal<'_>, draws: &[Draw]) -> Vec<Option<Solved>> {
    let one = |draw: &Draw| {
        let (above, below) = values.with(draw)?;
        let stable = verdict(&below) == Verdict::Stable;
        let places = places(&above).zip(places(&below)).map(|(above, below)| [above, below]);
        Some(Solved { stable, places })
    };
    let workers = std::thread::available_parallelism().map_or(1, usize::from).min(draws.len());
    // Where there are no threads, there is one processor.
    if workers <= 1 {
        return draws.iter().map(one).collect();
    }
    let next = AtomicUsize::new(0);
    let work = || {
        let mut mine = Vec::new();
        loop {
            let index = next.fetch_add(1, Ordering::Relaxed);
            let Some(draw) = draws.get(index) else { return mine };
            mine.push((index, one(draw)));
        }
    };
    let mut all: Vec<(usize, Option<Solved>)> = std::thread::scope(|scope| {
        let others: Vec<_> = (1..workers).map(|_| scope.spawn(work)).collect();
        let mut all = work();
        for other in others {
            match other.join() {
                Ok(theirs) => all.extend(theirs),
                Err(panic) => std::panic::resume_unwind(panic),
            }
        }
        all
    });
    all.sort_unstable_by_key(|(index, _)| *index);
    all.into_iter().map(|(_, solved)| solved).collect()
}

/// The roots of all circuits, by the nominal root that they come from.
struct Followed {
    /// The nominal roots, multiple ones repeated, and which root of the report each is.
    nominal: Vec<Complex<f64>>,
    owner: Vec<usize>,
    seen: Vec<Vec<Complex<f64>>>,
}

impl Followed {
    fn new(roots: &[Root]) -> Self {
        let mut followed = Self { nominal: Vec::new(), owner: Vec::new(), seen: Vec::new() };
        for (index, root) in roots.iter().enumerate() {
            followed.seen.push(Vec::new());
            for _ in 0..root.multiplicity {
                followed.nominal.push(root.value);
                followed.owner.push(index);
            }
        }
        followed
    }

    fn take(&mut self, roots: &[Complex<f64>]) {
        for (place, &owner) in follow(&self.nominal, roots).into_iter().zip(&self.owner) {
            self.seen[owner].extend(place.map(|place| roots[place]));
        }
    }

    fn spreads(self) -> Vec<Spread> {
        let spread = |roots: Vec<Complex<f64>>| {
            let hz = roots.iter().map(|root| root.norm() / std::f64::consts::TAU).collect();
            let q: Vec<f64> = roots
                .iter()
                .filter(|root| root.im != 0.0 && root.re != 0.0)
                .map(|root| root.norm() / (2.0 * root.re.abs()))
                .collect();
            let mostly = !roots.is_empty() && 10 * q.len() >= 9 * roots.len();
            Spread { hz: quantiles(hz), q: mostly.then(|| quantiles(q)) }
        };
        self.seen.into_iter().map(spread).collect()
    }
}

fn quantiles(mut values: Vec<f64>) -> [f64; 3] {
    values.sort_by(f64::total_cmp);
    [0.05, 0.5, 0.95].map(|part| {
        let place = (part * (values.len().saturating_sub(1)) as f64).round() as usize;
        values.get(place).copied().unwrap_or(f64::NAN)
    })
}

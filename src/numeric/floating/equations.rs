//! The equations of a sweep: at every frequency the same entries, only their numbers change.
//!
//! The network is written once, with the place of each value in a list instead of its number
//! ([`Pattern`]); then a frequency costs one pass over the entries ([`Numbers`]).

use num_complex::Complex;
use smallvec::{SmallVec, smallvec};

use crate::circuit::{Law, Value};
use crate::numeric::field::size;
use crate::numeric::network::{Form, Network, Stamp};
use crate::numeric::sparse::Row;
use crate::numeric::{Additive, Complexes, Field, NumericError, evaluate};

type C = Complex<f64>;

/// A sum of values, each by its place in the list and with its sign.
type Places = SmallVec<[(usize, bool); 2]>;

/// Place of the number 1.
const ONE: usize = 0;

/// Sums of places.
struct Formal;

impl Additive for Formal {
    type Element = Places;

    fn zero(&self) -> Places {
        SmallVec::new()
    }

    fn one(&self) -> Places {
        smallvec![(ONE, false)]
    }

    fn add(&self, a: &Places, b: &Places) -> Places {
        a.iter().chain(b).copied().collect()
    }

    fn negative(&self, a: &Places) -> Places {
        a.iter().map(|&(place, negative)| (place, !negative)).collect()
    }
}

/// A value of the list, as far as it is known before the frequency.
#[derive(Debug)]
enum Source<'a> {
    Constant(C),
    /// This times s.
    TimesS(C),
    /// Of this element.
    General(&'a Value, usize),
}

impl<'a> Source<'a> {
    fn new(value: &'a Value, element: usize, symbols: &[C]) -> Self {
        let (mut factors, mut powers) = (vec![value], 0);
        if let Value::Product(parts) = value {
            factors = parts.iter().filter(|part| !matches!(part, Value::S)).collect();
            powers = parts.len() - factors.len();
        }
        let mut product = C::ONE;
        for factor in factors {
            match evaluate(&Complexes, factor, symbols, &C::ZERO) {
                Some(number) if !factor.holds_s() => product *= number,
                _ => return Self::General(value, element),
            }
        }
        match powers {
            0 => Self::Constant(product),
            1 => Self::TimesS(product),
            _ => Self::General(value, element),
        }
    }

    fn at(&self, network: &Network<'_>, symbols: &[C], s: C) -> Result<C, NumericError> {
        match self {
            Self::Constant(value) => Ok(*value),
            Self::TimesS(factor) => Ok(factor * s),
            Self::General(value, element) => evaluate(&Complexes, value, symbols, &s)
                .ok_or_else(|| network.divides_by_zero(*element)),
        }
    }
}

/// Where the entries are, and which values add up to each.
#[derive(Debug)]
pub(super) struct Pattern<'a> {
    /// Where the entries of each row begin, and where the last row ends.
    pub(super) starts: Vec<usize>,
    /// Column of each entry, ascending in a row.
    pub(super) columns: Vec<usize>,
    entries: Vec<Places>,
    /// The values in the order of their places, and which stand as reciprocals.
    sources: Vec<(Source<'a>, bool)>,
    right: Vec<Places>,
    /// Numerator and denominator: entries of a row, and a constant.
    probes: [(Vec<(usize, Places)>, Places); 2],
    /// The first unknowns are node voltages, this many.
    pub(super) voltages: usize,
}

/// The numbers at one frequency.
#[derive(Debug, Default)]
pub(super) struct Numbers {
    values: Vec<C>,
    /// Of each entry.
    pub(super) entries: Vec<C>,
    /// Sum of the magnitudes of what adds up to each entry.
    pub(super) sizes: Vec<f64>,
    pub(super) right: Vec<C>,
}

impl<'a> Pattern<'a> {
    /// Of the equations in which impedances have a current of their own, or stand as 1/Z where that
    /// is not needed.
    pub(super) fn new(network: &Network<'a>, form: Form, symbols: &[C]) -> Self {
        let branches = network.branches(|_| form == Form::Extended);
        let mut sources = Vec::new();
        let mut place = |value: &'a Value, element: usize, inverted: bool| -> Places {
            sources.push((Source::new(value, element, symbols), inverted));
            smallvec![(ONE + sources.len(), false)]
        };
        let stamps: Vec<Stamp<Places>> = network
            .laws()
            .zip(&branches.0)
            .enumerate()
            .map(|(index, (law, branch))| match law {
                Some(Law::Impedance(z)) if branch.is_some() => {
                    Stamp::Impedance(place(z, index, false))
                }
                Some(Law::Impedance(z)) => Stamp::Admittance(place(z, index, true)),
                Some(Law::Admittance(y)) => Stamp::Admittance(place(y, index, false)),
                Some(Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls)) => {
                    let gains = controls.iter().map(|control| place(&control.gain, index, false));
                    Stamp::Controls(gains.collect())
                }
                _ => Stamp::None,
            })
            .collect();
        let system = network.write(&Formal, &stamps, branches);
        let (mut starts, mut columns, mut entries) = (vec![0], Vec::new(), Vec::<Places>::new());
        for mut row in system.rows {
            let begin = columns.len();
            row.sort_by_key(|(column, _)| *column);
            for (column, places) in row {
                if columns.len() > begin && columns.last() == Some(&column) {
                    entries.last_mut().into_iter().for_each(|sum| sum.extend(places.clone()));
                } else {
                    columns.push(column);
                    entries.push(places);
                }
            }
            starts.push(columns.len());
        }
        let probes = system.probes.map(|probe| (probe.row, probe.constant));
        let (right, voltages) = (system.right, system.voltages);
        Self { starts, columns, entries, sources, right, probes, voltages }
    }

    /// Number of equations.
    pub(super) fn len(&self) -> usize {
        self.right.len()
    }

    /// Entries of a row: their range in the lists.
    pub(super) fn row(&self, row: usize) -> std::ops::Range<usize> {
        self.starts[row]..self.starts[row + 1]
    }

    /// The rows with these numbers.
    pub(super) fn rows(&self, entries: &[C]) -> Vec<Row<C>> {
        let row = |row| self.row(row).map(|at| (self.columns[at], entries[at])).collect();
        (0..self.len()).map(row).collect()
    }

    /// Puts the numbers of a frequency in.
    pub(super) fn fill(
        &self,
        network: &Network<'_>,
        symbols: &[C],
        s: C,
        numbers: &mut Numbers,
    ) -> Result<(), NumericError> {
        let values = &mut numbers.values;
        values.clear();
        values.push(C::ONE);
        for (source, inverted) in &self.sources {
            let value = source.at(network, symbols, s)?;
            values.push(match inverted {
                true => Complexes.inverse(&value).ok_or(NumericError::Singular)?,
                false => value,
            });
        }
        numbers.entries.clear();
        numbers.entries.extend(self.entries.iter().map(|places| sum(values, places)));
        numbers.sizes.clear();
        numbers.sizes.extend(
            self.entries
                .iter()
                .map(|places| places.iter().map(|&(place, _)| size(values[place])).sum::<f64>()),
        );
        numbers.right.clear();
        numbers.right.extend(self.right.iter().map(|places| sum(values, places)));
        Ok(())
    }

    /// A probe as a linear form: entries by column, and a constant.
    pub(super) fn probe(&self, which: usize, numbers: &Numbers) -> (Row<C>, C) {
        let (row, constant) = &self.probes[which];
        let row = row.iter().map(|(column, places)| (*column, sum(&numbers.values, places)));
        (row.collect(), sum(&numbers.values, constant))
    }
}

fn sum(values: &[C], places: &Places) -> C {
    places.iter().fold(
        C::ZERO,
        |sum, &(place, negative)| {
            if negative { sum - values[place] } else { sum + values[place] }
        },
    )
}

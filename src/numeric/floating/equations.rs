//! The equations of a sweep: at every frequency the same entries, only their numbers change.
//!
//! The network is written once, with the place of each value in a list instead of its number
//! ([`Pattern`]); then a frequency costs one pass over the entries ([`Numbers`]).

use num_complex::Complex;
use smallvec::{SmallVec, smallvec};

use crate::circuit::Law;
use crate::numeric::field::size;
use crate::numeric::network::{Form, Network, Stamp};
use crate::numeric::sparse::Row;
use crate::numeric::{Additive, Complexes, Field, NumericError};

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

/// Where the entries are, and which values add up to each.
#[derive(Debug)]
pub(super) struct Pattern {
    /// Where the entries of each row begin, and where the last row ends.
    pub(super) starts: Vec<usize>,
    /// Column of each entry, ascending in a row.
    pub(super) columns: Vec<usize>,
    entries: Vec<Places>,
    /// For each element whether its impedance stands as 1/Z.
    inverted: Vec<bool>,
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

impl Pattern {
    /// Of the equations in which impedances have a current of their own, or stand as 1/Z where that
    /// is not needed.
    pub(super) fn new(network: &Network<'_>, form: Form) -> Self {
        let branches = network.branches(|_| form == Form::Extended);
        let mut next = ONE;
        let mut place = || -> Places {
            next += 1;
            smallvec![(next, false)]
        };
        let stamps: Vec<Stamp<Places>> = network
            .laws()
            .zip(&branches.0)
            .map(|(law, branch)| match law {
                Some(Law::Impedance(_)) if branch.is_some() => Stamp::Impedance(place()),
                Some(Law::Impedance(_) | Law::Admittance(_)) => Stamp::Admittance(place()),
                Some(Law::ControlledVoltage(controls) | Law::ControlledCurrent(controls)) => {
                    Stamp::Controls(controls.iter().map(|_| place()).collect())
                }
                _ => Stamp::None,
            })
            .collect();
        let inverted = branches.0.iter().map(Option::is_none).collect();
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
        Self { starts, columns, entries, inverted, right, probes, voltages }
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
        for (stamp, inverted) in network.stamps(&Complexes, symbols, &s)?.iter().zip(&self.inverted)
        {
            match stamp {
                Stamp::Impedance(value) if *inverted => {
                    values.push(Complexes.inverse(value).ok_or(NumericError::Singular)?);
                }
                Stamp::Impedance(value) | Stamp::Admittance(value) => values.push(*value),
                Stamp::Controls(gains) => values.extend(gains),
                Stamp::None => {}
            }
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
